"""From loads and current as told to events: runs, day sheets, dummy plating and recovery, stripping."""

from datetime import datetime

from chemicals.books import events
from chemicals.books.events import PARTS, Figure, Measured, Plating, Racks
from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import list_held
from chemicals.process import inputs
from chemicals.process.build.current import check_charge, check_told, find_plating, plating_onto
from chemicals.process.build.instruments import NONE, Used, find_instrument
from chemicals.process.draft import Draft, measured, vessel_name
from chemicals.process.models import RackType, Route, RouteStep
from chemicals.science.formula import METALS
from chemicals.science.quantity import Quantity
from chemicals.science.reading import WEIGHT


def build_run(draft: Draft, now: datetime, data: inputs.RunInput) -> events.Run | None:
    """Return the event of a run, or None with the reasons noted in the draft."""
    route = draft.find(Route, "route", data.route)
    rack = _rack(draft, "rack", data.rack, route)
    current = _current(draft, data, rack)
    by_current = data.current is not None or data.current_density is not None
    weights = data.weight_before, data.weight_after
    used = NONE if weights == (None, None) else find_instrument(draft, data.instrument, WEIGHT)
    before, after = (_weighed(weight, data.weight_sd, used) for weight in weights)
    check_charge(draft, charge=data.charge, by_current=by_current, time=data.time, before=before, after=after)
    if draft.errors or route is None or rack is None:
        return None
    vessels = _vessels(draft, "route", route)
    plating = _plating(draft, vessels[0]) if vessels else None
    if plating is not None:
        check_told(draft, data.charge, current, data.time, weighed=before is not None)
    if draft.errors:
        return None
    return events.Run(
        parts=data.parts.strip(),
        route=tuple(str(vessel.uuid) for vessel in vessels),
        charge=measured(data.charge),
        current=current,
        time=measured(data.time),
        weight_before=before,
        weight_after=after,
        plating=plating,
        rack=rack.name,
        drag_out=(_drag_out(rack),) * len(vessels),
        instrument=used.instrument,
        gauge=used.gauge,
    )


def _weighed(weight: Quantity | None, sd: Quantity | None, used: Used) -> Measured | None:
    """Return a weight with its uncertainty: as said, else the balance's."""
    if weight is None:
        return None
    return Measured(weight.typed, weight.unit, weight.base, used.doubt(weight.base, sd))


def _rack(draft: Draft, field: str, uuid: object, route: Route | None) -> RackType | None:
    if uuid is not None:
        return draft.find(RackType, field, uuid)  # type: ignore[arg-type]  # rows and inputs hold a UUID here
    return None if route is None else draft.known.once(("rack", route.pk), lambda: RackType.objects.get(routes=route))


def _vessels(draft: Draft, field: str, route: Route) -> list[Vessel]:
    vessels = draft.known.once((RouteStep, route.pk), lambda: _list_vessels(route))
    if not vessels:
        draft.refuse(field, "This route has no tanks. Add its tanks first.")
    return vessels


def _list_vessels(route: Route) -> list[Vessel]:
    return [step.vessel for step in RouteStep.objects.filter(route=route).select_related("vessel")]


def _plating(draft: Draft, bath: Vessel) -> Plating | None:
    """Return how a bath plates; None if it has no metal."""
    return draft.known.once((Plating, bath.pk), lambda: find_plating(bath))


