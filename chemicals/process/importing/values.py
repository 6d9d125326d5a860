"""What a cell means: days and clock times, yes and no, amounts. Each function raises CellError with what to write."""

import re
from dataclasses import dataclass, replace
from datetime import UTC, date, datetime, time
from functools import cache
from zoneinfo import ZoneInfo

from chemicals.books.canonical import CanonicalError, check_text
from chemicals.books.occurred import Occurred, came_twice, was_skipped
from chemicals.ledger.components import name_of
from chemicals.process.fields import AmountField, ChoiceField, ComponentField, TextField, WholeField, read_amount
from chemicals.process.importing.columns import COMMA, DAY_FIRST, ISO
from chemicals.process.importing.table import Broken, Cell, Plain
from chemicals.science.quantity import Quantity, QuantityError

EARLIEST, LATEST = date(1900, 1, 1), date(2999, 12, 31)
"""The days that may be written: beyond them a time zone cannot be applied."""

CLOCK_TEXT = r"(?P<clock>\d{1,2}:\d{2}(?::\d{2})?)"
ISO_TEXT = re.compile(rf"(\d{{4}})-(\d\d)-(\d\d)(?:[T ]{CLOCK_TEXT}(?P<offset>Z|[+-]\d\d:\d\d)?)?")
OTHER_TEXT = re.compile(rf"(\d{{1,2}})([./-])(\d{{1,2}})\2(\d{{4}})(?:,? {CLOCK_TEXT})?")
NUMBER = re.compile(r"[+-]?[\d.,' ]*\d")
NUMBERS = re.compile(r"\d[\d.,]*\d")
YES, NO = ("yes", "true", "x", "1"), ("no", "false", "0")


class CellError(ValueError):
    """What is wrong with a cell, and what to write there."""


@dataclass(frozen=True)
class Clocked:
    """A day, a clock time if one is known, and its offset from UTC if that was written: then it is one moment."""

    day: date
    clock: time | None = None
    moment: datetime | None = None


def read_clocked(cell: Cell, dates: str) -> Clocked:
    """Return the day, and the time if there is one. ``dates`` says which comes first, day or month."""
    if isinstance(cell, datetime):
        found = Clocked(cell.date(), cell.time())
    elif isinstance(cell, date):
        found = Clocked(cell)
    else:
        found = _read_clocked(_text(cell), dates)
    if not EARLIEST <= found.day <= LATEST:
        raise CellError(f"Write a day between {EARLIEST} and {LATEST}.")
    return found


def _read_clocked(text: str, dates: str) -> Clocked:
    iso, other = ISO_TEXT.fullmatch(text), OTHER_TEXT.fullmatch(text)
    try:
        if iso is not None:
            day = date(*map(int, iso.group(1, 2, 3)))
            clock = iso["clock"] and read_clock(iso["clock"])
            moment = datetime.combine(day, clock, _offset(iso["offset"])) if clock and iso["offset"] else None
            return Clocked(day, clock or None, moment)
        if other is not None and dates != ISO:
            first, second, year = map(int, other.group(1, 3, 4))
            day = date(year, second, first) if dates == DAY_FIRST else date(year, first, second)
            return Clocked(day, read_clock(other["clock"]) if other["clock"] else None)
    except CellError:
        raise
    except ValueError:
        raise CellError(f'There is no such day as "{text}". Write the date as 2026-03-02.') from None
    if other is not None:
        raise CellError(f'"{text}" can be read in two ways. Choose which comes first, the day or the month.')
    raise CellError(f'"{text}" is no date. Write 2026-03-02, or with the time 2026-03-02 14:30.')


def _offset(text: str) -> ZoneInfo | None:
    return datetime.fromisoformat(f"2000-01-01T00:00{text}").tzinfo  # type: ignore[return-value]  # any zone will do


def read_clock(cell: Cell) -> time:
    """Return a time of day."""
    if isinstance(cell, time):
        return cell.replace(microsecond=0)
    if isinstance(cell, datetime):
        return cell.time()
    text = _text(cell)
    try:
        if re.fullmatch(r"\d{1,2}:\d{2}(:\d{2})?", text):
            hour, minute, second = (*map(int, text.split(":")), 0)[:3]
            return time(hour, minute, second)
    except ValueError:
        pass
    raise CellError(f'"{text}" is no time of day. Write it as 14:30.')


