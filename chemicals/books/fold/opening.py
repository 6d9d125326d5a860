"""Openings and level readings: a content is set as seen."""

from chemicals.books.events import (
    AIR,
    ASSUMED,
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    OPENING,
    SPILL,
    UNACCOUNTED,
    VOLUME,
    Figure,
    LevelReading,
    Measured,
    Opening,
)
from chemicals.books.fold.state import WAS_UNKNOWN, Folding, Holding, Vessel, ratio


def fold_opening(folding: Folding, event: Opening) -> None:
    """``opening`` -> vessel. What is not listed is absent if the list is complete, else unknown."""
    folding.state.put_vessel(event.vessel, Vessel())
    listed = {held.component: held.amount for held in event.held}
    if event.volume is not None:
        listed[VOLUME] = event.volume
    if event.mass is not None:
        listed[GROSS_MASS] = event.mass
    for component in sorted(listed):
        _open(folding, event.vessel, component, listed[component])
    if event.volume is not None and event.mass is None:
        _weigh_by_density(folding, event.vessel, event.volume, event.density)
    for component in set(folding.state.components(event.vessel)) - {GROSS_MASS, *listed}:
        if event.complete:
            folding.set_content(event.vessel, component, 0, 0, OPENING, OBSERVED)
        else:
            folding.state.put(event.vessel, component, Holding(None))
    folding.state.put_vessel(event.vessel, Vessel(not event.complete, frozenset(event.poured)))


def _weigh_by_density(folding: Folding, vessel: str, volume: Measured, density: Figure | None) -> None:
    if density is None:
        folding.state.put(vessel, GROSS_MASS, Holding(None))
        return
    mass, sd = volume.base * density.base // 10**6, volume.base * density.sd // 10**6
    folding.set_content(vessel, GROSS_MASS, mass, sd, OPENING, ASSUMED)


def _open(folding: Folding, vessel: str, component: str, amount: Measured) -> None:
    folding.set_content(vessel, component, amount.base, amount.sd or 0, OPENING, OBSERVED)


def fold_level_reading(folding: Folding, event: LevelReading) -> None:
    """Set the volume. Less is water to air, or solution to a spill if that is said; more is unaccounted."""
    read, sd = event.volume.base, event.volume.sd or 0
    held = folding.state.holding(event.vessel, VOLUME)
    if held.amount is None:
        folding.note(WAS_UNKNOWN, VOLUME, UNACCOUNTED, event.vessel)
        folding.set_content(event.vessel, VOLUME, read, sd, UNACCOUNTED, OBSERVED)
        return
    lost = held.amount - read
    if lost > 0 and event.lost_to == SPILL:
        folding.pour(event.vessel, SPILL, lost, sd, OBSERVED)
    elif lost > 0:
        density = event.water_density.base
        folding.move(GROSS_MASS, event.vessel, AIR, lost * density // 10**6, sd * density // 10**6, COMPUTED)
    elif lost < 0:
        _gain_mass(folding, event.vessel, -lost, held.amount)
    against = AIR if lost > 0 else UNACCOUNTED
    folding.set_content(event.vessel, VOLUME, read, sd, against, OBSERVED)


def _gain_mass(folding: Folding, vessel: str, gained: int, volume: int) -> None:
    """What came from nowhere is taken to be as dense as what is there."""
    mass = folding.state.holding(vessel, GROSS_MASS).amount
    if mass is None or volume <= 0:
        folding.move_unknown(GROSS_MASS, UNACCOUNTED, vessel)
    else:
        folding.move(GROSS_MASS, UNACCOUNTED, vessel, ratio(mass, gained, volume), 0, ASSUMED)
