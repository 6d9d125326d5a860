"""A count day in words: what the books say, what was counted, and whether the two differ."""

from dataclasses import dataclass

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.process.counting.selectors import (
    AGREES,
    DIFFERS,
    WAS_UNKNOWN,
    WITHIN,
    Counted,
    Said,
)
from chemicals.process.models import CountLine, Seen
from compliance.web.export import Column, grams, litres
from compliance.web.words.amounts import UNKNOWN, in_one_unit

VERDICTS = {
    DIFFERS: gettext_lazy("differs"),
    WITHIN: gettext_lazy("agrees within its uncertainty"),
    AGREES: gettext_lazy("agrees"),
    WAS_UNKNOWN: gettext_lazy("unknown before"),
}
MARKS = {DIFFERS: "stop", WITHIN: "note", AGREES: "go", WAS_UNKNOWN: "note"}
"""Which mark a verdict has."""


@dataclass(frozen=True)
class CountedRow:
    """A line of a count as a page shows it."""

    row: Counted
    books: str
    counted: str
    difference: str
    verdict: str
    mark: str


def tell_counted(row: Counted) -> CountedRow:
    """Return a line in words."""
    return CountedRow(
        row=row,
        books=tell_said(row.books),
        counted=tell_line(row.line),
        difference=_difference(row),
        verdict=str(VERDICTS[row.verdict]),
        mark=MARKS[row.verdict],
    )


def tell_line(line: CountLine) -> str:
    """Return what was said of a container: as it was typed, with its uncertainty, or in words."""
    if line.said != Seen.AMOUNT:
        return str(line.get_said_display())
    return f"{line.typed} ± {line.typed_sd}" if line.typed_sd else line.typed


def tell_said(said: Said) -> str:
    """Return an amount with its uncertainty: nothing is a word too."""
    if said.amount is None:
        return str(UNKNOWN)
    return in_one_unit(said.amount, said.sd, said.dimension) if said.amount else _("nothing")


def _difference(row: Counted) -> str:
    if not row.difference:
        return ""
    sign = "+" if row.difference > 0 else "−"
    return f"{sign}{in_one_unit(abs(row.difference), row.difference_sd, row.books.dimension)}"


def _in_unit(amount: int | None, row: Counted) -> object:
    return litres(amount) if row.books.dimension == "volume" else grams(amount)


COLUMNS = (
    Column("container", lambda row: row.line.vessel.name),
    Column("code", lambda row: row.line.vessel.code),
    Column("place", lambda row: row.line.vessel.place.name if row.line.vessel.place else ""),
    Column("said", lambda row: tell_line(row.line)),
    Column("unit", lambda row: "L" if row.books.dimension == "volume" else "g"),
    Column("counted", lambda row: None if row.counted is None else _in_unit(row.counted.amount, row)),
    Column("books", lambda row: _in_unit(row.books.amount, row)),
    Column("difference", lambda row: _in_unit(row.difference, row)),
    Column("uncertainty", lambda row: None if row.difference is None else _in_unit(row.difference_sd, row)),
    Column("verdict", lambda row: VERDICTS[row.verdict]),
    Column("seen", lambda row: row.line.seen_at),
    Column("by", lambda row: str(row.line.seen_by.user)),
    Column("remark", lambda row: row.line.remark),
    Column("entry", lambda row: None if row.line.entry is None else row.line.entry.sequence),
)
"""The lines of a count against the books."""

SAID_COLUMNS = (
    Column("container", lambda line: line.vessel.name),
    Column("code", lambda line: line.vessel.code),
    Column("said", tell_line),
    Column("seen", lambda line: line.seen_at),
    Column("by", lambda line: str(line.seen_by.user)),
    Column("remark", lambda line: line.remark),
    Column("taken back", lambda line: line.taken_back_at),
    Column("taken back by", lambda line: "" if line.taken_back_by is None else str(line.taken_back_by.user)),
)
"""Everything that was said, also what was taken back."""

DAY_COLUMNS = (
    Column("place", lambda day: day.place.name if day.place else ""),
    Column("note", lambda day: day.note),
    Column("started", lambda day: day.started_at),
    Column("started by", lambda day: str(day.started_by.user)),
    Column("over", lambda day: day.finished_at),
    Column("ended by", lambda day: "" if day.finished_by is None else str(day.finished_by.user)),
    Column("abandoned", lambda day: "yes" if day.abandoned else ""),
    Column("containers seen", lambda day: day.seen),
    Column("entries", lambda day: day.made),
    Column("not seen", lambda day: "; ".join(day.unseen)),
)
"""Counts, open ones and past ones."""
