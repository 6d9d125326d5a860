"""Every list as a file, CSV, XLSX or JSON lines: one exporter, a list of columns for each list.

Files are streamed: rows are read while the file is being sent, so that a long list needs no more memory than a short
one. An XLSX file is written to a temporary file first, for its end stands at its beginning.
"""

import codecs
import contextvars
import csv
import io
import json
import tempfile
from collections.abc import Callable, Generator, Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import date, datetime
from decimal import Decimal
from typing import IO, Any

from django.http import StreamingHttpResponse
from django.utils import timezone
from django.utils.translation import gettext as _

FORMULA_SIGNS = ("=", "+", "-", "@", "\t", "\r")
"""A spreadsheet that reads CSV takes text that begins so for a formula; an apostrophe before it keeps it text."""

XLSX_DIGITS = 15
"""What a number of a spreadsheet can hold exactly (IEEE 754 double precision); a longer one is kept as text."""

XLSX_ROWS = 1_000_000
"""Rows of a sheet below its headings; a sheet can hold 1 048 576 (ECMA-376), the rest goes on the next one."""

XLSX_TEXT = 32_767
"""Characters that a cell can hold (ECMA-376); a longer text is left to the other formats, and said so."""

CHUNK = 64 * 1024
"""Bytes that are sent at once."""

Cell = str | int | Decimal | None
Chunks = Generator[bytes, None, None]


@dataclass(frozen=True)
class Column:
    """A column: its heading, and what stands in it for a row."""

    heading: str
    read: Callable[[Any], object]


@dataclass(frozen=True)
class Table:
    """A list to be written as a file.

    ``about`` is what the file says of itself, before the first row; ``line`` writes a row of JSON lines where it is
    not simply its columns.
    """

    name: str
    columns: Sequence[Column]
    rows: Iterable[Any]
    about: Mapping[str, Any] | None = None
    line: Callable[[Any], bytes] | None = None


def send(table: Table, ending: str, *, about: str = "") -> StreamingHttpResponse:
    """Return the list as a file to save; ``about`` ends its name. ``ending`` is one of FORMATS.

    The rows are read in the scope, time zone and language of now, though the file is sent later.
    """
    write, media_type = FORMATS[ending]
    name = "-".join(filter(None, (table.name.replace("_", "-"), about)))
    headers = {"Content-Disposition": f'attachment; filename="{name}.{ending}"', "X-Content-Type-Options": "nosniff"}
    return StreamingHttpResponse(_Stream(write(table)), content_type=media_type, headers=headers)


class _Stream(Iterator[bytes]):
    """Chunks, each made in a copy of the context that this was made in; closing it closes what they are read from."""

    def __init__(self, chunks: Chunks) -> None:
        self.chunks, self.context = chunks, contextvars.copy_context()

    def __next__(self) -> bytes:
        return self.context.run(next, self.chunks)

    def close(self) -> None:
        self.context.run(self.chunks.close)


def _cell(value: object) -> Cell:
    if value is None or isinstance(value, int | Decimal):
        return value
    if isinstance(value, datetime):
        return timezone.localtime(value).isoformat(timespec="minutes")
    return value.isoformat() if isinstance(value, date) else str(value)


def _lines(table: Table) -> Iterator[list[Cell]]:
    """Yield the headings, then one line for each row; what is unknown stays empty."""
    yield [column.heading for column in table.columns]
    for row in table.rows:
        yield [_cell(column.read(row)) for column in table.columns]


def _csv(table: Table) -> Chunks:
    """Write UTF-8 with a mark for spreadsheets; what the file says of itself stands in lines that begin with #."""
    target = io.StringIO()
    writer = csv.writer(target)
    yield codecs.BOM_UTF8
    for name, said in (table.about or {}).items():
        writer.writerow([f"# {name}: {said}"])
    for line in _lines(table):
        writer.writerow([_guarded(cell) for cell in line])
        if target.tell() >= CHUNK:
            yield target.getvalue().encode()
            target.seek(0)
            target.truncate()
    yield target.getvalue().encode()


