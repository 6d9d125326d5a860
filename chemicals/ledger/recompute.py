"""Folding again: forward through the entries from a place in the fold, writing only what differs.

A stretch is some entries that follow each other in fold order, whatever their kind, with what follows from each. In a
request all stretches are folded on one state in memory; the job folds one stretch a step, on the state that it reads
from the tables. All functions run inside the workshop's scope.
"""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from datetime import datetime

from django.db.models import Q, QuerySet

from chemicals.books import fold
from chemicals.books.fold import Folded
from chemicals.books.fold.state import State
from chemicals.journal import selectors as journal
from chemicals.journal.models import Entry
from chemicals.ledger import projection
from chemicals.ledger.followed import NOTHING, as_kept, components_of, read_followed, replace_followed
from chemicals.ledger.models import Books, Period
from chemicals.ledger.projection import Names, Order
from chemicals.workshop.models import Workshop

STRETCH = 500
"""How many entries are folded and compared at once; a killed worker loses as many at most."""


@dataclass(frozen=True)
class Stretch:
    """Entries that follow each other in fold order; ``beyond`` is the place of the next one, None after the last."""

    entries: tuple[Entry, ...]
    followed: Mapping[int, Folded]
    """By primary key, for all entries: from one that does not stand nothing follows."""
    beyond: Order | None


def order_of(entry: Entry) -> Order:
    """Return the place of an entry in the fold."""
    return entry.occurred_at, entry.sequence


def entries_from(start: Order | None, before: datetime | None = None) -> QuerySet[Entry]:
    """Return the entries from a place (None: the beginning) until just before a moment, in fold order."""
    entries = Entry.objects.order_by("occurred_at", "sequence")
    if start is not None:
        entries = entries.filter(occurred_at__gte=start[0])
        entries = entries.filter(Q(occurred_at__gt=start[0]) | Q(sequence__gte=start[1]))
    return entries if before is None else entries.filter(occurred_at__lt=before)


def folding_kinds() -> list[str]:
    """Return the kinds from which something follows."""
    return [kind.KIND for kind in fold.FOLDS]


def count_from(start: Order | None, limit: int | None = None) -> int:
    """Count the entries from a place on that fold; no further than the limit. One query."""
    return journal.mark_standing(entries_from(start)).filter(stands=True, kind__in=folding_kinds())[:limit].count()


def fold_stretch(state: State, start: Order | None, before: datetime | None = None) -> Stretch:
    """Read the next stretch from a place and fold it on the state (in place). One query."""
    found = list(journal.mark_standing(entries_from(start, before))[: STRETCH + 1])
    entries, following = found[:STRETCH], found[STRETCH:]
    followed = {entry.pk: _fold(state, entry) if entry.stands else NOTHING for entry in entries}
    return Stretch(tuple(entries), followed, order_of(following[0]) if following else None)


def _fold(state: State, entry: Entry) -> Folded:
    if entry.kind not in folding_kinds():
        return NOTHING
    return as_kept(fold.fold_event(state, journal.read_event(entry)))


def fold_stretches(state: State, start: Order | None, before: datetime | None = None) -> Iterator[Stretch]:
    """Fold forward from a place, stretch by stretch, on one state."""
    while True:
        stretch = fold_stretch(state, start, before)
        yield stretch
        start = stretch.beyond
        if start is None:
            return


def find_differing(workshop: Workshop, stretch: Stretch) -> list[tuple[Entry, Folded]]:
    """Return the entries of which the tables keep something else than what follows. Five queries."""
    kept = read_followed(stretch.entries, Names(workshop, ()))
    return [(e, stretch.followed[e.pk]) for e in stretch.entries if kept[e.pk] != stretch.followed[e.pk]]


def refold_from(workshop: Workshop, state: State, start: Order | None) -> None:
    """Fold forward from a place to the end of time and make the tables say so; the books stand afterwards."""
    for stretch in fold_stretches(state, start):
        write_differing(workshop, find_differing(workshop, stretch))
    projection.replace_holdings(workshop, state, Names(workshop, ()))
    stand(workshop)


def write_differing(workshop: Workshop, differing: list[tuple[Entry, Folded]]) -> None:
    """Write what follows from entries in the place of what the tables keep."""
    if differing:
        replace_followed(differing, Names(workshop, components_of(folded for _, folded in differing)))


def get_books(workshop: Workshop) -> Books:
    """Return how far the projection has come; a workshop without entries begins with this version of the fold."""
    return Books.objects.get_or_create(workshop=workshop, defaults={"fold_version": fold.VERSION})[0]


def stand(workshop: Workshop) -> None:
    """Note that the books say all that the journal says, as this version of the fold folds."""
    Books.objects.filter(workshop=workshop).update(
        fold_version=fold.VERSION, recomputed_to=None, recomputed_sequence=None, job=None
    )


def get_last_close() -> Period | None:
    """Return the closed period that ends last."""
    return Period.objects.filter(reopening=None).order_by("-until").first()


def start_after(period: Period | None) -> Order | None:
    """Return from where on what follows a closed period folds; None: the beginning."""
    return None if period is None else (period.until, 0)


def get_beginning() -> Order | None:
    """Return the place of the first entry in the fold, if there is any."""
    first = entries_from(None).only("occurred_at", "sequence").first()
    return None if first is None else order_of(first)
