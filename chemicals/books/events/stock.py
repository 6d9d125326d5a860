"""What came, what was found, what was counted; baths made up and topped up."""

from dataclasses import dataclass
from typing import Any

from chemicals.books import checks
from chemicals.books.events.base import (
    BOUNDARIES,
    GROSS_MASS,
    VOLUME,
    Event,
    Figure,
    Held,
    Ingredient,
    Measured,
    Recipe,
    Used,
)


@dataclass(frozen=True)
class Opening(Event):
    """What a vessel held when counting began. An incomplete list leaves every other component unknown."""

    KIND = "opening"
    vessel: str
    complete: bool
    volume: Measured | None
    mass: Measured | None
    held: tuple[Held, ...]
    density: Used[Figure | None]
    poured: Used[tuple[str, ...]]

    def __post_init__(self) -> None:
        # volume and mass have fields of their own
        checks.once("Opening", held=[VOLUME, GROSS_MASS, *(held.component for held in self.held)])

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class Count(Event):
    """What is there of a stock was counted: weighed, or measured. The difference, in proportion, is unaccounted."""

    KIND = "count"
    vessel: str
    volume: Measured | None
    mass: Measured | None

    def __post_init__(self) -> None:
        checks.exactly_one("Count", volume=self.volume, mass=self.mass)

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class Receipt(Event):
    """Bought matter arrived in a stock container (or an anode set): a mass or a volume of a product."""

    KIND = "receipt"
    vessel: str
    mass: Measured | None
    volume: Measured | None
    lot: str
    recipe: Used[Recipe]

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class MakeUp(Event):
    """A bath was made up: stock went into the tank, water filled it to a level.

    ``dissolved`` is by how much a kilogram of each ingredient that was weighed in swells the liquid, in nanolitres.
    """

    KIND = "make-up"
    VERSION = 2
    tank: str
    ingredients: tuple[Ingredient, ...]
    level: Measured | None
    water_density: Used[Figure]
    dissolved: Used[tuple[Figure, ...]]

    def __post_init__(self) -> None:
        checks.as_many("MakeUp", self.ingredients, dissolved=self.dissolved)

    def vessels(self) -> tuple[str, ...]:
        return (self.tank, *(item.stock for item in self.ingredients))


def swell_nothing(payload: dict[str, Any]) -> dict[str, Any]:
    """Make a make-up of version 1 one of version 2: what dissolved was taken to need no room."""
    nothing = {"base": 0, "sd": 0, "source": "recorded as if what dissolves needed no room"}
    dissolved = [nothing for _ in payload["observed"]["ingredients"]]
    return {**payload, "used": {**payload["used"], "dissolved": dissolved}}


@dataclass(frozen=True)
class TopUp(Event):
    """Liquid was added from a named source, an amount or up to a level. source: water supply or a vessel."""

    KIND = "top-up"
    tank: str
    source: str
    volume: Measured | None
    level: Measured | None
    water_density: Used[Figure]

    def vessels(self) -> tuple[str, ...]:
        return (self.tank,) if self.source in BOUNDARIES else (self.tank, self.source)
