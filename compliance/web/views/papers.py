"""Issued papers and kept files: fetching is reading, the bytes are those of the day of issue."""

from uuid import UUID

from django.http import HttpRequest, HttpResponse
from django.utils.http import content_disposition_header

from chemicals.journal import files
from chemicals.journal.selectors import get_attachment_for
from chemicals.workshop.models import Membership
from compliance.documents.selectors import get_paper_for, read_html, read_pdf
from compliance.web.door import page
from compliance.web.views.acts import address


@page()
def paper(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Show the accessible twin of a paper."""
    found = get_paper_for(member, uuid)
    return HttpResponse(read_html(found, pdf_url=address("paper-pdf", member, uuid)))


@page()
def pdf(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Show the issued PDF."""
    found = get_paper_for(member, uuid)
    headers = {"Content-Disposition": f'inline; filename="{found.kind}-{found.number}.pdf"'}
    return HttpResponse(read_pdf(found), content_type="application/pdf", headers=headers)


@page()
def file(request: HttpRequest, member: Membership, sha256: str) -> HttpResponse:
    """Hand out a kept file to save."""
    found = get_attachment_for(member, sha256)
    header = content_disposition_header(as_attachment=True, filename=found.name) or "attachment"
    headers = {"Content-Disposition": header}
    return HttpResponse(files.read(found.sha256), content_type=found.media_type, headers=headers)
