"""Containers that come in, and what is cared for of vessels without anything being poured."""

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.ledger.models import VesselFact
from chemicals.ledger.naming import LONGEST
from chemicals.register.models import Form
from compliance.api.fields import Amount, BaseUnits, Choice, Day, Identifier, Strict, Text, Whole, Words
from compliance.api.serializers.base import Person, Shape, choices_of
from compliance.api.serializers.vessels import CAPACITY_HELP
from compliance.clearance.receiving import LONGEST_LOT, MOST_ALIKE

MOST_CHANGED = 500
"""Containers that are changed at once."""
OPENED_HELP = _("When it was opened; of stock containers and anode sets only.")
EXPIRES_HELP = _("The day until which it keeps; of stock containers and anode sets only.")


class NewProductInput(Strict):
    """A product that is not in the register yet. Revise it later with composition and hazards."""

    name = Text(max_length=120, help_text=_("The name as it stands on the label."))
    supplier = Text(required=False, allow_blank=True, max_length=120, help_text=_("Who sells it."))
    form = Choice(choices=Form.choices, help_text=_("The physical form."))


class JarInput(Strict):
    """Containers of one product, all alike, as they came in: a product of the register, or a new one."""

    product = Identifier(required=False, allow_null=True, help_text=_("A product of the register."))
    new_product = NewProductInput(required=False, allow_null=True, help_text=_("A product that comes with them."))
    name = Text(
        required=False,
        allow_blank=True,
        max_length=LONGEST,
        help_text=_(
            "Without it they are called after their product; several are numbered, past numbers that are taken."
        ),
    )
    count = Whole(
        required=False,
        allow_null=True,
        min_value=1,
        max_value=MOST_ALIKE,
        help_text=_("How many alike; 1 if left out."),
    )
    amount = Amount(
        "mass",
        "volume",
        example="1 kg",
        required=False,
        allow_null=True,
        help_text=_("What is in each of them; without it they are set up empty, and nothing is recorded."),
    )
    lot = Text(required=False, allow_blank=True, max_length=LONGEST_LOT, help_text=_("The lot of what was received."))
    place = Identifier(required=False, allow_null=True, help_text=_("Where they stand."))
    capacity = BaseUnits("volume", example="2.5 L", required=False, allow_null=True, help_text=CAPACITY_HELP)
    received_on = Day(required=False, allow_null=True, help_text=_("The day on which they came; now if left out."))
    opened_on = Day(required=False, allow_null=True, help_text=OPENED_HELP)
    expires_on = Day(required=False, allow_null=True, help_text=EXPIRES_HELP)


class ManyInput(Strict):
    """What changes of many containers alike. What is left out stays as it is; null takes it away."""

    codes = Words(
        child=Text(max_length=20, help_text=_("A code, as typed or scanned.")),
        max_length=MOST_CHANGED,
        help_text=_("The codes of the containers."),
    )
    place = Identifier(required=False, allow_null=True, help_text=_("Where they stand; null for nowhere."))
    opened_on = Day(required=False, allow_null=True, help_text=OPENED_HELP)
    expires_on = Day(required=False, allow_null=True, help_text=EXPIRES_HELP)


class CareInput(Strict):
    """What changes of a vessel. What is left out stays as it is; null takes a place or a day away."""

    name = Text(required=False, max_length=LONGEST, help_text=_("A name that no other vessel here has."))
    place = Identifier(required=False, allow_null=True, help_text=_("Where it stands; null for nowhere."))
    opened_on = Day(required=False, allow_null=True, help_text=OPENED_HELP)
    expires_on = Day(required=False, allow_null=True, help_text=EXPIRES_HELP)


class ChangeShape(Shape):
    """What was changed of a vessel without anything being poured."""

    fact = choices_of(VesselFact.values, _("What was changed."))
    before = serializers.CharField(help_text=_("What stood there before, as people read it; empty for nothing."))
    after = serializers.CharField(help_text=_("What stands there since; empty for nothing."))
    note = serializers.CharField(help_text=_("Why, or how, as written; empty where nothing was."))
    changed_at = serializers.DateTimeField(help_text=_("When."))
    changed_by = Person(help_text=_("Who changed it."))
