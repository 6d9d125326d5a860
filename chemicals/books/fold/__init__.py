"""The projection: what a sequence of entries says about every vessel. Pure, deterministic, integers and Decimal only.

Fold order is (``occurred_at``, ``sequence``). Cancelled entries fold as if they had not been.
"""

from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass
from datetime import datetime
from typing import Any
from uuid import UUID

from chemicals.books import events
from chemicals.books.fold import (
    analysis,
    correction,
    counts,
    day_sheet,
    dummy,
    level,
    making,
    opening,
    run,
    treatment,
    upkeep,
    waste,
)
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.state import EVERY, Finding, Holding, State, Transfer, Vessel

VERSION = 2
"""Version of the projection; a change of meaning raises it."""

FOLDS: Mapping[type[events.Event], Callable[[Folding, Any], None]] = {
    events.Opening: opening.fold_opening,
    events.Count: counts.fold_count,
    events.LevelReading: level.fold_level_reading,
    events.WeightReading: counts.fold_weight_reading,
    events.DensityReading: counts.fold_density_reading,
    events.Receipt: making.fold_receipt,
    events.MakeUp: making.fold_make_up,
    events.TopUp: making.fold_top_up,
    events.Move: making.fold_move,
    events.Sample: making.fold_move,
    events.Spill: making.fold_move,
    events.Discharge: making.fold_move,
    events.Run: run.fold_run,
    events.DaySheet: day_sheet.fold_day_sheet,
    events.Dummy: dummy.fold_dummy,
    events.Strip: dummy.fold_strip,
    events.Acceptance: analysis.fold_acceptance,
    events.DrumOff: waste.fold_drum_off,
    events.HandOver: waste.fold_hand_over,
    events.Filter: upkeep.fold_uptake,
    events.Carbon: upkeep.fold_uptake,
    events.Resin: upkeep.fold_uptake,
    events.Sludge: upkeep.fold_sludge,
    events.CleanOut: upkeep.fold_clean_out,
    events.Treatment: treatment.fold_treatment,
    events.Correction: correction.fold_correction,
}
"""Kinds that are not listed post nothing: reading, analysis, cancellation, closing and reopening a period, paper."""


@dataclass(frozen=True)
class Entry:
    """An entry as the fold needs it."""

    uuid: UUID
    occurred_at: datetime
    sequence: int
    event: events.Event

    @property
    def order(self) -> tuple[datetime, int]:
        """Return the place in the fold: when it happened, then when it was recorded."""
        return self.occurred_at, self.sequence


@dataclass(frozen=True)
class Folded:
    """What followed from one entry."""

    transfers: tuple[Transfer, ...]
    findings: tuple[Finding, ...]
    contents: tuple[tuple[str, str, Holding], ...]
    """(vessel, component, holding after the entry) for all that changed; component EVERY: is the list complete?"""
    vessels: tuple[tuple[str, Vessel], ...] = ()
    """(vessel, what is known of it after the entry) for every vessel that ``contents`` names with EVERY."""


def fold_event(state: State, event: events.Event) -> Folded:
    """Apply one event to the state (in place) and return what followed from it."""
    fold = FOLDS.get(type(event))
    if fold is None:
        return Folded((), (), ())
    folding = Folding(state)
    state.touched.clear()
    fold(folding, event)
    vessels = tuple((vessel, state.vessel(vessel)) for vessel, component in sorted(state.touched) if component == EVERY)
    return Folded(tuple(folding.transfers), tuple(folding.findings), tuple(_contents(state)), vessels)


def _contents(state: State) -> Iterator[tuple[str, str, Holding]]:
    for vessel, component in sorted(state.touched):
        if component == EVERY:
            yield vessel, EVERY, Holding(None if state.vessel(vessel).incomplete else 0)
        else:
            yield vessel, component, state.holding(vessel, component)


def standing(entries: Iterable[Entry]) -> list[Entry]:
    """Return the entries that count, in fold order: none that is cancelled, no acceptance of a cancelled analysis."""
    everything = list(entries)
    cancelled = {entry.event.entry for entry in everything if isinstance(entry.event, events.Cancellation)}
    return [
        entry
        for entry in sorted(everything, key=lambda entry: entry.order)
        if entry.uuid not in cancelled
        and not (isinstance(entry.event, events.Acceptance) and entry.event.analysis in cancelled)
    ]


def rebuild(entries: Iterable[Entry]) -> tuple[State, dict[UUID, Folded]]:
    """Fold all entries from the beginning; return the final state and what followed from each."""
    state = State()
    followed = {entry.uuid: fold_event(state, entry.event) for entry in standing(entries)}
    return state, followed
