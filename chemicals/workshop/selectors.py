"""Reads about people and premises."""

import hashlib
from uuid import UUID

from django.db.models import QuerySet
from django_scopes import scope

from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import ApiToken, EmergencyNumber, Membership, Place, User


def list_memberships_of(user: User) -> QuerySet[Membership]:
    """Return the active memberships of a user with their workshops, by workshop name. One query."""
    return (
        Membership.objects.filter(user=user, active=True).select_related("workshop", "user").order_by("workshop__name")
    )


def get_membership_for(user: User, workshop_uuid: UUID) -> Membership:
    """Return the user's active membership in the workshop, else NotFoundError: strangers learn nothing."""
    try:
        return list_memberships_of(user).get(workshop__uuid=workshop_uuid)
    except Membership.DoesNotExist as error:
        raise NotFoundError("There is no such workshop.") from error


def list_members_for(member: Membership) -> QuerySet[Membership]:
    """Return everybody of the member's workshop, by name. One query."""
    return Membership.objects.filter(workshop=member.workshop).select_related("user", "workshop").order_by("user__name")


def get_member_for(member: Membership, uuid: UUID) -> Membership:
    """Return one membership of the member's workshop."""
    try:
        return list_members_for(member).get(uuid=uuid)
    except Membership.DoesNotExist as error:
        raise NotFoundError("There is no such person in this workshop.") from error


def list_places_for(member: Membership) -> QuerySet[Place]:
    """Return the places of the member's workshop, by name. One query."""
    with scope(workshop=member.workshop):
        return Place.objects.order_by("name")


def get_place_for(member: Membership, uuid: UUID) -> Place:
    """Return one place of the member's workshop."""
    try:
        return list_places_for(member).get(uuid=uuid)
    except Place.DoesNotExist as error:
        raise NotFoundError("There is no such place in this workshop.") from error


def list_emergency_numbers_for(member: Membership) -> QuerySet[EmergencyNumber]:
    """Return whom to call in an emergency, in the workshop's order. One query."""
    with scope(workshop=member.workshop):
        return EmergencyNumber.objects.select_related("entered_by__user").order_by("position")


def list_tokens_for(member: Membership) -> QuerySet[ApiToken]:
    """Return the member's own API tokens, newest first. One query."""
    return ApiToken.objects.filter(membership=member).order_by("-created_at")


def get_membership_by_token(key: str) -> Membership:
    """Return the active membership behind an API key, else NotFoundError."""
    token = (
        ApiToken.objects.filter(
            sha256=hashlib.sha256(key.encode()).hexdigest(),
            revoked_at=None,
            membership__active=True,
            membership__user__is_active=True,
        )
        .select_related("membership__user", "membership__workshop")
        .first()
    )
    if token is None:
        raise NotFoundError("This token is unknown or revoked.")
    return token.membership