def settle(found: Clocked, second: bool | None, zone: ZoneInfo) -> Occurred:  # noqa: FBT001  (None: it was not said)
    """Return when it happened, in the workshop's zone; ``second`` says which of two equal clock times."""
    if found.moment is not None:
        return Occurred(found.moment.astimezone(UTC))
    if found.clock is None:
        return Occurred.on_day(found.day, zone)
    if was_skipped(found.day, found.clock, zone):
        raise CellError("Clocks were put forward: this time did not exist that day. Write the right one.")
    if second is None and came_twice(found.day, found.clock, zone):
        raise CellError(
            'Clocks were put back: this time came twice that day. Write "first" or "second" into a column of its own, '
            "or the time with its offset from UTC, as 2026-10-25 02:30+01:00."
        )
    return Occurred.at_clock(found.day, found.clock, zone, second=bool(second))


def read_which(cell: Cell) -> bool:
    """Return whether the second of two equal clock times is meant."""
    words = {"first": False, "1": False, "second": True, "2": True}
    text = _text(cell).casefold()
    if text not in words:
        raise CellError(f'"{text}" is neither. Write "first" or "second", or leave it empty.')
    return words[text]


def read_amount_cell(kind: AmountField, cell: Cell, unit: str, decimal: str) -> Quantity:
    """Return an amount as typed; a bare number is taken in the unit of its heading."""
    if isinstance(cell, date | time):
        raise CellError(
            f"The spreadsheet has made a date or a time of this. Write the amount with its unit, as {kind.example}."
        )
    typed = _text(cell)
    text = typed if isinstance(cell, Plain) or decimal != COMMA else _with_point(typed)
    try:
        quantity = read_amount(kind, text, unit or None)
    except QuantityError as error:
        raise CellError(error.message) from error
    return replace(quantity, typed=typed)


def _with_point(typed: str) -> str:
    """Return an amount that was written with a decimal comma as it is written with a point."""
    number = NUMBER.match(typed)
    if number is None or "," not in number[0]:
        return typed
    if "." in number[0]:
        raise CellError(f'A comma is the decimal sign here, so "{number[0]}" is unclear. Write it without points.')
    return number[0].replace(",", ".") + typed[number.end() :]


def read_figure(cell: Cell, unit: str, decimal: str) -> str:
    """Return the text of one figure, or of a range of them, with points for decimal signs and a unit behind it."""
    text = read_name(cell)
    if decimal == COMMA and not isinstance(cell, Plain):
        text = NUMBERS.sub(lambda found: _with_point(found[0]), text)
    return f"{text} {unit}" if unit and text[-1:].isdecimal() else text


def read_day(cell: Cell, dates: str) -> date:
    """Return a day of which no time of day is told."""
    found = read_clocked(cell, dates)
    if found.clock not in (None, time()):
        raise CellError("Write the day alone, without a time.")
    return found.day


def read_flag(cell: Cell) -> bool:
    """Return yes or no."""
    text = _text(cell).casefold()
    if text not in YES + NO:
        raise CellError(f'"{text}" is neither yes nor no. Write "yes" or "no".')
    return text in YES


def read_choice(kind: ChoiceField, cell: Cell) -> str:
    """Return the word of the list that was written, or whose label was."""
    text = _text(cell).casefold()
    for value, label in kind.choices:
        if text in (value.casefold(), str(label).casefold()):
            return value
    known = ", ".join(value for value, _ in kind.choices[:40])
    raise CellError(f'"{_text(cell)}" is not in the list. Write one of: {known}.')


def read_component(kind: ComponentField, cell: Cell) -> str:
    """Return what is balanced, by its symbol, name or formula; whether the workshop knows it is asked later."""
    text = read_name(cell)
    return _component_names(kind.known).get(text.casefold(), text)


@cache
def _component_names(codes: tuple[str, ...]) -> dict[str, str]:
    return {word.casefold(): code for code in codes for word in (code, name_of(code))}


def read_whole(kind: WholeField, cell: Cell) -> int:
    """Return a whole number between the ends of its field."""
    text = _text(cell)
    if not re.fullmatch(r"\d{1,9}", text) or not kind.least <= int(text) <= kind.most:
        raise CellError(f'"{text}" is no whole number between {kind.least} and {kind.most}. Write one.')
    return int(text)


def read_text(kind: TextField, cell: Cell) -> str:
    """Return a line of text that the journal can keep."""
    text = str(cell) if isinstance(cell, date | time) else _text(cell)
    try:
        check_text(text)
    except CanonicalError as error:
        raise CellError(str(error)) from error
    if len(text) > kind.longest:
        raise CellError(f"This is longer than {kind.longest} characters. Shorten it.")
    return text


def read_name(cell: Cell) -> str:
    """Return the name of a thing."""
    if isinstance(cell, date | time):
        raise CellError("The spreadsheet has made a date or a time of this name. Write it as a text.")
    return _text(cell)


def _text(cell: Cell) -> str:
    if isinstance(cell, Broken):
        raise CellError(cell.message)
    return str(cell)
