"""A whole file, understood: the entries that it would make, in the order of recording, and everything that is wrong."""

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from datetime import datetime
from itertools import islice
from typing import Any
from uuid import UUID

from django_scopes import scope

from chemicals.books import events, fold
from chemicals.books.occurred import Occurred
from chemicals.journal.models import Entry
from chemicals.journal.selectors import get_entry_for, list_entries_for
from chemicals.journal.services import FUTURE, lies_ahead
from chemicals.ledger.periods import explain_closed
from chemicals.ledger.recompute import get_last_close
from chemicals.process.build import build
from chemicals.process.draft import Known
from chemicals.process.importing.columns import KEY, WHEN, ColumnMap, check_map
from chemicals.process.importing.reading import Errors, Outcome, Reader, RowError, Said
from chemicals.process.importing.table import Table
from chemicals.process.inputs import AcceptanceInput
from chemicals.process.services import require_possible
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership

BATCH = 500
"""Of how many keys it is asked at once whether there is an entry."""


@dataclass(frozen=True)
class Made:
    """An entry that a row would make."""

    said: Said
    event: events.Event
    occurred: Occurred


@dataclass(frozen=True, kw_only=True)
class Understood(Outcome):
    """What a file says.

    ``made`` are the entries of the rows that are right, in order of time, those of the same moment in the order of the
    file; an acceptance comes after its analysis.
    """

    made: tuple[Made, ...] = ()


def understand(
    member: Membership, now: datetime, table: Table, chosen: ColumnMap, sha256: str, *, most: int | None = None
) -> Understood:
    """Return what the rows of a file say, at most so many of them. Writes nothing.

    A few queries for each table that is looked into and for each thing that is named, none for a row; two for a row
    that speaks of an entry of the journal.
    """
    problems = check_map(chosen, table.headings)
    if problems:
        return Understood(**refuse_map(problems))
    with scope(workshop=member.workshop):
        return _Understanding(member, now, Reader(member, table, chosen, sha256)).run(table, most)


def refuse_map(problems: Sequence[FieldError]) -> dict[str, Any]:
    """Return the outcome of a file of which nothing was read, because of what was said of its columns."""
    columns = ("" if problem.field == "mapping" else problem.field for problem in problems)
    errors = tuple(RowError(0, column, problem.message) for column, problem in zip(columns, problems, strict=True))
    return {"rows": 0, "errors": errors, "wrong": len(errors), "all_read": False}


class _Understanding:
    """Goes through a file: reads every row, then builds every entry."""

    def __init__(self, member: Membership, now: datetime, reader: Reader) -> None:
        self.member, self.now, self.reader = member, now, reader
        self.errors: Errors = reader.errors
        self.known, self.closed = Known(), get_last_close()
        self.accepted: dict[UUID, int] = {}

    def run(self, table: Table, most: int | None) -> Understood:
        """Return what the rows say."""
        rows = table.rows()
        said, count = [], 0
        for row in rows if most is None else islice(rows, most):
            count += 1
            found = self.reader.read(row)
            if found is not None:
                said.append(found)
        if not count:
            self.errors.add(0, "", "There is no row below the headings. Choose another file.")
        self._refuse_known(said)
        made = [*self._build(each for each in said if not each.refers)]
        made += self._build(each for each in said if each.refers)
        made.sort(key=lambda each: (each.occurred.at, each.said.refers, each.said.row))
        return Understood(
            rows=count,
            made=tuple(made),
            errors=self.errors.in_order(),
            wrong=self.errors.count,
            all_read=next(rows, None) is None,
        )

    def _refuse_known(self, said: Sequence[Said]) -> None:
        """Refuse rows whose entries are there already: by an earlier file with the same keys."""
        for first in range(0, len(said), BATCH):
            batch = {each.key: each for each in said[first : first + BATCH]}
            rows = list_entries_for(self.member).filter(uuid__in=list(batch)).order_by("sequence")
            for uuid, sequence in rows.values_list("uuid", "sequence"):
                row = batch[uuid]
                message = f"This was imported already: it is entry {sequence}. Leave the row out."
                self.errors.add(row.row, row.columns.get(KEY, ""), message)

    def _build(self, said: Iterable[Said]) -> Iterator[Made]:
        for each in said:
            try:
                made = self._make(each)
            except InvalidInputError as error:
                for problem in error.errors:
                    self.errors.add(each.row, _heading(each, problem.field), problem.message)
            else:
                yield made

    def _make(self, said: Said) -> Made:
        """Return the entry that a row would make, or raise InvalidInputError with what is wrong."""
        if isinstance(said.data, AcceptanceInput):
            self._require_analysis(said.data.analysis)
        built = build(self.member, self.now, said.data, said.occurred, self.known)
        built.require_here()
        event, occurred = built.event, built.occurred
        assert occurred is not None  # noqa: S101  (read, or that of the analysis)
        if lies_ahead(self.member.workshop, self.now, occurred):
            raise InvalidInputError.of(WHEN, FUTURE)
        if self.closed is not None and type(event) in fold.FOLDS and occurred.at < self.closed.until:
            raise InvalidInputError.of(WHEN, explain_closed(self.closed))
        if said.refers:
            self._require_possible(said, event)
        else:
            fresh = Entry(uuid=said.key, kind=event.KIND, occurred_at=occurred.at, precision=occurred.precision)
            self.known.add(fresh, event)
        return Made(said, event, occurred)

    def _require_analysis(self, uuid: UUID) -> None:
        there = self.known.entry(uuid) or self.known.once(
            (Entry, uuid), list_entries_for(self.member).filter(uuid=uuid).first
        )
        if there is None:
            text = self.reader.names.keys.get(uuid, "")
            message = f'No analysis has the key "{text}". Write the key of its row, or # and the number of its entry.'
            raise InvalidInputError.of("analysis", message)

    def _require_possible(self, said: Said, event: events.Event) -> None:
        """Refuse to accept an analysis twice, in the file or in the journal."""
        about = event.about()
        assert about is not None  # noqa: S101  (the row speaks of an entry)
        first = self.accepted.setdefault(about, said.row)
        if first != said.row:
            raise InvalidInputError.of("analysis", f"Row {first} accepts this analysis already. Leave one of them out.")
        if self.known.entry(about) is None:
            try:
                require_possible(get_entry_for(self.member, about), event)
            except ConflictError as error:
                raise InvalidInputError.of("analysis", str(error)) from error


def _heading(said: Said, field: str) -> str:
    """Return the heading of a field: "held.0.amount" is the amount of the first group that the row fills."""
    name, *path = field.split(".")
    if len(path) == 2 and path[0].isdecimal():
        number = said.groups[name][int(path[0])]
        return said.columns.get(f"{name} {number} {path[1]}", "")
    return said.columns.get(name, "")
