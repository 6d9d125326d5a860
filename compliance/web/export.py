"""Every list as a file, CSV or XLSX: one exporter, a list of columns for each view."""

import csv
import io
from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass
from datetime import date, datetime
from decimal import Decimal
from typing import Any

from django.http import Http404, HttpRequest, HttpResponse
from django.utils import timezone

FORMULA_SIGNS = ("=", "+", "-", "@", "\t", "\r")
"""A spreadsheet that reads CSV takes text that begins so for a formula; an apostrophe before it keeps it text."""

XLSX_DIGITS = 15
"""What a number of a spreadsheet can hold exactly (IEEE 754 double precision); a longer one is kept as text."""

Cell = str | int | Decimal | None


@dataclass(frozen=True)
class Column:
    """A column: its heading, and what stands in it for a row."""

    heading: str
    read: Callable[[Any], object]


Listed = tuple[Sequence[Column], Callable[[], Iterable[Any]]]
"""Columns of a list, and how to get its rows."""


def wanted_file(request: HttpRequest, *, about: str = "", **lists: Listed) -> HttpResponse | None:
    """Return the list that the address asks for as a file (``as=csv`` or ``as=xlsx``); None where it wants the page.

    It is the first list, or the one named by ``list``. ``about`` ends the name of the file.
    """
    ending = request.GET.get("as", "")
    if ending not in FORMATS:
        return None
    name = request.GET.get("list", next(iter(lists)))
    if name not in lists:
        raise Http404("no such list")
    columns, rows = lists[name]
    write, media_type = FORMATS[ending]
    title = "-".join(filter(None, (name.replace("_", "-"), about)))
    headers = {"Content-Disposition": f'attachment; filename="{title}.{ending}"'}
    return HttpResponse(write(_table(columns, rows())), content_type=media_type, headers=headers)


def _table(columns: Sequence[Column], rows: Iterable[Any]) -> Iterator[list[Cell]]:
    """Yield the headings, then one line for each row; what is unknown stays empty."""
    yield [column.heading for column in columns]
    for row in rows:
        yield [_cell(column.read(row)) for column in columns]


def _cell(value: object) -> Cell:
    if value is None or isinstance(value, int | Decimal):
        return value
    if isinstance(value, datetime):
        return timezone.localtime(value).isoformat(timespec="minutes")
    return value.isoformat() if isinstance(value, date) else str(value)


def _csv(table: Iterable[list[Cell]]) -> bytes:
    """Write UTF-8 with a mark for spreadsheets."""
    target = io.StringIO()
    csv.writer(target).writerows([_guarded(cell) for cell in row] for row in table)
    return target.getvalue().encode("utf-8-sig")


def _guarded(cell: Cell) -> str:
    if cell is None:
        return ""
    if isinstance(cell, str):
        return f"'{cell}" if cell.startswith(FORMULA_SIGNS) else cell
    return f"{cell:f}" if isinstance(cell, Decimal) else str(cell)


def _xlsx(table: Iterable[list[Cell]]) -> bytes:
    """Write one sheet; whatever people typed is stored as text, never as a formula."""
    from openpyxl import Workbook
    from openpyxl.cell import WriteOnlyCell
    from openpyxl.cell.cell import ILLEGAL_CHARACTERS_RE

    book, target = Workbook(write_only=True), io.BytesIO()
    sheet = book.create_sheet()

    def stored(cell: Cell) -> Any:
        if cell is None or isinstance(cell, int) or (isinstance(cell, Decimal) and _fits(cell)):
            return cell
        text = WriteOnlyCell(sheet, ILLEGAL_CHARACTERS_RE.sub("", _plain(cell)))
        text.data_type = "s"  # the library takes what begins with "=" for a formula
        return text

    for row in table:
        sheet.append([stored(cell) for cell in row])
    book.save(target)
    return target.getvalue()


def _plain(cell: str | Decimal) -> str:
    return cell if isinstance(cell, str) else f"{cell:f}"


def _fits(number: Decimal) -> bool:
    return len(number.as_tuple().digits) <= XLSX_DIGITS


FORMATS: dict[str, tuple[Callable[[Iterable[list[Cell]]], bytes], str]] = {
    "csv": (_csv, "text/csv; charset=utf-8"),
    "xlsx": (_xlsx, "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet"),
}


def grams(micrograms: int | None) -> Decimal | None:
    """Return exact grams."""
    return None if micrograms is None else Decimal(micrograms) / 10**6


def moles(nanomoles: int | None) -> Decimal | None:
    """Return exact moles."""
    return None if nanomoles is None else Decimal(nanomoles) / 10**9


def litres(nanolitres: int | None) -> Decimal | None:
    """Return exact litres."""
    return None if nanolitres is None else Decimal(nanolitres) / 10**9
