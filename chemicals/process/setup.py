"""Writes of the set-up: tanks, rack types, routes. Plain settings: figures go into each entry as used."""

from dataclasses import dataclass
from datetime import datetime

from django.core.exceptions import ValidationError
from django.db import models, transaction
from django_scopes import scope

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.services import create_vessel
from chemicals.process.models import AnodeKind, RackType, Route, RouteStep, Tank
from chemicals.register.models import Product
from chemicals.science.formula import METALS
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.permissions import require_same_workshop, require_writer


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


def create_tank(*, actor: Membership, now: datetime, tank: TankInput) -> Tank:
    """Create a bath or a rinse with its vessel."""
    require_writer(actor)
    _check_tank(actor, tank)
    with transaction.atomic(), scope(workshop=actor.workshop):
        vessel = create_vessel(
            actor=actor,
            now=now,
            kind=VesselKind(tank.kind),
            name=tank.name,
            place=tank.place,
            capacity=tank.capacity,
        )
        return Tank.objects.create(
            vessel=vessel,
            mark=tank.mark,
            bath_type=tank.bath_type.strip(),
            metal=tank.metal,
            valence=tank.valence,
            efficiency=tank.efficiency,
            efficiency_sd=tank.efficiency_sd,
            anode_kind=tank.anode_kind,
            anode=tank.anode,
        )


def _check_tank(actor: Membership, tank: TankInput) -> None:
    errors = []
    if tank.kind not in (VesselKind.BATH, VesselKind.RINSE):
        errors.append(FieldError("kind", "A tank is a bath or a rinse."))
    if tank.metal and tank.metal not in METALS:
        errors.append(FieldError("metal", "Choose a metal from the list."))
    if bool(tank.metal) != (tank.valence is not None):
        errors.append(FieldError("valence", "A metal and its valence go together. Write both, or neither."))
    if tank.valence is not None and not 1 <= tank.valence <= 8:
        errors.append(FieldError("valence", "A valence lies between 1 and 8."))
    if tank.mark is not None and tank.capacity is not None and tank.mark > tank.capacity:
        errors.append(FieldError("mark", "The mark lies above what the tank can hold."))
    if not 0 < tank.efficiency <= 1_100_000:
        errors.append(FieldError("efficiency", "A current efficiency lies between 0 and 110 %."))
    if tank.anode_kind == AnodeKind.SOLUBLE and tank.anode is None:
        errors.append(FieldError("anode", "A soluble anode loses metal: choose its anode set, so that it is counted."))
    if errors:
        raise InvalidInputError(errors)
    if tank.anode is not None:
        require_same_workshop(actor, tank.anode)


HOLDERS = (VesselKind.STOCK, VesselKind.ANODE)


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
    """Create a stock container of a product, or an anode set. Capacity in nanolitres."""
    require_writer(actor)
    errors = []
    if kind not in HOLDERS:
        errors.append(FieldError("kind", "Choose a stock container or an anode set."))
    if kind == VesselKind.STOCK and product is None:
        errors.append(FieldError("product", "A stock container holds one product. Choose the product."))
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
    rack = RackType(workshop=actor.workshop, name=name.strip(), area=area, drag_out=drag_out, drag_out_sd=drag_out_sd)
    with transaction.atomic(), scope(workshop=actor.workshop):
        _clean(rack)
        rack.save()
    return rack


def create_route(*, actor: Membership, name: str, rack: RackType, vessels: list[Vessel]) -> Route:
    """Create a route through tanks in order; the first one plates."""
    require_writer(actor)
    require_same_workshop(actor, rack, *vessels)
    if not vessels:
        raise InvalidInputError.of("vessels", "A route goes through at least one tank. Choose the tanks in order.")
    if len(set(vessels)) < len(vessels):
        raise InvalidInputError.of("vessels", "A tank stands twice in the route. Choose each tank once.")
    route = Route(workshop=actor.workshop, name=name.strip(), rack=rack)
    with transaction.atomic(), scope(workshop=actor.workshop):
        _clean(route)
        route.save()
        RouteStep.objects.bulk_create(
            RouteStep(route=route, position=position, vessel=vessel) for position, vessel in enumerate(vessels)
        )
    return route


def _clean(row: models.Model) -> None:
    """Turn Django's validation errors into ours, all at once."""
    try:
        row.full_clean()
    except ValidationError as error:
        raise InvalidInputError(
            [
                FieldError("name" if field == "__all__" else field, message)
                for field, messages in error.message_dict.items()
                for message in messages
            ]
        ) from error
