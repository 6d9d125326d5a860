"""Vessels, tanks, rack types, routes."""

from typing import Any

from django.db.models import QuerySet
from django.utils.translation import gettext as _
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.ledger.codes import tidy_code
from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import get_vessel_for, list_findings_of, list_vessels_for, read_contents
from chemicals.process.models import RackType, Route, Tank
from chemicals.process.selectors import (
    get_rack_type_for,
    get_route_for,
    get_tank_of,
    list_rack_types_for,
    list_routes_for,
    list_tanks_for,
)
from chemicals.process.setup import TankInput, create_holder, create_rack_type, create_route, create_tank
from chemicals.register.selectors import get_product_for
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.selectors import get_place_for
from compliance.api.serializers import vessels as shapes
from compliance.api.serializers.base import With
from compliance.api.views.base import ListCreateView, Lookup, WorkshopView
from compliance.api.views.entries import name_vessels, stands_to

LATEST = 50
"""How many findings a vessel shows."""


class VesselsView(ListCreateView):
    """Everything that holds matter. A POST sets up a stock container, an anode set, a filter or the like."""

    shape, input_class, query_class = shapes.VesselShape, shapes.VesselInput, shapes.VesselQuery

    def rows(self) -> QuerySet[Vessel]:
        """Return the vessels, of the kind and with the code if they are given."""
        rows = list_vessels_for(self.member)
        if "kind" in self.query:
            rows = rows.filter(kind=self.query["kind"])
        if "code" in self.query:
            rows = rows.filter(code=tidy_code(self.query["code"]))
        return rows

    def create(self, said: dict[str, Any]) -> Vessel:
        """Set up a stock container, an anode set, or what stands for solids."""
        lookup = Lookup(self.member)
        product = lookup.find("product", get_product_for, said.pop("product", None))
        place = lookup.find("place", get_place_for, said.pop("place", None))
        lookup.finish()
        return create_holder(actor=self.member, now=self.now, product=product, place=place, **said)


class VesselView(WorkshopView):
    """One vessel with what it holds."""

    shape = shapes.VesselDetail

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the vessel."""
        vessel = get_vessel_for(self.member, kwargs["uuid"])
        read = {"contents": read_contents(vessel), "findings": list_findings_of(vessel)[:LATEST]}
        found = With(vessel, **read, stands_to=stands_to(self.member))
        return self.respond(found, vessels=name_vessels(self.member))


class TanksView(ListCreateView):
    """Baths and rinses with the figures that their runs rely on."""

    shape, input_class = shapes.TankShape, shapes.TankInput

    def rows(self) -> QuerySet[Tank]:
        """Return the tanks."""
        return list_tanks_for(self.member)

    def create(self, said: dict[str, Any]) -> Tank:
        """Set up a bath or a rinse."""
        lookup = Lookup(self.member)
        place = lookup.find("place", get_place_for, said.pop("place", None))
        anode = lookup.find("anode", get_vessel_for, said.pop("anode", None))
        racks = lookup.find("racks", get_vessel_for, said.pop("racks", None))
        lookup.finish()
        tank = TankInput(place=place, anode=anode, racks=racks, **said)
        return create_tank(actor=self.member, now=self.now, tank=tank)


class TankView(WorkshopView):
    """One bath or rinse, by its vessel."""

    shape = shapes.TankShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the tank."""
        tank = get_tank_of(get_vessel_for(self.member, kwargs["uuid"]))
        if tank is None:
            raise NotFoundError(_("This vessel is neither a bath nor a rinse."))
        return self.respond(tank)


class RackTypesView(ListCreateView):
    """Rack types: what a load drags out, and its area."""

    shape, input_class = shapes.RackTypeShape, shapes.RackTypeInput

    def rows(self) -> QuerySet[RackType]:
        """Return the rack types."""
        return list_rack_types_for(self.member)

    def create(self, said: dict[str, Any]) -> RackType:
        """Create a rack type."""
        return create_rack_type(actor=self.member, **said)


class RackTypeView(WorkshopView):
    """One rack type."""

    shape = shapes.RackTypeShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the rack type."""
        return self.respond(get_rack_type_for(self.member, kwargs["uuid"]))


class RoutesView(ListCreateView):
    """Routes: the tanks that a load goes through."""

    shape, input_class = shapes.RouteShape, shapes.RouteInput

    def rows(self) -> QuerySet[Route]:
        """Return the routes."""
        return list_routes_for(self.member)

    def create(self, said: dict[str, Any]) -> Route:
        """Create a route."""
        lookup = Lookup(self.member)
        rack = lookup.find("rack", get_rack_type_for, said["rack"])
        vessels = lookup.find_all("vessels", get_vessel_for, said["vessels"])
        lookup.finish()
        assert rack is not None  # noqa: S101  (else finish has raised)
        route = create_route(actor=self.member, name=said["name"], rack=rack, vessels=vessels)
        return get_route_for(self.member, route.uuid)


class RouteView(WorkshopView):
    """One route."""

    shape = shapes.RouteShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the route."""
        return self.respond(get_route_for(self.member, kwargs["uuid"]))
