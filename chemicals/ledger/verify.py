"""Fold the whole journal again and compare: every row of the ledger must be what follows from the entries."""

from collections.abc import Iterator, Mapping
from uuid import UUID

from django_scopes import scope

from chemicals.books import fold
from chemicals.books.fold.state import Holding as Held
from chemicals.books.fold.state import State
from chemicals.journal import selectors as journal
from chemicals.journal.models import Entry
from chemicals.journal.verify import Problem
from chemicals.ledger import projection
from chemicals.ledger.models import Holding, Memory
from chemicals.workshop.models import Workshop


def verify_projection(workshop: Workshop) -> list[Problem]:
    """Return the entries whose rows are not what follows from them, then what vessels hold and should not.

    Raises ValueError if an entry cannot be read.
    """
    with scope(workshop=workshop):
        state, followed = fold.rebuild(journal.iterate_fold_entries(workshop))
        names = projection.Names(workshop, ())
        missing = sorted(_named(state, followed) - names.known)
        if missing:
            return [Problem(None, f"The books lack what the entries name: {', '.join(missing)}.")]
        return [*_verify_entries(followed, names), *_verify_holdings(state), *_verify_memories(state)]


def _named(state: State, followed: Mapping[UUID, fold.Folded]) -> set[str]:
    """Return every vessel and component that the entries name."""
    components = {component for folded in followed.values() for _, component, _ in folded.contents}
    return set(state.vessels) | {vessel for vessel, _ in state.holdings} | components


def _verify_entries(followed: Mapping[UUID, fold.Folded], names: projection.Names) -> Iterator[Problem]:
    kept = projection.stored_rows()
    nothing = fold.Folded((), (), ())
    for entry in Entry.objects.order_by("sequence").defer("body"):
        if kept[entry.pk] != projection.expected_rows(entry, followed.get(entry.uuid, nothing), names):
            yield Problem(entry.sequence, "What the ledger keeps of this entry is not what follows from it.")


def _verify_holdings(state: State) -> Iterator[Problem]:
    rows = Holding.objects.values_list("vessel__uuid", "component__code", "amount", "variance", "known_part")
    stored = {
        (str(vessel), component): Held(amount, variance, known) for vessel, component, amount, variance, known in rows
    }
    for vessel, component in sorted(set(stored) | set(state.holdings)):
        if stored.get((vessel, component)) != state.holdings.get((vessel, component)):
            yield Problem(None, f"The holding of {component} in vessel {vessel} is not what the entries say.")


def _verify_memories(state: State) -> Iterator[Problem]:
    rows = Memory.objects.values_list("vessel__uuid", "incomplete", "poured")
    stored = {str(vessel): fold.state.Vessel(incomplete, frozenset(poured)) for vessel, incomplete, poured in rows}
    for vessel in sorted(set(stored) | set(state.vessels)):
        if stored.get(vessel) != state.vessels.get(vessel):
            yield Problem(None, f"What was poured into vessel {vessel} is not what the entries say.")
