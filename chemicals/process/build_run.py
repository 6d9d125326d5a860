"""From a run as told to its event: route, charge, weights, and the figures of the bath that day."""

from datetime import datetime

from chemicals.books import events
from chemicals.books.events import Deposit, Figure, Measured, Plating
from chemicals.ledger.models import Vessel
from chemicals.process.draft import Draft, measured
from chemicals.process.inputs import RunInput
from chemicals.process.models import AnodeKind, RackType, Route, RouteStep, Tank
from chemicals.science.faraday import F
from chemicals.science.formula import atomic_weight


def build_run(draft: Draft, now: datetime, data: RunInput) -> events.Run | None:
    """Return the event of a run, or None with the reasons noted in the draft."""
    route = draft.find(Route, "route", data.route)
    rack = _rack(draft, data, route)
    current = _current(draft, data, rack)
    _check_charge(draft, data)
    if draft.errors or route is None or rack is None:
        return None
    vessels = draft.known.once((RouteStep, route.pk), lambda: _list_vessels(route))
    if not vessels:
        draft.refuse("route", "This route has no tanks. Add its tanks first.")
        return None
    plating = draft.known.once((Plating, vessels[0].pk), lambda: _plating(vessels[0]))
    drag_out = Figure(rack.drag_out, rack.drag_out * rack.drag_out_sd // 10**6, f"rack type {rack.name}")
    if plating is not None and data.charge is None and (current is None or data.time is None) and not _weighed(data):
        draft.refuse("charge", "Write the ampere-hours, or current and time, or both weights.")
        return None
    return events.Run(
        parts=data.parts.strip(),
        route=tuple(str(vessel.uuid) for vessel in vessels),
        charge=measured(data.charge),
        current=current,
        time=measured(data.time),
        weight_before=measured(data.weight_before, data.weight_sd),
        weight_after=measured(data.weight_after, data.weight_sd),
        plating=plating,
        rack=rack.name,
        drag_out=(drag_out,) * len(vessels),
    )


def _rack(draft: Draft, data: RunInput, route: Route | None) -> RackType | None:
    if data.rack is not None:
        return draft.find(RackType, "rack", data.rack)
    return None if route is None else draft.known.once(("rack", route.pk), lambda: RackType.objects.get(routes=route))


def _current(draft: Draft, data: RunInput, rack: RackType | None) -> Measured | None:
    density = data.current_density
    if density is None:
        return measured(data.current)
    if data.current is not None:
        draft.refuse("current_density", "Write the current or the current density, not both.")
        return None
    if rack is not None and rack.area is None:
        draft.refuse("current_density", "This rack type has no area. Write the current instead.")
        return None
    if rack is None or rack.area is None:
        return None
    base = density.base * rack.area // 10**4  # uA/dm2 times mm2; 10^4 mm2 are 1 dm2
    return Measured(f"{density.typed} x {rack.name}", density.unit, base)


def _check_charge(draft: Draft, data: RunInput) -> None:
    by_current = data.current is not None or data.current_density is not None
    if data.charge is not None and by_current:
        draft.refuse("charge", "Write the ampere-hours or the current, not both.")
    if data.charge is None and by_current and data.time is None:
        draft.refuse("time", "Write how long the current flowed.")
    if (data.weight_before is None) != (data.weight_after is None):
        missing = "weight_before" if data.weight_before is None else "weight_after"
        draft.refuse(missing, "One weight alone tells nothing. Write both, or neither.")


def _weighed(data: RunInput) -> bool:
    return data.weight_before is not None and data.weight_after is not None


def _list_vessels(route: Route) -> list[Vessel]:
    return [step.vessel for step in RouteStep.objects.filter(route=route).select_related("vessel")]


def _plating(first: Vessel) -> Plating | None:
    """Return how the first tank of a route plates; None if it has no metal."""
    bath = Tank.objects.filter(vessel=first).select_related("vessel", "anode").first()
    if bath is None or not bath.metal:
        return None
    soluble = bath.anode_kind == AnodeKind.SOLUBLE and bath.anode is not None
    anode = str(bath.anode.uuid) if soluble and bath.anode is not None else None
    return Plating(_deposit(bath), anode, racks=None, rack_share=None, conversions=())


def _deposit(bath: Tank) -> Deposit:
    assert bath.valence is not None  # noqa: S101  (constraint tank_metal_with_valence)
    return Deposit(
        metal=bath.metal,
        molar_mass=str(atomic_weight(bath.metal)),
        valence=bath.valence,
        faraday=str(F),
        efficiency=Figure(bath.efficiency, bath.efficiency_sd, f"set for {bath.vessel.name}"),
    )
