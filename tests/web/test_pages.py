"""Every page, as each of the three roles: it opens, keeps the policy, and offers only what the role may do."""

import re
from collections.abc import Iterator
from datetime import datetime
from uuid import uuid4

import pytest

from chemicals.journal.models import Entry
from chemicals.workshop.models import Membership, Role
from compliance.documents.selectors import list_papers_for
from compliance.dropoffs.selectors import list_drop_offs_for
from compliance.dropoffs.services import create_drop_off, create_receiver, pack_drop_off
from compliance.waste.selectors import get_container_for
from compliance.waste.services import close_container, issue_label
from tests.web.conftest import Line, Visitor, text_of

WRITING = (
    "add-product", "add-substance", "add-anode", "add-holder", "add-rack-type", "add-route", "add-stream",
    "add-container", "new-jar", "change-containers",
    "add-drop-off", "add-receiver", "add-place", "add-token",
)  # fmt: skip
OWNING = ("workshop-settings", "invite")
FORMS = re.compile(
    r'href="[^"]*/(new|stream|container|receiver|workshop/places|tokens|people|settings'
    r"|jar|change|care|limit|apart|assess|put-away|labels|decant)/"
)
"""Links to what only owners and workers may open."""


@pytest.fixture
def packed(filled: Line, owner: Membership, now: datetime) -> Line:
    """Return the line with a label and a packed drop-off."""
    drum = close_container(actor=owner, now=now, container=filled.drum, gross=6 * 10**9)
    issue_label(actor=owner, now=now, key=uuid4(), container=get_container_for(owner, drum.vessel.uuid))
    receiver = create_receiver(actor=owner, name="County collection point")
    drop_off = create_drop_off(
        actor=owner, now=now, receiver=receiver, mode="brought", planned_for=now.date(), containers=[drum]
    )
    pack_drop_off(actor=owner, now=now, drop_off=drop_off)
    return filled


def reading(line: Line, owner: Membership) -> Iterator[tuple[str, tuple[object, ...]]]:
    """Yield every page that anybody of the workshop may read."""
    names = (
        "today",
        "register",
        "containers",
        "jars",
        "places",
        "violations",
        "counts",
        "chemicals",
        "emergency",
        "substances",
        "tanks",
        "entries",
        "export",
        "balance",
        "waste",
        "drop-offs",
        "workshop",
    )
    yield from ((name, ()) for name in names)
    yield "product", (line.salt.uuid,)
    yield from (("vessel", (vessel.uuid,)) for vessel in (line.tub, line.bath, line.rinse))
    yield from (("waste-container", (drum.vessel.uuid,)) for drum in (line.drum, line.cyanide_drum))
    yield from (("entry", (entry.uuid,)) for entry in Entry._base_manager.all())
    yield from (("drop-off", (drop_off.uuid,)) for drop_off in list_drop_offs_for(owner))
    yield from (("paper", (paper.uuid,)) for paper in list_papers_for(owner))


def writing(line: Line) -> Iterator[tuple[str, tuple[object, ...]]]:
    """Yield every form that only owners and workers may open."""
    yield from ((name, ()) for name in WRITING)
    yield "add-tank", ("bath",)
    yield "add-tank", ("rinse",)
    yield "care", (line.tub.uuid,)
    yield "care", (line.bath.uuid,)
    yield "revise-product", (line.salt.uuid,)


def test_every_page_opens_for_every_role(packed: Line, owner: Membership, observer: Membership) -> None:
    for member in (owner, observer):
        visitor = Visitor(member)
        for name, args in reading(packed, owner):
            page = visitor.get(name, *args)
            assert page.status_code == 200, (name, member.role)
            assert_well_formed(name, page.content.decode(), page.headers["Content-Security-Policy"])


def assert_well_formed(name: str, html: str, policy: str) -> None:
    """Check what holds for every page: language, title, one main, one heading, nothing inline, the policy."""
    assert re.search(r'<html lang="en">', html), name
    assert re.search(r"<title>\s*\S", html), name
    assert html.count("<main") == 1, name
    assert html.count("<h1") == 1, name
    assert not re.search(r"<[^>]+\sstyle=|<style|<script(?! src=)|\son[a-z]+=|javascript:", html), name
    assert "default-src 'none'" in policy
    assert "unsafe" not in policy
    ids = re.findall(r'\sid="([^"]+)"', html)
    assert len(ids) == len(set(ids)), name


def test_forms_open_for_those_who_write_and_for_nobody_else(
    packed: Line, owner: Membership, worker: Membership, observer: Membership
) -> None:
    for name, args in writing(packed):
        for member in (owner, worker):
            page = Visitor(member).get(name, *args)
            assert page.status_code == 200, (name, member.role)
            assert_well_formed(name, page.content.decode(), page.headers["Content-Security-Policy"])
        assert Visitor(observer).get(name, *args).status_code == 403, name


def test_what_is_the_owners_is_closed_to_workers(owner: Membership, worker: Membership, observer: Membership) -> None:
    for name in OWNING:
        assert [Visitor(member).get(name).status_code for member in (owner, worker, observer)] == [200, 403, 403]
    assert Visitor(worker).post("password-link", owner.uuid).status_code == 403


