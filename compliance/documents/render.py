"""Frozen data in, paper out: PDF bytes (the same each time) and the accessible HTML twin with the same facts."""

from io import BytesIO
from typing import Any, cast

from . import fonts
from .check import check_data
from .flow import MM
from .label import draw_label
from .manifest import draw_manifest
from .shapes import ManifestData, PaperSize, WasteLabelData
from .stock import PAGES, find_stock


def render_pdf(kind: str, data: dict[str, Any], *, paper_size: PaperSize) -> bytes:
    """Draw the paper. Raises a `PaperError`: wrong shape, a character without a drawing, text that does not fit."""
    check_data(kind, data)
    fonts.check_glyphs(data)
    fonts.register()
    from reportlab.pdfgen.canvas import Canvas

    wide, high = PAGES[paper_size]
    target = BytesIO()
    canvas = Canvas(target, pagesize=(wide * MM, high * MM), invariant=1, initialFontName=fonts.REGULAR, lang="en")
    if kind == "waste-label":
        label = cast("WasteLabelData", data)
        draw_label(canvas, label, find_stock(label.get("stock"), label.get("start", 1), paper_size))
    else:
        draw_manifest(canvas, cast("ManifestData", data), paper_size)
    canvas.save()
    return target.getvalue()
