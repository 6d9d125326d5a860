"""People and premises: users, workshops, memberships, places, tokens of the API."""

import uuid
from collections.abc import Iterable
from typing import ClassVar
from zoneinfo import ZoneInfo, available_timezones

from django.contrib.auth.base_user import AbstractBaseUser, BaseUserManager
from django.core.exceptions import ValidationError
from django.core.validators import MaxValueValidator, MinValueValidator
from django.db import models
from django.db.models.functions import Lower
from django.utils.translation import gettext_lazy as _
from django_scopes import ScopedManager

from chemicals.workshop.searched import Searched


class UserManager(BaseUserManager["User"]):
    """Creates people by e-mail address; addresses differ by more than case."""

    def create_user(self, email: str, password: str | None = None, *, name: str = "") -> "User":
        """Create and return an active user; without a password the user cannot sign in yet."""
        user = self.model(email=self.normalize_email(email).lower(), name=name)
        user.set_password(password)
        user.save()
        return user

    def get_by_natural_key(self, username: str | None) -> "User":
        return self.get(email=(username or "").lower())


class User(AbstractBaseUser):
    """A person. Never deleted, only deactivated: the journal names memberships for ever."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    email = models.EmailField(_("e-mail address"), unique=True)
    name = models.CharField(_("name"), max_length=120, blank=True)
    is_active = models.BooleanField(default=True)

    USERNAME_FIELD = "email"
    EMAIL_FIELD = "email"
    REQUIRED_FIELDS: ClassVar[list[str]] = []
    objects = UserManager()

    class Meta:
        constraints = [models.UniqueConstraint(Lower("email"), name="user_email_once")]

    def __str__(self) -> str:
        return self.name or self.email


MOST_SHEET_YEARS = 30


def check_time_zone(value: str) -> None:
    """Refuse a time zone that the time zone database does not know."""
    if value not in available_timezones():
        raise ValidationError(_("Unknown time zone. Write it like Europe/Berlin."))


class Workshop(models.Model):
    """The tenant: one premises with its people, places, vessels and books.

    A safety data sheet older than ``sheet_years`` gets a mark: the workshop's own figure, no rule of anybody else.
    """

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    name = models.CharField(_("name"), max_length=120)
    address = models.TextField(_("address"), blank=True)
    telephone = models.CharField(_("telephone"), max_length=60, blank=True)
    time_zone = models.CharField(_("time zone"), max_length=64, default="UTC", validators=[check_time_zone])
    sheet_years = models.PositiveSmallIntegerField(
        _("years until a safety data sheet is marked as old"),
        default=3,
        validators=[MinValueValidator(1), MaxValueValidator(MOST_SHEET_YEARS)],
    )
    invented = models.BooleanField(_("invented data"), default=False)
    created_at = models.DateTimeField()

    class Meta:
        constraints = [
            models.CheckConstraint(
                condition=models.Q(sheet_years__gte=1, sheet_years__lte=MOST_SHEET_YEARS), name="workshop_sheet_years"
            )
        ]

    def __str__(self) -> str:
        return self.name

    @property
    def zone(self) -> ZoneInfo:
        """The workshop's time zone, in which its days begin and end."""
        return ZoneInfo(self.time_zone)


class Role(models.TextChoices):
    """What a member may do: an owner everything, a worker record, an observer read."""

    OWNER = "owner", _("owner")
    WORKER = "worker", _("worker")
    OBSERVER = "observer", _("observer")


class Membership(models.Model):
    """A user's role in a workshop; the journal names this uuid as the author."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="memberships")
    user = models.ForeignKey(User, on_delete=models.PROTECT, related_name="memberships")
    role = models.CharField(_("role"), max_length=10, choices=Role.choices)
    active = models.BooleanField(default=True)

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["workshop", "user"], name="membership_once"),
            models.CheckConstraint(condition=models.Q(role__in=Role.values), name="membership_role"),
        ]

    def __str__(self) -> str:
        return f"{self.user} ({self.role})"


class Place(Searched):
    """A room, cupboard, shelf or bench; it may say which bund and which exhaust duct it shares."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="places")
    name = models.CharField(_("name"), max_length=80)
    bund = models.CharField(_("shared bund"), max_length=80, blank=True)
    exhaust_duct = models.CharField(_("shared exhaust duct"), max_length=80, blank=True)

    objects: "models.Manager[Place]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["workshop", "name"], name="place_name_once")]

    def __str__(self) -> str:
        return self.name

    def search_texts(self) -> Iterable[str]:
        return (self.name,)


class EmergencyNumber(models.Model):
    """Whom to call in an emergency, as the workshop entered it; printed on the emergency sheet in this order."""

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="emergency_numbers")
    position = models.PositiveSmallIntegerField()
    label = models.CharField(_("whom to call"), max_length=80)
    number = models.CharField(_("telephone"), max_length=60)
    entered_at = models.DateTimeField()
    entered_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[EmergencyNumber]" = ScopedManager(workshop="workshop")

    class Meta:
        ordering = ["position"]
        constraints = [models.UniqueConstraint(fields=["workshop", "position"], name="emergency_number_position_once")]

    def __str__(self) -> str:
        return f"{self.label}: {self.number}"


class ApiToken(models.Model):
    """A member's key for the API. Only its SHA-256 is kept; the key is shown once."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    membership = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="tokens")
    name = models.CharField(_("name"), max_length=80)
    sha256 = models.CharField(max_length=64, unique=True)
    created_at = models.DateTimeField()
    revoked_at = models.DateTimeField(null=True, blank=True)

    def __str__(self) -> str:
        return self.name
