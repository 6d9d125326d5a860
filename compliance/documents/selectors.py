"""Reads of issued papers. Fetching is reading: the same bytes as on the day of issue, or an error."""

from typing import Any
from uuid import UUID

from django.db.models import BinaryField, QuerySet, Value
from django_scopes import scope

from chemicals.books import canonical
from chemicals.journal import files
from chemicals.journal.selectors import Position
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership
from compliance.documents.models import Paper


def list_papers_for(member: Membership) -> QuerySet[Paper]:
    """Return all papers of the member's workshop, newest first, with issuer and entry. One query."""
    with scope(workshop=member.workshop):
        return Paper.objects.select_related("issued_by__user", "entry").order_by("-issued_at", "-pk")


def list_papers_naming(member: Membership, text: str) -> QuerySet[Paper]:
    """Return the papers whose frozen data hold a text, such as the code of a container, newest first. One query."""
    wanted = Value(text.encode(), output_field=BinaryField())
    return list_papers_for(member).alias(position=Position("data", wanted)).filter(position__gt=0)


def get_paper_for(member: Membership, uuid: UUID) -> Paper:
    """Return one paper of the member's workshop."""
    try:
        return list_papers_for(member).get(uuid=uuid)
    except Paper.DoesNotExist as error:
        raise NotFoundError("There is no such paper in this workshop.") from error


def read_data(paper: Paper) -> dict[str, Any]:
    """Return the frozen data that the paper was drawn from, in the shape of its kind."""
    data: dict[str, Any] = canonical.load(bytes(paper.data))
    return data


def read_pdf(paper: Paper) -> bytes:
    """Return the issued bytes; DamagedFileError if they are missing or were changed."""
    return files.read(paper.pdf_sha256)


def read_html(paper: Paper, *, pdf_url: str = "") -> str:
    """Return the accessible twin, drawn from the same frozen data; ``pdf_url`` adds a link to the issued bytes."""
    from compliance.documents.render import render_html

    return render_html(paper.kind, read_data(paper), pdf_url=pdf_url)
