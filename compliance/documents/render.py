"""Frozen data in, paper out: PDF bytes (the same each time) and the accessible HTML twin with the same facts."""

from io import BytesIO
from typing import Any, cast

from django.template.loader import render_to_string
from django.utils.translation import get_language

from compliance.documents import fonts
from compliance.documents.check import check_data
from compliance.documents.emergency import draw_emergency_sheet
from compliance.documents.flow import MM
from compliance.documents.label import draw_label
from compliance.documents.manifest import draw_manifest
from compliance.documents.register_list import draw_register
from compliance.documents.shapes import EmergencyData, LabelsData, ManifestData, PaperSize, RegisterData, WasteLabelData
from compliance.documents.stock import ALL_STOCKS, PAGES, find_stock
from compliance.documents.twin import twin_context
from compliance.documents.vessel_label import draw_labels
from compliance.documents.words import paper_title

_IN_MILLIMETRES = ("waste-label", "labels")
"""Papers that must not be scaled to fit the page: they lie on label stock."""


def render_pdf(kind: str, data: dict[str, Any], *, paper_size: PaperSize) -> bytes:
    """Draw the paper. Raises a `PaperError`: wrong shape, a character without a drawing, text that does not fit."""
    check_data(kind, data)
    fonts.check_glyphs(data)
    fonts.register()
    from reportlab.pdfgen.canvas import Canvas

    wide, high = PAGES[paper_size]
    target = BytesIO()
    size, language = (wide * MM, high * MM), get_language() or "en"
    canvas = Canvas(target, pagesize=size, invariant=1, initialFontName=fonts.REGULAR, lang=language)
    canvas.setTitle(paper_title(kind, data))
    canvas.setAuthor(data["workshop"]["name"])
    canvas.setProducer("Gramledger")
    if kind in _IN_MILLIMETRES:
        canvas.setViewerPreference("PrintScaling", "None")
    _draw(canvas, kind, data, paper_size)
    canvas.save()
    return target.getvalue()


def _draw(canvas: Any, kind: str, data: dict[str, Any], paper_size: PaperSize) -> None:
    if kind == "waste-label":
        label = cast("WasteLabelData", data)
        draw_label(canvas, label, find_stock(label.get("stock"), label.get("start", 1), paper_size))
    elif kind == "labels":
        labels = cast("LabelsData", data)
        draw_labels(canvas, labels, find_stock(labels["stock"], labels["start"], paper_size, ALL_STOCKS))
    elif kind == "emergency":
        draw_emergency_sheet(canvas, cast("EmergencyData", data), paper_size)
    elif kind == "register":
        draw_register(canvas, cast("RegisterData", data), paper_size)
    else:
        draw_manifest(canvas, cast("ManifestData", data), paper_size)


def render_html(kind: str, data: dict[str, Any], *, pdf_url: str = "") -> str:
    """The page with the same facts; `pdf_url` adds a link to the issued bytes. Raises `PaperDataError`."""
    check_data(kind, data)
    return render_to_string(f"documents/{kind}.html", {**twin_context(kind, data), "pdf_url": pdf_url})
