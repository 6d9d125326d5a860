"""A CSV or XLSX file as a table of cells. Nothing is guessed: what cannot be read is said by row and column."""

import codecs
import csv
import io
import warnings
import zipfile
from collections import Counter
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta
from decimal import Decimal
from itertools import islice
from typing import Any

from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.texts import tidy

LARGEST_FILE = 50 * 1024 * 1024
"""Bytes of the largest file that is read."""

LARGEST_UNPACKED = 200 * 1024 * 1024
"""Bytes that the parts of an XLSX file may have when they are unpacked."""

MOST_COLUMNS, MOST_ROWS = 200, 100_000
SHEET_ROWS = 1 << 20
"""Rows of a sheet, empty ones included (ECMA-376)."""

SEPARATORS = (",", ";", "\t")
ZIP, OLD_SHEET = b"PK\x03\x04", b"\xd0\xcf\x11\xe0"
"""First bytes of XLSX files and of their predecessors."""

CSV_TYPE = "text/csv"
XLSX_TYPE = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet"


@dataclass(frozen=True)
class Broken:
    """A cell, or a line, that cannot be read: why, and what to do."""

    message: str


class Plain(str):
    """A number that the file holds as one, in plain digits: its decimal sign is a point, whatever texts use."""

    __slots__ = ()


Cell = str | date | time | Broken
"""What stands in a cell: a text or a plain number, a day or a moment, a clock time. Empty is ""."""

Line = Sequence[Cell] | Broken


@dataclass(frozen=True)
class Row:
    """A row with its number as a spreadsheet counts, and its cells under the headings; or why it cannot be read."""

    number: int
    cells: tuple[Cell, ...] = ()
    problem: str = ""


@dataclass(frozen=True)
class Table:
    """The headings of a file, and how to read its rows. ``unread`` are the names of further sheets."""

    headings: tuple[str, ...]
    first: int
    lines: Callable[[], Iterator[Line]]
    unread: tuple[str, ...] = ()

    def rows(self) -> Iterator[Row]:
        """Yield the rows below the headings that are not empty; one that says so in the place of too many."""
        count = 0
        for number, line in enumerate(self.lines(), 1):
            if number <= self.first or _is_blank(line):
                continue
            count += 1
            if count > MOST_ROWS:
                yield Row(number, problem=f"There are more than {MOST_ROWS} rows. Split the file.")
                return
            yield self._row(number, line)

    def _row(self, number: int, line: Line) -> Row:
        if isinstance(line, Broken):
            return Row(number, problem=line.message)
        width = len(self.headings)
        if any(cell != "" for cell in line[width:]):
            more = "This row has more cells than there are headings. A separator inside a cell needs quotation marks."
            return Row(number, problem=more)
        return Row(number, (*line[:width], *[""] * (width - len(line))))


def open_table(data: bytes) -> Table:
    """Return the table in a file. Raises InvalidInputError by the field ``file``."""
    if len(data) > LARGEST_FILE:
        raise _refuse("This file is larger than 50 MB. Split it.")
    if data.startswith(OLD_SHEET):
        raise _refuse("This is a spreadsheet of an old format. Save it as XLSX or as CSV.")
    lines, unread = _open_xlsx(data) if data.startswith(ZIP) else (_open_csv(data), ())
    first, headings = _find_headings(lines())
    return Table(headings, first, lines, unread)


def media_type_of(data: bytes) -> str:
    """Return the media type of a file that ``open_table`` reads."""
    return XLSX_TYPE if data.startswith(ZIP) else CSV_TYPE


def _refuse(*messages: str) -> InvalidInputError:
    return InvalidInputError([FieldError("file", message) for message in messages])


def _is_blank(line: Line) -> bool:
    return not isinstance(line, Broken) and all(cell == "" for cell in line)


def _find_headings(lines: Iterator[Line]) -> tuple[int, tuple[str, ...]]:
    """Return the first row that is not empty, and its number. A column without a heading is called by its place."""
    number, line = next(((number, line) for number, line in enumerate(lines, 1) if not _is_blank(line)), (0, []))
    if isinstance(line, Broken):
        raise _refuse(f"Row {number}: {line.message}")
    broken = [f"Row {number}: {cell.message}" for cell in line if isinstance(cell, Broken)]
    if broken:
        raise _refuse(*broken)
    texts = list(map(str, line))
    while texts and not texts[-1]:
        texts.pop()
    if not texts:
        raise _refuse("This file is empty. The first row must hold the headings of the columns.")
    if len(texts) > MOST_COLUMNS:
        raise _refuse(f"There are more than {MOST_COLUMNS} columns. Leave out those that are not needed.")
    headings = tuple(" ".join(text.split()) or f"(column {place})" for place, text in enumerate(texts, 1))
    twice = [heading for heading, count in Counter(map(str.casefold, headings)).items() if count > 1]
    if twice:
        raise _refuse(*(f'Two columns are called "{heading}". Give each a heading of its own.' for heading in twice))
    return number, headings


