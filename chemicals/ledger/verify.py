"""Prove the ledger: closed periods by their digests, the rest by folding again from the last close.

A closed period is never folded again by another version of the fold than closed it; its rows must give the digest that
its closing entry says. Every row after that must be what follows from the entries.
"""

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import islice
from uuid import UUID

from django_scopes import scope

from chemicals.books import fold
from chemicals.books.digest import digest_followed, digest_holdings
from chemicals.books.events import Acceptance, Cancellation, PeriodClosing, PeriodReopening
from chemicals.books.fold import Folded
from chemicals.books.fold.state import State
from chemicals.jobs import models as jobs
from chemicals.journal import selectors as journal
from chemicals.journal.models import Entry
from chemicals.journal.verify import Problem
from chemicals.ledger import gone, projection, recompute
from chemicals.ledger.followed import NOTHING, as_kept, read_followed
from chemicals.ledger.models import Books, Period, Vessel
from chemicals.ledger.periods import as_columns
from chemicals.ledger.projection import Names, Order
from chemicals.workshop.models import Workshop

ATTEMPTS = 5
"""How often the books are looked at again because they changed meanwhile."""

BROKEN = "What the ledger keeps of this entry is not what follows from it."


@dataclass(frozen=True)
class Closing:
    """A closed period as the journal tells of it; ``reopening`` is the entry that opened it again."""

    entry: fold.Entry
    event: PeriodClosing
    reopening: UUID | None


def verify_projection(workshop: Workshop) -> list[Problem]:
    """Return the entries whose rows are not what follows from them, then what vessels hold and should not.

    What was found while somebody recorded, or the job wrote, is looked at again. Raises ValueError if an entry cannot
    be read.
    """
    found: list[Problem] = []
    with scope(workshop=workshop):
        for _attempt in range(ATTEMPTS):
            before = _mark(workshop)
            proof = Proof(workshop, list(journal.iterate_fold_entries(workshop)))
            found = [*proof.of_periods(), *proof.of_the_rest()]
            if not found or _mark(workshop) == before:
                break
    return found


def _mark(workshop: Workshop) -> tuple[object, ...]:
    """Return how far chain and books have come."""
    return journal.get_head(workshop), *Books.objects.values_list("recomputed_to", "recomputed_sequence", "job")


