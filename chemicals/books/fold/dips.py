"""Drag-out: what a load carries out of each tank of its route into the next, and at last away with the parts."""

from collections.abc import Sequence
from itertools import pairwise

from chemicals.books.events import ASSUMED, PARTS, Figure
from chemicals.books.fold.arithmetic import root
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.state import LIMIT, Transfer

Ends = tuple[str, str, str, str]
"""Component, source, target and basis of a transfer."""


def dip(folding: Folding, route: Sequence[str], drag_out: Sequence[Figure]) -> None:
    """Take one load through its route: each tank drags out to the next, the last one with the parts."""
    for (tank, end), drags in zip(pairwise((*route, PARTS)), drag_out, strict=True):
        folding.pour(tank, end, drags.base, drags.sd, ASSUMED)


def dip_often(folding: Folding, route: Sequence[str], drag_out: Sequence[Figure], loads: int) -> None:
    """Take so many loads through their route, one after the other.

    The figure of a rack type is wrong by as much at every load: over n loads the doubts of one step add up, where
    independent ones would grow with the root of n. Each load is given sqrt(n) of the doubt, so that all give n of it.
    """
    shared = [Figure(drags.base, root(drags.sd**2 * loads), drags.source) for drags in drag_out]
    for _ in range(loads):
        dip(folding, route, shared)


def merged(transfers: Sequence[Transfer]) -> list[Transfer]:
    """Return one transfer for all between the same ends, of one component and basis, in order of their beginning."""
    sums: dict[Ends, tuple[int, int]] = {}
    full: list[Transfer] = []
    for one in transfers:
        ends = one.component, one.source, one.target, one.basis
        amount, variance = sums.get(ends, (0, 0))
        if amount + one.amount > LIMIT:  # no posting holds more
            full.append(_transfer(ends, amount, variance))
            amount = variance = 0
        sums[ends] = amount + one.amount, variance + one.sd**2
    return [*full, *(_transfer(ends, *total) for ends, total in sums.items())]


def _transfer(ends: Ends, amount: int, variance: int) -> Transfer:
    component, source, target, basis = ends
    return Transfer(component, source, target, amount, min(root(variance), LIMIT), basis)
