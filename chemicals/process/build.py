"""From inputs to events: what was observed, and the figures relied on that day. One function per verb."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import datetime
from decimal import ROUND_HALF_EVEN
from typing import Any

from chemicals.books import events
from chemicals.books.events import AIR, SPILL, WATER_SUPPLY, Event, Figure, Measured, Recipe
from chemicals.books.occurred import Occurred
from chemicals.ledger.models import Vessel
from chemicals.process import inputs
from chemicals.process.build_run import build_run
from chemicals.process.draft import WATER, Draft, Known, by_dimension, measured
from chemicals.process.models import Tank
from chemicals.register.models import Product, ProductRevision
from chemicals.register.selectors import build_recipe, get_current_revision, recipe_key
from chemicals.science.formula import METALS, FormulaError, metal_fraction
from chemicals.science.quantity import Quantity
from chemicals.workshop.models import Membership

NO_ROOM = Figure(0, 0, "what dissolves is taken to need no room")
ASSUMED_DENSITY = Figure(1_100_000, 100_000, "assumed for a plating solution: 1.1 g/mL, uncertain by 0.1 g/mL")


@dataclass(frozen=True)
class Built:
    """An event ready to be recorded, and the time it must have if it may not be chosen."""

    event: Event
    occurred: Occurred | None


def build(
    member: Membership, now: datetime, data: inputs.Input, occurred: Occurred | None, known: Known | None = None
) -> Built:
    """Return the event that the input describes, or raise InvalidInputError with everything that is wrong.

    Many builds may share what is ``known``.
    """
    draft = Draft(member, known)
    event = BUILDERS[type(data)](draft, now, data)
    draft.finish()
    assert event is not None  # noqa: S101  (a builder that returns nothing has refused)
    return Built(event, _occurred(draft, event, occurred))


def _occurred(draft: Draft, event: Event, occurred: Occurred | None) -> Occurred | None:
    """An acceptance happens at sampling time: from then on the content is what was found."""
    if not isinstance(event, events.Acceptance):
        return occurred
    analysis = draft.entry("analysis", event.analysis)
    assert analysis is not None  # noqa: S101  (its acceptance was built)
    return Occurred(analysis.occurred_at, analysis.precision)


def _build_opening(draft: Draft, now: datetime, data: inputs.OpeningInput) -> Event | None:
    vessel = draft.vessel(data, "vessel")
    product = None if data.product is None else draft.find(Product, "product", data.product)
    if data.volume is None and data.mass is None:
        draft.refuse("volume", "Write the volume, or the mass of a solid.")
    held = [_held(draft, number, row, data.volume) for number, row in enumerate(data.held)]
    if len({row.metal for row in data.held}) < len(data.held):
        draft.refuse("held", "A metal stands twice in the list. Add the two together.")
    if draft.errors or vessel is None:
        return None
    revision = None if product is None else _current(draft, product)
    return events.Opening(
        vessel=str(vessel.uuid),
        complete=data.complete,
        volume=measured(data.volume),
        mass=measured(data.mass),
        held=tuple(row for row in held if row is not None),
        density=None if data.volume is None else ASSUMED_DENSITY,
        poured=_poured(data, vessel, revision),
    )


def _poured(data: inputs.OpeningInput, vessel: Vessel, revision: ProductRevision | None) -> tuple[str, ...]:
    """Return what the vessel shall remember: the product, nothing for mere water, else that nobody can name it."""
    if revision is not None:
        return (recipe_key(revision),)
    water = data.complete and not data.held
    return () if water else (events.UNKNOWN_LIQUID + str(vessel.uuid),)


def _held(draft: Draft, number: int, row: inputs.HeldRow, volume: Quantity | None) -> events.Held | None:
    amount = row.amount
    if row.metal not in METALS:
        draft.refuse(f"held.{number}.metal", "This is not balanced here. Choose a metal from the list.")
        return None
    if amount.dimension == "mass":
        return events.Held(row.metal, Measured(amount.typed, amount.unit, amount.base))
    if volume is None:
        draft.refuse(f"held.{number}.amount", "A concentration needs the volume. Write the volume, or a mass here.")
        return None
    return events.Held(row.metal, Measured(amount.typed, amount.unit, amount.base * volume.base // 10**9))


def _build_receipt(draft: Draft, now: datetime, data: inputs.ReceiptInput) -> Event | None:
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


def _current(draft: Draft, product: Product) -> ProductRevision:
    return draft.known.once((ProductRevision, product.pk), lambda: get_current_revision(product))


def _recipe(draft: Draft, product: Product) -> Recipe:
    return draft.known.once((Recipe, product.pk), lambda: build_recipe(_current(draft, product)))


def _build_make_up(draft: Draft, now: datetime, data: inputs.MakeUpInput) -> Event | None:
    tank = draft.vessel(data, "tank")
    if not data.ingredients and data.level is None:
        draft.refuse("ingredients", "Write at least one ingredient, or the volume filled to.")
    rows = [
        (draft.vessel(row, "stock", under=f"ingredients.{number}."), row.amount)
        for number, row in enumerate(data.ingredients)
    ]
    if draft.errors or tank is None:
        return None
    return events.MakeUp(
        tank=str(tank.uuid),
        ingredients=tuple(
            events.Ingredient(str(stock.uuid), by_dimension(amount, "mass"), by_dimension(amount, "volume"))
            for stock, amount in rows
            if stock is not None
        ),
        level=measured(data.level),
        water_density=WATER,
        dissolved=(NO_ROOM,) * len(rows),
    )


def _build_top_up(draft: Draft, now: datetime, data: inputs.TopUpInput) -> Event | None:
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
        source=WATER_SUPPLY if source is None else str(source.uuid),
        volume=measured(data.volume),
        level=level,
        water_density=WATER,
    )


def _mark(vessel: Vessel) -> Measured | None:
    mark = Tank.objects.filter(vessel=vessel).values_list("mark", flat=True).first()
    return None if mark is None else Measured("to the mark", "nL", mark)


def _build_move(draft: Draft, now: datetime, data: inputs.MoveInput) -> Event | None:
    source, target = draft.vessel(data, "source"), draft.vessel(data, "target")
    if source is not None and source == target:
        draft.refuse("target", "Source and target are the same vessel. Choose another one.")
    if draft.errors or source is None or target is None:
        return None
    return events.Move(str(source.uuid), str(target.uuid), measured(data.volume))


def _build_drum_off(draft: Draft, now: datetime, data: inputs.DrumOffInput) -> Event | None:
    source, target = draft.vessel(data, "source"), draft.vessel(data, "target")
    if draft.errors or source is None or target is None:
        return None
    return events.DrumOff(str(source.uuid), str(target.uuid), measured(data.volume))


def _build_level(draft: Draft, now: datetime, data: inputs.LevelInput) -> Event | None:
    vessel = draft.vessel(data, "vessel")
    if vessel is not None and vessel.capacity is not None and data.volume.base > vessel.capacity:
        draft.refuse("volume", "This is more than the vessel can hold. Read the level again.")
    volume = measured(data.volume, data.sd)
    if draft.errors or vessel is None or volume is None:
        return None
    return events.LevelReading(str(vessel.uuid), volume, SPILL if data.spilled else AIR, WATER)


def _build_analysis(draft: Draft, now: datetime, data: inputs.AnalysisInput) -> Event | None:
    vessel = draft.vessel(data, "vessel")
    salt = data.expressed_as.strip()
    if data.metal not in METALS:
        draft.refuse("metal", "This is not balanced here. Choose a metal from the list.")
        return None
    try:
        fraction = metal_fraction(salt or data.metal, data.metal)
    except FormulaError as error:
        draft.refuse("expressed_as", str(error))
        return None
    if not fraction:
        draft.refuse("expressed_as", f"{salt} holds no {data.metal}. Write the formula of the salt, or leave it empty.")
    if data.reported_at is not None and data.reported_at > now:
        draft.refuse("reported_at", "This lies in the future. Write when the result came.")
    result = measured(data.result, data.sd)
    if draft.errors or vessel is None or result is None:
        return None
    base, sd = (int((value * fraction).to_integral_value(ROUND_HALF_EVEN)) for value in (result.base, result.sd or 0))
    source = "as reported" if not salt else f"as reported, {fraction} of {salt} is {data.metal}"
    return events.Analysis(
        vessel=str(vessel.uuid),
        component=data.metal,
        result=result,
        expressed_as=salt or data.metal,
        reported_at=data.reported_at,
        concentration=Figure(base, sd, source),
    )


def _build_acceptance(draft: Draft, now: datetime, data: inputs.AcceptanceInput) -> Event | None:
    entry = draft.entry("analysis", data.analysis, events.Analysis)
    if entry is None:
        return None
    analysis = draft.known.event_of(entry)
    assert isinstance(analysis, events.Analysis)  # noqa: S101  (the kind was asked for)
    return events.Acceptance(
        analysis=entry.uuid,
        vessel=analysis.vessel,
        component=analysis.component,
        concentration=analysis.concentration,
    )


def _build_hand_over(draft: Draft, now: datetime, data: inputs.HandOverInput) -> Event | None:
    container = draft.vessel(data, "container")
    if draft.errors or container is None:
        return None
    return events.HandOver(str(container.uuid), data.receiver.strip(), measured(data.gross))


def _build_cancellation(draft: Draft, now: datetime, data: inputs.CancellationInput) -> Event | None:
    entry = draft.entry("entry", data.entry)
    if entry is not None and entry.kind in (events.Cancellation.KIND, events.Paper.KIND):
        draft.refuse("entry", f"A {entry.kind} cannot be cancelled. Record what is right as a new entry.")
    if not data.reason.strip():
        draft.refuse("reason", "Write why this entry was a mistake.")
    if draft.errors or entry is None:
        return None
    return events.Cancellation(entry.uuid, data.reason.strip())


Builder = Callable[[Draft, datetime, Any], Event | None]
BUILDERS: Mapping[type[inputs.Input], Builder] = {
    inputs.OpeningInput: _build_opening,
    inputs.ReceiptInput: _build_receipt,
    inputs.MakeUpInput: _build_make_up,
    inputs.TopUpInput: _build_top_up,
    inputs.RunInput: build_run,
    inputs.MoveInput: _build_move,
    inputs.LevelInput: _build_level,
    inputs.AnalysisInput: _build_analysis,
    inputs.AcceptanceInput: _build_acceptance,
    inputs.DrumOffInput: _build_drum_off,
    inputs.HandOverInput: _build_hand_over,
    inputs.CancellationInput: _build_cancellation,
}
