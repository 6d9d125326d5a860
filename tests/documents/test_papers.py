"""Issuing: numbers, the journal entry, the kept bytes, idempotency, and who may do what."""

import hashlib
from collections.abc import Callable
from datetime import UTC, datetime, timedelta
from io import BytesIO
from pathlib import Path
from typing import Any
from uuid import UUID, uuid4

import pytest
from django.db import IntegrityError, transaction
from django_scopes import scope
from pypdf import PdfReader

from chemicals.books import canonical, events
from chemicals.journal import files
from chemicals.journal.models import Attachment, Entry
from chemicals.journal.selectors import get_head, read_event
from chemicals.workshop.errors import ConflictError, NotFoundError, NotPermittedError
from chemicals.workshop.models import Membership, Role, User, Workshop
from compliance.documents import selectors, services
from compliance.documents.errors import MissingGlyphError, PaperDataError
from compliance.documents.models import Paper
from compliance.documents.render import render_pdf
from compliance.documents.shapes import FILLED_IN

pytestmark = pytest.mark.django_db
Data = dict[str, Any]
NOW = datetime(2025, 4, 12, 8, 15, tzinfo=UTC)


@pytest.fixture(autouse=True)
def _own_folder(settings: Any, tmp_path: Path) -> None:
    settings.ATTACHMENTS = tmp_path


@pytest.fixture
def member_of() -> Callable[..., Membership]:
    """A new workshop with one member."""

    def make(name: str = "Invented Workshop", role: str = Role.OWNER) -> Membership:
        workshop = Workshop.objects.create(
            name=name, address="1 Invented Lane", telephone="000 111", time_zone="Europe/Berlin", created_at=NOW
        )
        user = User.objects.create_user(f"{uuid4()}@example.org", name="Jo Example")
        return Membership.objects.create(workshop=workshop, user=user, role=role)

    return make


@pytest.fixture
def owner(member_of: Callable[..., Membership]) -> Membership:
    return member_of()


@pytest.fixture
def asked(label: Data) -> Data:
    """What whoever wants a label has to say."""
    return {name: value for name, value in label.items() if name not in FILLED_IN}


def issue(actor: Membership, data: Data, key: UUID | None = None, kind: str = "waste-label") -> Paper:
    return services.issue_paper(actor=actor, now=NOW, kind=kind, build=lambda: data, key=key or uuid4())


def nothing(paper: Paper) -> None:
    """Write nothing further with the paper."""


def test_a_paper_carries_number_workshop_time_issuer_and_chain_head(owner: Membership, asked: Data) -> None:
    first = issue(owner, asked)
    sequence, head = get_head(owner.workshop)
    second = issue(owner, asked)
    assert (first.number, second.number) == (1, 2)
    data = selectors.read_data(second)
    assert data == asked | {
        "number": 2,
        "workshop": {"name": "Invented Workshop", "address": "1 Invented Lane", "telephone": "000 111"},
        "chain_head": head,
        "chain_sequence": sequence,
        "issued_at": "2025-04-12T10:15+02:00",
        "issued_by": "Jo Example",
        "paper_size": "A4",
    }
    assert sequence == 1


def test_each_kind_and_each_workshop_counts_by_itself(
    owner: Membership, member_of: Callable[..., Membership], asked: Data, manifest: Data
) -> None:
    load = {name: value for name, value in manifest.items() if name not in FILLED_IN}
    papers = [issue(owner, asked), issue(owner, load, kind="manifest"), issue(member_of("Other"), asked)]
    assert [(paper.kind, paper.number) for paper in papers] == [("waste-label", 1), ("manifest", 1), ("waste-label", 1)]


def test_the_journal_holds_the_hashes_and_the_bytes_lie_with_the_attachments(owner: Membership, asked: Data) -> None:
    paper = issue(owner, asked)
    pdf = selectors.read_pdf(paper)
    assert read_event(paper.entry) == events.Paper(
        paper="waste-label",
        number=1,
        data_sha256=hashlib.sha256(bytes(paper.data)).hexdigest(),
        pdf_sha256=hashlib.sha256(pdf).hexdigest(),
    )
    assert canonical.decode_body(bytes(paper.entry.body)).attachments == (paper.pdf_sha256,)
    with scope(workshop=owner.workshop):
        kept = Attachment.objects.get()
    assert (kept.sha256, kept.name, kept.media_type) == (paper.pdf_sha256, "waste-label-1.pdf", "application/pdf")
    assert "W-7K3M" in PdfReader(BytesIO(pdf)).pages[0].extract_text()


def test_the_issued_bytes_follow_from_the_frozen_data(owner: Membership, asked: Data) -> None:
    paper = services.issue_paper(
        actor=owner, now=NOW, kind="waste-label", build=lambda: asked, key=uuid4(), paper_size="Letter"
    )
    data = selectors.read_data(paper)
    assert data["paper_size"] == "Letter"
    assert render_pdf(paper.kind, data, paper_size="Letter") == selectors.read_pdf(paper)
    twin = selectors.read_html(paper, pdf_url="/paper.pdf")
    assert "Acid copper rinse" in twin
    assert 'href="/paper.pdf"' in twin


def test_the_same_key_returns_the_first_paper_and_another_kind_conflicts(owner: Membership, asked: Data) -> None:
    key = uuid4()
    first = issue(owner, asked, key)
    again = services.issue_paper(
        actor=owner, now=NOW + timedelta(hours=1), kind="waste-label", build=lambda: asked, key=key, paper_size="Letter"
    )
    assert again == first
    assert issue(owner, asked | {"stream": "Nickel rinse"}, key) == first
    with pytest.raises(ConflictError, match="This key was used for another paper"):
        issue(owner, asked, key, kind="manifest")
    with scope(workshop=owner.workshop):
        assert Paper.objects.count() == Entry.objects.count() == 1


