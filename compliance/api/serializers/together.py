"""Several records in one request: each says its verb, and what the door of that verb takes."""

from collections.abc import Mapping
from typing import Any

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.process.inputs import INPUTS
from compliance.api.fields import Choice, Strict, rows
from compliance.api.serializers.base import Shape
from compliance.api.serializers.doors import DOORS, PreviewShape
from compliance.api.serializers.entries import EntryShape
from compliance.clearance.together import MOST_TOGETHER


class OneRecord(Strict):
    """One of several records."""

    verb = Choice(choices=[(verb, verb) for verb in INPUTS], help_text=_("What happened, as in record/VERB."))
    data = serializers.DictField(  # type: ignore[assignment]  # a field of the request
        help_text=_("What record/VERB takes, with occurred_at and attachments.")
    )

    def to_internal_value(self, data: Any) -> Any:
        """Return the values, those of the verb read by its own door; every error at once."""
        found = super().to_internal_value(data)
        door = DOORS[found["verb"]](data=found["data"])
        if not door.is_valid():
            raise serializers.ValidationError({"data": door.errors})
        said: Mapping[str, Any] = door.validated_data
        return {**found, "data": {name: value for name, value in said.items() if value is not None}}


class RecordsInput(Strict):
    """Records in the order in which they happened, or stand on a paper."""

    records = rows(OneRecord, most=MOST_TOGETHER, help_text=_("The records; all of them are written, or none."))


class EntriesShape(Shape):
    """The entries of several records, in their order."""

    entries = EntryShape(many=True, help_text=_("One entry for each record."))


class PreviewsShape(Shape):
    """What would follow from each of several records, in their order."""

    previews = PreviewShape(many=True, help_text=_("One answer for each record, on the books as they stand now."))
