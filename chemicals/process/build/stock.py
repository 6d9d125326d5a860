"""From what was said of stock and of baths made from it to events: opening, count, receipt, make-up, top-up."""

from datetime import datetime
from math import isqrt

from chemicals.books import events, fold
from chemicals.books.events import UNKNOWN_LIQUID, WATER_SUPPLY, Figure, Held, Measured, Recipe
from chemicals.books.fold.state import State
from chemicals.ledger.components import dimension_of
from chemicals.ledger.models import Vessel
from chemicals.process import inputs
from chemicals.process.build.figures import LIQUID_BRINGS_ITS_OWN, SOLUTION_DENSITY
from chemicals.process.build.substances import find_held
from chemicals.process.draft import WATER, Draft, by_dimension, measured, vessel_name
from chemicals.process.models import Tank
from chemicals.register.models import Form, Per, Product, ProductRevision
from chemicals.register.selectors import build_recipe, get_current_revision, recipe_key
from chemicals.science.quantity import Quantity
from chemicals.science.solution import swelling_of_mixture
from chemicals.science.units import DIMENSIONS

NL_PER_L = 10**9


def build_opening(draft: Draft, now: datetime, data: inputs.OpeningInput) -> events.Opening | None:
    """Return the event of an opening: what was found, what it was made from if anybody knows."""
    vessel = draft.vessel(data, "vessel")
    product = None if data.product is None else draft.find(Product, "product", data.product)
    if data.volume is None and data.mass is None:
        draft.refuse("volume", "Write the volume, or the mass of a solid.")
    held = find_held(draft, "held", data.held, volume=data.volume, mass=data.mass)
    if draft.errors or vessel is None:
        return None
    revision = None if product is None else current_revision(draft, product)
    return events.Opening(
        vessel=str(vessel.uuid),
        complete=data.complete,
        volume=measured(data.volume),
        mass=measured(data.mass),
        held=held,
        density=None if data.volume is None else SOLUTION_DENSITY,
        poured=_poured(data, vessel, revision),
    )


def _poured(data: inputs.OpeningInput, vessel: Vessel, revision: ProductRevision | None) -> tuple[str, ...]:
    """Return what the vessel shall remember: the product, nothing for mere water, else that nobody can name it."""
    if revision is not None:
        return (recipe_key(revision),)
    water = data.complete and not data.held
    return () if water else (UNKNOWN_LIQUID + str(vessel.uuid),)


def build_count(draft: Draft, now: datetime, data: inputs.CountInput) -> events.Count | None:
    """Return the event of a count."""
    vessel = draft.vessel(data, "vessel")
    check_same_dimension(draft, data.amount, data.sd)
    if draft.errors or vessel is None:
        return None
    return events.Count(
        vessel=str(vessel.uuid),
        volume=by_dimension(data.amount, "volume", data.sd),
        mass=by_dimension(data.amount, "mass", data.sd),
    )


def check_same_dimension(draft: Draft, said: Quantity | None, sd: Quantity | None, at: str = "") -> None:
    """Refuse an uncertainty that is not of the kind of its amount."""
    if sd is not None and (said is None or sd.dimension != said.dimension):
        draft.refuse(f"{at}sd", "Write the uncertainty in a unit of the same kind as the amount, or leave it out.")


def build_receipt(draft: Draft, now: datetime, data: inputs.ReceiptInput) -> events.Receipt | None:
    """Return the event of a receipt, with the composition as the register knows it now."""
    vessel = draft.vessel(data, "vessel")
    if vessel is not None and vessel.product is None:
        draft.refuse("vessel", "This container has no product. Set up a container for the product first.")
    if draft.errors or vessel is None or vessel.product is None:
        return None
    return events.Receipt(
        vessel=str(vessel.uuid),
        mass=by_dimension(data.amount, "mass"),
        volume=by_dimension(data.amount, "volume"),
        lot=data.lot,
        recipe=_recipe(draft, vessel.product),
    )