def test_a_key_of_another_workshop_conflicts_and_leaves_nothing(
    owner: Membership, member_of: Callable[..., Membership], asked: Data
) -> None:
    stranger, key = member_of("Other"), uuid4()
    issue(owner, asked, key)
    with pytest.raises(ConflictError):
        issue(stranger, asked, key)
    with scope(workshop=stranger.workshop):
        assert not Paper.objects.exists()
        assert not Entry.objects.exists()
        assert not Attachment.objects.exists()


def test_a_number_taken_meanwhile_is_drawn_anew(
    owner: Membership, asked: Data, monkeypatch: pytest.MonkeyPatch
) -> None:
    draw, rivals = services.draw_paper, iter([uuid4(), uuid4()])

    def draw_while_others_issue(**given: Any) -> services.DrawnPaper:
        drawn = draw(**given)
        for key in rivals:
            rival = draw(**given)
            services.issue_drawn(actor=owner, now=NOW, drawn=rival, key=key, then=nothing)
            break
        return drawn

    monkeypatch.setattr(services, "draw_paper", draw_while_others_issue)
    paper = issue(owner, asked)
    assert paper.number == 3
    assert "Label 3," in PdfReader(BytesIO(selectors.read_pdf(paper))).pages[0].extract_text()


def test_a_drawn_paper_whose_number_is_gone_is_not_issued(owner: Membership, asked: Data) -> None:
    drawn = services.draw_paper(actor=owner, now=NOW, kind="waste-label", build=lambda: asked)
    issue(owner, asked)
    with pytest.raises(services.ChainMovedError):
        services.issue_drawn(actor=owner, now=NOW, drawn=drawn, key=uuid4(), then=nothing)
    with scope(workshop=owner.workshop):
        assert Paper.objects.count() == Entry.objects.count() == Attachment.objects.count() == 1


def test_it_gives_up_with_a_sentence_when_others_are_always_faster(
    owner: Membership, asked: Data, monkeypatch: pytest.MonkeyPatch
) -> None:
    def always_late(**_given: Any) -> Paper:
        raise services.ChainMovedError("late")

    monkeypatch.setattr(services, "issue_drawn", always_late)
    with pytest.raises(ConflictError, match="recording at this moment"):
        issue(owner, asked)


def test_nothing_is_recorded_of_a_paper_that_cannot_be_drawn(owner: Membership, asked: Data) -> None:
    with pytest.raises(MissingGlyphError, match="stream: the paper's font cannot draw '漂'"):
        issue(owner, asked | {"stream": "漂"})
    with pytest.raises(PaperDataError, match=r"container\.volume: must be text, not 1\.5"):
        issue(owner, asked | {"container": asked["container"] | {"volume": 1.5}})
    with pytest.raises(PaperDataError, match=r"stream: contains control characters \(U\+0007\): remove them"):
        issue(owner, asked | {"stream": "bell\a"})
    with scope(workshop=owner.workshop):
        assert not Paper.objects.exists()
        assert not Entry.objects.exists()
        assert not Attachment.objects.exists()


def test_changed_or_missing_bytes_are_refused(owner: Membership, asked: Data) -> None:
    paper = issue(owner, asked)
    path = files.path_of(paper.pdf_sha256)
    path.write_bytes(path.read_bytes() + b" ")
    with pytest.raises(files.DamagedFileError, match="was changed on disk"):
        selectors.read_pdf(paper)
    path.unlink()
    with pytest.raises(files.DamagedFileError, match="is missing"):
        selectors.read_pdf(paper)


def test_observers_read_and_do_not_issue(member_of: Callable[..., Membership], asked: Data, owner: Membership) -> None:
    with pytest.raises(NotPermittedError):
        issue(member_of("Third", Role.OBSERVER), asked)
    paper = issue(owner, asked)
    user = User.objects.create_user("inspector@example.org")
    observer = Membership.objects.create(workshop=owner.workshop, user=user, role=Role.OBSERVER)
    assert selectors.get_paper_for(observer, paper.uuid) == paper


def test_strangers_find_nothing(owner: Membership, member_of: Callable[..., Membership], asked: Data) -> None:
    paper, stranger = issue(owner, asked), member_of("Other")
    with pytest.raises(NotFoundError):
        selectors.get_paper_for(stranger, paper.uuid)
    assert not list(selectors.list_papers_for(stranger))


@pytest.mark.parametrize("count", [1, 3])
def test_the_list_is_newest_first_and_one_query(
    count: int, owner: Membership, asked: Data, django_assert_num_queries: Any
) -> None:
    issued = [issue(owner, asked) for _ in range(count)]
    with django_assert_num_queries(1):
        seen = [
            (str(paper.issued_by.user), paper.entry.sequence, paper.pk) for paper in selectors.list_papers_for(owner)
        ]
    assert [pk for _, _, pk in seen] == [paper.pk for paper in reversed(issued)]


@pytest.mark.parametrize(
    ("change", "constraint"),
    [({"kind": "passport"}, "paper_kind"), ({"number": 1}, "number")],
    ids=["paper_kind", "paper_number_once"],
)
def test_the_database_refuses_unknown_kinds_and_numbers_used_twice(
    change: Data, constraint: str, owner: Membership, asked: Data
) -> None:
    first, second = issue(owner, asked), issue(owner, asked)
    assert (first.number, second.number) == (1, 2)
    with (
        scope(workshop=owner.workshop),
        transaction.atomic(),
        pytest.raises(IntegrityError, match=constraint),
    ):
        Paper.objects.filter(pk=second.pk).update(**change)


def test_the_constraints_have_their_names() -> None:
    assert {constraint.name for constraint in Paper._meta.constraints} == {"paper_number_once", "paper_kind"}
