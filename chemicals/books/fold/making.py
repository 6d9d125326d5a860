"""Receipts, make-up, top-up and moves: known amounts go from here to there."""

from chemicals.books.events import (
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    SUPPLIER,
    UNACCOUNTED,
    VOLUME,
    WATER_SUPPLY,
    Figure,
    MakeUp,
    Measured,
    Move,
    Receipt,
    TopUp,
)
from chemicals.books.fold.state import UNKNOWN_LEVEL, Folding


def fold_receipt(folding: Folding, event: Receipt) -> None:
    """supplier -> stock container: gross mass, volume of a liquid, and each component of the recipe."""
    recipe = event.recipe
    folding.pour_into(event.vessel, [recipe.key], complete=recipe.complete)
    mass = event.mass or _convert(event.volume, recipe.density, multiply=True)
    volume = event.volume or (None if recipe.solid else _convert(event.mass, recipe.density, multiply=False))
    _arrive(folding, event.vessel, GROSS_MASS, mass, computed=event.mass is None)
    if not recipe.solid:
        _arrive(folding, event.vessel, VOLUME, volume, computed=event.volume is None)
    for share in recipe.shares:
        whole = mass if share.per == "kg" else volume
        if whole is None:
            folding.move_unknown(share.component, SUPPLIER, event.vessel)
            continue
        amount = share.amount * whole.base // 10**9
        sd = share.sd * whole.base // 10**9 + share.amount * (whole.sd or 0) // 10**9
        folding.move(share.component, SUPPLIER, event.vessel, amount, sd, COMPUTED)


def _arrive(folding: Folding, vessel: str, component: str, amount: Measured | None, *, computed: bool) -> None:
    if amount is None:
        folding.move_unknown(component, SUPPLIER, vessel)
    else:
        folding.move(component, SUPPLIER, vessel, amount.base, amount.sd or 0, COMPUTED if computed else OBSERVED)


def _convert(known: Measured | None, density: Figure | None, *, multiply: bool) -> Measured | None:
    """Return mass from volume, or volume from mass, by the density (ug/mL); None where the density is unknown."""
    if known is None or density is None:
        return None
    base = known.base * density.base // 10**6 if multiply else known.base * 10**6 // density.base
    sd = base * density.sd // density.base + base * (known.sd or 0) // max(known.base, 1)
    return Measured(known.typed, known.unit, base, sd)


def fold_make_up(folding: Folding, event: MakeUp) -> None:
    """stock -> tank in proportion; then water from the supply up to the level."""
    for item in event.ingredients:
        if item.volume is not None:
            folding.pour(item.stock, event.tank, item.volume.base, item.volume.sd or 0, OBSERVED)
        elif item.mass is not None:
            folding.scoop(item.stock, event.tank, item.mass.base, item.mass.sd or 0, OBSERVED)
    if event.level is not None:
        _fill(folding, event.tank, WATER_SUPPLY, event.level, event.water_density)


def fold_top_up(folding: Folding, event: TopUp) -> None:
    """Source -> tank: the amount said, or what is missing up to the level."""
    if event.volume is not None:
        _add(folding, event.tank, event.source, event.volume.base, event.volume.sd or 0, event.water_density, OBSERVED)
    elif event.level is not None:
        _fill(folding, event.tank, event.source, event.level, event.water_density)


def fold_move(folding: Folding, event: Move) -> None:
    """Vessel -> vessel in proportion to the volume, or all of it."""
    if event.volume is None:
        folding.pour_all(event.source, event.target, OBSERVED)
    else:
        folding.pour(event.source, event.target, event.volume.base, event.volume.sd or 0, OBSERVED)


def _fill(folding: Folding, tank: str, source: str, level: Measured, density: Figure) -> None:
    """Add what is missing up to the level, then take the level as read."""
    held = folding.state.holding(tank, VOLUME)
    if held.amount is None:
        folding.note(UNKNOWN_LEVEL, VOLUME, source, tank)
        for component in {GROSS_MASS, *([] if source == WATER_SUPPLY else folding.state.components(source))} - {VOLUME}:
            folding.move_unknown(component, source, tank)
    elif level.base > held.amount:
        _add(folding, tank, source, level.base - held.amount, 0, density, COMPUTED)
    folding.set_content(tank, VOLUME, level.base, level.sd or 0, UNACCOUNTED, OBSERVED)


def _add(folding: Folding, tank: str, source: str, volume: int, sd: int, density: Figure, basis: str) -> None:
    if source == WATER_SUPPLY:
        folding.water(source, tank, volume, sd, density.base, basis)
    else:
        folding.pour(source, tank, volume, sd, basis)
