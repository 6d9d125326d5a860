"""Receipts, make-up, top-up and moves: known amounts go from here to there."""

from chemicals.books.events import (
    AIR,
    ASSUMED,
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    REACTION,
    SUPPLIER,
    UNACCOUNTED,
    VOLUME,
    WATER_SUPPLY,
    Figure,
    Ingredient,
    MakeUp,
    Measured,
    Move,
    Receipt,
    TopUp,
)
from chemicals.books.fold.arithmetic import product, quotient, root
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.level import read_level
from chemicals.books.fold.state import UNKNOWN_LEVEL

Amount = tuple[int, int, str]
"""An amount, its standard uncertainty and its basis."""


def fold_receipt(folding: Folding, event: Receipt) -> None:
    """supplier -> stock container: gross mass, volume of a liquid, and each component of the recipe."""
    recipe = event.recipe
    mass, volume = _mass(event), _volume(event)
    arrived: dict[str, Amount | None] = {GROSS_MASS: mass} if recipe.solid else {GROSS_MASS: mass, VOLUME: volume}
    for component, amount in arrived.items():
        _arrive(folding, event.vessel, component, amount)
    for share in recipe.shares:
        whole = mass if share.per == "kg" else volume
        part = None if whole is None else (*product(whole[0], whole[1], share.amount, share.sd, 10**9), COMPUTED)
        _arrive(folding, event.vessel, share.component, part)
    listed = [*arrived, *(share.component for share in recipe.shares)]
    folding.remember(event.vessel, [recipe.key], incomplete=not recipe.complete, listed=listed)


def _arrive(folding: Folding, vessel: str, component: str, amount: Amount | None) -> None:
    if amount is None:
        folding.move_unknown(component, SUPPLIER, vessel)
    else:
        folding.move(component, SUPPLIER, vessel, *amount)


def _mass(event: Receipt) -> Amount | None:
    """Return the mass as weighed, or from the volume by the density (ug/mL); None where neither is known."""
    if event.mass is not None:
        return event.mass.base, event.mass.stated_sd, OBSERVED
    density = event.recipe.density
    if event.volume is None or density is None:
        return None
    return *product(event.volume.base, event.volume.stated_sd, density.base, density.sd, 10**6), COMPUTED


def _volume(event: Receipt) -> Amount | None:
    """Return the volume as measured, or of a liquid from its mass by the density; None where neither is known."""
    if event.volume is not None:
        return event.volume.base, event.volume.stated_sd, OBSERVED
    density = event.recipe.density
    if event.recipe.solid or event.mass is None or density is None or density.base <= 0:
        return None
    return *quotient(event.mass.base, event.mass.stated_sd, density.base, density.sd, 10**6), COMPUTED


def fold_make_up(folding: Folding, event: MakeUp) -> None:
    """stock -> tank in proportion, and the room that salts need; then water from the supply up to the level.

    Liquids that shrink or swell on mixing lose or gain volume but no mass: that is unaccounted volume.
    """
    for item, swelling in zip(event.ingredients, event.dissolved, strict=True):
        add_ingredient(folding, item, event.tank)
        if item.mass is not None:
            _swell(folding, item.stock, event.tank, item.mass, swelling)
    if event.level is not None:
        _fill(folding, event.tank, WATER_SUPPLY, event.level, event.water_density)
        folding.set_content(event.tank, VOLUME, event.level.base, event.level.stated_sd, UNACCOUNTED, COMPUTED)


def add_ingredient(folding: Folding, item: Ingredient, tank: str) -> None:
    """stock -> tank in proportion to the volume or the mass; without either nobody knows how much."""
    if item.volume is not None:
        folding.pour(item.stock, tank, item.volume.base, item.volume.stated_sd, OBSERVED)
    elif item.mass is not None:
        folding.scoop(item.stock, tank, item.mass.base, item.mass.stated_sd, OBSERVED)
    else:
        folding.pour_unknown(item.stock, tank)


def _swell(folding: Folding, stock: str, tank: str, mass: Measured, swelling: Figure) -> None:
    """``reaction`` -> tank of the volume by which what dissolves swells the liquid."""
    volume, sd = product(mass.base, mass.stated_sd, swelling.base, swelling.sd, 10**9)
    if stock != tank:
        folding.move(VOLUME, REACTION, tank, volume, sd, ASSUMED)


def fold_top_up(folding: Folding, event: TopUp) -> None:
    """Source -> tank: the amount said, or what is missing up to the level; then the level as read."""
    if event.volume is not None:
        volume = event.volume
        _add(folding, event.tank, event.source, volume.base, volume.stated_sd, event.water_density, OBSERVED)
    elif event.level is not None:
        _fill(folding, event.tank, event.source, event.level, event.water_density)
    else:
        folding.pour_unknown(event.source, event.tank)
    if event.level is not None:
        read_level(folding, event.tank, event.level, AIR, event.water_density)


def fold_move(folding: Folding, event: Move) -> None:
    """One end -> the other in proportion to the volume, or to the mass, or all of it."""
    if event.volume is not None:
        folding.pour(event.source, event.target, event.volume.base, event.volume.stated_sd, OBSERVED)
    elif event.mass is not None:
        folding.scoop(event.source, event.target, event.mass.base, event.mass.stated_sd, OBSERVED)
    else:
        folding.pour_all(event.source, event.target)


def _fill(folding: Folding, tank: str, source: str, level: Measured, density: Figure) -> None:
    """Add what is missing up to the level.

    Where the books do not say that anything is missing, nobody knows how much was added: of water that shows in the
    level alone, of a solution it leaves both contents unknown.
    """
    held = folding.state.holding(tank, VOLUME)
    if held.amount is None:
        folding.note(UNKNOWN_LEVEL, VOLUME, source, tank)
        folding.pour_unknown(source, tank)
    elif level.base > held.amount:
        doubt = root(held.variance + level.stated_sd**2)
        _add(folding, tank, source, level.base - held.amount, doubt, density, COMPUTED)
    elif source != WATER_SUPPLY:
        folding.pour_unknown(source, tank)


def _add(folding: Folding, tank: str, source: str, volume: int, sd: int, density: Figure, basis: str) -> None:
    if source == WATER_SUPPLY:
        folding.water(source, tank, volume, sd, density, basis)
    else:
        folding.pour(source, tank, volume, sd, basis)
