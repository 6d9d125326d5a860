"""Counts, weighings, densities: what is there is set as read, the difference is unaccounted."""

from chemicals.books.events import COMPUTED, GROSS_MASS, UNACCOUNTED, VOLUME, Count, DensityReading, WeightReading
from chemicals.books.fold.arithmetic import product, root
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.state import UNKNOWN_LEVEL


def fold_count(folding: Folding, event: Count) -> None:
    """Set the volume or the mass; all else is missing, or was found, in proportion."""
    if event.volume is not None:
        folding.count(event.vessel, event.volume.base, event.volume.stated_sd, by=VOLUME)
    elif event.mass is not None:
        folding.count(event.vessel, event.mass.base, event.mass.stated_sd, by=GROSS_MASS)


def fold_weight_reading(folding: Folding, event: WeightReading) -> None:
    """Set the gross mass, and nothing else."""
    mass = event.mass
    folding.set_content(event.vessel, GROSS_MASS, mass.base, mass.stated_sd, UNACCOUNTED, COMPUTED)


def fold_density_reading(folding: Folding, event: DensityReading) -> None:
    """Gross mass := density x volume, as the books have the volume."""
    volume, density = folding.state.holding(event.vessel, VOLUME), event.density
    if volume.amount is None or volume.amount <= 0:
        folding.note(UNKNOWN_LEVEL, GROSS_MASS, event.vessel, UNACCOUNTED)
        return
    mass, sd = product(volume.amount, root(volume.variance), density.base, density.stated_sd, 10**6)
    folding.set_content(event.vessel, GROSS_MASS, mass, sd, UNACCOUNTED, COMPUTED)
