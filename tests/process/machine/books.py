"""What people were told is recorded, and what must hold for the tables because of it."""

from collections import Counter
from datetime import datetime
from typing import Any
from uuid import UUID

from django.db.models import Sum
from django_scopes import scope

from chemicals.books.events import REACTION, PeriodClosing, PeriodReopening
from chemicals.books.fold import Entry as FoldEntry
from chemicals.books.fold import Folded, rebuild
from chemicals.journal.models import Entry, Head
from chemicals.journal.selectors import as_fold_entry
from chemicals.journal.verify import verify_chain
from chemicals.ledger.followed import as_kept, read_followed
from chemicals.ledger.models import ComponentKind, Content, Holding, Posting
from chemicals.ledger.projection import Names, load_state
from chemicals.ledger.selectors import get_recomputed_to
from chemicals.ledger.verify import verify_projection
from chemicals.workshop.models import Workshop
from compliance.ops.verify import our_models

NOTHING = Folded((), (), ())


class Acknowledged:
    """The entries of a workshop as its people know them: what they were told, and what they were told nothing about."""

    def __init__(self, workshop: Workshop) -> None:
        self.workshop = workshop
        self.rows: dict[str, Entry] = {}
        """By label: the sequence."""
        self.hashes: dict[UUID, bytes] = {}
        self.entries: dict[UUID, FoldEntry] = {}
        self.doubtful: set[UUID] = set()
        """Keys of acts whose process was killed: the entry is there, wholly, or it is not."""

    def add(self, entry: Entry) -> None:
        """Note an entry that somebody was told of: for ever it stays as it is."""
        self.rows[str(entry.sequence)] = entry
        self.hashes[entry.uuid] = bytes(entry.hash)
        self.entries[entry.uuid] = as_fold_entry(entry)
        self.doubtful.discard(entry.uuid)

    @property
    def closed(self) -> FoldEntry | None:
        """Return the closing of the last period that is closed."""
        reopened = {entry.event.closing for entry in self.entries.values() if isinstance(entry.event, PeriodReopening)}
        closings = [entry for entry in self.entries.values() if isinstance(entry.event, PeriodClosing)]
        return next((entry for entry in reversed(closings) if entry.uuid not in reopened), None)

    @property
    def closed_until(self) -> datetime | None:
        """Return the moment before which nothing that moves matter may be recorded any more."""
        return self.closed.event.until if self.closed and isinstance(self.closed.event, PeriodClosing) else None

    def prove(self) -> None:
        """Fail if the tables are not what follows from what was acknowledged."""
        with scope(workshop=self.workshop):
            rows = list(Entry.objects.order_by("sequence"))
            self._prove_journal(rows)
            assert verify_projection(self.workshop) == []  # as far as the books stand
            prove_rows()
            if get_recomputed_to(self.workshop) is None:
                self._prove_ledger(rows)
                prove_sums_of_vessels()

    def _prove_journal(self, rows: list[Entry]) -> None:
        assert [row.sequence for row in rows] == list(range(1, len(rows) + 1))
        assert Head.objects.filter(workshop=self.workshop, sequence=len(rows)).exists() or not rows
        for row in rows:
            if row.uuid in self.doubtful:
                self.add(row)  # it came through, though nobody was told
        assert {row.uuid: bytes(row.hash) for row in rows} == self.hashes
        assert verify_chain(self.workshop) == []

    def _prove_ledger(self, rows: list[Entry]) -> None:
        state, followed = rebuild(self.entries.values())
        assert load_state(self.workshop) == state
        kept = read_followed(rows, Names(self.workshop, ()))
        wanted = {row.pk: as_kept(followed.get(row.uuid, NOTHING)) for row in rows}
        assert kept == wanted


def prove_rows() -> None:
    """Fail if an entry makes or loses anything, a metal reacts, or a variance is negative."""
    postings = Posting.objects.order_by()
    sums = postings.values_list("entry__sequence", "component__code").annotate(total=Sum("amount"))
    assert [row for row in sums if row[2]] == []
    reacted = postings.filter(boundary=REACTION, component__kind__in=(ComponentKind.METAL, ComponentKind.SOLUTE))
    assert list(reacted.values_list("entry__sequence", "component__code")) == []
    assert [sd for sd in postings.values_list("sd", flat=True) if sd < 0] == []
    for table in (Holding, Content):
        held = table._default_manager.values_list("vessel__name", "component__code", "amount", "variance")
        assert [row for row in held if row[3] < 0 or (row[2] is None and row[3])] == []


def prove_sums_of_vessels() -> None:
    """Fail if what a vessel was given and gave, by its postings, is not what it holds."""
    sums = Posting.objects.exclude(vessel=None).order_by().values_list("vessel", "component")
    given = Counter({(vessel, component): total for vessel, component, total in sums.annotate(total=Sum("amount"))})
    for held in Holding.objects.all():
        booked = held.known_part if held.amount is None else held.amount
        assert given.pop((held.vessel_id, held.component_id), 0) == booked, held
    assert not any(given.values())


def all_rows(workshop: Workshop) -> dict[str, list[Any]]:
    """Return every row of a workshop's journal, ledger and jobs, by table."""
    apps = ("journal", "ledger", "jobs")
    tables = [table for table in our_models() if table._meta.app_label in apps and hasattr(table, "workshop")]
    with scope(workshop=workshop):
        return {
            table._meta.label: list(table._default_manager.filter(workshop=workshop).order_by("pk").values_list())
            for table in tables
        }
