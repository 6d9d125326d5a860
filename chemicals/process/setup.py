"""Writes of the set-up: tanks, rack types, routes. Plain settings: figures go into each entry as used."""

from collections.abc import Iterator
from dataclasses import dataclass, replace
from datetime import datetime

from django.db import transaction
from django_scopes import scope

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.services import create_vessel
from chemicals.process.models import AnodeKind, RackType, Route, RouteStep, SideReaction, Tank, TankChange
from chemicals.register.models import Product
from chemicals.science.formula import METALS
from chemicals.science.quantity import show
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.rows import check_row


@dataclass(frozen=True, kw_only=True)
class TankInput:
    """A bath or a rinse. Volumes in nanolitres, efficiencies in parts per million; a rinse has no metal."""

    kind: str
    name: str
    place: Place | None = None
    capacity: int | None = None
    mark: int | None = None
    bath_type: str = ""
    metal: str = ""
    valence: int | None = None
    efficiency: int = 1_000_000
    efficiency_sd: int = 30_000
    anode_kind: str = ""
    anode: Vessel | None = None
    side_reaction: str = ""
    racks: Vessel | None = None
    rack_share: int | None = None


TANKS = (VesselKind.BATH, VesselKind.RINSE)


def create_tank(*, actor: Membership, now: datetime, tank: TankInput) -> Tank:
    """Create a bath or a rinse with its vessel."""
    require_writer(actor)
    require_same_workshop(actor, *(thing for thing in (tank.place, tank.anode, tank.racks) if thing is not None))
    if tank.kind not in TANKS:
        raise InvalidInputError.of("kind", "A tank is a bath or a rinse.")
    row = Tank(
        mark=tank.mark,
        bath_type=tank.bath_type,
        metal=tank.metal,
        valence=tank.valence,
        efficiency=tank.efficiency,
        efficiency_sd=tank.efficiency_sd,
        anode_kind=tank.anode_kind,
        anode=tank.anode,
        side_reaction=tank.side_reaction,
        racks=tank.racks,
        rack_share=tank.rack_share,
    )
    errors = [
        *_check_figures(tank), *_check_anode(tank), *_check_racks(tank), *check_row(row, leave_out=["vessel"])
    ]  # fmt: skip
    with transaction.atomic(), scope(workshop=actor.workshop):
        row.vessel = _create_tank_vessel(actor, now, tank, errors)
        row.save()
    return row


def _create_tank_vessel(actor: Membership, now: datetime, tank: TankInput, errors: list[FieldError]) -> Vessel:
    """Create the vessel, or raise what is wrong with it together with the tank's own errors."""
    try:
        vessel = create_vessel(
            actor=actor,
            now=now,
            kind=VesselKind(tank.kind),
            name=tank.name,
            place=tank.place,
            capacity=tank.capacity,
        )
    except InvalidInputError as error:
        raise InvalidInputError([*error.errors, *errors]) from error
    if errors:
        raise InvalidInputError(errors)
    return vessel


def _check_figures(tank: TankInput) -> Iterator[FieldError]:
    if tank.metal and tank.metal not in METALS:
        yield FieldError("metal", "Choose a metal from the list.")
    if tank.metal and tank.kind == VesselKind.RINSE:
        yield FieldError("metal", "A rinse plates no metal. Leave the metal out, or choose a bath.")
    if bool(tank.metal) != (tank.valence is not None):
        yield FieldError("valence", "A metal and its valence go together. Write both, or neither.")
    if tank.valence is not None and not 1 <= tank.valence <= 8:
        yield FieldError("valence", "A valence lies between 1 and 8.")
    if tank.mark is not None and tank.mark <= 0:
        yield FieldError("mark", "The mark lies above the bottom. Write the volume at the mark, or leave it out.")
    if tank.mark is not None and tank.capacity is not None and tank.mark > tank.capacity:
        yield FieldError("mark", "The mark lies above what the tank can hold.")
    if not 0 < tank.efficiency <= 1_100_000:
        yield FieldError("efficiency", "A current efficiency lies between 0 and 110 %.")


def _check_anode(tank: TankInput) -> Iterator[FieldError]:
    if tank.anode_kind == AnodeKind.SOLUBLE and tank.anode is None:
        yield FieldError("anode", "A soluble anode loses metal: choose its anode set, so that it is counted.")
    if tank.anode is not None and tank.anode.kind != VesselKind.ANODE:
        yield FieldError("anode", "This is no anode set. Choose one, or set one up first.")
    if tank.side_reaction and tank.anode_kind != AnodeKind.INERT:
        yield FieldError("side_reaction", "This happens at an inert anode. Choose that anode, or leave this out.")
    if tank.side_reaction and not tank.metal:
        yield FieldError("side_reaction", "This follows from the metal that is plated. Choose the metal first.")
    chromium = (tank.metal, tank.valence) == ("Cr", 6)
    if tank.side_reaction == SideReaction.CHROMIUM_VI and tank.metal and not chromium:
        yield FieldError("side_reaction", "Only a bath that plates chromium of valence 6 uses chromium(VI) up.")


def _check_racks(tank: TankInput) -> Iterator[FieldError]:
    if tank.racks is not None and tank.racks.kind != VesselKind.RACKS:
        yield FieldError("racks", "This is no rack build-up. Choose one, or set one up first.")
    if tank.racks is not None and not tank.metal:
        yield FieldError("racks", "Nothing grows on racks where nothing is plated. Leave this out.")
    if tank.rack_share is not None and tank.racks is None:
        yield FieldError("racks", "A share of the deposit grows on racks: choose the rack build-up that it goes to.")
    if tank.rack_share is not None and not 0 <= tank.rack_share < 1_000_000:
        yield FieldError("rack_share", "A share lies between 0 and 100 %, and something is left for the parts.")