def _drag_out(rack: RackType) -> Figure:
    return Figure(rack.drag_out, rack.drag_out * rack.drag_out_sd // 10**6, f"rack type {rack.name}")


def _current(draft: Draft, data: inputs.RunInput, rack: RackType | None) -> Measured | None:
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


def build_day_sheet(draft: Draft, now: datetime, data: inputs.DaySheetInput) -> events.DaySheet | None:
    """Return the event of a day sheet: racks by type, and the charge of each bath."""
    if not data.racks and not data.charges:
        draft.refuse("racks", "Write the racks of the day, or the ampere-hours of a bath.")
    racks = [_racks(draft, f"racks.{number}.", row) for number, row in enumerate(data.racks)]
    baths = [draft.vessel(row, "bath", under=f"charges.{number}.") for number, row in enumerate(data.charges)]
    platings = [None if bath is None else _plating(draft, bath) for bath in baths]
    for number, (bath, plates) in enumerate(zip(baths, platings, strict=True)):
        if bath is not None and plates is None:
            draft.refuse(f"charges.{number}.bath", "This bath plates no metal. Leave it out, or set its metal up.")
    if len({row.bath for row in data.charges}) < len(data.charges):
        draft.refuse("charges", "A bath stands twice in the list. Add the two together.")
    if draft.errors:
        return None
    rows = [row for row in racks if row is not None]
    return events.DaySheet(
        racks=tuple(row for row, _ in rows),
        charges=tuple(
            events.BathCharge(str(row.bath), Measured(row.charge.typed, row.charge.unit, row.charge.base))
            for row in data.charges
        ),
        drag_out=tuple((figure,) * len(row.route) for row, figure in rows),
        platings=tuple(plating for plating in platings if plating is not None),
    )


def _racks(draft: Draft, at: str, row: inputs.RacksRow) -> tuple[Racks, Figure] | None:
    route = draft.find(Route, f"{at}route", row.route)
    rack = _rack(draft, f"{at}rack", row.rack, route)
    if not 1 <= row.loads <= MOST_LOADS:
        draft.refuse(f"{at}loads", f"Write how many racks went through, from 1 to {MOST_LOADS}.")
    if draft.errors or route is None or rack is None:
        return None
    vessels = _vessels(draft, f"{at}route", route)
    return Racks(tuple(str(vessel.uuid) for vessel in vessels), rack.name, row.loads), _drag_out(rack)


MOST_LOADS = 1000


def build_dummy(draft: Draft, now: datetime, data: inputs.DummyInput) -> events.Dummy | None:
    """Return the event of dummy plating, or of a recovery cell on a tank."""
    tank, target = draft.vessel(data, "tank"), draft.vessel(data, "target")
    before, after = measured(data.weight_before, data.weight_sd), measured(data.weight_after, data.weight_sd)
    by_current = data.current is not None
    check_charge(draft, charge=data.charge, by_current=by_current, time=data.time, before=before, after=after)
    if not draft.errors:
        check_told(draft, data.charge, measured(data.current), data.time, weighed=before is not None)
    if data.metal and data.metal not in METALS:
        draft.refuse("metal", "Choose a metal from the list.")
    plating = None if tank is None or draft.errors else plating_onto(draft, tank, target, data.metal)
    if draft.errors or tank is None or plating is None:
        return None
    return events.Dummy(
        tank=str(tank.uuid),
        target=vessel_name(target, PARTS),
        charge=measured(data.charge),
        current=measured(data.current),
        time=measured(data.time),
        weight_before=before,
        weight_after=after,
        plating=plating,
    )


def build_strip(draft: Draft, now: datetime, data: inputs.StripInput) -> events.Strip | None:
    """Return the event of stripping parts, which are weighed, or the build-up on racks."""
    tank, source = draft.vessel(data, "tank"), draft.vessel(data, "source")
    before, after = measured(data.weight_before, data.weight_sd), measured(data.weight_after, data.weight_sd)
    if (before is None) != (after is None):
        missing = "weight_before" if before is None else "weight_after"
        draft.refuse(missing, "One weight alone tells nothing. Write both, or neither.")
    elif before is None and data.source is None:
        draft.refuse("weight_before", "What comes off parts shows in their weight alone. Write both weights.")
    metal = _stripped(draft, source, data.metal)
    if draft.errors or tank is None:
        return None
    return events.Strip(vessel_name(source, PARTS), str(tank.uuid), metal, before, after)


def _stripped(draft: Draft, source: Vessel | None, said: str) -> str:
    """Return the metal that came off: the only one that the build-up holds, if nobody says."""
    if said in METALS:
        return said
    held = [] if source is None or said else [row.component for row in list_held(source) if row.amount != 0]
    metals = [component for component in held if component in METALS]
    if len(metals) != 1:
        draft.refuse("metal", "Which metal came off is not known here. Choose the metal.")
        return ""
    return metals[0]
