"""Issued papers against the entries that prove them."""

import hashlib

from django_scopes import scope

from chemicals.books import events
from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_event
from chemicals.journal.verify import Problem
from chemicals.workshop.models import Workshop
from compliance.documents.models import Paper


def verify_papers(workshop: Workshop) -> list[Problem]:
    """Return the papers of a workshop that are missing or not as they were issued. Files are checked elsewhere.

    Raises ValueError if an entry cannot be read.
    """
    with scope(workshop=workshop):
        papers = Paper.objects.select_related("entry").order_by("entry__sequence")
        found = [
            Problem(p.entry.sequence, f"The paper {p} is not as it was issued.") for p in papers if not _is_as_issued(p)
        ]
        lost = Entry.objects.filter(kind=events.Paper.KIND, paper=None).order_by("sequence")
        found += [Problem(number, "Its paper is missing.") for number in lost.values_list("sequence", flat=True)]
        return found


def _is_as_issued(paper: Paper) -> bool:
    return read_event(paper.entry) == events.Paper(
        paper=paper.kind,
        number=paper.number,
        data_sha256=hashlib.sha256(bytes(paper.data)).hexdigest(),
        pdf_sha256=paper.pdf_sha256,
    )
