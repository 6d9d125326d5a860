"""Workshops and places."""

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.workshop.models import Role
from compliance.api.fields import Strict, Text
from compliance.api.serializers.base import Shape, choices_of


class WorkshopShape(Shape):
    """A workshop as the token's member sees it."""

    uuid = serializers.UUIDField(source="workshop.uuid", help_text=_("Stands in all addresses of this workshop."))
    name = serializers.CharField(source="workshop.name", help_text=_("The workshop's name."))
    address = serializers.CharField(source="workshop.address", help_text=_("Postal address, as papers print it."))
    telephone = serializers.CharField(source="workshop.telephone", help_text=_("Telephone, as papers print it."))
    time_zone = serializers.CharField(
        source="workshop.time_zone", help_text=_("The zone in which the workshop's days begin and end.")
    )
    sheet_years = serializers.IntegerField(
        source="workshop.sheet_years",
        help_text=_("Years after which this workshop marks a safety data sheet as old: its own figure."),
    )
    invented = serializers.BooleanField(source="workshop.invented", help_text=_("True where the data are invented."))
    role = choices_of(Role.values, _("What the token may do: an observer only reads."))


class HeadShape(Shape):
    """The end of the workshop's chain of entries: it proves everything before it."""

    sequence = serializers.IntegerField(help_text=_("How many entries there are."))
    hash = serializers.CharField(help_text=_("SHA-256 of the last entry and all before it, in hex."))


class WorkshopDetail(WorkshopShape):
    """A workshop with the end of its journal."""

    head = HeadShape(help_text=_("The end of the journal at this moment."))


class PlaceShape(Shape):
    """A room, cupboard, shelf or bench."""

    uuid = serializers.UUIDField(help_text=_("The place's identifier."))
    name = serializers.CharField(help_text=_("Its name."))
    bund = serializers.CharField(help_text=_("The bund that it shares, if any."))
    exhaust_duct = serializers.CharField(help_text=_("The exhaust duct that it shares, if any."))


class PlaceInput(Strict):
    """A new place."""

    name = Text(max_length=80, help_text=_("A name that no other place here has."))
    bund = Text(required=False, allow_blank=True, max_length=80, help_text=_("The bund that it shares."))
    exhaust_duct = Text(required=False, allow_blank=True, max_length=80, help_text=_("The exhaust duct it shares."))
