"""Loads through the tanks: runs, day sheets, dummy plating, stripping."""

from dataclasses import dataclass
from typing import Any
from uuid import UUID

from chemicals.books import checks
from chemicals.books.events.base import (
    BOUNDARIES,
    PARTS,
    SPECIES,
    Event,
    Figure,
    Gauge,
    Measured,
    Used,
    only_vessels,
)


@dataclass(frozen=True)
class Deposit:
    """The figures of Faraday's law for a bath: charge per mole, efficiency in ppm."""

    metal: str
    molar_mass: str
    valence: int
    faraday: str
    efficiency: Figure

    def __post_init__(self) -> None:
        checks.positive("Deposit", molar_mass=self.molar_mass, faraday=self.faraday, valence=self.valence)


@dataclass(frozen=True)
class Conversion:
    """What the current makes or uses up in a bath besides the deposit: nanomoles of a species per kilocoulomb."""

    species: str
    per_kilocoulomb: Figure
    made: bool

    def __post_init__(self) -> None:
        checks.one_of("Conversion", SPECIES, species=self.species)


@dataclass(frozen=True)
class Plating:
    """What is relied on where current flows in a bath.

    ``anode`` names the anode set of a soluble anode; an inert anode gives nothing to the bath. ``rack_share`` is the
    part of the deposit, in ppm, that grows on the rack and not on parts; ``racks`` is the vessel that stands for it.
    """

    deposit: Deposit
    anode: str | None
    racks: str | None
    rack_share: Figure | None
    conversions: tuple[Conversion, ...]

    def __post_init__(self) -> None:
        checks.both_or_neither("Plating", racks=self.racks, rack_share=self.rack_share)

    def vessels(self) -> tuple[str, ...]:
        """Return the vessels that the current touches besides the bath."""
        return only_vessels(self.anode, self.racks)


@dataclass(frozen=True)
class Run(Event):
    """A load went through a route of tanks; the first one plated it. Weights, where taken, tell the mass.

    ``plating`` is None for a load that is only dipped. ``drag_out`` is what the load drags out of each tank of the
    route, in nanolitres. ``instrument`` is the balance of both weights.
    """

    KIND = "run"
    VERSION = 3
    parts: str
    route: tuple[str, ...]
    charge: Measured | None
    current: Measured | None
    time: Measured | None
    weight_before: Measured | None
    weight_after: Measured | None
    plating: Used[Plating | None]
    rack: Used[str]
    drag_out: Used[tuple[Figure, ...]]
    instrument: UUID | None = None
    gauge: Used[Gauge | None] = None

    def __post_init__(self) -> None:
        checks.as_many("Run", self.route, drag_out=self.drag_out)

    def vessels(self) -> tuple[str, ...]:
        return (*self.route, *(self.plating.vessels() if self.plating else ()))


def join_plating(payload: dict[str, Any]) -> dict[str, Any]:
    """Make a run of version 1 one of version 2: the figures of the current stand together."""
    used = dict(payload["used"])
    deposit, anode = used.pop("deposit"), used.pop("anode")
    figures = {"deposit": deposit, "anode": anode, "racks": None, "rack_share": None, "conversions": []}
    return {**payload, "used": {**used, "plating": None if deposit is None else figures}}


@dataclass(frozen=True)
class Racks:
    """So many loads of one rack type through a route."""

    route: tuple[str, ...]
    rack: str
    loads: int

    def __post_init__(self) -> None:
        checks.between("Racks", 1, 1000, loads=self.loads)


@dataclass(frozen=True)
class BathCharge:
    """The charge that went through a bath, as its counter says."""

    bath: str
    charge: Measured


@dataclass(frozen=True)
class DaySheet(Event):
    """A day's (or a month's) racks by type, and the charge of each bath, at the end of it.

    ``drag_out`` is what one load of each row drags out of each tank of its route, in nanolitres; ``platings`` goes
    with ``charges``.
    """

    KIND = "day sheet"
    racks: tuple[Racks, ...]
    charges: tuple[BathCharge, ...]
    drag_out: Used[tuple[tuple[Figure, ...], ...]]
    platings: Used[tuple[Plating, ...]]

    def __post_init__(self) -> None:
        checks.as_many("DaySheet", self.racks, drag_out=self.drag_out)
        checks.as_many("DaySheet", self.charges, platings=self.platings)
        for row, figures in zip(self.racks, self.drag_out, strict=True):
            checks.as_many("DaySheet", row.route, drag_out=figures)
        checks.once("DaySheet", charges=[row.bath for row in self.charges])

    def vessels(self) -> tuple[str, ...]:
        tanks = [tank for row in self.racks for tank in row.route] + [row.bath for row in self.charges]
        return tuple(dict.fromkeys([*tanks, *(vessel for plating in self.platings for vessel in plating.vessels())]))


@dataclass(frozen=True)
class Dummy(Event):
    """A bath was dummied, or a recovery cell ran on it: metal went from it onto ``target`` (a vessel, or parts)."""

    KIND = "dummy"
    tank: str
    target: str
    charge: Measured | None
    current: Measured | None
    time: Measured | None
    weight_before: Measured | None
    weight_after: Measured | None
    plating: Used[Plating]

    def __post_init__(self) -> None:
        checks.none_of("Dummy", BOUNDARIES, tank=self.tank)
        checks.none_of("Dummy", BOUNDARIES - {PARTS}, target=self.target)

    def vessels(self) -> tuple[str, ...]:
        return (self.tank, *only_vessels(self.target), *self.plating.vessels())


@dataclass(frozen=True)
class Strip(Event):
    """Metal was stripped from parts, or from rack build-up (a vessel), into a tank.

    ``weight_before`` and ``weight_after`` tell how much; without them all that the books have of it in ``source``.
    """

    KIND = "strip"
    source: str
    tank: str
    metal: str
    weight_before: Measured | None
    weight_after: Measured | None

    def __post_init__(self) -> None:
        checks.none_of("Strip", BOUNDARIES, tank=self.tank)
        checks.none_of("Strip", BOUNDARIES - {PARTS}, source=self.source)
        checks.both_or_neither("Strip", weight_before=self.weight_before, weight_after=self.weight_after)
        if self.source == PARTS:
            checks.needed("Strip", weight_before=self.weight_before)

    def vessels(self) -> tuple[str, ...]:
        return only_vessels(self.source, self.tank)