def _open_csv(data: bytes) -> Callable[[], Iterator[Line]]:
    text = _decode(data)
    separator = _find_separator(text)

    def lines() -> Iterator[Line]:
        reader = csv.reader(io.StringIO(text, newline=""), delimiter=separator, strict=True)
        try:
            for cells in reader:
                yield [tidy(cell) for cell in cells[: MOST_COLUMNS + 1]]
        except csv.Error as error:
            yield Broken(f"From here on the file cannot be read ({error}). Mend its quotation marks, or save it anew.")

    return lines


def _decode(data: bytes) -> str:
    """Return the text: UTF-8, or UTF-16 that says so."""
    marked = data.startswith((codecs.BOM_UTF16_LE, codecs.BOM_UTF16_BE))
    if b"\0" in data and not marked:
        raise _refuse("This is neither a CSV nor an XLSX file. Save it as one of these.")
    try:
        return data.decode("utf-16" if marked else "utf-8-sig")
    except UnicodeDecodeError as error:
        line = data[: error.start].count(b"\n") + 1
        raise _refuse(
            f"Line {line} holds a character that is not in UTF-8. Save the file as CSV in UTF-8, or as XLSX."
        ) from error


def _find_separator(text: str) -> str:
    """Return the separator that gives the headings the most columns."""
    head = text.lstrip("\r\n \t")[: 1 << 16]

    def count(separator: str) -> int:
        try:
            return len(next(csv.reader(io.StringIO(head, newline=""), delimiter=separator), ()))
        except csv.Error:
            return 0

    return max(SEPARATORS, key=count)


def _open_xlsx(data: bytes) -> tuple[Callable[[], Iterator[Line]], tuple[str, ...]]:
    """Return the lines of the first sheet that is not hidden, and the names of the others."""
    book = _load(data)
    if book is None:
        raise _refuse("This file is larger than 200 MB when it is unpacked. Split it.")
    sheets = [sheet for sheet in book.worksheets if sheet.sheet_state == "visible"]
    if not sheets:
        raise _refuse("This file has no sheet that can be seen. Save it as one with a sheet.")
    sheet = sheets[0]
    sheet.reset_dimensions()  # what a file says of its own size need not be true

    def lines() -> Iterator[Line]:
        rows = islice(sheet.iter_rows(max_col=MOST_COLUMNS + 1), SHEET_ROWS)
        try:
            blank: object = None  # the reader gives the same cells for every row that is missing
            while batch := _read_quietly(rows):
                for cells in batch:
                    line = [] if cells is blank else _read_cells(cells)
                    blank = blank if line else cells
                    yield line
        except Exception as error:  # a damaged sheet breaks its reader in many ways
            yield Broken(f"From here on the sheet cannot be read ({type(error).__name__}). Save the file anew.")

    return lines, tuple(other.title for other in sheets[1:])


def _load(data: bytes) -> Any:
    """Return the workbook; None if it is too large."""
    from openpyxl import load_workbook

    try:
        if _measure(data) > LARGEST_UNPACKED:
            return None
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # about styles, which do not matter here
            return load_workbook(io.BytesIO(data), read_only=True, keep_links=False)
    except Exception as error:  # a damaged file breaks its reader in many ways
        raise _refuse(f"This XLSX file cannot be read ({type(error).__name__}). Save it anew, or as CSV.") from error


def _measure(data: bytes) -> int:
    """Return how large the parts of an archive are when they are unpacked; no more of them is read than they say."""
    with zipfile.ZipFile(io.BytesIO(data)) as archive:
        return sum(part.file_size for part in archive.infolist())


def _read_quietly(rows: Iterator[Any], count: int = 500) -> list[Any]:
    """Return the next rows without the reader's warnings: what is wrong with a cell is said under its name."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        return list(islice(rows, count))


def _read_cells(cells: Sequence[Any]) -> list[Cell]:
    from openpyxl.cell.read_only import EMPTY_CELL

    if all(cell is EMPTY_CELL for cell in cells):
        return []
    return ["" if cell is EMPTY_CELL or cell.value is None else _read_cell(cell) for cell in cells]


def _read_cell(cell: Any) -> Cell:
    """Return the value of a cell, as a person sees it. A formula is none: its result may be old, or missing."""
    value, kind = cell.value, cell.data_type
    if kind == "f":
        return Broken("A formula stands here. Copy the column and paste its values only.")
    if kind == "e":
        return Broken(f"The spreadsheet shows the error {value} here. Write what is right.")
    if isinstance(value, datetime):
        return _shown(value, cell.number_format)
    return value if isinstance(value, time) else _spell(value, cell.number_format)


def _spell(value: object, number_format: str) -> str:
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, timedelta):
        return Plain(f"{_plain(value.total_seconds())} s")
    if isinstance(value, int | float):
        return Plain(f"{_plain(value, 100)} %" if "%" in number_format else _plain(value))
    return tidy(str(value))


def _plain(number: float, times: int = 1) -> str:
    """Return a number in plain digits: the fewest that stand for it."""
    text = f"{Decimal(repr(number)) * times:f}"
    return text.rstrip("0").rstrip(".") if "." in text else text


def _shown(moment: datetime, number_format: str) -> date:
    """Return the moment to the second, or only its day where no more is shown."""
    from openpyxl.styles.numbers import is_datetime

    if is_datetime(number_format) == "date":
        return moment.date()
    return (moment + timedelta(microseconds=500_000)).replace(microsecond=0)
