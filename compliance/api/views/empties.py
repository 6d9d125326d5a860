"""Empty stock containers: which stay a waste; put away, here again."""

from typing import Any

from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.ledger.selectors import get_vessel_for
from compliance.api.serializers import empties as shapes
from compliance.api.serializers.vessels import VesselsShape
from compliance.api.views.base import Lookup, WorkshopView
from compliance.premises.empties import list_empties_for
from compliance.premises.services import bring_back, put_away


class EmptiesView(WorkshopView):
    """Stock containers that held something, are known to be empty, and are not gone."""

    shape = shapes.EmptiesShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return them, each with whether it stays a waste, and why."""
        return self.respond({"containers": list_empties_for(self.member)})


class PutAwayView(WorkshopView):
    """Notes that empty stock containers are gone; what stays a waste goes by the verb hand-over only."""

    shape, input_class, statuses = VesselsShape, shapes.PutAwayInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Put them away, all or none."""
        said, lookup = self.read_body(request), Lookup(self.member)
        vessels = lookup.find_all("vessels", get_vessel_for, said.pop("vessels"))
        lookup.finish()
        return self.respond({"vessels": put_away(actor=self.member, now=self.now, vessels=vessels, **said)})


class HereAgainView(WorkshopView):
    """Notes that containers that were put away are here again; a hand-over is cancelled instead."""

    shape, input_class, statuses = VesselsShape, shapes.HereAgainInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Take them back, all or none."""
        said, lookup = self.read_body(request), Lookup(self.member)
        vessels = lookup.find_all("vessels", get_vessel_for, said.pop("vessels"))
        lookup.finish()
        return self.respond({"vessels": bring_back(actor=self.member, now=self.now, vessels=vessels)})
