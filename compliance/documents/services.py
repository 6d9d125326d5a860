"""Issuing numbered papers. Drawing comes first and touches nothing; issuing is one short transaction."""

import hashlib
from collections.abc import Callable
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
from compliance.documents.shapes import PaperSize

_ATTEMPTS = 5  # how often a paper is drawn anew because something was recorded meanwhile


class ChainMovedError(ConflictError):
    """Something was recorded between drawing and issuing: what the paper says may be out of date. Draw it again."""


@dataclass(frozen=True)
class DrawnPaper:
    """A paper that is ready to be issued: its frozen data as canonical bytes, and its PDF."""

    kind: str
    number: int
    chain_sequence: int
    data: bytes
    pdf: bytes


Build = Callable[[], dict[str, Any]]


def issue_paper(
    *,
    actor: Membership,
    now: datetime,
    kind: str,
    build: Build,
    key: UUID,
    paper_size: PaperSize = "A4",
    then: Callable[[Paper], None] = lambda paper: None,
) -> Paper:
    """Draw a paper under the next number of its kind, keep its bytes and record it in the journal.

    ``build`` returns data of the shape of its kind (``shapes.SHAPES``) without the fields of ``FILLED_IN``; it is
    called again if something was recorded meanwhile, so that the paper says what the books say at the chain head
    printed on it. ``then`` does further writes in the paper's transaction. The same ``key`` returns the first paper.
    Raises a PaperError if it cannot be drawn.
    """
    require_writer(actor)
    for _attempt in range(_ATTEMPTS):
        first = find_issued(actor=actor, kind=kind, key=key)
        if first is not None:
            return first
        drawn = draw_paper(actor=actor, now=now, kind=kind, build=build, paper_size=paper_size)
        try:
            return issue_drawn(actor=actor, now=now, drawn=drawn, key=key, then=then)
        except ChainMovedError:
            continue
    raise ConflictError(_("Others are recording at this moment. Try again."))


def find_issued(*, actor: Membership, kind: str, key: UUID) -> Paper | None:
    """Return the paper that this key issued before, or None; ConflictError if it was another kind of paper."""
    with scope(workshop=actor.workshop):
        paper = Paper.objects.filter(entry__uuid=key).select_related("entry", "issued_by__user").first()
    if paper is not None and paper.kind != kind:
        raise ConflictError(_("This key was used for another paper. Open a fresh form and issue again."))
    return paper


def draw_paper(
    *, actor: Membership, now: datetime, kind: str, build: Build, paper_size: PaperSize = "A4"
) -> DrawnPaper:
    """Fill in number, chain head and issuer, and draw the PDF. Writes nothing; call it outside a transaction."""
    from compliance.documents.render import render_pdf

    require_writer(actor)
    workshop = actor.workshop
    sequence, head = get_head(workshop)
    number = _next_number(actor, kind)
    complete = {
        **build(),
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
    return DrawnPaper(kind, number, sequence, frozen, pdf)


def issue_drawn(
    *, actor: Membership, now: datetime, drawn: DrawnPaper, key: UUID, then: Callable[[Paper], None]
) -> Paper:
    """Issue a drawn paper in one transaction; ChainMovedError if anything was recorded since it was drawn."""
    require_writer(actor)
    pdf_sha256 = files.keep(drawn.pdf)  # complete on disk before an entry names it
    event = events.Paper(
        paper=drawn.kind,
        number=drawn.number,
        data_sha256=hashlib.sha256(drawn.data).hexdigest(),
        pdf_sha256=pdf_sha256,
    )
    with transaction.atomic(), scope(workshop=actor.workshop):
        if journal.lock_chain(actor).sequence != drawn.chain_sequence:
            raise ChainMovedError(_("Something was recorded meanwhile. Try again."))
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
        paper = Paper.objects.create(
            workshop=actor.workshop,
            kind=drawn.kind,
            number=drawn.number,
            data=drawn.data,
            pdf_sha256=pdf_sha256,
            entry=appended.entry,
            issued_at=now,
            issued_by=actor,
        )
        then(paper)
        return paper


def _next_number(actor: Membership, kind: str) -> int:
    with scope(workshop=actor.workshop):
        last = Paper.objects.filter(kind=kind).order_by("-number").values_list("number", flat=True).first()
    return (last or 0) + 1
