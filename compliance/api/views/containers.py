"""Containers that come in, and what is cared for of vessels without anything being poured."""

from typing import Any

from django.db.models import QuerySet
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.models import VesselChange
from chemicals.ledger.selectors import get_vessel_for, list_changes_of
from chemicals.register.selectors import get_product_for
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.selectors import get_place_for
from compliance.api.fields import read_nulls
from compliance.api.keys import read_key
from compliance.api.pagination import NewestFirst
from compliance.api.serializers import containers as shapes
from compliance.api.serializers.vessels import VesselShape, VesselsShape
from compliance.api.views.base import ListView, Lookup, WorkshopView
from compliance.clearance.receiving import JarInput, NewProductInput, receive_containers
from compliance.premises.selectors import find_vessels_by_code


class ReceiveView(WorkshopView):
    """Sets up containers alike, with their product if it is new, and records what was received into each of them."""

    shape, input_class, statuses, needs_key = VesselsShape, shapes.JarInput, (201, 200), True

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Set them up, all or none; the same key with the same body returns them again and writes nothing."""
        key, said, lookup = read_key(request), self.read_body(request), Lookup(self.member)
        new = said.pop("new_product", None)
        product = lookup.find("product", get_product_for, said.pop("product", None))
        place = lookup.find("place", get_place_for, said.pop("place", None))
        lookup.finish()
        new_product = None if new is None else NewProductInput(**new)
        jar = JarInput(product=product, new_product=new_product, place=place, **said)
        found = receive_containers(actor=self.member, now=self.now, key=key, jar=jar)
        return self.respond({"vessels": found.vessels}, 201 if found.is_new else 200)


class CareView(WorkshopView):
    """Changes name, place or days of a vessel; nothing is poured. What is left out stays, null takes it away."""

    shape, input_class, statuses = VesselShape, shapes.CareInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Change it; what is as it was is no change."""
        vessel = get_vessel_for(self.member, kwargs["uuid"])
        care = _read_care(self, read_nulls(shapes.CareInput, request.data))
        (changed,) = change_vessels(actor=self.member, now=self.now, vessels=[vessel], care=care)
        return self.respond(changed)


class ChangesView(ListView):
    """What was changed of a vessel without anything being poured, the latest first."""

    shape, pagination_class = shapes.ChangeShape, NewestFirst

    def rows(self) -> QuerySet[VesselChange]:
        """Return the changes."""
        return list_changes_of(get_vessel_for(self.member, self.kwargs["uuid"]))


class ChangeManyView(WorkshopView):
    """Changes place or days of many containers alike, all of them or none; what is wrong names the container."""

    shape, input_class, statuses = VesselsShape, shapes.ManyInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Change them."""
        said = read_nulls(shapes.ManyInput, request.data)
        vessels = find_vessels_by_code(self.member, said.pop("codes"))
        care = _read_care(self, said)
        try:
            changed = change_vessels(actor=self.member, now=self.now, vessels=vessels, care=care)
        except InvalidInputError as error:
            fields = {"vessels": "codes"}
            errors = [FieldError(fields.get(each.field, each.field), each.message) for each in error.errors]
            raise InvalidInputError(errors) from error
        return self.respond({"vessels": changed})


def _read_care(view: WorkshopView, said: dict[str, Any]) -> CareInput:
    lookup = Lookup(view.member)
    if "place" in said:
        said["place"] = lookup.find("place", get_place_for, said["place"])
    lookup.finish()
    return CareInput(**said)
