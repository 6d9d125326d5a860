"""From the rows of a file to the inputs of verbs: every error of every row, each with its row and its column."""

from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import Any
from uuid import UUID

from chemicals.books.occurred import Occurred
from chemicals.process import fields as kinds
from chemicals.process.fields import EMPTY, FieldKind, RowsField, describe
from chemicals.process.importing import values
from chemicals.process.importing.columns import (
    CLOCK,
    GENERAL,
    KEY,
    NUMBERED,
    UNDATED,
    VERB,
    VERBS,
    WHEN,
    WHICH,
    ColumnMap,
    find_field,
    fold,
    split_unit,
    verb_words,
)
from chemicals.process.importing.names import Names, key_of, row_of
from chemicals.process.importing.table import Cell, Row, Table
from chemicals.process.importing.values import CellError, Clocked
from chemicals.process.inputs import Input
from chemicals.workshop.models import Membership

MOST_ERRORS = 10_000
"""How many errors are kept; further ones are counted."""

NEEDED = "This is needed. Write it."


@dataclass(frozen=True)
class RowError:
    """What is wrong in a row (0: in the file), in which column ("": in none or all of them), and what to do."""

    row: int
    column: str
    message: str


@dataclass(frozen=True)
class Said:
    """What a row says: the input of its verb, and when it happened (None: its time follows from another entry).

    ``columns`` are the headings by what they say; ``groups`` the numbers of the groups of fields that are filled:
    held 1 metal, held 3 metal.
    """

    row: int
    key: UUID
    data: Input
    occurred: Occurred | None
    columns: Mapping[str, str]
    groups: Mapping[str, tuple[int, ...]]

    @property
    def refers(self) -> bool:
        """Say whether the row speaks of another entry."""
        return any(is_entry(kind) for _, kind in describe(type(self.data)))


def is_entry(kind: FieldKind) -> bool:
    """Say whether a field names another entry."""
    return isinstance(kind, kinds.ReferenceField) and kind.to == "analysis"


@dataclass(frozen=True, kw_only=True)
class Outcome:
    """What came of reading a file: how many rows were read, the first ``errors`` of ``wrong``.

    ``all_read``: no further rows were left out.
    """

    rows: int
    errors: tuple[RowError, ...]
    wrong: int
    all_read: bool


class Errors:
    """Collects what is wrong; the first of it is kept, all of it is counted."""

    def __init__(self) -> None:
        self.kept: list[RowError] = []
        self.count = 0

    def add(self, row: int, column: str, message: str) -> None:
        """Note what is wrong."""
        self.count += 1
        if len(self.kept) < MOST_ERRORS:
            self.kept.append(RowError(row, column, message))

    def in_order(self) -> tuple[RowError, ...]:
        """Return what is kept, by row."""
        return tuple(sorted(self.kept, key=lambda error: error.row))


@dataclass(frozen=True)
class _Filled:
    """A cell that is not empty, its heading, and the unit that stands there."""

    heading: str
    unit: str
    cell: Cell