class Proof:
    """Compares what the entries of a workshop say with what the tables keep."""

    def __init__(self, workshop: Workshop, told: Sequence[fold.Entry]) -> None:
        self.workshop = workshop
        self.standing = fold.standing(told)
        self.told = told
        self.names = Names(workshop, ())
        self.closings = list(_tell_closings(told))
        self.changes = list(_tell_changes(told))
        self.periods = {period.closing.uuid: period for period in Period.objects.select_related("closing", "reopening")}

    def of_periods(self) -> Iterator[Problem]:
        """Yield what is wrong with closed periods, those that were opened again too."""
        for closing in self.closings:
            period = self.periods.get(closing.entry.uuid)
            if period is None:
                yield Problem(closing.entry.sequence, "The closed period of this entry is missing in the ledger.")
                continue
            if not _is_copy(period, closing):
                yield Problem(closing.entry.sequence, "The ledger says another closed period than this entry.")
            if digest_holdings(projection.load_closing_state(period)) != closing.event.holdings_sha256:
                yield Problem(closing.entry.sequence, "What was held at the end of this period is not what was closed.")
            if closing.reopening is None:
                yield from self._of_closed(closing)
        told = {closing.entry.uuid for closing in self.closings}
        for uuid in sorted(self.periods.keys() - told, key=str):
            yield Problem(None, f"The ledger has a closed period that no entry speaks of: {self.periods[uuid]}.")

    def _of_closed(self, closing: Closing) -> Iterator[Problem]:
        event, scattered = closing.event, list[int]()
        digest = digest_followed(self._kept(closing, scattered))
        if scattered or digest != event.followed_sha256:
            yield Problem(closing.entry.sequence, "What the ledger keeps of this closed period is not what was closed.")
            if event.fold_version == fold.VERSION:
                yield from self._name_broken(closing)
            else:
                yield from (Problem(sequence, BROKEN) for sequence in scattered)
        for sequence, (moment, _) in self.changes:
            if sequence > event.sequence and moment < event.until:
                yield Problem(sequence, "This was recorded in a closed period.")

    def _kept(self, closing: Closing, scattered: list[int]) -> Iterator[tuple[UUID, Folded]]:
        """Yield what the tables keep of the entries of a period; name those whose rows do not fit each other."""
        start = None if closing.event.after is None else (closing.event.after, 0)
        for entries in _chunks(recompute.entries_from(start, closing.event.until).defer("body").iterator()):
            kept = read_followed(entries, self.names)
            for entry in entries:
                folded = kept[entry.pk]
                if folded is None:
                    scattered.append(entry.sequence)
                else:
                    yield entry.uuid, folded

    def _name_broken(self, closing: Closing) -> Iterator[Problem]:
        """Fold a closed period again, by the version that closed it, to name its broken entries."""
        before = [c for c in self.closings if c.reopening is None and c.event.until == closing.event.after]
        state = projection.load_closing_state(self.periods.get(before[0].entry.uuid) if before else None)
        after, until = closing.event.after, closing.event.until
        inside = [e for e in self.standing if (after is None or after <= e.occurred_at) and e.occurred_at < until]
        followed = {entry.uuid: fold.fold_event(state, entry.event) for entry in inside}
        yield from self._compare(followed, {entry.uuid for entry in inside})

    def of_the_rest(self) -> Iterator[Problem]:
        """Yield what is wrong after the last close: entry by entry, then what vessels hold and remember."""
        books = Books.objects.select_related("job").first()
        if books is not None and books.fold_version != fold.VERSION:
            yield Problem(
                None,
                f"The books were kept by version {books.fold_version} of the fold, this program has "
                f"{fold.VERSION}. Run: manage.py upgrade",
            )
            return
        standing = [closing for closing in self.closings if closing.reopening is None]
        if standing and standing[-1].entry.uuid not in self.periods:
            return
        last = standing[-1] if standing else None
        yield from self._of_open(last, None if books is None else books.position)
        if books is not None and books.job is not None and books.job.state == jobs.State.DONE:
            yield Problem(None, "The books are said to be behind, but nothing works on them.")

    def _of_open(self, last: Closing | None, position: Order | None) -> Iterator[Problem]:
        state = projection.load_closing_state(None if last is None else self.periods[last.entry.uuid])
        entries = [e for e in self.told if last is None or e.occurred_at >= last.event.until]
        wanted = {e.uuid for e in entries if position is None or e.order < position}
        followed = {e.uuid: fold.fold_event(state, e.event) for e in self.standing if e.uuid in wanted}
        missing = sorted(_named(state, followed) - self.names.known)
        if missing:
            yield Problem(None, f"The books lack what the entries name: {', '.join(missing)}.")
            return
        yield from self._compare(followed, wanted)
        if position is None:
            yield from self._compare_holdings(state)
            yield from self._compare_gone()

    def _compare(self, followed: Mapping[UUID, Folded], wanted: set[UUID]) -> Iterator[Problem]:
        """Yield the wanted entries whose rows are not what followed."""
        rows = Entry.objects.order_by("sequence").defer("body")
        for entries in _chunks(entry for entry in rows.iterator() if entry.uuid in wanted):
            kept = read_followed(entries, self.names)
            for entry in entries:
                if kept[entry.pk] != as_kept(followed.get(entry.uuid, NOTHING)):
                    yield Problem(entry.sequence, BROKEN)

    def _compare_holdings(self, state: State) -> Iterator[Problem]:
        now = projection.load_state(self.workshop)
        for vessel, component in sorted(set(now.holdings) | set(state.holdings)):
            if now.holdings.get((vessel, component)) != state.holdings.get((vessel, component)):
                yield Problem(None, f"The holding of {component} in vessel {vessel} is not what the entries say.")
        for vessel in sorted(set(now.vessels) | set(state.vessels)):
            if now.vessels.get(vessel) != state.vessels.get(vessel):
                yield Problem(None, f"What was poured into vessel {vessel} is not what the entries say.")

    def _compare_gone(self) -> Iterator[Problem]:
        """Yield what was handed over and is said to be here, or gone since another moment, or the reverse."""
        told = gone.tell()
        for vessel in Vessel.objects.filter(uuid__in=told).order_by("pk"):
            said = told[str(vessel.uuid)]
            if vessel.gone_at != said.wanted(vessel):
                yield Problem(said.sequence, f"Since when vessel {vessel.uuid} is gone is not what its entries say.")


def _tell_closings(told: Iterable[fold.Entry]) -> Iterator[Closing]:
    entries = list(told)
    opened = {entry.event.closing: entry.uuid for entry in entries if isinstance(entry.event, PeriodReopening)}
    for entry in entries:
        if isinstance(entry.event, PeriodClosing):
            yield Closing(entry, entry.event, opened.get(entry.uuid))


def _tell_changes(told: Sequence[fold.Entry]) -> Iterator[tuple[int, Order]]:
    """Yield (sequence, from where on the books changed) of every entry that changed them."""
    subjects: dict[UUID, list[fold.Entry]] = {}
    for entry in told:
        if type(entry.event) in fold.FOLDS:
            yield entry.sequence, entry.order
            subjects.setdefault(entry.uuid, []).append(entry)
        if isinstance(entry.event, Acceptance):
            subjects.setdefault(entry.event.analysis, []).append(entry)
        if isinstance(entry.event, Cancellation) and entry.event.entry in subjects:
            yield entry.sequence, min(gone.order for gone in subjects[entry.event.entry])


def _is_copy(period: Period, closing: Closing) -> bool:
    """Say whether the row of a period says what its entries say."""
    columns = as_columns(closing.event)
    opened = None if period.reopening is None else period.reopening.uuid
    return opened == closing.reopening and {name: getattr(period, name) for name in columns} == columns


def _named(state: State, followed: Mapping[UUID, Folded]) -> set[str]:
    """Return every vessel and component that the entries name."""
    components = {component for folded in followed.values() for _, component, _ in folded.contents}
    return set(state.vessels) | {vessel for vessel, _ in state.holdings} | components


def _chunks(entries: Iterable[Entry]) -> Iterator[list[Entry]]:
    left = iter(entries)
    while chunk := list(islice(left, recompute.STRETCH)):
        yield chunk
