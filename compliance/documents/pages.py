"""Papers of several pages: the same head, and a foot that tells one sheet from another and witnesses the journal."""

from collections.abc import Mapping, Sequence
from typing import Any, NamedTuple

from django.utils.translation import gettext as _

from compliance.documents import words
from compliance.documents.errors import DoesNotFitError, FieldError
from compliance.documents.flow import MM, Block, Columns, Group, Rule, Stack, Text, paginate
from compliance.documents.fonts import REGULAR, SEMIBOLD, Style
from compliance.documents.shapes import PaperSize
from compliance.documents.stock import PAGES

MARGIN = 15 * MM
CODE = 24 * MM
"""Side of the code in a head."""
_FOOT, _NUMBER = Style(REGULAR, 7), Style(SEMIBOLD, 9)


class Pages(NamedTuple):
    """What stands on the pages. ``issued`` is the sentence of the foot, ``data`` gives it the chain head; ``field`` is
    where a text stands that is longer than a page.
    """

    head: Block
    groups: Sequence[Group]
    issued: str
    data: Mapping[str, Any]
    field: str = ""


def draw_pages(canvas: Any, pages: Pages, paper_size: PaperSize) -> None:
    """Draw head, foot and as much of the groups on each page as it holds; `DoesNotFitError` if one text is too long."""
    wide, high = (side * MM for side in PAGES[paper_size])
    width = wide - 2 * MARGIN
    head_height, foot_height = pages.head.height(width), _foot(pages, 1, 1).height(width)
    room = high - 2 * MARGIN - head_height - foot_height
    filled = paginate(pages.groups, width, room)
    if any(sum(block.height(width) for block in page) > room for page in filled):
        raise DoesNotFitError(
            [FieldError(pages.field, _("one text is longer than a page: say less, or in more lines"))]
        )
    for number, page in enumerate(filled, start=1):
        pages.head.draw(canvas, MARGIN, high - MARGIN, width)
        Stack(page).draw(canvas, MARGIN, high - MARGIN - head_height, width)
        _foot(pages, number, len(filled)).draw(canvas, MARGIN, MARGIN + foot_height, width)
        canvas.showPage()


def _foot(pages: Pages, number: int, total: int) -> Block:
    page = _("page %(number)d of %(total)d") % {"number": number, "total": total}
    chain = _("journal %(sequence)d") % {"sequence": pages.data["chain_sequence"]}
    return Stack(
        [
            Rule(0.4, 4, 2),
            Columns([Text(pages.issued, _FOOT), Text(page, _NUMBER, align=1.0)], [0.75, 0.25]),
            Text(f"{chain}: {words.grouped(pages.data['chain_head'])}", _FOOT),
        ]
    )
