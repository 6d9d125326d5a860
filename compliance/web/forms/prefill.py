"""What a record form may know beforehand: the vessel whose page one comes from, or the last time."""

from collections.abc import Mapping
from contextlib import suppress
from typing import Any
from uuid import UUID

from chemicals.books.events import Measured, Run
from chemicals.journal.selectors import get_entry_for, read_event
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import get_vessel_for
from chemicals.process.fields import InstrumentField, VesselField, describe
from chemicals.process.inputs import INPUTS, RunInput, WeightInput
from chemicals.process.instruments import find_last_instrument
from chemicals.process.selectors import list_routes_for, list_routes_through
from chemicals.science.units import find
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership
from compliance.waste.selectors import get_container_for
from compliance.web.export import grams


def prefill(member: Membership, verb: str, query: Mapping[str, str]) -> dict[str, Any]:
    """Return the first values of a form from its address: ``vessel``, ``again``, or fields by their own names."""
    known = {name: query[name] for name, _ in describe(INPUTS[verb]) if name in query}
    with suppress(NotFoundError, ValueError):
        vessel = get_vessel_for(member, UUID(query.get("vessel", "")))
        known = {**_from_vessel(member, verb, vessel), **_instrument(member, verb, vessel, query), **known}
    with suppress(NotFoundError, ValueError):
        known = {**known, **_from_entry(member, verb, UUID(query.get("again", "")))}
    return known


def _from_vessel(member: Membership, verb: str, vessel: Vessel) -> dict[str, Any]:
    """Put the vessel into the first field that takes its kind; of a run, the only route through it."""
    if INPUTS[verb] is RunInput:
        routes = list(list_routes_through(member, vessel)[:2])
        return {"route": str(routes[0].uuid)} if len(routes) == 1 else {}
    for name, kind in describe(INPUTS[verb]):
        if isinstance(kind, VesselField) and vessel.kind in kind.kinds:
            return {name: str(vessel.uuid), **_tare(member, verb, vessel)}
    return {}


def _instrument(member: Membership, verb: str, vessel: Vessel, query: Mapping[str, str]) -> dict[str, str]:
    """Return the instrument that was used last for this at the vessel."""
    for name, kind in describe(INPUTS[verb]):
        if isinstance(kind, InstrumentField):
            found = find_last_instrument(member, vessel, verb.replace("-", " "), query.get(kind.by, ""))
            return {} if found is None else {name: str(found)}
    return {}


def _tare(member: Membership, verb: str, vessel: Vessel) -> dict[str, str]:
    """Return the empty weight of a waste container that is to be weighed, if it is known."""
    if INPUTS[verb] is not WeightInput or vessel.kind != VesselKind.WASTE:
        return {}
    tare = get_container_for(member, vessel.uuid).tare
    return {} if tare is None else {"tare": f"{grams(tare)} g"}


def _from_entry(member: Membership, verb: str, uuid: UUID) -> dict[str, Any]:
    """Repeat what an earlier run said, but not what was weighed: that is of its own load."""
    event = read_event(get_entry_for(member, uuid))
    if INPUTS[verb] is not RunInput or not isinstance(event, Run):
        return {}
    tanks = list(event.route)
    route = next(
        (
            str(route.uuid)
            for route in list_routes_for(member)
            if [str(step.vessel.uuid) for step in route.steps.all()] == tanks
        ),
        "",
    )
    return {"route": route, "parts": event.parts, **_typed("charge", event.charge), **_typed("time", event.time)} | (
        _current(event.current)
    )


def _typed(name: str, figure: Measured | None) -> dict[str, str]:
    return {} if figure is None else {name: figure.typed}


def _current(figure: Measured | None) -> dict[str, str]:
    """A current that was told as a density was written down as "1 A/dm2 x rack type"."""
    if figure is not None and find(figure.unit, "current_density"):
        return {"current_density": figure.typed.partition(" x ")[0]}
    return _typed("current", figure)
