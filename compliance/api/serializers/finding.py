"""Finding products and containers: what may be asked, made from the same table as the forms of the pages."""

from typing import Any

from django.utils.text import format_lazy
from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.science.ghs import PICTOGRAMS, SIGNAL_WORDS
from compliance.api.fields import Choice, Identifier, Text
from compliance.api.serializers.base import choices_of
from compliance.api.serializers.query import PageQuery
from compliance.api.serializers.vessels import ContentsShape, VesselShape
from compliance.premises.filters import FILTERS, LONGEST_TEXT, Filter


class FindQuery(PageQuery):
    """Which products or containers to list: those that fit everything that is said, in order of creation."""

    q = Text(
        required=False,
        max_length=LONGEST_TEXT,
        help_text=_(
            "Words, each of which must stand in a name, supplier, substance, other name, CAS or EC number, formula, "
            "code or place; without case and accents."
        ),
    )
    place = Identifier(required=False, help_text=_("Only what stands in this place."))
    supplier = Text(required=False, max_length=120, help_text=_("Only of this supplier, the whole name."))

    def get_fields(self) -> dict[str, Any]:
        """Return the words, and a field for each filter."""
        return {**super().get_fields(), **{name: _choice(each) for name, each in FILTERS.items()}}


def _choice(each: Filter) -> Choice:
    known = format_lazy("{} {}", each.meaning, "; ".join(each.choices))
    return Choice(choices=[(value, value) for value in each.choices], required=False, help_text=known)


class FoundContainerShape(VesselShape):
    """A stock container or anode set with what it holds, and the hazards of everything in it as entered."""

    gone_at = serializers.DateTimeField(allow_null=True, help_text=_("Since when it is gone; null while it is here."))
    contents = ContentsShape(allow_null=True, help_text=_("What it holds now; null where nothing was ever recorded."))
    signal_word = choices_of(SIGNAL_WORDS, _("The strongest signal word of what is in it."), allow_blank=True)
    pictograms = serializers.ListField(
        child=choices_of(PICTOGRAMS, _("One pictogram.")), help_text=_("The pictograms of what is in it.")
    )
    hazards_not_entered = serializers.ListField(
        child=serializers.CharField(help_text=_("One product.")),
        help_text=_("What is in it of which no hazards were entered."),
    )
