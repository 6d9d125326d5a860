"""Reads about receivers and drop-offs."""

from uuid import UUID

from django.db.models import Prefetch, QuerySet
from django_scopes import scope

from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership
from compliance.dropoffs.models import DropOff, DropOffContainer, Receiver
from compliance.waste.models import WasteContainer
from compliance.waste.selectors import list_containers_for


def list_receivers_for(member: Membership) -> QuerySet[Receiver]:
    """Return the receivers of the member's workshop, by name. One query."""
    with scope(workshop=member.workshop):
        return Receiver.objects.order_by("name")


def get_receiver_for(member: Membership, uuid: UUID) -> Receiver:
    """Return one receiver of the member's workshop."""
    try:
        return list_receivers_for(member).get(uuid=uuid)
    except Receiver.DoesNotExist as error:
        raise NotFoundError("There is no such receiver in this workshop.") from error


def list_drop_offs_for(member: Membership) -> QuerySet[DropOff]:
    """Return the drop-offs with their containers, the latest planned first. Two queries."""
    with scope(workshop=member.workshop):
        containers = Prefetch(
            "containers",
            DropOffContainer.objects.select_related("vessel__waste_container__stream", "vessel__product").order_by(
                "vessel__name"
            ),
        )
        return (
            DropOff.objects.select_related("receiver", "manifest")
            .prefetch_related(containers)
            .order_by("-planned_for", "-pk")
        )


def get_drop_off_for(member: Membership, uuid: UUID) -> DropOff:
    """Return one drop-off of the member's workshop."""
    try:
        return list_drop_offs_for(member).get(uuid=uuid)
    except DropOff.DoesNotExist as error:
        raise NotFoundError("There is no such drop-off in this workshop.") from error


def list_ready_containers_for(member: Membership) -> QuerySet[WasteContainer]:
    """Return the closed containers that are on no drop-off yet, by name. Two queries."""
    return list_containers_for(member).filter(
        closed_at__isnull=False, vessel__drop_off_container=None, vessel__gone_at=None
    )
