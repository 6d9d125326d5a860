"""Mass balances in print, and two constructed from figures in print: data/mass_balances.csv, and books to tell them in.

Every case is told as entries; the fold makes the postings; what went over each boundary and what changed in each vessel
must be the figures of the case. Then something that came is left out, as a forgetful person would: an analysis or a
count at the end must show exactly that amount as unaccounted, to the microgram.
"""

import csv
from collections import Counter
from decimal import Decimal
from fractions import Fraction
from pathlib import Path
from uuid import UUID

from chemicals.books.events import (
    OPENING,
    UNACCOUNTED,
    Acceptance,
    DaySheet,
    Deposit,
    Event,
    Figure,
    Measured,
    Racks,
    Run,
)
from chemicals.books.fold import Folded
from chemicals.books.fold.plating import faraday_charge
from tests.books.words import KG, Books, G, kilograms, plating

TABLE = Path(__file__).parent / "data" / "mass_balances.csv"
ROWS = list(csv.DictReader(TABLE.read_text(encoding="utf-8").splitlines()))
CASES = tuple(dict.fromkeys(row["case"] for row in ROWS))
LB, GAL = 453_592_370, 3_785_411_784
"""Micrograms in an avoirdupois pound and nanolitres in a US gallon: both exact by definition (NIST SP 811, B.8)."""
UNITS = {"g/min": G, "kg": KG, "lb/month": LB}
"""Micrograms in a unit of a case; what a rate gives in one minute, or in one month, was recorded."""
AN_ANALYSIS = UUID(int=1)


class Line(Books):
    """Books that also keep how much went from one end to another."""

    def __init__(self, *events: Event) -> None:
        self.flows: Counter[tuple[str, str, str]] = Counter()
        super().__init__(*events)

    def record(self, event: Event) -> Folded:
        folded = super().record(event)
        for one in folded.transfers:
            self.flows[one.component, one.source, one.target] += one.amount
        return folded

    def more(self, component: str, vessel: str) -> int:
        """Return how much more a vessel holds than when it was opened."""
        return (self.holds(vessel, component) or 0) - self.flows[component, OPENING, vessel]

    def found(self, component: str, vessel: str) -> int:
        """Return what was found in a vessel and not accounted for; less than nothing is missing."""
        return self.flows[component, UNACCOUNTED, vessel] - self.flows[component, vessel, UNACCOUNTED]


def analysed(vessel: str, component: str, micrograms_per_litre: int) -> Acceptance:
    return Acceptance(AN_ANALYSIS, vessel, component, Figure(micrograms_per_litre, 0, "titration"))


def dipped(route: tuple[str, ...], *drags: int) -> Run:
    """Return a load that was only dipped; drag-out in nanolitres."""
    figures = tuple(Figure(drag, 0, "as entered") for drag in drags)
    return Run("parts", route, None, None, None, None, None, None, "rack", figures)


def many_dipped(loads: int, route: tuple[str, ...], *drags: int) -> DaySheet:
    figures = tuple(Figure(drag, 0, "as entered") for drag in drags)
    return DaySheet((Racks(route, "rack", loads),), (), (figures,), ())


def plated(deposit: Deposit, gained: str, dissolves: str, *, anode: str | None) -> Run:
    """Return parts that gained so many kilograms, while the charge dissolved so many of the anodes."""
    charge = Measured("the counter's", "C", faraday_charge(int(Decimal(dissolves) * KG), deposit))
    after = kilograms(str(1000 + Decimal(gained)))
    nothing = Figure(0, 0, "counted with the racks")
    return Run(
        "parts", ("bath",), charge, None, None, kilograms(1000), after, plating(deposit, anode), "rack", (nothing,)
    )  # fmt: skip


def figures(case: str, side: str) -> dict[str, Fraction]:
    """Return the amounts of a case by stream, in micrograms. side: came, went, or more (in the vessels)."""
    rows = [row for row in ROWS if (row["case"], row["side"]) == (case, side)]
    return {row["stream"]: Fraction(row["amount"]) * UNITS[row["unit"]] for row in rows}


def assert_closes(case: str, within: int, **found: list[int]) -> None:
    """Compare the streams of each side, to so many micrograms, and the closure, to a thousandth of a per cent."""
    for side, amounts in found.items():
        for (stream, expected), amount in zip(figures(case, side).items(), amounts, strict=True):
            assert abs(amount - expected) <= within, stream
    came, went = sum(found["came"]), sum(found["went"]) + sum(found.get("more", []))
    (printed,) = (row["amount"] for row in ROWS if (row["case"], row["side"]) == (case, "closure"))
    assert round(100 * went / came, 3) == float(printed)
