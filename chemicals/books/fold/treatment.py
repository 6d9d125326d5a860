"""Batch treatment: reagents go in, species react away, metal settles; filtrate and sludge are what is left."""

from chemicals.books.events import (
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    REACTION,
    SPECIES,
    UNACCOUNTED,
    VOLUME,
    Measured,
    Treatment,
    is_metal,
)
from chemicals.books.fold.arithmetic import product, root
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.making import add_ingredient
from chemicals.books.fold.state import UNKNOWN_LEVEL

LITRE = 10**9
"""Nanolitres: concentrations are per litre."""


def fold_treatment(folding: Folding, event: Treatment) -> None:
    """stock -> vessel, species -> reaction; then vessel -> sludge, and all that is left -> filtrate."""
    for reagent in event.reagents:
        add_ingredient(folding, reagent, event.vessel)
    for species in event.consumed:
        folding.move_all(species, event.vessel, REACTION)
    if event.sludge is None and event.filtrate_volume is not None:
        _set_volume(folding, event.vessel, event.filtrate_volume)
    for row in event.dissolved:
        if row.component in SPECIES:
            _find_left(folding, event.vessel, row.component, row.concentration)
    if event.sludge is not None:
        _settle_metals(folding, event, event.sludge)
        if event.filtrate_volume is not None:
            _part_liquid(folding, event, event.sludge, event.filtrate_volume)
        _weigh(folding, event.vessel, event.sludge, event.sludge_mass)
        folding.remember_from(event.vessel, event.sludge)
    folding.pour_all(event.vessel, event.filtrate)


def _apart(folding: Folding, event: Treatment) -> set[str]:
    """Return what does not simply follow the liquid: metals, and solutes that were analysed."""
    metals = {component for component in folding.state.components(event.vessel) if is_metal(component)}
    return metals | {row.component for row in event.dissolved} - set(SPECIES)


def _find_left(folding: Folding, vessel: str, species: str, concentration: Measured) -> None:
    """Set what is left of a species in all the liquid: the rest reacted away."""
    volume = folding.state.holding(vessel, VOLUME)
    if volume.amount is None or volume.amount <= 0:
        folding.note(UNKNOWN_LEVEL, species, vessel, UNACCOUNTED)
        return
    left = product(volume.amount, root(volume.variance), concentration.base, concentration.stated_sd, LITRE)
    folding.set_content(vessel, species, *left, UNACCOUNTED, COMPUTED)


def _settle_metals(folding: Folding, event: Treatment, sludge: str) -> None:
    """Leave of each metal what was found dissolved. Without an analysis nobody knows what settled: never a guess."""
    found = {row.component: row.concentration for row in event.dissolved}
    for component in sorted(_apart(folding, event)):
        held = folding.state.holding(event.vessel, component).amount
        if component in found or held != 0:
            left = _dissolved(folding, event, component, found.get(component))
            folding.settle(component, event.vessel, sludge, left)


def _dissolved(
    folding: Folding, event: Treatment, component: str, concentration: Measured | None
) -> tuple[int, int] | None:
    """Return how much is in the filtrate: concentration x its volume; None where either is unknown."""
    if concentration is None:
        return None
    volume = folding.state.holding(event.vessel, VOLUME)
    base, sd = volume.amount, root(volume.variance)
    if event.filtrate_volume is not None:
        base, sd = event.filtrate_volume.base, event.filtrate_volume.stated_sd
    if base is None or base < 0:
        folding.note(UNKNOWN_LEVEL, component, event.vessel, event.filtrate)
        return None
    return product(base, sd, concentration.base, concentration.stated_sd, LITRE)


def _part_liquid(folding: Folding, event: Treatment, sludge: str, filtrate: Measured) -> None:
    """Leave the filtrate's volume; the sludge keeps the other liquid with what is dissolved in it."""
    held = folding.state.holding(event.vessel, VOLUME)
    apart = {*_apart(folding, event), GROSS_MASS}
    if held.amount is None:
        folding.note(UNKNOWN_LEVEL, VOLUME, event.vessel, sludge)
        folding.pour_unknown(event.vessel, sludge, but=apart)
    else:
        doubt = root(held.variance + filtrate.stated_sd**2)
        folding.pour(event.vessel, sludge, held.amount - filtrate.base, doubt, COMPUTED, but=apart)
    _set_volume(folding, event.vessel, filtrate)


def _set_volume(folding: Folding, vessel: str, volume: Measured) -> None:
    folding.set_content(vessel, VOLUME, volume.base, volume.stated_sd, UNACCOUNTED, COMPUTED)


def _weigh(folding: Folding, vessel: str, sludge: str, mass: Measured | None) -> None:
    """Move the wet mass; unweighed, nobody knows how much of it is sludge."""
    if mass is None:
        folding.move_unknown(GROSS_MASS, vessel, sludge)
    else:
        folding.move(GROSS_MASS, vessel, sludge, mass.base, mass.stated_sd, OBSERVED)