class Reader:
    """Reads the rows of one file by one column map."""

    def __init__(self, member: Membership, table: Table, chosen: ColumnMap, sha256: str) -> None:
        self.member, self.chosen, self.sha256 = member, chosen, sha256
        self.errors, self.names = Errors(), Names(member)
        self.columns = {target: heading for heading, target in chosen.used.items()}
        self._places = [
            (place, heading, split_unit(heading)[1], chosen.used[heading])
            for place, heading in enumerate(table.headings)
            if heading in chosen.used
        ]
        self._keys: dict[str, int] = {}
        self._verbs = verb_words()
        self._row = 0

    def read(self, row: Row) -> Said | None:
        """Return what a row says, or None with everything that is wrong noted."""
        self._row, before = row.number, self.errors.count
        if row.problem:
            self._refuse("", row.problem)
            return None
        filled = {
            target: _Filled(heading, unit, row.cells[place])
            for place, heading, unit, target in self._places
            if row.cells[place] != ""
        }
        verb = self._read_verb(filled)
        key, occurred = self._read_key(filled), self._read_when(filled, verb)
        if verb is None:
            return None
        self._refuse_surplus(filled, verb)
        said = self._read_input(VERBS[verb], filled, "")
        if self.errors.count > before:
            return None
        return Said(row.number, key, VERBS[verb](**said), occurred, self.columns, _find_groups(filled))

    def _refuse(self, column: str, message: str) -> None:
        self.errors.add(self._row, column, message)

    def _heading(self, target: str) -> str:
        return self.columns.get(target, "")

    def _try(self, filled: _Filled, read: Callable[[Cell], Any]) -> Any:
        """Return what a cell means; None with the reason noted."""
        try:
            return read(filled.cell)
        except CellError as error:
            self._refuse(filled.heading, str(error))
            return None

    def _read_verb(self, filled: Mapping[str, _Filled]) -> str | None:
        if self.chosen.verb:
            return self.chosen.verb
        if VERB not in filled:
            self._refuse(self._heading(VERB), NEEDED)
            return None

        def read(cell: Cell) -> str:
            verb = self._verbs.get(fold(str(cell)))
            if verb is None:
                raise CellError(f'"{cell}" is nothing that can be imported. Write one of: {", ".join(VERBS)}.')
            return verb

        found: str | None = self._try(filled[VERB], read)
        return found

    def _read_key(self, filled: Mapping[str, _Filled]) -> UUID:
        if KEY not in filled:
            return row_of(self.member, self.sha256, self._row)
        key = str(filled[KEY].cell)
        first = self._keys.setdefault(key, self._row)
        if first != self._row:
            self._refuse(filled[KEY].heading, f'The key "{key}" stands in row {first} already. Give each row its own.')
        return key_of(self.member, key)

    def _read_when(self, filled: Mapping[str, _Filled], verb: str | None) -> Occurred | None:
        if verb in UNDATED:
            for target in (WHEN, CLOCK, WHICH):
                if target in filled:
                    self._refuse(filled[target].heading, "It counts from the sampling of its analysis. Leave it empty.")
            return None
        if WHEN not in filled:
            self._refuse(self._heading(WHEN), NEEDED)
            return None
        found: Clocked | None = self._try(filled[WHEN], lambda cell: values.read_clocked(cell, self.chosen.dates))
        clock = self._try(filled[CLOCK], values.read_clock) if CLOCK in filled else None
        second = self._try(filled[WHICH], values.read_which) if WHICH in filled else None
        if found is None:
            return None
        if clock is not None and found.clock is not None:
            self._refuse(filled[CLOCK].heading, f"The column {filled[WHEN].heading} holds a time already. Use one.")
            return None
        whole = found if clock is None else Clocked(found.day, clock)
        settled: Occurred | None = self._try(
            filled[WHEN], lambda _cell: values.settle(whole, second, self.member.workshop.zone)
        )
        return settled

    def _refuse_surplus(self, filled: Mapping[str, _Filled], verb: str) -> None:
        for target, each in filled.items():
            if target not in GENERAL and find_field(verb, target) is None:
                self._refuse(each.heading, f'There is no such thing where it says "{verb}". Leave it empty.')

    def _read_input(self, of: type[Any], filled: Mapping[str, _Filled], before: str) -> dict[str, Any]:
        """Return the values of an input's fields, or of one of its groups, whose targets begin with ``before``."""
        said: dict[str, Any] = {}
        for name, kind in describe(of):
            if isinstance(kind, RowsField):
                said[name] = tuple(self._read_groups(name, kind, filled))
            elif before + name in filled:
                said[name] = self._read_field(kind, filled[before + name])
            elif kind.required:
                self._refuse(self._heading(before + name) or (before and before + name) or str(kind.label), NEEDED)
            else:
                said[name] = EMPTY.get(type(kind))
        return said

    def _read_groups(self, name: str, kind: RowsField, filled: Mapping[str, _Filled]) -> Iterator[Any]:
        for number in _find_groups(filled).get(name, ()):
            before = self.errors.count
            values = self._read_input(kind.of, filled, f"{name} {number} ")
            if self.errors.count == before:
                yield kind.of(**values)

    def _read_field(self, kind: FieldKind, filled: _Filled) -> Any:
        return self._try(filled, lambda cell: READERS[type(kind)](self, kind, cell, filled.unit))

    def read_moment(self, cell: Cell) -> Any:
        """Return a moment of the workshop's zone; a day stands for its noon."""
        found = values.read_clocked(cell, self.chosen.dates)
        return values.settle(found, None, self.member.workshop.zone).at


READERS: Mapping[type[FieldKind], Callable[[Reader, Any, Cell, str], Any]] = {
    kinds.AmountField: lambda reader, kind, cell, unit: values.read_amount_cell(
        kind, cell, unit, reader.chosen.decimal
    ),
    kinds.VesselField: lambda reader, kind, cell, _unit: reader.names.vessel(kind, values.read_name(cell)),
    kinds.ReferenceField: lambda reader, kind, cell, _unit: reader.names.reference(kind, values.read_name(cell)),
    kinds.InstrumentField: lambda reader, kind, cell, _unit: reader.names.reference(kind, values.read_name(cell)),
    kinds.ComponentField: lambda _reader, kind, cell, _unit: values.read_component(kind, cell),
    kinds.WholeField: lambda _reader, kind, cell, _unit: values.read_whole(kind, cell),
    kinds.ChoiceField: lambda _reader, kind, cell, _unit: values.read_choice(kind, cell),
    kinds.TextField: lambda _reader, kind, cell, _unit: values.read_text(kind, cell),
    kinds.FlagField: lambda _reader, _kind, cell, _unit: values.read_flag(cell),
    kinds.MomentField: lambda reader, _kind, cell, _unit: reader.read_moment(cell),
}
"""How a cell of each kind of field is read."""


def _find_groups(targets: Iterable[str]) -> dict[str, tuple[int, ...]]:
    found: dict[str, set[int]] = {}
    for match in filter(None, map(NUMBERED.fullmatch, targets)):
        found.setdefault(match[1], set()).add(int(match[2]))
    return {name: tuple(sorted(numbers)) for name, numbers in found.items()}
