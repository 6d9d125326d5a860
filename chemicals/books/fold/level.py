"""Level readings: the volume is set as read, and the difference to the books is explained."""

from chemicals.books.events import (
    AIR,
    ASSUMED,
    COMPUTED,
    GROSS_MASS,
    UNACCOUNTED,
    UNKNOWN_LIQUID,
    VOLUME,
    Figure,
    LevelReading,
    Measured,
)
from chemicals.books.fold.arithmetic import product, ratio, root
from chemicals.books.fold.folding import Folding


def fold_level_reading(folding: Folding, event: LevelReading) -> None:
    """Set the volume. Less is water to air, or solution to a spill if that is said; more is unaccounted."""
    read_level(folding, event.vessel, event.volume, event.lost_to, event.water_density)


def read_level(folding: Folding, vessel: str, level: Measured, lost_to: str, water_density: Figure) -> None:
    """Set the volume as read; ``lost_to`` says where less volume went."""
    held = folding.state.holding(vessel, VOLUME)
    against = UNACCOUNTED
    if held.amount is not None:
        lost, doubt = held.amount - level.base, root(held.variance + level.stated_sd**2)
        if lost < 0:
            _gain_mass(folding, vessel, -lost, doubt, held.amount)
        elif lost_to == AIR:
            against = AIR
            mass, mass_sd = product(lost, doubt, water_density.base, water_density.sd, 10**6)
            folding.move(GROSS_MASS, vessel, AIR, mass, mass_sd, COMPUTED)
        else:
            folding.pour(vessel, lost_to, lost, doubt, COMPUTED)
    folding.set_content(vessel, VOLUME, level.base, level.stated_sd, against, COMPUTED)
    if held.amount is not None and held.amount <= 0 < level.base:
        # there is liquid where the books have none: nobody can name it
        folding.remember(vessel, [UNKNOWN_LIQUID + vessel], incomplete=True, listed=[VOLUME])


def _gain_mass(folding: Folding, vessel: str, gained: int, doubt: int, volume: int) -> None:
    """What came from nowhere is taken to be as dense as what is there."""
    mass = folding.state.holding(vessel, GROSS_MASS).amount
    if mass is None or mass <= 0 or volume <= 0:
        folding.move_unknown(GROSS_MASS, UNACCOUNTED, vessel)
    else:
        folding.move(GROSS_MASS, UNACCOUNTED, vessel, ratio(mass, gained, volume), ratio(mass, doubt, volume), ASSUMED)
