"""Empty stock containers: what stays a waste, what was put away."""

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.ledger.models import LONGEST_NOTE
from compliance.api.fields import Flag, Identifier, Strict, Text, Words
from compliance.api.serializers.base import Shape
from compliance.api.serializers.vessels import VesselShape

MOST_AT_ONCE = 500


class EmptyShape(Shape):
    """A stock container that held something, is known to be empty, and is not gone."""

    vessel = VesselShape(help_text=_("The container."))
    held = serializers.ListField(
        child=serializers.CharField(help_text=_("A product, by name.")),
        source="names",
        help_text=_("What it is known to have held, ever."),
    )
    stays_waste = serializers.BooleanField(help_text=_("True if it stays a waste until it is handed over."))
    very_toxic = serializers.ListField(
        child=serializers.CharField(help_text=_("A class or a code.")),
        help_text=_("What says that it held something very toxic."),
    )
    not_entered = serializers.ListField(
        child=serializers.CharField(help_text=_("A product, by name.")),
        help_text=_("What it held of which no hazards are entered: whoever puts it away must have looked."),
    )
    why = serializers.CharField(help_text=_("The reason in a sentence. Local rules decide in the end."))


class EmptiesShape(Shape):
    """All of them."""

    containers = EmptyShape(many=True, help_text=_("Those that stay a waste first."))


class PutAwayInput(Strict):
    """Which empty stock containers are gone, and what became of them."""

    vessels = Words(
        child=Identifier(help_text=_("An empty stock container.")),
        max_length=MOST_AT_ONCE,
        help_text=_("What is gone: all of it, or nothing is noted."),
    )
    note = Text(
        required=False,
        allow_blank=True,
        max_length=LONGEST_NOTE,
        help_text=_("What became of them: rinsed, reused, rubbish, returned."),
    )
    confirmed = Flag(
        required=False,
        help_text=_("True if somebody read label and sheet where no hazards are entered, and it was not very toxic."),
    )


class HereAgainInput(Strict):
    """Which containers that were put away are here again."""

    vessels = Words(
        child=Identifier(help_text=_("A container that was put away.")),
        max_length=MOST_AT_ONCE,
        help_text=_("What is here again: all of it, or nothing is noted."),
    )
