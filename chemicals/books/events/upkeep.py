"""Upkeep of solutions and what it leaves: filter, carbon, resin, clean-out, sludge, treatment."""

from dataclasses import dataclass

from chemicals.books import checks
from chemicals.books.events.base import (
    GROSS_MASS,
    SPECIES,
    VOLUME,
    Event,
    Figure,
    Held,
    Ingredient,
    Measured,
    Used,
    only_vessels,
)

OF_THEIR_OWN = (VOLUME, GROSS_MASS)
"""What is told by fields of its own, and cannot stand in a list of what was found."""


@dataclass(frozen=True)
class Uptake(Event):
    """A medium was in a tank's liquid and keeps solution and metal: base of filter, carbon and resin.

    ``target`` is the vessel that stands for the medium, or the waste container it went into. ``medium`` is its own
    mass, bought; ``passed`` the volume that went through; ``taken`` the metal in it, weighed or analysed. What is not
    known is relied on: ``solution``, the liquid it keeps (nL), and ``uptake``, the part of every metal in what passed
    that it keeps (ppm).
    """

    tank: str
    target: str
    medium: Measured | None
    passed: Measured | None
    taken: tuple[Held, ...]
    solution: Used[Figure]
    uptake: Used[Figure]

    def __post_init__(self) -> None:
        checks.once(type(self).__name__, taken=[*OF_THEIR_OWN, *(row.component for row in self.taken)])

    def vessels(self) -> tuple[str, ...]:
        return only_vessels(self.tank, self.target)


@dataclass(frozen=True)
class Filter(Uptake):
    """A filter came out of the liquid."""

    KIND = "filter"


@dataclass(frozen=True)
class Carbon(Uptake):
    """The liquid was treated with activated carbon."""

    KIND = "carbon"


@dataclass(frozen=True)
class Resin(Uptake):
    """Liquid went through an ion exchange resin."""

    KIND = "resin"


@dataclass(frozen=True)
class Sludge(Event):
    """Settled solids went from a vessel into a sludge vessel: their wet mass, and the metal in them if analysed.

    Metal that is not in ``held`` is taken to go in proportion to the mass.
    """

    KIND = "sludge"
    source: str
    target: str
    mass: Measured
    held: tuple[Held, ...]

    def __post_init__(self) -> None:
        checks.once("Sludge", held=[*OF_THEIR_OWN, *(row.component for row in self.held)])

    def vessels(self) -> tuple[str, ...]:
        return only_vessels(self.source, self.target)


@dataclass(frozen=True)
class CleanOut(Event):
    """A tank was emptied and washed: all of it, and the wash water, went into ``target``."""

    KIND = "clean-out"
    tank: str
    target: str
    water: Measured | None
    water_density: Used[Figure]

    def vessels(self) -> tuple[str, ...]:
        return only_vessels(self.tank, self.target)


@dataclass(frozen=True)
class Dissolved:
    """What an analysis found of a component in the filtrate, in ug/L (of a species nmol/L)."""

    component: str
    concentration: Measured


@dataclass(frozen=True)
class Treatment(Event):
    """A vessel's content was treated as a batch, and nothing of it stayed there (unless it is the filtrate's vessel).

    ``reagents`` went in. Of each metal, what was found ``dissolved`` stayed in the filtrate and the rest is in the
    sludge; without a sludge everything is in the filtrate. ``consumed`` names species that reacted away, wholly.
    ``filtrate_volume`` None: all the liquid. ``sludge_mass`` is wet.
    """

    KIND = "treatment"
    vessel: str
    reagents: tuple[Ingredient, ...]
    filtrate: str
    sludge: str | None
    filtrate_volume: Measured | None
    sludge_mass: Measured | None
    dissolved: tuple[Dissolved, ...]
    consumed: tuple[str, ...]

    def __post_init__(self) -> None:
        found = [*OF_THEIR_OWN, *(row.component for row in self.dissolved)]
        checks.once("Treatment", dissolved=found, consumed=self.consumed)
        for species in self.consumed:  # a metal never reacts away
            checks.one_of("Treatment", SPECIES, consumed=species)
        if self.sludge is not None:
            checks.none_of("Treatment", (self.vessel, self.filtrate), sludge=self.sludge)

    def vessels(self) -> tuple[str, ...]:
        stocks = (item.stock for item in self.reagents)
        return tuple(dict.fromkeys(only_vessels(self.vessel, self.filtrate, self.sludge, *stocks)))
