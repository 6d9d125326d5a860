"""Matter from here to there: moves, drumming off, samples, spills, what goes to the sewer."""

from dataclasses import dataclass
from typing import Any

from chemicals.books import checks
from chemicals.books.events.base import BOUNDARIES, SAMPLE, SEWER, SPILL, Event, Measured, only_vessels


@dataclass(frozen=True)
class Move(Event):
    """Matter moved from one vessel to another: a volume, a mass, or (both None) all of it."""

    KIND = "move"
    VERSION = 2
    source: str
    target: str
    volume: Measured | None = None
    mass: Measured | None = None

    def __post_init__(self) -> None:
        checks.at_most_one(type(self).__name__, volume=self.volume, mass=self.mass)

    def vessels(self) -> tuple[str, ...]:
        return only_vessels(self.source, self.target)


def weigh_nothing(payload: dict[str, Any]) -> dict[str, Any]:
    """Make a move of version 1 one of version 2: it was not weighed."""
    return {**payload, "observed": {**payload["observed"], "mass": None}}


@dataclass(frozen=True)
class DrumOff(Move):
    """Spent liquid or solids went into a waste container: a volume, a mass, or (both None) all of it."""

    KIND = "drum off"


@dataclass(frozen=True)
class Sample(Move):
    """A sample was taken and does not come back."""

    KIND = "sample"
    VERSION = 1

    def __post_init__(self) -> None:
        super().__post_init__()
        checks.one_of("Sample", (SAMPLE,), target=self.target)


@dataclass(frozen=True)
class Spill(Move):
    """Matter was spilled: what was picked up went into ``target``, the waste container, or (spill) nothing was."""

    KIND = "spill"
    VERSION = 1

    def __post_init__(self) -> None:
        super().__post_init__()
        checks.none_of("Spill", BOUNDARIES - {SPILL}, target=self.target)


@dataclass(frozen=True)
class Discharge(Move):
    """Liquid went to the sewer."""

    KIND = "discharge"
    VERSION = 1

    def __post_init__(self) -> None:
        super().__post_init__()
        checks.one_of("Discharge", (SEWER,), target=self.target)