FACTS = (
    "mark", "bath_type", "metal", "valence", "efficiency", "efficiency_sd", "anode_kind", "anode", "side_reaction",
    "racks", "rack_share",
)  # fmt: skip
"""What of a tank may change after it was set up: entries keep the figures that they relied on."""
SHOWN_AS = {"mark": "volume", "efficiency": "fraction", "efficiency_sd": "fraction", "rack_share": "fraction"}


def change_tank(*, actor: Membership, now: datetime, row: Tank, tank: TankInput, note: str = "") -> list[TankChange]:
    """Change how a bath or a rinse is set up, and note what changed, who said so and when.

    Of ``tank`` kind, name, place and capacity are not looked at: they belong to the vessel. What was recorded so far
    keeps the figures that it relied on; what is recorded from now on relies on the new ones.
    """
    require_writer(actor)
    require_same_workshop(actor, row.vessel, *(thing for thing in (tank.anode, tank.racks) if thing is not None))
    said = replace(tank, kind=row.vessel.kind, capacity=row.vessel.capacity)
    before = {name: getattr(row, name) for name in FACTS}
    for name in FACTS:
        setattr(row, name, getattr(said, name))
    changes = [
        TankChange(
            tank=row, fact=name, before=_told(name, before[name]), after=_told(name, getattr(row, name)),
            note=note.strip(), changed_at=now, changed_by=actor,
        )
        for name in FACTS
        if getattr(row, name) != before[name]
    ]  # fmt: skip
    errors = [
        *_check_figures(said), *_check_anode(said), *_check_racks(said), *check_row(row, leave_out=["vessel"]),
        *(error for change in changes[:1] for error in check_row(change, leave_out=["tank"])),
    ]  # fmt: skip
    if errors:
        row.refresh_from_db()
        raise InvalidInputError(errors)
    with transaction.atomic(), scope(workshop=actor.workshop):
        row.save()
        TankChange.objects.bulk_create(changes)
    return changes


def _told(name: str, value: object) -> str:
    """Return what a fact was, as people read it; empty where it was nothing."""
    if isinstance(value, int) and name in SHOWN_AS:
        return show(value, SHOWN_AS[name])
    return "" if value is None else str(value)[:80]


SOLID_HOLDERS = (
    VesselKind.FILTER, VesselKind.CARBON, VesselKind.RESIN, VesselKind.RECOVERY_CELL, VesselKind.RACKS,
    VesselKind.SLUDGE,
)  # fmt: skip
"""Kinds of vessels that stand for solids which took metal out of a liquid."""
HOLDERS = (VesselKind.STOCK, VesselKind.ANODE, *SOLID_HOLDERS)
"""Kinds of vessels that need no figures of their own."""


def create_holder(
    *,
    actor: Membership,
    now: datetime,
    kind: str,
    name: str,
    product: Product | None = None,
    place: Place | None = None,
    capacity: int | None = None,
) -> Vessel:
    """Create a stock container, an anode set, or what stands for solids: filter, sludge and so on.

    Capacity in nanolitres. Of filter, carbon, resin and what grows nothing is bought in: they have no product.
    """
    require_writer(actor)
    errors = []
    if kind not in HOLDERS:
        errors.append(FieldError("kind", "Choose one of the list. Tanks and waste containers have forms of their own."))
    if kind == VesselKind.STOCK and product is None:
        errors.append(FieldError("product", "A stock container holds one product. Choose the product."))
    if product is not None and kind in SOLID_HOLDERS:
        errors.append(FieldError("product", "Nothing is received into this. Leave the product out."))
    if errors:
        raise InvalidInputError(errors)
    return create_vessel(
        actor=actor, now=now, kind=VesselKind(kind), name=name, place=place, product=product, capacity=capacity
    )


def create_rack_type(
    *, actor: Membership, name: str, drag_out: int, area: int | None = None, drag_out_sd: int = 300_000
) -> RackType:
    """Create a rack type: drag-out per load in nanolitres, its relative uncertainty in ppm, area in mm2."""
    require_writer(actor)
    rack = RackType(workshop=actor.workshop, name=name, area=area, drag_out=drag_out, drag_out_sd=drag_out_sd)
    with transaction.atomic(), scope(workshop=actor.workshop):
        errors = check_row(rack, unique=True)
        if area is not None and area <= 0:
            errors.append(FieldError("area", "An area is more than nothing. Write it, or leave it out."))
        if errors:
            raise InvalidInputError(errors)
        rack.save()
    return rack


def create_route(*, actor: Membership, name: str, rack: RackType, vessels: list[Vessel]) -> Route:
    """Create a route through tanks in order; the first one plates."""
    require_writer(actor)
    require_same_workshop(actor, rack, *vessels)
    errors = list(_check_steps(vessels))
    route = Route(workshop=actor.workshop, name=name, rack=rack)
    with transaction.atomic(), scope(workshop=actor.workshop):
        errors = [*check_row(route, unique=True), *errors]
        if errors:
            raise InvalidInputError(errors)
        route.save()
        RouteStep.objects.bulk_create(
            RouteStep(route=route, position=position, vessel=vessel) for position, vessel in enumerate(vessels)
        )
    return route


def _check_steps(vessels: list[Vessel]) -> Iterator[FieldError]:
    if not vessels:
        yield FieldError("vessels", "A route goes through at least one tank. Choose the tanks in order.")
    if len(set(vessels)) < len(vessels):
        yield FieldError("vessels", "A tank stands twice in the route. Choose each tank once.")
    for vessel in vessels:
        if vessel.kind not in TANKS:
            yield FieldError("vessels", f"{vessel.name} is neither bath nor rinse. Choose the tanks in order.")
