"""Writes about people and premises. Plain rows, not facts of matter: they are not journalled."""

import hashlib
import secrets
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from django.contrib.auth.password_validation import validate_password
from django.core.exceptions import ValidationError
from django.db import transaction
from django_scopes import scope

from chemicals.workshop.errors import FieldError, InvalidInputError, NotFoundError
from chemicals.workshop.models import ApiToken, EmergencyNumber, Membership, Place, Role, User, Workshop
from chemicals.workshop.permissions import require_owner, require_same_workshop, require_writer
from chemicals.workshop.rows import check_row


def create_workshop(
    *,
    now: datetime,
    name: str,
    time_zone: str,
    owner: User,
    address: str = "",
    telephone: str = "",
    invented: bool = False,
) -> Membership:
    """Create a workshop and return its first owner's membership."""
    workshop = Workshop(
        name=name.strip(), time_zone=time_zone, address=address, telephone=telephone, invented=invented, created_at=now
    )
    _check(workshop)
    with transaction.atomic():
        workshop.save()
        return Membership.objects.create(workshop=workshop, user=owner, role=Role.OWNER)


@transaction.atomic
def change_workshop(
    *, actor: Membership, name: str, address: str, telephone: str, time_zone: str, sheet_years: int | None = None
) -> Workshop:
    """Change what papers print of the workshop, and the zone in which its days begin; entries keep their moments.

    ``sheet_years`` after which a safety data sheet is marked as old; as before if left out.
    """
    require_owner(actor)
    workshop = Workshop.objects.select_for_update().get(pk=actor.workshop_id)
    workshop.name, workshop.time_zone = name.strip(), time_zone
    workshop.address, workshop.telephone = address.strip(), telephone.strip()
    workshop.sheet_years = workshop.sheet_years if sheet_years is None else sheet_years
    _check(workshop)
    workshop.save(update_fields=["name", "address", "telephone", "time_zone", "sheet_years"])
    return workshop


def create_user(*, email: str, password: str | None, name: str) -> User:
    """Create a user; the password must pass the validators, the address must be new."""
    user = User(email=User.objects.normalize_email(email).lower(), name=name.strip())
    errors = []
    if password is not None:
        try:
            validate_password(password, user)
        except ValidationError as error:
            errors = [FieldError("password", message) for message in error.messages]
    user.set_password(password)
    errors += check_row(user, unique=True)
    if errors:
        raise InvalidInputError(errors)
    user.save()
    return user


@transaction.atomic
def invite_member(*, actor: Membership, email: str, name: str, role: str) -> Membership:
    """Give a person a role in the actor's workshop; a new person gets no password yet, only a link to set one."""
    require_owner(actor)
    if role not in Role.values:
        raise InvalidInputError.of("role", "Choose owner, worker or observer.")
    user = User.objects.filter(email=email.strip().lower()).first()
    if user is None:
        user = create_user(email=email.strip(), password=None, name=name)
    if Membership.objects.filter(workshop=actor.workshop, user=user).exists():
        raise InvalidInputError.of("email", "This person is a member already. Change the role in the list instead.")
    return Membership.objects.create(workshop=actor.workshop, user=user, role=role)


@transaction.atomic
def change_member(*, actor: Membership, member_uuid: UUID, role: str, active: bool) -> Membership:
    """Change a role, or end a membership. The last owner stays."""
    require_owner(actor)
    member = Membership.objects.filter(workshop=actor.workshop, uuid=member_uuid).first()
    if member is None:
        raise NotFoundError("There is no such person in this workshop.")
    if role not in Role.values:
        raise InvalidInputError.of("role", "Choose owner, worker or observer.")
    member.role, member.active = role, active
    member.save(update_fields=["role", "active"])
    if not Membership.objects.filter(workshop=actor.workshop, role=Role.OWNER, active=True).exists():
        raise InvalidInputError.of("role", "A workshop keeps at least one owner. Make another person owner first.")
    return member


def create_place(*, actor: Membership, name: str, bund: str = "", exhaust_duct: str = "") -> Place:
    """Create a place in the actor's workshop."""
    require_writer(actor)
    place = Place(workshop=actor.workshop, name=name.strip(), bund=bund.strip(), exhaust_duct=exhaust_duct.strip())
    _check(place)
    with transaction.atomic():
        place.save()
    return place


@transaction.atomic
def change_place(*, actor: Membership, place: Place, name: str, bund: str = "", exhaust_duct: str = "") -> Place:
    """Change a place's name, and which bund and exhaust duct it shares. What stands there stays."""
    require_writer(actor)
    require_same_workshop(actor, place)
    with scope(workshop=actor.workshop):
        found = Place.objects.select_for_update().get(pk=place.pk)
    found.name, found.bund, found.exhaust_duct = name.strip(), bund.strip(), exhaust_duct.strip()
    _check(found)
    with scope(workshop=actor.workshop):
        found.save(update_fields=["name", "bund", "exhaust_duct"])
    return found


MOST_EMERGENCY_NUMBERS = 12
"""Rows that a person finds at a glance."""


@dataclass(frozen=True)
class NumberInput:
    """Whom to call, and the number."""

    label: str
    number: str


@transaction.atomic
def set_emergency_numbers(*, actor: Membership, now: datetime, numbers: Sequence[NumberInput]) -> list[EmergencyNumber]:
    """Replace the workshop's emergency numbers by these, in this order."""
    require_owner(actor)
    rows = [
        EmergencyNumber(
            workshop=actor.workshop,
            position=position,
            label=said.label,
            number=said.number,
            entered_at=now,
            entered_by=actor,
        )
        for position, said in enumerate(numbers)
    ]
    errors = [
        FieldError(f"numbers.{row.position}.{each.field}", each.message) for row in rows for each in _check_number(row)
    ]
    if len(rows) > MOST_EMERGENCY_NUMBERS:
        errors.append(FieldError("numbers", f"These are more than {MOST_EMERGENCY_NUMBERS}. Leave some out."))
    if errors:
        raise InvalidInputError(errors)
    with scope(workshop=actor.workshop):
        Workshop.objects.select_for_update().get(pk=actor.workshop_id)
        EmergencyNumber.objects.all().delete()
        return EmergencyNumber.objects.bulk_create(rows)


def _check_number(row: EmergencyNumber) -> Iterator[FieldError]:
    yield from check_row(row)
    if row.number and not any(char.isdigit() for char in row.number):
        yield FieldError("number", "A telephone number has figures. Write it as it is dialled from here.")


def create_token(*, actor: Membership, now: datetime, name: str) -> tuple[ApiToken, str]:
    """Create a key for the API with the actor's rights; return the row and the key, which is shown once."""
    require_writer(actor)
    key = "glt_" + secrets.token_urlsafe(32)
    sha256 = hashlib.sha256(key.encode()).hexdigest()
    token = ApiToken(membership=actor, name=name, sha256=sha256, created_at=now)
    errors = check_row(token)
    if errors:
        raise InvalidInputError(errors)
    token.save()
    return token, key


def revoke_token(*, actor: Membership, now: datetime, token_uuid: UUID) -> None:
    """End one of the actor's own tokens."""
    changed = ApiToken.objects.filter(membership=actor, uuid=token_uuid, revoked_at=None).update(revoked_at=now)
    if not changed:
        raise NotFoundError("There is no such token, or it is revoked already.")


def _check(row: Workshop | Place) -> None:
    workshop = row if isinstance(row, Workshop) else row.workshop
    with scope(workshop=workshop):
        errors = check_row(row, unique=True)
    if errors:
        raise InvalidInputError(errors)