def _guarded(cell: Cell) -> str:
    if cell is None:
        return ""
    if isinstance(cell, str):
        return f"'{cell}" if cell.startswith(FORMULA_SIGNS) else cell
    return f"{cell:f}" if isinstance(cell, Decimal) else str(cell)


def _jsonl(table: Table) -> Chunks:
    """Write one JSON object for each row, by the headings; the first line is what the file says of itself, if it does.

    Numbers have all their digits: what reads them as floats keeps 15.
    """
    if table.about is not None:
        yield f'{{"about":{_encode(table.about)}}}\n'.encode()
    columns = [(f"{_encode(column.heading)}:", column.read) for column in table.columns]
    line = table.line or (lambda row: _object(columns, row))
    buffer = bytearray()
    for row in table.rows:
        buffer += line(row)
        if len(buffer) >= CHUNK:
            yield bytes(buffer)
            buffer.clear()
    yield bytes(buffer)


def _object(columns: Sequence[tuple[str, Callable[[Any], object]]], row: object) -> bytes:
    cells = ",".join([name + _literal(_cell(read(row))) for name, read in columns])
    return f"{{{cells}}}\n".encode()


_encode = json.JSONEncoder(ensure_ascii=False).encode


def _literal(cell: Cell) -> str:
    return f"{cell:f}" if isinstance(cell, Decimal) else _encode(cell)


def _xlsx(table: Table) -> Chunks:
    """Write sheets to a temporary file and send it; whatever people typed is stored as text, never as a formula."""
    with tempfile.TemporaryFile() as file:
        _write_xlsx(table, file)
        file.seek(0)
        while chunk := file.read(CHUNK):
            yield chunk


def _write_xlsx(table: Table, file: IO[bytes]) -> None:
    from openpyxl import Workbook

    book, lines = Workbook(write_only=True), _lines(table)
    headings = next(lines)

    def begin(title: str) -> Any:
        sheet = book.create_sheet(title)
        sheet.append(headings)
        return sheet

    sheet = begin(table.name)
    for number, line in enumerate(lines):
        if number and number % XLSX_ROWS == 0:
            sheet = begin(f"{table.name} {number // XLSX_ROWS + 1}")
        sheet.append([_stored(sheet, cell) for cell in line])
    if table.about is not None:
        sheet = book.create_sheet("about")
        for name, said in table.about.items():
            sheet.append([_stored(sheet, name), _stored(sheet, str(said))])
    book.save(file)


def _stored(sheet: Any, cell: Cell) -> Any:
    from openpyxl.cell import WriteOnlyCell
    from openpyxl.cell.cell import ILLEGAL_CHARACTERS_RE

    if cell is None or isinstance(cell, int) or (isinstance(cell, Decimal) and _fits(cell)):
        return cell
    plain = ILLEGAL_CHARACTERS_RE.sub("", cell) if isinstance(cell, str) else f"{cell:f}"
    if len(plain) > XLSX_TEXT:
        return _("This is longer than a cell can hold: take the file as CSV or as JSON lines.")
    if not plain.startswith(("=", "#")):
        return plain
    text = WriteOnlyCell(sheet, plain)
    text.data_type = "s"  # the library takes what begins with "=" for a formula, and "#N/A" for an error
    return text


def _fits(number: Decimal) -> bool:
    return len(number.as_tuple().digits) <= XLSX_DIGITS


FORMATS: Mapping[str, tuple[Callable[[Table], Chunks], str]] = {
    "csv": (_csv, "text/csv; charset=utf-8"),
    "xlsx": (_xlsx, "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet"),
    "jsonl": (_jsonl, "application/jsonl"),
}
"""Ending of a file -> how it is written, and its media type."""


def grams(micrograms: int | None) -> Decimal | None:
    """Return exact grams."""
    return None if micrograms is None else Decimal(micrograms) / 10**6


def litres(nanolitres: int | None) -> Decimal | None:
    """Return exact litres."""
    return None if nanolitres is None else Decimal(nanolitres) / 10**9


def millimoles(nanomoles: int | None) -> Decimal | None:
    """Return exact millimoles."""
    return None if nanomoles is None else Decimal(nanomoles) / 10**6
