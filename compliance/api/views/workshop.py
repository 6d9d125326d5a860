"""Workshops and places."""

from typing import Any

from django.db.models import QuerySet
from django.utils.translation import gettext as _
from rest_framework.mixins import ListModelMixin
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.journal.selectors import get_head
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.selectors import get_place_for, list_members_for, list_places_for
from chemicals.workshop.services import create_place
from compliance.api.pagination import StableCursor
from compliance.api.serializers.base import With
from compliance.api.serializers.query import PageQuery
from compliance.api.serializers.workshop import PlaceInput, PlaceShape, WorkshopDetail, WorkshopShape
from compliance.api.views.base import ApiView, ListCreateView, WorkshopView


class WorkshopsView(ListModelMixin, ApiView):
    """The workshops that the token opens: its member's own one."""

    shape = WorkshopShape
    query_class = PageQuery
    pagination_class = StableCursor

    def get_queryset(self) -> QuerySet[Membership]:
        """Return the token's membership."""
        if getattr(self, "swagger_fake_view", False):
            return Membership.objects.none()
        member = self.request.auth
        assert isinstance(member, Membership)  # noqa: S101  (tokens are the only way in)
        return list_members_for(member).filter(pk=member.pk)

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return one page."""
        return self.list(request, **kwargs)


class WorkshopDetailView(WorkshopView):
    """One workshop with the end of its journal."""

    shape = WorkshopDetail

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the workshop."""
        sequence, digest = get_head(self.member.workshop)
        return self.respond(With(self.member, head={"sequence": sequence, "hash": digest}))


class PlacesView(ListCreateView):
    """Places: rooms, cupboards, shelves, benches."""

    shape, input_class = PlaceShape, PlaceInput

    def rows(self) -> QuerySet[Place]:
        """Return the places."""
        return list_places_for(self.member)

    def create(self, said: dict[str, Any]) -> Place:
        """Create a place."""
        return create_place(actor=self.member, **said)


class PlaceView(WorkshopView):
    """One place."""

    shape = PlaceShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the place."""
        return self.respond(get_place_for(self.member, kwargs["uuid"]))


class NowhereView(ApiView):
    """Whatever has no address here."""

    schema = None

    def enter(self, request: Request, **kwargs: Any) -> None:
        """Say so, whatever was asked."""
        raise NotFoundError(
            _("There is nothing at this address. Lists and things end in a slash; see /api/v1/schema for all of them.")
        )
