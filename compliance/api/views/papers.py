"""Issued papers, and the files of a workshop."""

from typing import Any

from django.db.models import QuerySet
from django.http import HttpResponse
from django.utils.http import content_disposition_header
from rest_framework.parsers import MultiPartParser
from rest_framework.request import Request
from rest_framework.response import Response

from compliance.api.pagination import NewestFirst
from compliance.api.serializers import waste as shapes
from compliance.api.serializers.base import With
from compliance.api.views.base import ListView, WorkshopView
from compliance.documents.models import Paper
from compliance.documents.selectors import get_paper_for, list_papers_for, read_data, read_pdf
from compliance.documents.uploads import add_file, read_file

FILE_TYPES = ("application/pdf", "image/png", "image/jpeg")


class PapersView(ListView):
    """Issued papers, the latest first."""

    shape, pagination_class = shapes.PaperShape, NewestFirst

    def rows(self) -> QuerySet[Paper]:
        """Return the papers."""
        return list_papers_for(self.member)


class PaperView(WorkshopView):
    """One issued paper with the frozen data that it was drawn from."""

    shape = shapes.PaperDetail

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the paper."""
        paper = get_paper_for(self.member, kwargs["uuid"])
        return self.respond(With(paper, content=read_data(paper)))


class PaperPdfView(WorkshopView):
    """The PDF of an issued paper: the same bytes as on the day of issue."""

    media_types = ("application/pdf",)

    def get(self, request: Request, **kwargs: Any) -> HttpResponse:
        """Return the bytes."""
        paper = get_paper_for(self.member, kwargs["uuid"])
        return send(read_pdf(paper), "application/pdf", f"{paper.kind}-{paper.number}.pdf")


class AttachmentsView(WorkshopView):
    """Keeps a file: a safety data sheet, a photograph, a laboratory report. The same bytes are kept once."""

    parser_classes = (MultiPartParser,)
    shape, input_class = shapes.AttachmentShape, shapes.AttachmentInput

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Keep it."""
        file = self.read_body(request)["file"]
        return self.respond(add_file(actor=self.member, now=self.now, name=file.name, data=file.read()), 201)


class AttachmentView(WorkshopView):
    """The bytes of one file."""

    media_types = FILE_TYPES

    def get(self, request: Request, **kwargs: Any) -> HttpResponse:
        """Return the bytes, if they are still those that were put in."""
        attachment, data = read_file(self.member, kwargs["sha256"])
        return send(data, attachment.media_type, attachment.name)


def send(data: bytes, media_type: str, name: str) -> HttpResponse:
    """Return bytes to be saved as a file, never shown in place: they come from people."""
    response = HttpResponse(data, content_type=media_type)
    response.headers["Content-Disposition"] = (
        content_disposition_header(as_attachment=True, filename=name) or "attachment"
    )
    response.headers["X-Content-Type-Options"] = "nosniff"
    return response
