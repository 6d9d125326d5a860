"""Reads about waste: streams, containers, what a container may react as."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from django.db.models import Prefetch, QuerySet
from django_scopes import scope

from chemicals.books.events import VOLUME
from chemicals.ledger.models import Holding, Vessel, VesselKind
from chemicals.science.quantity import show
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership
from compliance.waste.models import WasteContainer, WasteStream

OPEN, CLOSED, GONE = "open", "closed", "gone"
NEARLY_FULL = 80
"""Percent of the capacity; headspace is kept for warmth and gas (common practice)."""


def list_streams_for(member: Membership) -> QuerySet[WasteStream]:
    """Return the waste streams of the member's workshop, by name. One query."""
    with scope(workshop=member.workshop):
        return WasteStream.objects.order_by("name")


def get_stream_for(member: Membership, uuid: UUID) -> WasteStream:
    """Return one waste stream of the member's workshop."""
    try:
        return list_streams_for(member).get(uuid=uuid)
    except WasteStream.DoesNotExist as error:
        raise NotFoundError("There is no such waste stream in this workshop.") from error


def list_containers_for(member: Membership) -> QuerySet[WasteContainer]:
    """Return the waste containers with stream, vessel and volume held, by name. Two queries."""
    with scope(workshop=member.workshop):
        volumes = Prefetch("vessel__holdings", Holding.objects.filter(component__code=VOLUME), to_attr="volumes")
        return (
            WasteContainer.objects.select_related("vessel__place", "stream", "vessel__drop_off_container__drop_off")
            .prefetch_related(volumes)
            .order_by("vessel__name")
        )


def list_closed_vessels(member: Membership) -> frozenset[UUID]:
    """Return the vessels of the closed waste containers, into which nothing goes any more. One query."""
    with scope(workshop=member.workshop):
        closed = WasteContainer.objects.filter(closed_at__isnull=False)
        return frozenset(closed.values_list("vessel__uuid", flat=True))


def get_container_for(member: Membership, uuid: UUID) -> WasteContainer:
    """Return one waste container by its vessel's uuid."""
    try:
        return list_containers_for(member).get(vessel__uuid=uuid)
    except WasteContainer.DoesNotExist as error:
        raise NotFoundError("There is no such waste container in this workshop.") from error


def state_of(container: WasteContainer) -> str:
    """Return how far a listed container is, without a query: open, closed, gone, or the state of its drop-off."""
    goes_along = getattr(container.vessel, "drop_off_container", None)
    if goes_along is not None:
        state: str = goes_along.drop_off.state
        return state
    if container.vessel.gone_at is not None:
        return GONE
    return OPEN if container.closed_at is None else CLOSED


@dataclass(frozen=True)
class Fill:
    """How full a container is: nanolitres; None is unknown."""

    volume: int | None
    capacity: int | None

    @property
    def percent(self) -> int | None:
        """Return how full it is in whole percent; None where that is not known."""
        return None if self.volume is None or not self.capacity else self.volume * 100 // self.capacity

    @property
    def is_nearly_full(self) -> bool:
        """Say whether it is time for an empty container."""
        return self.percent is not None and self.percent >= NEARLY_FULL


def list_filling_for(member: Membership) -> list[tuple[WasteContainer, Fill]]:
    """Return the containers that are on no drop-off yet with their fill, the fullest first. Two queries."""
    rows = [
        (row, read_fill(row))
        for row in list_containers_for(member).filter(vessel__drop_off_container=None, vessel__gone_at=None)
    ]
    return sorted(rows, key=lambda pair: -(pair[1].percent or 0))


def read_fill(container: WasteContainer) -> Fill:
    """Return how full a listed container is, without a query."""
    rows: list[Holding] = getattr(container.vessel, "volumes", [])
    return Fill(rows[0].amount if rows else 0, container.vessel.capacity)


def find_obstacles(vessel: Vessel, at: datetime, volume: int | None) -> Iterator[str]:
    """Yield why nothing more, or not so much, goes into a waste container at a moment; ``volume`` None is unknown."""
    if vessel.kind != VesselKind.WASTE:
        return
    with scope(workshop=vessel.workshop):
        container = WasteContainer.objects.filter(vessel=vessel).first()
        held = Holding.objects.filter(vessel=vessel, component__code=VOLUME).values_list("amount", flat=True).first()
    if container is not None and container.closed_at is not None and at >= container.closed_at:
        yield f"{vessel.name} is closed and weighed: what goes in now stands on no paper. Use another container."
    elif None not in (vessel.capacity, volume) and (held or 0) + (volume or 0) > (vessel.capacity or 0):
        yield (
            f"{vessel.name} holds {show(held or 0, 'volume')} of at most {show(vessel.capacity or 0, 'volume')}: "
            f"{show(volume or 0, 'volume')} more would run over. Use another container, or read its level."
        )


def find_seal(vessel: Vessel, at: datetime) -> Iterator[str]:
    """Yield why nothing is taken out of a waste container at a moment: it is closed."""
    if vessel.kind != VesselKind.WASTE:
        return
    with scope(workshop=vessel.workshop):
        closed = WasteContainer.objects.filter(vessel=vessel, closed_at__lte=at).exists()
    if closed:
        yield f"{vessel.name} is closed and weighed: its papers say what is in it. Take nothing out of it."


def get_declared_reactivity(vessel: Vessel) -> frozenset[str]:
    """Return what the stream of a waste container may react as, whatever is in the container today."""
    if vessel.kind != VesselKind.WASTE:
        return frozenset()
    with scope(workshop=vessel.workshop):
        container = WasteContainer.objects.filter(vessel=vessel).select_related("stream").first()
    return frozenset() if container is None else frozenset(container.stream.reactivity)
