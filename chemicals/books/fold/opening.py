"""Openings: what a vessel holds is set as found."""

from chemicals.books.events import (
    ASSUMED,
    GROSS_MASS,
    OBSERVED,
    OPENING,
    UNACCOUNTED,
    UNKNOWN_LIQUID,
    VOLUME,
    Measured,
    Opening,
)
from chemicals.books.fold.arithmetic import product
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.state import Vessel

Found = tuple[int, int, str]
"""An amount, its standard uncertainty and its basis."""


def fold_opening(folding: Folding, event: Opening) -> None:
    """``opening`` -> vessel. What is not listed is absent if the list is complete, else unknown.

    A vessel that the books know is opened anew: what they held of it is not opened twice, the difference is
    unaccounted. To open is not to empty: what was poured in before stays remembered.
    """
    state, vessel = folding.state, event.vessel
    found = _found(event)
    poured = state.vessel(vessel).poured | frozenset(event.poured)
    if not event.complete and not event.poured:
        poured |= {UNKNOWN_LIQUID + vessel}
    state.put_vessel(vessel, Vessel())
    for component in sorted({*found, *state.components(vessel)}):
        amount = found.get(component, (0, 0, OBSERVED) if event.complete else None)
        held = state.holding(vessel, component)
        if amount is None:
            state.put(vessel, component, held.made_unknown())
        else:
            base, sd, basis = amount
            folding.set_content(vessel, component, base, sd, UNACCOUNTED if held.booked else OPENING, basis)
    state.put_vessel(vessel, Vessel(not event.complete, poured))


def _found(event: Opening) -> dict[str, Found | None]:
    found: dict[str, Found | None] = {held.component: _seen(held.amount) for held in event.held}
    if event.volume is not None:
        found[VOLUME] = _seen(event.volume)
    found[GROSS_MASS] = _mass(event)
    return found


def _seen(amount: Measured) -> Found:
    return amount.base, amount.stated_sd, OBSERVED


def _mass(event: Opening) -> Found | None:
    """Return the gross mass: as weighed, or by the density, or nothing in an empty vessel; else unknown."""
    if event.mass is not None:
        return _seen(event.mass)
    if event.volume is not None and event.density is not None:
        volume, density = event.volume, event.density
        return *product(volume.base, volume.stated_sd, density.base, density.sd, 10**6), ASSUMED
    empty = event.complete and event.volume is None and not event.held
    return (0, 0, OBSERVED) if empty else None
