"""Limits of places, what is kept apart, what was assessed, and what stands together and must not."""

from typing import Any

from django.db.models import QuerySet
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.workshop.selectors import get_place_for
from chemicals.workshop.services import change_place
from compliance.api.serializers import places as shapes
from compliance.api.serializers.waste import NothingInput
from compliance.api.serializers.workshop import PlaceInput, PlaceShape
from compliance.api.views.base import ListCreateView, Lookup, WorkshopView
from compliance.premises import lines
from compliance.premises.models import Assessment, KeepApart, QuantityLimit
from compliance.premises.violations import (
    get_assessment_for,
    get_keep_apart_for,
    get_limit_for,
    list_assessments_for,
    list_keep_apart_for,
    list_limits_for,
    list_violations_for,
)


class ChangePlaceView(WorkshopView):
    """Changes a place's name, and which bund and exhaust duct it shares."""

    shape, input_class, statuses = PlaceShape, PlaceInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Change it; what is left out becomes empty."""
        said = self.read_body(request)
        return self.respond(change_place(actor=self.member, place=get_place_for(self.member, kwargs["uuid"]), **said))


class ViolationsView(WorkshopView):
    """What stands together and must not, limits that are passed, and what is not known: as of now."""

    shape = shapes.ViolationsShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return all of it."""
        return self.respond({"violations": list_violations_for(self.member, self.now)})


class LimitsView(ListCreateView):
    """The limits of places; an owner adds one."""

    shape, input_class = shapes.QuantityLimitShape, shapes.QuantityLimitInput

    def rows(self) -> QuerySet[QuantityLimit]:
        """Return the limits."""
        return list_limits_for(self.member)

    def create(self, said: dict[str, Any]) -> QuantityLimit:
        """Add a limit."""
        lookup = Lookup(self.member)
        place = lookup.find("place", get_place_for, said.pop("place"))
        lookup.finish()
        assert place is not None  # noqa: S101  (else finish has raised)
        return lines.add_limit(actor=self.member, now=self.now, place=place, limit=lines.LimitInput(**said))


class ChangeLimitView(WorkshopView):
    """Changes a limit, or says that it was compared again."""

    shape, input_class, statuses = shapes.QuantityLimitShape, shapes.QuantityLimitChange, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Change it as a whole."""
        said, row = self.read_body(request), get_limit_for(self.member, kwargs["uuid"])
        limit = lines.LimitInput(**said)
        return self.respond(lines.change_limit(actor=self.member, now=self.now, row=row, limit=limit))


class KeepApartView(ListCreateView):
    """The workshop's own lines on what is kept apart; an owner adds one."""

    shape, input_class = shapes.KeepApartShape, shapes.KeepApartInput

    def rows(self) -> QuerySet[KeepApart]:
        """Return the lines."""
        return list_keep_apart_for(self.member)

    def create(self, said: dict[str, Any]) -> KeepApart:
        """Add a line."""
        return lines.add_keep_apart(actor=self.member, now=self.now, line=lines.KeepApartInput(**said))


class ChangeKeepApartView(WorkshopView):
    """Changes a line on what is kept apart, or says that it was compared again."""

    shape, input_class, statuses = shapes.KeepApartShape, shapes.KeepApartInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Change it as a whole."""
        line, row = lines.KeepApartInput(**self.read_body(request)), get_keep_apart_for(self.member, kwargs["uuid"])
        return self.respond(lines.change_keep_apart(actor=self.member, now=self.now, row=row, line=line))


class AssessmentsView(ListCreateView):
    """What was assessed of things that stand together; an owner notes one."""

    shape, input_class = shapes.AssessmentShape, shapes.AssessmentInput

    def rows(self) -> QuerySet[Assessment]:
        """Return what was assessed."""
        return list_assessments_for(self.member)

    def create(self, said: dict[str, Any]) -> Assessment:
        """Note it."""
        lookup = Lookup(self.member)
        place = lookup.find("place", get_place_for, said.pop("place", None))
        lookup.finish()
        found = lines.AssessmentInput(place=place, **said)
        return lines.note_assessment(actor=self.member, now=self.now, assessment=found)


class RemoveLimitView(WorkshopView):
    """Removes a limit: it no longer counts."""

    shape, input_class, statuses = shapes.QuantityLimitShape, NothingInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Remove it, and return what it was."""
        self.read_body(request)
        row = get_limit_for(self.member, kwargs["uuid"])
        answer = self.respond(row)
        lines.remove_line(actor=self.member, row=row)
        return answer


class RemoveKeepApartView(WorkshopView):
    """Removes a line on what is kept apart: it no longer counts."""

    shape, input_class, statuses = shapes.KeepApartShape, NothingInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Remove it, and return what it was."""
        self.read_body(request)
        row = get_keep_apart_for(self.member, kwargs["uuid"])
        answer = self.respond(row)
        lines.remove_line(actor=self.member, row=row)
        return answer


class RemoveAssessmentView(WorkshopView):
    """Removes an assessment: what stands there is as wrong as before."""

    shape, input_class, statuses = shapes.AssessmentShape, NothingInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Remove it, and return what it was."""
        self.read_body(request)
        row = get_assessment_for(self.member, kwargs["uuid"])
        answer = self.respond(row)
        lines.remove_line(actor=self.member, row=row)
        return answer
