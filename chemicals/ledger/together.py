"""Entries that are recorded together: the earliest of them, and what their vessels may have been given meanwhile.

All functions run inside the workshop's scope; those that write, inside a transaction.
"""

from collections.abc import Sequence

from chemicals.books import events, fold
from chemicals.books.fold.state import State, Vessel
from chemicals.journal.models import Entry
from chemicals.ledger import projection
from chemicals.ledger.projection import Names
from chemicals.ledger.recompute import order_of
from chemicals.workshop.models import Workshop

Recorded = tuple[Entry, events.Event]


def in_order(recorded: Sequence[Recorded]) -> list[Recorded]:
    """Return those that fold, in fold order."""
    return sorted((pair for pair in recorded if type(pair[1]) in fold.FOLDS), key=lambda pair: order_of(pair[0]))


def find_first(recorded: Sequence[Recorded]) -> Recorded | None:
    """Return the one from which on the books change; None if they do not."""
    return min((pair for pair in recorded if type(pair[1]) in fold.FOLDS), key=lambda p: order_of(p[0]), default=None)


def remember_all(workshop: Workshop, recorded: Sequence[Recorded]) -> None:
    """Let the vessels of entries that are left to the job remember at once all that may be in them.

    At least one of the entries folds. Marks are added, none is taken away: the job writes what is right.
    """
    pairs = in_order(recorded)
    names = Names(workshop, (), {vessel for _, event in pairs for vessel in event.vessels()})
    now = projection.load_state(workshop, names.vessels)
    seen = {name: now.vessel(name) for name in names.vessels}
    state = projection.load_state_before(order_of(pairs[0][0]), names.vessels)
    for _, event in pairs:
        _see(seen, state, event.vessels())
        fold.fold_event(state, event)
        _see(seen, state, event.vessels())
    projection.write_memories(workshop, seen, names)


def _see(seen: dict[str, Vessel], state: State, vessels: Sequence[str]) -> None:
    for name in vessels:
        before, now = seen[name], state.vessel(name)
        if before != now:
            seen[name] = Vessel(before.incomplete or now.incomplete, before.poured | now.poured)
