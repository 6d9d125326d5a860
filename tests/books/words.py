"""The trade's words for the books' tests: amounts as one says them, and books that check themselves at each record."""

from decimal import Decimal
from typing import NamedTuple
from uuid import UUID

from chemicals.books.events import (
    BOUNDARIES,
    Conversion,
    Deposit,
    Event,
    Figure,
    Held,
    Measured,
    Opening,
    Plating,
    Recipe,
    Share,
)
from chemicals.books.fold import Folded, fold_event
from chemicals.books.fold.state import Holding, State

G, KG, ML, L = 10**6, 10**9, 10**6, 10**9
"""Micrograms in a gram and a kilogram, nanolitres in a millilitre and a litre."""
MMOL = 10**6
"""Nanomoles in a millimole."""

NO_ROOM = Figure(0, 0, "what dissolves needs no room, for easy sums")
WATER = Figure(1_000_000, 0, "1 g/mL, for easy sums")
DENSE = Figure(1_200_000, 0, "1.2 g/mL, for easy sums")
SALT = UUID("00000000-0000-4000-8000-000000000001")
ACID = UUID("00000000-0000-4000-8000-000000000002")

Number = int | str


def _measured(amount: Number, unit: str, size: int, sd: Number | None) -> Measured:
    return Measured(
        str(amount), unit, int(Decimal(amount) * size), None if sd is None else int(Decimal(sd) * size)
    )  # fmt: skip


def litres(amount: Number, sd: Number | None = None) -> Measured:
    return _measured(amount, "L", L, sd)


def grams(amount: Number, sd: Number | None = None) -> Measured:
    return _measured(amount, "g", G, sd)


def kilograms(amount: Number, sd: Number | None = None) -> Measured:
    return _measured(amount, "kg", KG, sd)


def millimoles(amount: Number, sd: Number | None = None) -> Measured:
    return _measured(amount, "mmol", MMOL, sd)


def coulombs(amount: Number, sd: Number | None = None) -> Measured:
    return _measured(amount, "C", 10**6, sd)


def amperes(amount: Number, sd: Number | None = None) -> Measured:
    return _measured(amount, "A", 10**6, sd)


def seconds(amount: Number, sd: Number | None = None) -> Measured:
    return _measured(amount, "s", 1000, sd)


class Step(NamedTuple):
    """One tank of a route and what a load drags out of it."""

    tank: str
    drag_out: Figure


def step(tank: str, millilitres: Number, sd: Number = 0) -> Step:
    """Return a step of a route with its drag-out."""
    return Step(tank, Figure(int(Decimal(millilitres) * ML), int(Decimal(sd) * ML), "drag-out as entered"))


def copper_deposit(efficiency_ppm: int = 1_000_000, sd: int = 0) -> Deposit:
    return Deposit("Cu", "63.546", 2, "96485.33212", Figure(efficiency_ppm, sd, "as entered"))


def plating(
    deposit: Deposit,
    anode: str | None = None,
    *,
    on_racks: tuple[int, int] | None = None,
    conversions: tuple[Conversion, ...] = (),
) -> Plating:
    """Return the figures of a bath; ``on_racks`` is the share of the deposit that grows there, in ppm, with its sd."""
    share = None if on_racks is None else Figure(*on_racks, "uncoated tips")
    return Plating(deposit, anode, None if share is None else "racks", share, conversions)


def made(species: str, per_kilocoulomb: int, sd: int = 0) -> Conversion:
    """Return how many nanomoles of a species a kilocoulomb makes."""
    return Conversion(species, Figure(per_kilocoulomb, sd, "Faraday's law"), made=True)


def used_up(species: str, per_kilocoulomb: int, sd: int = 0) -> Conversion:
    """Return how many nanomoles of a species a kilocoulomb uses up."""
    return Conversion(species, Figure(per_kilocoulomb, sd, "as the supplier says"), made=False)


def salt(*, complete: bool = True) -> Recipe:
    """Return copper sulfate: 254.5 g of copper in a kilogram."""
    shares = (Share("Cu", 254_500_000, 0, "kg"),)
    return Recipe(SALT, 1, "copper sulfate", solid=True, complete=complete, shares=shares, density=None)


def acid(*, complete: bool = True, density: Figure | None = DENSE) -> Recipe:
    """Return a liquid of 1.2 g/mL with 20 g of sodium in a litre and 1 g of iron in a kilogram."""
    shares = (Share("Na", 20 * G, 0, "L"), Share("Fe", 1 * G, 0, "kg"))
    return Recipe(ACID, 1, "pickle concentrate", solid=False, complete=complete, shares=shares, density=density)


def opening(
    vessel: str,
    volume: Measured | None = None,
    *,
    complete: bool = True,
    mass: Measured | None = None,
    density: Figure | None = WATER,
    poured: tuple[str, ...] = (),
    **held: Measured,
) -> Opening:
    """Return what a vessel holds: by default a complete list, as dense as water. free_cyanide is free cyanide."""
    listed = tuple(Held(component.replace("_", " "), amount) for component, amount in held.items())
    return Opening(vessel, complete, volume, mass, listed, density, poured)


class Books:
    """Books that record events as they come and check after each that postings and holdings agree."""

    def __init__(self, *events: Event) -> None:
        self.state = State()
        self.posted: dict[tuple[str, str], int] = {}
        for event in events:
            self.record(event)

    def record(self, event: Event) -> Folded:
        """Fold an event; what is booked in each vessel is the sum of all that was transferred."""
        folded = fold_event(self.state, event)
        for transfer in folded.transfers:
            for end, amount in ((transfer.source, -transfer.amount), (transfer.target, transfer.amount)):
                key = (end, transfer.component)
                self.posted[key] = self.posted.get(key, 0) + amount
        vessels = {key: amount for key, amount in self.posted.items() if key[0] not in BOUNDARIES and amount}
        booked = {key: holding.booked for key, holding in self.state.holdings.items() if holding.booked}
        assert vessels == booked
        return folded

    def holding(self, vessel: str, component: str) -> Holding:
        return self.state.holding(vessel, component)

    def holds(self, vessel: str, component: str) -> int | None:
        """Return an amount in base units; None is unknown."""
        return self.holding(vessel, component).amount

    def went_to(self, end: str, component: str) -> int:
        """Return what all entries brought to an end, less what they took from it."""
        return self.posted.get((end, component), 0)

    def remembers(self, vessel: str) -> set[str]:
        return set(self.state.vessel(vessel).poured)

    def is_complete(self, vessel: str) -> bool:
        return not self.state.vessel(vessel).incomplete


def moved(folded: Folded, component: str) -> list[tuple[str, str, int]]:
    """Return (from, to, amount) of a component, in the order in which it happened."""
    return [(t.source, t.target, t.amount) for t in folded.transfers if t.component == component]


def bases(folded: Folded, component: str) -> set[str]:
    """Return the bases of what moved of a component."""
    return {t.basis for t in folded.transfers if t.component == component}


def codes(folded: Folded) -> set[str]:
    """Return the codes of the findings."""
    return {finding.code for finding in folded.findings}
