"""Level tables: the volume that a height in a tank stands for, by straight lines between the heights that are known."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal
from itertools import pairwise

from chemicals.science.errors import TextError
from chemicals.science.quantity import Quantity
from chemicals.science.units import find, to_base


@dataclass(frozen=True)
class Step:
    """A height in nanometres with the volume in nanolitres that it stands for."""

    height: int
    volume: int


@dataclass(frozen=True)
class Interpolated:
    """A volume with its uncertainty, and between which steps it lies: one step twice where it is met exactly."""

    volume: int
    sd: int
    below: Step
    above: Step


class LevelError(TextError):
    """A height cannot be told as a volume."""

    messages = {
        "outside": (
            "%(typed)s lies outside the level table, which goes from %(least)s to %(most)s. Read it again, write the "
            "volume instead, or add rows to the table."
        ),
        "no_heights": "The level table has no two heights. Write the volume instead, or add rows to the table.",
    }


def interpolate(height: int, division: int, steps: Sequence[Step]) -> Interpolated | None:
    """Return the volume at a height, rounded down to a nanolitre; None outside of the steps, which rise.

    The standard uncertainty is half a ``division`` (in nanometres) on the line that the height lies on.
    """
    for below, above in pairwise(steps):
        if below.height <= height <= above.height:
            rise, run = above.volume - below.volume, above.height - below.height
            volume = below.volume + (height - below.height) * rise // run
            sd = -(-division * rise // (2 * run))
            exact = next((step for step in (below, above) if step.height == height), None)
            return Interpolated(volume, sd, exact or below, exact or above)
    return None


def division_of(height: Quantity) -> int:
    """Return the last place to which a height was written, in nanometres: 32.5 cm was read to a millimetre."""
    unit = find(height.unit, "length")
    size = 1 if unit is None else int(to_base(Decimal(1), unit, "length"))
    exponent = height.value.as_tuple().exponent
    return max(1, size // 10 ** max(0, -exponent)) if isinstance(exponent, int) else size


def find_fall(steps: Sequence[Step]) -> int | None:
    """Return the place of the first step (by height) that holds no more than the one below it; None: all rise."""
    return next((n for n in range(1, len(steps)) if steps[n].volume <= steps[n - 1].volume), None)


def add_in_squares(*sds: int) -> int:
    """Return the standard uncertainty of a sum of independent parts, rounded up."""
    total = sum(sd * sd for sd in sds)
    return math.isqrt(total - 1) + 1 if total else 0
