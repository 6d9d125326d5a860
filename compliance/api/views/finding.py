"""Containers as they are looked for."""

from typing import Any

from django.db.models import QuerySet
from django.utils import timezone
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.ledger.models import Vessel
from chemicals.workshop.models import Membership
from chemicals.workshop.selectors import get_place_for
from compliance.api.serializers import finding as shapes
from compliance.api.serializers.base import With
from compliance.api.views.base import ListView, Lookup
from compliance.premises.filters import Wanted
from compliance.premises.finding import find_containers, tell_containers
from compliance.premises.selectors import Standing


def read_wanted(member: Membership, said: dict[str, Any]) -> Wanted:
    """Return what a query looks for; a place that is not here is refused under its name."""
    lookup = Lookup(member)
    lookup.find("place", get_place_for, said.get("place"))
    lookup.finish()
    return Wanted.of(said)


class FoundContainersView(ListView):
    """Stock containers and anode sets: those that are looked for, else all that are not gone."""

    shape, query_class = shapes.FoundContainerShape, shapes.FindQuery

    def rows(self) -> QuerySet[Vessel]:
        """Return the containers."""
        today = timezone.localdate(self.now, self.member.workshop.zone)
        return find_containers(self.member, read_wanted(self.member, self.query), today)

    def list(self, request: Request, *args: Any, **kwargs: Any) -> Response:
        """Return one page, with what each container holds."""
        page = self.paginate_queryset(self.get_queryset()) or []
        told = tell_containers(self.member, [vessel.pk for vessel in page])
        return self.get_paginated_response(self.shape([_with_hazards(each) for each in told], many=True).data)


def _with_hazards(each: Standing) -> With:
    found = each.hazards
    return With(
        each.vessel,
        contents=each.contents,
        signal_word=found.signal_word,
        pictograms=found.pictograms,
        hazards_not_entered=found.not_entered,
    )