def test_an_observer_is_offered_nothing_to_do(packed: Line, owner: Membership, observer: Membership) -> None:
    """The only form that writes is the one for signing out; no link leads to a form that would be refused."""
    visitor = Visitor(observer)
    for name, args in reading(packed, owner):
        html = visitor.get(name, *args).content.decode()
        assert re.findall(r'<form[^>]*method="post"[^>]*action="([^"]+)"', html) in ([], ["/sign-out"]), name
        assert "/record/" not in html, name
        assert not FORMS.search(html), name


def test_labels_belong_to_fields_and_needed_fields_say_so(visit: Visitor, packed: Line) -> None:
    for name, args in writing(packed):
        html = visit.get(name, *args).content.decode()
        labelled = set(re.findall(r'<label for="([^"]+)"', html))
        fields = re.findall(r'<(?:input|select|textarea)[^>]*\sid="([^"]+)"[^>]*>', html)
        hidden = re.findall(r'<input type="hidden"[^>]*id="([^"]+)"', html)
        assert [field for field in fields if field not in labelled and field not in hidden] == [], name


def test_skip_link_and_landmarks(visit: Visitor, packed: Line) -> None:
    html = visit.get("tanks").content.decode()
    assert '<a class="skip" href="#main">' in html
    assert '<nav class="pages" aria-label="Pages">' in html
    assert html.count('aria-current="page"') == 1
    assert re.search(r'href="[^"]*/tanks/" aria-current="page"', html)


def test_unknown_is_a_word_and_never_zero(visit: Visitor, line: Line) -> None:
    visit.post("record", "opening", key=uuid4(), vessel=line.bath.uuid, volume="20 L", step="save")
    page = text_of(visit.get("vessel", line.bath.uuid))
    assert "not all listed" in page
    assert "every metal not named is unknown" in page
    assert "<dt>metals</dt> <dd>unknown</dd>" in page
    assert "metals unknown" in text_of(visit.get("tanks"))


def test_an_entry_names_what_was_poured_in(visit: Visitor, line: Line) -> None:
    for vessel, more in ((line.bath, {"product": line.salt.uuid}), (line.rinse, {})):
        visit.post("record", "opening", key=uuid4(), vessel=vessel.uuid, volume="9 L", step="save", **more)
    known, unknown = (
        text_of(visit.get("entry", entry.uuid)) for entry in Entry._base_manager.filter(kind="opening").order_by("pk")
    )
    assert "<dt>poured in</dt> <dd>Blue salt, revision 1</dd>" in known
    assert "<dt>poured in</dt> <dd>a liquid that nobody can name</dd>" in unknown


def test_a_code_opens_the_page_of_its_vessel(visit: Visitor, line: Line, stranger: Membership) -> None:
    typed = f"{line.bath.code[:3].lower()}-{line.bath.code[3:]}"
    address = f"/c/{line.bath.code}"
    assert visit.client.get(f"/c/{typed}").headers["Location"] == visit.address("vessel", line.bath.uuid)
    assert visit.client.get("/c", {"code": line.bath.code}).headers["Location"] == address
    assert visit.client.get("/c", {"code": "../x y"}).headers["Location"].endswith("/register/?q=..%2Fx+y")
    assert visit.client.get("/c/NOSUCH").status_code == 404
    assert Visitor(stranger).client.get(address).status_code == 404


def test_the_page_of_a_waste_vessel_is_that_of_its_container(visit: Visitor, line: Line) -> None:
    there = visit.address("waste-container", line.drum.vessel.uuid)
    assert visit.get("vessel", line.drum.vessel.uuid).headers["Location"] == there


def test_a_wrong_method_is_told_so(visit: Visitor, line: Line) -> None:
    assert visit.post("today").status_code == 405
    assert visit.get("issue-label", line.drum.vessel.uuid).status_code == 405
    assert visit.client.head(visit.address("today")).status_code == 200


def test_home_goes_to_the_only_workshop_or_offers_a_choice(owner: Membership, stranger: Membership) -> None:
    visitor = Visitor(owner)
    assert visitor.client.get("/").headers["Location"] == visitor.address("today")
    Membership.objects.create(workshop=stranger.workshop, user=owner.user, role=Role.WORKER)
    page = text_of(visitor.client.get("/"))
    assert "Alder Court" in page
    assert "Birch Yard" in page


def test_a_member_of_no_workshop_is_told_whom_to_ask(owner: Membership) -> None:
    visitor = Visitor(owner)
    Membership.objects.update(active=False)
    assert "Ask an owner to invite you" in text_of(visitor.client.get("/"))
    assert visitor.get("today").status_code == 404


def test_pages_that_are_not_there_say_so_quietly(visit: Visitor) -> None:
    page = visit.client.get("/nowhere/")
    assert page.status_code == 404
    assert "<h1>Not found</h1>" in page.content.decode()
    assert "default-src 'none'" in page.headers["Content-Security-Policy"]


def test_a_form_without_its_token_is_refused_with_a_page(owner: Membership, line: Line) -> None:
    from django.test import Client

    client = Client(enforce_csrf_checks=True)
    client.force_login(owner.user, backend="django.contrib.auth.backends.ModelBackend")
    page = client.post(Visitor(owner).address("add-place"), {"name": "Shelf"})
    assert page.status_code == 403
    assert "This form is too old" in page.content.decode()
