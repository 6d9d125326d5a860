"""What followed from entries, between the fold and the tables: postings, contents, findings.

All functions run inside the workshop's scope; those that write, inside a transaction.
"""

from collections import defaultdict
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import replace

from django.db.models import Model

from chemicals.books.events import BOUNDARIES
from chemicals.books.fold import Folded
from chemicals.books.fold.state import EVERY, Finding, Holding, Transfer
from chemicals.journal.models import Entry
from chemicals.ledger import models
from chemicals.ledger.inserting import Row, insert_rows
from chemicals.ledger.projection import BATCH, HELD, Names, read_vessel

NOTHING = Folded((), (), ())

COLUMNS: Mapping[type[Model], tuple[str, ...]] = {
    models.Posting: ("occurred_at", "transfer", "amount", "component_id", "vessel_id", "boundary", "sd", "basis"),
    models.Content: ("occurred_at", "sequence", "vessel_id", "component_id", *HELD, "poured"),
    models.Finding: ("occurred_at", "code", "component", "source", "target"),
}
WRITTEN = {table: ("workshop_id", "entry_id", *columns) for table, columns in COLUMNS.items()}


def components_of(followed: Iterable[Folded]) -> set[str]:
    """Return every component of which something followed."""
    return {
        component
        for folded in followed
        for component in (*(moved.component for moved in folded.transfers), *(held[1] for held in folded.contents))
    }


def as_kept(folded: Folded) -> Folded:
    """Return what followed from an entry in the order in which the tables give it back."""
    findings = sorted(folded.findings, key=lambda found: (found.code, found.component, found.source, found.target))
    return replace(folded, findings=tuple(findings))


def read_followed(entries: Sequence[Entry], names: Names) -> dict[int, Folded | None]:
    """Return what the tables keep of each entry, by primary key; None: rows that cannot have followed from it.

    Three queries.
    """
    kept = {table: _read_rows(table, fields, entries) for table, fields in COLUMNS.items()}
    reader = Reader(names)
    return {entry.pk: reader.read(entry, *(kept[table].get(entry.pk, []) for table in COLUMNS)) for entry in entries}


def _read_rows(table: type[Model], fields: Sequence[str], entries: Sequence[Entry]) -> Mapping[int, list[Row]]:
    found: dict[int, list[Row]] = defaultdict(list)
    rows = table._default_manager.filter(entry_id__in=[entry.pk for entry in entries])
    for entry_id, *values in rows.values_list("entry_id", *fields).iterator(chunk_size=BATCH):
        found[entry_id].append(tuple(values))
    return found


class ScatteredError(Exception):
    """Rows that cannot have followed from one entry."""


class Reader:
    """Makes what followed from an entry of the rows that are kept of it."""

    def __init__(self, names: Names) -> None:
        self.vessels = {pk: uuid for uuid, pk in names.vessels.items()}
        self.components = {pk: code for code, pk in names.components.items()}

    def read(self, entry: Entry, postings: list[Row], contents: list[Row], findings: list[Row]) -> Folded | None:
        """Return it, or None if the rows do not fit each other or the entry."""
        try:
            for occurred_at, *_ in (*postings, *contents, *findings):
                _expect(occurred_at == entry.occurred_at)
            transfers = tuple(self._transfers(sorted(postings, key=lambda row: row[1:3])))
            held = sorted((self._content(entry, row) for row in contents), key=lambda row: row[:2])
        except (ScatteredError, KeyError):
            return None
        return Folded(
            transfers,
            tuple(Finding(*row[1:]) for row in sorted(findings)),
            tuple((vessel, component, holding) for vessel, component, holding, _ in held),
            tuple((name, read_vessel(of.amount, poured)) for name, component, of, poured in held if component == EVERY),
        )

    def _transfers(self, rows: list[Row]) -> Iterator[Transfer]:
        """Yield the transfer of each two rows: what one end gives, the other takes."""
        _expect(len(rows) % 2 == 0)
        for number, (giver, taker) in enumerate(zip(rows[::2], rows[1::2], strict=True)):
            _, first, given, *what, source, out_of, sd, basis = giver
            _, second, taken, component, target, into, *figures = taker
            _expect((first, second) == (number, number))
            _expect((given, *what, sd, basis) == (-taken, component, *figures))
            ends = self._end(source, out_of), self._end(target, into)
            yield Transfer(self.components[component], *ends, taken, sd, basis)

    def _end(self, vessel: int | None, boundary: str) -> str:
        return boundary if vessel is None else self.vessels[vessel]

    def _content(self, entry: Entry, row: Row) -> tuple[str, str, Holding, list[str] | None]:
        _, sequence, vessel, component, *held, poured = row
        code = self.components[component]
        _expect(sequence == entry.sequence)
        _expect((poured is not None) == (code == EVERY))
        return self.vessels[vessel], code, Holding(*held), poured


def _expect(truth: bool) -> None:  # noqa: FBT001  (reads as an assertion)
    if not truth:
        raise ScatteredError


def write_followed(followed: Iterable[tuple[Entry, Folded]], names: Names) -> None:
    """Write what followed from entries of which nothing is kept yet."""
    pairs = list(followed)
    insert_rows(models.Posting, WRITTEN[models.Posting], (row for e, f in pairs for row in _postings(e, f, names)))
    insert_rows(models.Content, WRITTEN[models.Content], (row for e, f in pairs for row in _contents(e, f, names)))
    insert_rows(models.Finding, WRITTEN[models.Finding], (row for e, f in pairs for row in _findings(e, f)))


def replace_followed(followed: Sequence[tuple[Entry, Folded]], names: Names) -> None:
    """Write what followed from entries in the place of what is kept of them."""
    for table in COLUMNS:
        table._default_manager.filter(entry_id__in=[entry.pk for entry, _ in followed]).delete()
    write_followed(followed, names)


def _postings(entry: Entry, folded: Folded, names: Names) -> Iterator[Row]:
    about = entry.workshop_id, entry.pk, entry.occurred_at
    for number, moved in enumerate(folded.transfers):
        component = names.components[moved.component]
        for end, amount in ((moved.source, -moved.amount), (moved.target, moved.amount)):
            vessel, boundary = (None, end) if end in BOUNDARIES else (names.vessels[end], "")
            yield (*about, number, amount, component, vessel, boundary, moved.sd, moved.basis)


def _contents(entry: Entry, folded: Folded, names: Names) -> Iterator[Row]:
    about = entry.workshop_id, entry.pk, entry.occurred_at, entry.sequence
    vessels = dict(folded.vessels)
    for vessel, component, held in folded.contents:
        poured = sorted(vessels[vessel].poured) if component == EVERY else None
        which = names.vessels[vessel], names.components[component]
        yield (*about, *which, held.amount, held.variance, held.known_part, poured)


def _findings(entry: Entry, folded: Folded) -> Iterator[Row]:
    about = entry.workshop_id, entry.pk, entry.occurred_at
    for found in folded.findings:
        yield (*about, found.code, found.component, found.source, found.target)