def build_found(vessel: Vessel, amount: Quantity, recipe: Recipe) -> events.Opening:
    """Return the event of a container of a product that was found with so much in it, as if that had just arrived."""
    name = str(vessel.uuid)
    mass, volume = by_dimension(amount, "mass"), by_dimension(amount, "volume")
    state = State()
    fold.fold_event(state, events.Receipt(vessel=name, mass=mass, volume=volume, lot="", recipe=recipe))
    found = {component: held for (_, component), held in state.holdings.items()}
    known = {
        component: Measured(amount.typed, base_unit_of(component), held.amount, isqrt(held.variance))
        for component, held in sorted(found.items())
        if held.amount is not None
    }
    return events.Opening(
        vessel=name,
        complete=recipe.complete and len(known) == len(found),
        volume=volume or known.get(events.VOLUME),
        mass=mass or known.get(events.GROSS_MASS),
        held=tuple(
            Held(component, held)
            for component, held in known.items()
            if component not in (events.VOLUME, events.GROSS_MASS)
        ),
        density=None,
        poured=(recipe.key,),
    )


def base_unit_of(component: str) -> str:
    """Return the unit in which a component is counted."""
    return DIMENSIONS[dimension_of(component)].base_unit


def current_revision(draft: Draft, product: Product) -> ProductRevision:
    """Return a product as the register knows it now."""
    return draft.known.once((ProductRevision, product.pk), lambda: get_current_revision(product))


def _recipe(draft: Draft, product: Product) -> Recipe:
    return draft.known.once((Recipe, product.pk), lambda: build_recipe(current_revision(draft, product)))


def build_make_up(draft: Draft, now: datetime, data: inputs.MakeUpInput) -> events.MakeUp | None:
    """Return the event of a make-up, with the room that its solids need once they are dissolved."""
    tank = draft.vessel(data, "tank")
    if not data.ingredients and data.level is None:
        draft.refuse("ingredients", "Write at least one ingredient, or the volume filled to.")
    rows = find_ingredients(draft, "ingredients", data.ingredients)
    if draft.errors or tank is None:
        return None
    return events.MakeUp(
        tank=str(tank.uuid),
        ingredients=tuple(ingredient for ingredient, _ in rows),
        level=measured(data.level),
        water_density=WATER,
        dissolved=tuple(_dissolved(draft, stock) for _, stock in rows),
    )


def find_ingredients(
    draft: Draft, field: str, rows: tuple[inputs.IngredientRow, ...]
) -> list[tuple[events.Ingredient, Vessel]]:
    """Return what was taken from which stock container."""
    found = [(row, draft.vessel(row, "stock", under=f"{field}.{number}.")) for number, row in enumerate(rows)]
    return [
        (
            events.Ingredient(str(stock.uuid), by_dimension(row.amount, "mass"), by_dimension(row.amount, "volume")),
            stock,
        )
        for row, stock in found
        if stock is not None
    ]


def _dissolved(draft: Draft, stock: Vessel) -> Figure:
    """Return by how much a kilogram out of a stock container swells a liquid that it dissolves in, in nanolitres."""
    return draft.known.once((Figure, stock.pk), lambda: _swelling(draft, stock.product))


def _swelling(draft: Draft, product: Product | None) -> Figure:
    revision = None if product is None else current_revision(draft, product)
    if revision is not None and revision.form == Form.LIQUID:
        return LIQUID_BRINGS_ITS_OWN
    lines = [] if revision is None else [line for line in revision.lines.all() if line.per == Per.KILOGRAM]
    found = swelling_of_mixture((line.substance.formula, line.amount / 10**9) for line in lines)
    return Figure(max(0, round(found.litres * NL_PER_L)), round(found.sd * NL_PER_L), found.source)


def build_top_up(draft: Draft, now: datetime, data: inputs.TopUpInput) -> events.TopUp | None:
    """Return the event of a top-up: an amount, or to the mark."""
    tank, source = draft.vessel(data, "tank"), draft.vessel(data, "source")
    if tank is not None and tank == source:
        draft.refuse("source", "A tank cannot be topped up from itself. Choose another source.")
    level = None
    if data.volume is None and tank is not None:
        level = draft.known.once((Tank, tank.pk), lambda: _mark(tank))
        if level is None:
            draft.refuse("volume", "This tank has no mark. Write how much was added.")
    if draft.errors or tank is None:
        return None
    return events.TopUp(
        tank=str(tank.uuid),
        source=vessel_name(source, WATER_SUPPLY),
        volume=measured(data.volume),
        level=level,
        water_density=WATER,
    )


def _mark(vessel: Vessel) -> Measured | None:
    mark = Tank.objects.filter(vessel=vessel).values_list("mark", flat=True).first()
    return None if mark is None else Measured("to the mark", "nL", mark)
