"""Instruments, level tables, and what was read at a vessel."""

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.process.levels import MOST_MARKS
from chemicals.process.models import LONGEST_TYPED
from chemicals.science.reading import MEASURED
from chemicals.science.units import DIMENSIONS
from compliance.api.fields import BaseUnits, Choice, Day, Flag, Strict, Text, rows
from compliance.api.serializers.base import Figure, Named, Person, Shape, choices_of
from compliance.api.serializers.vessels import TankInput


class InstrumentShape(Shape):
    """What something is measured with, or by which method, and how sure it is."""

    uuid = serializers.UUIDField(help_text=_("The instrument's identifier."))
    name = serializers.CharField(help_text=_("Its name."))
    measures = choices_of(MEASURED, _("What it measures."))
    sd = serializers.CharField(source="sd_typed", help_text=_("Its standard uncertainty as typed; empty if unknown."))
    sd_base = serializers.IntegerField(
        source="sd", allow_null=True, help_text=_("The same in whole base units of what it measures.")
    )
    relative_sd = serializers.CharField(
        source="relative_typed", help_text=_("Its standard uncertainty as a share of what is read, as typed.")
    )
    relative_sd_base = serializers.IntegerField(
        source="relative_sd", allow_null=True, help_text=_("The same in parts per million.")
    )
    calibrated_on = serializers.DateField(allow_null=True, help_text=_("When it was calibrated; null if not said."))
    valid_until = serializers.DateField(
        allow_null=True, help_text=_("Until when that is valid: later readings come with a caution.")
    )
    picture = serializers.CharField(
        source="picture.sha256",
        default=None,
        allow_null=True,
        help_text=_("SHA-256 of its picture; null where there is none."),
    )
    retired = serializers.BooleanField(help_text=_("True if it is not offered any more."))
    changed_at = serializers.DateTimeField(help_text=_("When this was entered."))
    changed_by = Person(help_text=_("Who entered it."))


class InstrumentChange(Strict):
    """An instrument as it is from now on: what is left out is empty. What it measures stays."""

    name = Text(max_length=80, help_text=_("A name that no other instrument here has."))
    sd = Text(
        required=False,
        allow_blank=True,
        max_length=LONGEST_TYPED,
        help_text=_("Its standard uncertainty, such as 0.1 L; of an analysis or a test strip none, but a share."),
    )
    relative_sd = Text(
        required=False,
        allow_blank=True,
        max_length=LONGEST_TYPED,
        help_text=_("Its standard uncertainty as a share of what is read, such as 1 %; none of a pH or temperature."),
    )
    calibrated_on = Day(required=False, allow_null=True, help_text=_("When it was calibrated."))
    valid_until = Day(required=False, allow_null=True, help_text=_("Until when that is valid."))
    picture = Text(
        required=False, allow_null=True, max_length=64, help_text=_("SHA-256 of an uploaded PNG or JPEG file.")
    )
    retired = Flag(required=False, allow_null=True, help_text=_("True: it is not offered any more."))


class InstrumentInput(InstrumentChange):
    """A new instrument, or a method."""

    measures = Choice(
        choices=[(name, name) for name in MEASURED],
        help_text=_("What it measures; a meter of several is entered for each."),
    )


class LevelMarkShape(Shape):
    """A row of a level table."""

    mark = serializers.CharField(help_text=_("A height such as 32 cm, or the name of a mark."))
    hot = serializers.BooleanField(help_text=_("True if it is for liquid at its working temperature."))
    volume = Figure(dimension="volume", help_text=_("The volume at 20 °C that it stands for."))
    entered_at = serializers.DateTimeField(help_text=_("When it was entered."))
    entered_by = Person(help_text=_("Who entered it."))


class LevelTableShape(Shape):
    """The level table of a tank."""

    marks = LevelMarkShape(many=True, help_text=_("Its rows, cold ones first, from the bottom up."))


class LevelMarkInput(Strict):
    """A row of a level table."""

    mark = Text(max_length=LONGEST_TYPED, help_text=_("A height such as 32 cm, or the name of a mark."))
    volume = BaseUnits("volume", example="18 L", help_text=_("The volume at 20 °C that it stands for."))
    hot = Flag(required=False, allow_null=True, help_text=_("True if it is for liquid at its working temperature."))


class LevelTableInput(Strict):
    """A whole level table: it takes the place of the one so far."""

    marks = rows(LevelMarkInput, most=MOST_MARKS, help_text=_("The rows, in any order; none takes the table away."))


class TankChangeShape(Shape):
    """What was changed of how a tank is set up."""

    fact = serializers.CharField(help_text=_("Which of its fields."))
    before = serializers.CharField(help_text=_("What it was, as people read it; empty where it was nothing."))
    after = serializers.CharField(help_text=_("What it is since; empty for nothing."))
    note = serializers.CharField(help_text=_("Why, if somebody said so."))
    changed_at = serializers.DateTimeField(help_text=_("When."))
    changed_by = Person(help_text=_("By whom."))


class TankChangesShape(Shape):
    """What was changed of how a tank is set up, the latest first."""

    changes = TankChangeShape(many=True, help_text=_("One row for each field."))


class TankChangeInput(TankInput):
    """How a tank is set up from now on: what is left out is empty, or its default. Entries keep their figures."""

    kind = None  # type: ignore[assignment]  # these belong to the vessel
    name = None  # type: ignore[assignment]
    place = None  # type: ignore[assignment]
    capacity = None  # type: ignore[assignment]
    note = Text(required=False, allow_blank=True, max_length=200, help_text=_("Why it is changed."))


class TakenShape(Shape):
    """A reading of any kind that stands."""

    entry = serializers.UUIDField(source="entry.uuid", help_text=_("The entry that records it."))
    occurred_at = serializers.DateTimeField(source="entry.occurred_at", help_text=_("When it was read, or sampled."))
    quantity = choices_of(MEASURED, _("What was read."))
    shows = serializers.CharField(help_text=_("Of an analysis or a test strip: of what; else empty."))
    typed = serializers.CharField(help_text=_("The result as typed."))
    unit = serializers.SerializerMethodField(help_text=_("The base unit of the figures."))
    least = serializers.IntegerField(allow_null=True, help_text=_("The number, or the lower end; null: below most."))
    most = serializers.IntegerField(allow_null=True, help_text=_("The number, or the upper end; null: above least."))
    sd = serializers.IntegerField(allow_null=True, help_text=_("Standard uncertainty; null where nobody stated one."))
    instrument = serializers.CharField(help_text=_("The name that its instrument had then; empty if none was named."))

    def get_unit(self, taken: object) -> str:
        """Return the base unit."""
        return DIMENSIONS[taken.dimension].base_unit  # type: ignore[attr-defined]  # a reading has its dimension


class ReadingsShape(Shape):
    """What was read at a vessel, the latest first."""

    vessel = Named(help_text=_("The vessel."))
    readings = TakenShape(many=True, help_text=_("The latest 1000 of every kind that were not cancelled."))
