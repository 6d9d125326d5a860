"""What a file of the register would make: substances, places, products with their revisions, containers."""

from collections import Counter
from dataclasses import dataclass
from datetime import date
from typing import Literal
from uuid import UUID

from chemicals.ledger.models import Vessel
from chemicals.process.importing.reading import Outcome, RowError
from chemicals.register.checks import Checked
from chemicals.register.models import CompositionLine, ProductRevision, Substance
from chemicals.science.quantity import Quantity

State = Literal["new", "revised", "here"]


KINDS = ("products", "revisions", "containers", "substances", "places")
"""What a file makes, in the order in which it is told: a database may keep counts in another."""


@dataclass(frozen=True)
class Planned:
    """A product of the file: the revision that its rows speak of, first told in a row.

    ``state``: it is new, this is its next revision, or all of it is here already (then ``checked`` is None).
    """

    row: int
    state: State
    revision: ProductRevision
    lines: tuple[CompositionLine, ...]
    checked: Checked | None


@dataclass(frozen=True)
class Container:
    """A container that is not written yet, ``key`` of the entry that says what is in it.

    An ``amount`` that was received on a day is a receipt; of one without a day it is only known that it is there now.
    ``new_place`` is the name of a place that is not written yet.
    """

    row: int
    key: UUID
    vessel: Vessel
    product: Planned
    new_place: str
    amount: Quantity | None
    lot: str
    received_on: date | None


@dataclass(frozen=True)
class Plan:
    """Everything that a file would make, in the order of writing."""

    substances: tuple[Substance, ...] = ()
    places: tuple[str, ...] = ()
    products: tuple[Planned, ...] = ()
    containers: tuple[Container, ...] = ()

    @property
    def counts(self) -> dict[str, int]:
        """Return how many things of each kind it makes."""
        states = Counter(planned.state for planned in self.products)
        others = (len(self.containers), len(self.substances), len(self.places))
        return dict(zip(KINDS, (states["new"], states["revised"], *others), strict=True))

    def list_rows(self, most: int) -> list[tuple[int, Planned, list[Container]]]:
        """Return the first rows that say something new, each with its product and the containers that it names."""
        products = {planned.row: planned for planned in self.products}
        held: dict[int, list[Container]] = {}
        for each in self.containers:
            held.setdefault(each.row, []).append(each)
        rows = sorted({*products, *held})[:most]
        return [(row, products[row] if row in products else held[row][0].product, held.get(row, [])) for row in rows]


@dataclass(frozen=True, kw_only=True)
class RegisterUnderstood(Outcome):
    """What a file of the register says; ``remarks`` are no errors: what a person should look at, by row and column."""

    made: Plan = Plan()
    remarks: tuple[RowError, ...] = ()
