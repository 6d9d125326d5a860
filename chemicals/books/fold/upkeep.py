"""Upkeep: what filters, carbon and resins keep, sludge that is taken out, tanks that are emptied and washed."""

from collections.abc import Collection

from chemicals.books.events import (
    ASSUMED,
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    SPECIES,
    SUPPLIER,
    WATER_SUPPLY,
    CleanOut,
    Figure,
    Held,
    Measured,
    Sludge,
    Uptake,
    is_metal,
)
from chemicals.books.fold.arithmetic import product
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.plating import move_metal

MILLION = 10**6


def fold_uptake(folding: Folding, event: Uptake) -> None:
    """supplier -> medium of the medium itself; tank -> medium of the liquid it keeps and of what it took up.

    What was found in the medium is all that is in it, the kept liquid's part included.
    """
    tank, target = event.tank, event.target
    if event.medium is not None:
        folding.move(GROSS_MASS, SUPPLIER, target, event.medium.base, event.medium.stated_sd, OBSERVED)
    for found in event.taken:
        _take(folding, event, found)
    taken = {found.component for found in event.taken}
    folding.pour(tank, target, event.solution.base, event.solution.sd, ASSUMED, but=taken)
    folding.remember_from(tank, target, known=taken)  # drained to the last drop it was in the liquid all the same
    if event.passed is not None and event.passed.base and event.uptake.base:
        _keep_metals(folding, event, event.passed, but=taken)


def _take(folding: Folding, event: Uptake, found: Held) -> None:
    """Move what was found in the medium. Of a metal, the mass goes along that the kept liquid does not bring."""
    amount, sd = found.amount.base, found.amount.stated_sd
    if found.component not in SPECIES:
        brought = folding.share(event.tank, found.component, event.solution.base, 0) or (0, 0)
        folding.move(GROSS_MASS, event.tank, event.target, max(amount - brought[0], 0), sd, COMPUTED)
    folding.move(found.component, event.tank, event.target, amount, sd, OBSERVED)


def _keep_metals(folding: Folding, event: Uptake, passed: Measured, *, but: Collection[str]) -> None:
    """Keep the relied part of every metal in what passed through."""
    for metal in folding.state.components(event.tank):
        held = folding.state.holding(event.tank, metal).amount
        if is_metal(metal) and metal not in but and held != 0:
            through = folding.share(event.tank, metal, passed.base, passed.stated_sd)
            kept = None if through is None or held is None else _kept(through, event.uptake, held)
            move_metal(folding, metal, event.tank, event.target, kept)


def _kept(through: tuple[int, int], uptake: Figure, held: int) -> tuple[int, int, str]:
    amount, sd = product(*through, uptake.base, uptake.sd, MILLION)
    return min(amount, max(held, 0)), sd, ASSUMED


def fold_sludge(folding: Folding, event: Sludge) -> None:
    """source -> sludge in proportion to the wet mass; what was analysed in it goes as analysed."""
    for found in event.held:
        amount = found.amount
        folding.move(found.component, event.source, event.target, amount.base, amount.stated_sd, OBSERVED)
    analysed = {found.component for found in event.held}
    folding.scoop(event.source, event.target, event.mass.base, event.mass.stated_sd, OBSERVED, but=analysed)


def fold_clean_out(folding: Folding, event: CleanOut) -> None:
    """tank -> target, all of it; then the wash water, of which nobody may have said how much it was."""
    folding.pour_all(event.tank, event.target)
    if event.water is None:
        folding.pour_unknown(WATER_SUPPLY, event.target)
    else:
        water = event.water
        folding.water(WATER_SUPPLY, event.target, water.base, water.stated_sd, event.water_density, OBSERVED)
