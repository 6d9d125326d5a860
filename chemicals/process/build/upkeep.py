"""From what was said of upkeep to events: filter, carbon, resin, sludge, clean-out, treatment."""

from datetime import datetime
from typing import TypeVar

from chemicals.books import events
from chemicals.books.events import Dissolved, Figure
from chemicals.ledger.components import dimension_per_litre
from chemicals.process import inputs
from chemicals.process.build.figures import (
    IN_CARBON_PER_KG,
    IN_CARTRIDGE,
    IN_RESIN_PER_KG,
    NOTHING,
    RESIN_KEEPS,
    for_each_kilogram,
)
from chemicals.process.build.stock import find_ingredients
from chemicals.process.build.substances import express, find_factor, find_held, times
from chemicals.process.draft import WATER, Draft, measured, vessel_name
from chemicals.science.quantity import Quantity

U = TypeVar("U", bound=events.Filter | events.Carbon | events.Resin)
AnyUptake = inputs.FilterInput | inputs.CarbonInput | inputs.ResinInput
UNWEIGHED = Figure(0, 0, "nothing assumed: it was not weighed")


def build_filter(draft: Draft, now: datetime, data: inputs.FilterInput) -> events.Filter | None:
    """Return the event of a filter: a drained cartridge where nobody says how much solution is in it."""
    return _build_uptake(draft, data, events.Filter, IN_CARTRIDGE, NOTHING)


def build_carbon(draft: Draft, now: datetime, data: inputs.CarbonInput) -> events.Carbon | None:
    """Return the event of a carbon treatment."""
    return _build_uptake(draft, data, events.Carbon, _by_weight(IN_CARBON_PER_KG, data.medium), NOTHING)


def build_resin(draft: Draft, now: datetime, data: inputs.ResinInput) -> events.Resin | None:
    """Return the event of a passage over resin."""
    if data.passed is None and not data.taken:
        draft.refuse("passed", "Write the volume that went through, or what was found in the resin.")
    return _build_uptake(draft, data, events.Resin, _by_weight(IN_RESIN_PER_KG, data.medium), RESIN_KEEPS)


def _by_weight(figure: Figure, medium: Quantity | None) -> Figure:
    return UNWEIGHED if medium is None else for_each_kilogram(figure, medium.base)


def _build_uptake(draft: Draft, data: AnyUptake, event: type[U], solution: Figure, uptake: Figure) -> U | None:
    tank, target = draft.vessel(data, "tank"), draft.vessel(data, "target")
    taken = find_held(draft, "taken", data.taken, volume=None, mass=data.medium)
    if data.uptake is not None and data.uptake.base > 10**6:
        draft.refuse("uptake", "A share is at most 100 %.")
    if draft.errors or tank is None or target is None:
        return None
    return event(
        tank=str(tank.uuid),
        target=str(target.uuid),
        medium=measured(data.medium),
        passed=measured(data.passed),
        taken=taken,
        solution=_as_told(data.solution) or solution,
        uptake=_as_told(data.uptake) or uptake,
    )


def _as_told(said: Quantity | None) -> Figure | None:
    return None if said is None else Figure(said.base, 0, f"as told: {said.typed}")


def build_sludge(draft: Draft, now: datetime, data: inputs.SludgeInput) -> events.Sludge | None:
    """Return the event of sludge taken out."""
    source, target, mass = draft.vessel(data, "source"), draft.vessel(data, "target"), measured(data.mass)
    held = find_held(draft, "held", data.held, volume=None, mass=data.mass)
    if source is not None and source == target:
        draft.refuse("target", "Source and target are the same vessel. Choose another one.")
    if draft.errors or source is None or target is None or mass is None:
        return None
    return events.Sludge(str(source.uuid), str(target.uuid), mass, held)


def build_clean_out(draft: Draft, now: datetime, data: inputs.CleanOutInput) -> events.CleanOut | None:
    """Return the event of a clean-out."""
    tank, target = draft.vessel(data, "tank"), draft.vessel(data, "target")
    if tank is not None and tank == target:
        draft.refuse("target", "A tank is not cleaned out into itself. Choose another vessel.")
    if draft.errors or tank is None or target is None:
        return None
    return events.CleanOut(str(tank.uuid), str(target.uuid), measured(data.water), WATER)


def build_treatment(draft: Draft, now: datetime, data: inputs.TreatmentInput) -> events.Treatment | None:
    """Return the event of a batch treatment."""
    vessel, filtrate = draft.vessel(data, "vessel"), draft.vessel(data, "filtrate")
    sludge = draft.vessel(data, "sludge")
    filtrate = filtrate or vessel
    reagents = find_ingredients(draft, "reagents", data.reagents)
    found = [_dissolved(draft, f"dissolved.{number}.", row) for number, row in enumerate(data.dissolved)]
    dissolved = tuple(row for row in found if row is not None)
    if not (data.reagents or data.consumed or data.dissolved or data.filtrate or data.sludge):
        draft.refuse("reagents", "Write what went in, what reacted away, or where filtrate and sludge went.")
    if len({row.component for row in dissolved}) < len(dissolved):
        draft.refuse("dissolved", "A metal stands twice in the list. Write each once.")
    if len({row.species for row in data.consumed}) < len(data.consumed):
        draft.refuse("consumed", "A species stands twice in the list. Write each once.")
    if sludge is not None and sludge in (vessel, filtrate):
        draft.refuse("sludge", "The sludge goes into a vessel of its own. Choose another one.")
    if sludge is None and data.sludge_mass is not None:
        draft.refuse("sludge", "Choose where the sludge went.")
    if draft.errors or vessel is None or filtrate is None:
        return None
    return events.Treatment(
        vessel=str(vessel.uuid),
        reagents=tuple(ingredient for ingredient, _ in reagents),
        filtrate=str(filtrate.uuid),
        sludge=None if sludge is None else vessel_name(sludge, ""),
        filtrate_volume=measured(data.filtrate_volume),
        sludge_mass=measured(data.sludge_mass),
        dissolved=dissolved,
        consumed=tuple(row.species for row in data.consumed),
    )


def _dissolved(draft: Draft, at: str, row: inputs.DissolvedRow) -> Dissolved | None:
    component = draft.component(f"{at}metal", row.metal)
    if component is None:
        return None
    factor = find_factor(draft, f"{at}expressed_as", component, row.expressed_as, row.result)
    if factor is None:
        return None
    result, dimension = row.result, dimension_per_litre(component)
    return Dissolved(component, express(result, row.expressed_as, dimension, times(factor, result.base)))
