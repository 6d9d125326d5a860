"""Runs: metal onto parts, metal from soluble anodes, drag-out along the route."""

from decimal import ROUND_HALF_EVEN, Decimal, localcontext
from itertools import pairwise

from chemicals.books.events import ASSUMED, COMPUTED, GROSS_MASS, OBSERVED, PARTS, Deposit, Figure, Run
from chemicals.books.fold.arithmetic import product, quotient, root
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.state import WEIGHT_LOST

MILLION = 10**6
ALL_DISSOLVES = Figure(MILLION, 0, "a soluble anode has no other reaction")
Amount = tuple[int, int, str]
"""An amount in micrograms, its standard uncertainty and its basis."""


def fold_run(folding: Folding, event: Run) -> None:
    """bath -> parts, anode set -> bath, then each step drags out to the next and drags in."""
    if event.plating is not None and event.route:
        bath, deposit, anode = event.route[0], event.plating.deposit, event.plating.anode
        plated = _weighed(event) or _by_faraday(event, deposit, deposit.efficiency)
        _plate(folding, deposit.metal, bath, PARTS, plated)
        if plated is not None and plated[0] < 0:
            folding.note(WEIGHT_LOST, deposit.metal, bath, PARTS)
        if anode is not None:
            _plate(folding, deposit.metal, anode, bath, _dissolved(event, deposit))
    for (tank, end), drag_out in zip(pairwise((*event.route, PARTS)), event.drag_out, strict=True):
        folding.pour(tank, end, drag_out.base, drag_out.sd, ASSUMED)


def _plate(folding: Folding, metal: str, source: str, target: str, amount: Amount | None) -> None:
    """Move metal without liquid: its mass leaves with it."""
    for component in (metal, GROSS_MASS):
        if amount is None:
            folding.move_unknown(component, source, target)
        else:
            folding.move(component, source, target, *amount)


def _weighed(event: Run) -> Amount | None:
    before, after = event.weight_before, event.weight_after
    if before is None or after is None:
        return None
    return after.base - before.base, root(before.stated_sd**2 + after.stated_sd**2), OBSERVED


def _dissolved(event: Run, figures: Deposit) -> Amount | None:
    """Return what a soluble anode lost: all charge dissolves metal. Without charge, as much as plated the weight."""
    weighed, efficiency = _weighed(event), figures.efficiency
    if charge_of(event) is None and weighed is not None and weighed[0] >= 0 and efficiency.base > 0:
        return *quotient(weighed[0], weighed[1], efficiency.base, efficiency.sd, MILLION), ASSUMED
    return _by_faraday(event, figures, ALL_DISSOLVES)


def _by_faraday(event: Run, figures: Deposit, efficiency: Figure) -> Amount | None:
    charge = charge_of(event)
    if charge is None:
        return None
    base, sd = charge
    doubts = faraday_mass(sd, figures, efficiency.base), faraday_mass(base, figures, efficiency.sd)
    return faraday_mass(base, figures, efficiency.base), root(doubts[0] ** 2 + doubts[1] ** 2), COMPUTED


def charge_of(event: Run) -> tuple[int, int] | None:
    """Return the charge in microcoulombs and its standard uncertainty; None where it is not known.

    As read, else current (uA) times time (ms).
    """
    if event.charge is not None:
        return event.charge.base, event.charge.stated_sd
    if event.current is None or event.time is None:
        return None
    return product(event.current.base, event.current.stated_sd, event.time.base, event.time.stated_sd, 1000)


def faraday_mass(charge: int, figures: Deposit, efficiency_ppm: int) -> int:
    """Return the mass in micrograms: M Q / (z F) x efficiency (Faraday's laws of electrolysis)."""
    with localcontext() as context:
        context.prec = 60
        mass = Decimal(figures.molar_mass) * charge * efficiency_ppm
        mass /= figures.valence * Decimal(figures.faraday) * MILLION
        return int(mass.to_integral_value(ROUND_HALF_EVEN))
