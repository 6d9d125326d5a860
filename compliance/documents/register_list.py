"""The list of chemicals, with the columns of the rule that the workshop chose."""

from collections.abc import Iterator
from typing import Any

from django.utils.translation import gettext as _

from compliance.documents import register_words, words
from compliance.documents.codes import draw_code
from compliance.documents.flow import Block, Columns, Gap, Group, Picture, Rule, Stack, Text
from compliance.documents.fonts import BOLD, REGULAR, SEMIBOLD, Style
from compliance.documents.pages import CODE, Pages, draw_pages
from compliance.documents.shapes import ListColumn, ListRowData, PaperSize, RegisterData

_TITLE, _STRONG, _BODY = Style(BOLD, 17), Style(SEMIBOLD, 9), Style(REGULAR, 8.5)
_CELL, _CELL_HEAD, _NAME = Style(REGULAR, 8), Style(SEMIBOLD, 8), Style(SEMIBOLD, 8.5)
_SHARES: dict[ListColumn, float] = {
    "name": 0.24, "classification": 0.3, "quantities": 0.17, "areas": 0.15, "sheet": 0.14,
}  # fmt: skip


def draw_register(canvas: Any, data: RegisterData, paper_size: PaperSize) -> None:
    """Draw all pages."""
    draw_pages(
        canvas, Pages(_head(data), list(_groups(data)), words.issued("register", data), data, "rows"), paper_size
    )


def _head(data: RegisterData) -> Block:
    workshop = data["workshop"]
    telephone = _("telephone %s") % words.known(workshop["telephone"])
    text = Stack(
        [
            Text(words.paper_title("register", data), _TITLE),
            Text(f"{workshop['name']}, {workshop['address']}, {telephone}".replace("\n", ", "), _STRONG),
            Gap(3),
            Text(register_words.columns_after(data["rule"]), _BODY),
            Text(register_words.list_is_no_verdict(), _BODY),
        ]
    )
    code = Picture(CODE, CODE, lambda canvas, x, y: draw_code(canvas, x, y, CODE, data["url"]))
    return Stack([Columns([text, code], [1.0, CODE]), Rule(1.2, 1, 4), _header(data)])


def _widths(data: RegisterData) -> list[float]:
    shares = [_SHARES[column] for column in data["columns"]]
    return [share / sum(shares) for share in shares]


def _header(data: RegisterData) -> Block:
    cells = [Text(register_words.list_column(column), _CELL_HEAD) for column in data["columns"]]
    return Stack([Columns(cells, _widths(data)), Rule(0.8, 1, 1)])


def _groups(data: RegisterData) -> Iterator[Group]:
    nothing = Gap(0)
    widths = _widths(data)
    if not data["rows"]:
        yield Group([Text(_("Nothing of the register is here by the books."), _STRONG)], nothing)
    for row in data["rows"]:
        yield Group([Stack([_row(row, data["columns"], widths), Rule(0.3, 1.5, 1.5)])], nothing)
    yield Group([Gap(4), *(Text(line, _BODY) for line in register_words.notes(data))], nothing)


def _row(row: ListRowData, columns: list[ListColumn], widths: list[float]) -> Block:
    cells = []
    for column in columns:
        first, *more = row[column] or [words.known(None)]
        style = _NAME if column == "name" else _CELL
        cells.append(Stack([Text(first, style), *(Text(line, _CELL) for line in more)]))
    return Columns(cells, widths)
