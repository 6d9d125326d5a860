"""Codes (QR, ISO/IEC 18004) as rectangles, the same for PDF and SVG: drawn as vectors they stay sharp at every size."""

from functools import lru_cache
from typing import Any

import segno

QUIET = 4  # modules of white round the code, as the standard asks


@lru_cache(maxsize=64)
def bars(text: str) -> tuple[int, tuple[tuple[int, int, int], ...]]:
    """Side in modules (without the quiet zone) and the dark bars as (column, row, length), row 0 on top.

    Error level M: a splash on the label may hide an eighth of it.
    """
    rows = [bytes(row) for row in segno.make_qr(text, error="m", boost_error=False).matrix]
    found = []
    for row_number, row in enumerate(rows):
        start = None
        for column, dark in enumerate((*row, 0)):
            if dark and start is None:
                start = column
            elif not dark and start is not None:
                found.append((start, row_number, column - start))
                start = None
    return len(rows), tuple(found)


def draw_code(canvas: Any, x: float, y: float, side: float, text: str) -> None:
    """Draw the code with its quiet zone in a square of `side` points whose lower left corner is (x, y)."""
    count, found = bars(text)
    module = side / (count + 2 * QUIET)
    path = canvas.beginPath()
    for column, row, length in found:
        path.rect(x + (column + QUIET) * module, y + side - (row + 1 + QUIET) * module, length * module, module)
    canvas.setFillGray(0)
    canvas.drawPath(path, stroke=0, fill=1)


def code_svg(text: str) -> tuple[int, str]:
    """Side of the view box and the path data of the dark modules, for inline SVG."""
    count, found = bars(text)
    data = "".join(f"M{column + QUIET} {row + QUIET}h{length}v1h-{length}z" for column, row, length in found)
    return count + 2 * QUIET, data
