"""Issuing numbered papers. Drawing comes first and touches nothing; issuing is one short transaction."""

import hashlib
from dataclasses import dataclass
from datetime import datetime
from typing import Any
from uuid import UUID

from django.db import transaction
from django.utils.translation import gettext as _
from django_scopes import scope

from chemicals.books import canonical, events
from chemicals.books.clearance import not_asked
from chemicals.journal import files
from chemicals.journal import services as journal
from chemicals.journal.selectors import get_head
from chemicals.workshop.errors import ConflictError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.documents.check import check_data
from compliance.documents.models import Paper
from compliance.documents.shapes import FILLED_IN, PaperSize

_ATTEMPTS = 5  # how often a paper is drawn anew because another one took its number meanwhile


class NumberTakenError(ConflictError):
    """Another paper of this kind was issued between drawing and issuing: draw again."""


@dataclass(frozen=True)
class DrawnPaper:
    """A paper that is ready to be issued: its frozen data as canonical bytes, and its PDF."""

    kind: str
    number: int
    data: bytes
    pdf: bytes


def issue_paper(
    *, actor: Membership, now: datetime, kind: str, data: dict[str, Any], key: UUID, paper_size: PaperSize = "A4"
) -> Paper:
    """Draw a paper under the next number of its kind, keep its bytes and record it in the journal.

    ``data`` has the shape of its kind (``shapes.SHAPES``) without the fields of ``FILLED_IN``. The same ``key`` with
    the same data returns the first paper, other data raises ConflictError. Raises a PaperError if it cannot be drawn.
    """
    for _attempt in range(_ATTEMPTS):
        first = find_issued(actor=actor, kind=kind, data=data, key=key)
        if first is not None:
            return first
        drawn = draw_paper(actor=actor, now=now, kind=kind, data=data, paper_size=paper_size)
        try:
            return issue_drawn(actor=actor, now=now, drawn=drawn, key=key)
        except NumberTakenError:
            continue
    raise ConflictError(_("Other papers are being issued at this moment. Try again."))


def find_issued(*, actor: Membership, kind: str, data: dict[str, Any], key: UUID) -> Paper | None:
    """Return the paper that this key issued before, or None; ConflictError if it was another paper."""
    require_writer(actor)
    with scope(workshop=actor.workshop):
        paper = Paper.objects.filter(entry__uuid=key).select_related("entry", "issued_by__user").first()
    if paper is None:
        return None
    stored = canonical.load(bytes(paper.data))
    asked = {name: value for name, value in stored.items() if name in FILLED_IN}
    asked |= {name: value for name, value in data.items() if name not in FILLED_IN}
    if paper.kind == kind:
        check_data(kind, asked)
    if paper.kind != kind or canonical.dump(asked) != bytes(paper.data):
        raise ConflictError(_("This key was used for another paper. Open a fresh form and issue again."))
    return paper


def draw_paper(
    *, actor: Membership, now: datetime, kind: str, data: dict[str, Any], paper_size: PaperSize = "A4"
) -> DrawnPaper:
    """Fill in number, chain head and issuer, and draw the PDF. Writes nothing; call it outside a transaction."""
    from compliance.documents.render import render_pdf

    require_writer(actor)
    workshop = actor.workshop
    sequence, head = get_head(workshop)
    number = _next_number(actor, kind)
    complete = {
        **data,
        "workshop": {"name": workshop.name, "address": workshop.address, "telephone": workshop.telephone},
        "number": number,
        "chain_head": head,
        "chain_sequence": sequence,
        "issued_at": now.astimezone(workshop.zone).isoformat(timespec="minutes"),
        "issued_by": str(actor.user),
        "paper_size": paper_size,
    }
    check_data(kind, complete)
    frozen = canonical.dump(complete)
    pdf = render_pdf(kind, canonical.load(frozen), paper_size=paper_size)
    return DrawnPaper(kind, number, frozen, pdf)


def issue_drawn(*, actor: Membership, now: datetime, drawn: DrawnPaper, key: UUID) -> Paper:
    """Issue a drawn paper in one transaction; NumberTakenError if its number is gone: draw it again."""
    require_writer(actor)
    pdf_sha256 = files.keep(drawn.pdf)  # complete on disk before an entry names it
    event = events.Paper(
        paper=drawn.kind,
        number=drawn.number,
        data_sha256=hashlib.sha256(drawn.data).hexdigest(),
        pdf_sha256=pdf_sha256,
    )
    with transaction.atomic(), scope(workshop=actor.workshop):
        journal.lock_chain(actor)
        if _next_number(actor, drawn.kind) != drawn.number:
            raise NumberTakenError(_("Another paper took this number meanwhile. Try again."))
        name = f"{drawn.kind}-{drawn.number}.pdf"
        journal.add_attachment(actor=actor, now=now, name=name, data=drawn.pdf)
        appended = journal.append(
            actor=actor,
            now=now,
            key=key,
            event=event,
            occurred=None,
            clearance=not_asked("a paper moves no matter"),
            attachments=[pdf_sha256],
        )
        return Paper.objects.create(
            workshop=actor.workshop,
            kind=drawn.kind,
            number=drawn.number,
            data=drawn.data,
            pdf_sha256=pdf_sha256,
            entry=appended.entry,
            issued_at=now,
            issued_by=actor,
        )


def _next_number(actor: Membership, kind: str) -> int:
    with scope(workshop=actor.workshop):
        last = Paper.objects.filter(kind=kind).order_by("-number").values_list("number", flat=True).first()
    return (last or 0) + 1
