"""A sheet for a product of the demo: one page that says that it is invented."""

import io
from collections.abc import Sequence


def draw_sheet(name: str, supplier: str, statements: Sequence[str]) -> bytes:
    """Return a PDF page, the same bytes each time."""
    from reportlab.pdfgen.canvas import Canvas

    lines = [name, f"Supplier: {supplier}", "", *statements, "", "Invented for a demo. This is no safety data sheet."]
    file = io.BytesIO()
    canvas = Canvas(file, pagesize=(595, 842), invariant=1)  # A4 in points
    canvas.setTitle(f"{name} (invented)")
    text = canvas.beginText(60, 770)
    text.setFont("Helvetica", 12, leading=20)
    text.textLines(lines)
    canvas.drawText(text)
    canvas.save()
    return file.getvalue()
