"""Waste streams, waste containers, receivers, drop-offs."""

from datetime import date, datetime
from typing import Any

from django.db.models import QuerySet
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.ledger.selectors import get_vessel_for
from chemicals.workshop.selectors import get_place_for
from compliance.api.keys import read_key
from compliance.api.pagination import NewestFirst
from compliance.api.serializers import waste as shapes
from compliance.api.serializers.doors import build_occurred
from compliance.api.views.base import ListCreateView, Lookup, WorkshopView, freeze
from compliance.dropoffs.models import DropOff, Mode, Receiver
from compliance.dropoffs.selectors import get_drop_off_for, get_receiver_for, list_drop_offs_for, list_receivers_for
from compliance.dropoffs.services import create_drop_off, create_receiver, hand_over, pack_drop_off
from compliance.waste.models import WasteContainer, WasteStream
from compliance.waste.selectors import get_container_for, get_stream_for, list_containers_for, list_streams_for
from compliance.waste.services import StreamInput, close_container, create_container, create_stream, issue_label


class StreamsView(ListCreateView):
    """Waste streams: what a receiver approved."""

    shape, input_class = shapes.StreamShape, shapes.StreamInput

    def rows(self) -> QuerySet[WasteStream]:
        """Return the streams."""
        return list_streams_for(self.member)

    def create(self, said: dict[str, Any]) -> WasteStream:
        """Create a stream."""
        return create_stream(actor=self.member, stream=StreamInput(**freeze(said)))


class StreamView(WorkshopView):
    """One waste stream."""

    shape = shapes.StreamShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the stream."""
        return self.respond(get_stream_for(self.member, kwargs["uuid"]))


class ContainersView(ListCreateView):
    """Waste containers: one filling of one stream each."""

    shape, input_class = shapes.ContainerShape, shapes.ContainerInput

    def rows(self) -> QuerySet[WasteContainer]:
        """Return the containers."""
        return list_containers_for(self.member)

    def create(self, said: dict[str, Any]) -> WasteContainer:
        """Put up an empty container."""
        lookup = Lookup(self.member)
        stream = lookup.find("stream", get_stream_for, said.pop("stream"))
        place = lookup.find("place", get_place_for, said.pop("place", None))
        lookup.finish()
        assert stream is not None  # noqa: S101  (else finish has raised)
        made = create_container(actor=self.member, now=self.now, stream=stream, place=place, **said)
        return get_container_for(self.member, made.vessel.uuid)


class ContainerView(WorkshopView):
    """One waste container, by its vessel."""

    shape = shapes.ContainerShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the container."""
        return self.respond(get_container_for(self.member, kwargs["uuid"]))


class CloseView(WorkshopView):
    """Closes a waste container with its gross weight, ready for a drop-off."""

    shape, input_class, statuses = shapes.ContainerShape, shapes.CloseInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Close it."""
        said = self.read_body(request)
        container = get_container_for(self.member, kwargs["uuid"])
        close_container(actor=self.member, now=self.now, container=container, **said)
        return self.respond(get_container_for(self.member, kwargs["uuid"]))


class LabelView(WorkshopView):
    """Issues the numbered label of a waste container as it is now."""

    shape, input_class, needs_key = shapes.PaperShape, shapes.NothingInput, True

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Issue it; the same key returns the same paper."""
        self.read_body(request)
        key, container = read_key(request), get_container_for(self.member, kwargs["uuid"])
        return self.respond(issue_label(actor=self.member, now=self.now, key=key, container=container), 201)


class ReceiversView(ListCreateView):
    """Who takes waste containers."""

    shape, input_class = shapes.ReceiverShape, shapes.ReceiverInput

    def rows(self) -> QuerySet[Receiver]:
        """Return the receivers."""
        return list_receivers_for(self.member)

    def create(self, said: dict[str, Any]) -> Receiver:
        """Create a receiver."""
        return create_receiver(actor=self.member, **said)


class ReceiverView(WorkshopView):
    """One receiver."""

    shape = shapes.ReceiverShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the receiver."""
        return self.respond(get_receiver_for(self.member, kwargs["uuid"]))


class DropOffsView(ListCreateView):
    """Drop-offs, the latest draft first."""

    shape, input_class, pagination_class = shapes.DropOffShape, shapes.DropOffInput, NewestFirst

    def rows(self) -> QuerySet[DropOff]:
        """Return the drop-offs."""
        return list_drop_offs_for(self.member)

    def create(self, said: dict[str, Any]) -> DropOff:
        """Draft a drop-off."""
        lookup = Lookup(self.member)
        receiver = lookup.find("receiver", get_receiver_for, said["receiver"])
        containers = lookup.find_all("containers", get_container_for, said.get("containers", ()))
        stock = lookup.find_all("stock", get_vessel_for, said.get("stock", ()))
        lookup.finish()
        assert receiver is not None  # noqa: S101  (else finish has raised)
        made = create_drop_off(
            actor=self.member,
            now=self.now,
            receiver=receiver,
            mode=said.get("mode", Mode.BROUGHT),
            planned_for=said["planned_for"],
            containers=containers,
            stock=stock,
        )
        return get_drop_off_for(self.member, made.uuid)


class DropOffView(WorkshopView):
    """One drop-off."""

    shape = shapes.DropOffShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the drop-off."""
        return self.respond(get_drop_off_for(self.member, kwargs["uuid"]))


class PackView(WorkshopView):
    """Packs a drop-off: its manifest is issued, and from then on its list stands."""

    shape, input_class, statuses = shapes.DropOffShape, shapes.NothingInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Pack it."""
        self.read_body(request)
        pack_drop_off(actor=self.member, now=self.now, drop_off=get_drop_off_for(self.member, kwargs["uuid"]))
        return self.respond(get_drop_off_for(self.member, kwargs["uuid"]))


class HandOverView(WorkshopView):
    """Hands a packed drop-off over: every container went to the receiver, all of it."""

    shape, input_class, statuses = shapes.DropOffShape, shapes.HandOverTime, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Hand it over."""
        when: datetime | date | None = self.read_body(request).get("occurred_at")
        hand_over(
            actor=self.member,
            now=self.now,
            drop_off=get_drop_off_for(self.member, kwargs["uuid"]),
            occurred=build_occurred(when, self.member.workshop),
        )
        return self.respond(get_drop_off_for(self.member, kwargs["uuid"]))
