"""Count days: what was said of each container, and how it compares with the books."""

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.process.counting.selectors import VERDICTS, Counted, Said
from chemicals.process.counting.services import LONGEST_NOTE
from chemicals.process.models import CountLine, Seen
from compliance.api.fields import Amount, Choice, Identifier, Strict, Text
from compliance.api.serializers.base import Estimate, Figure, Named, Person, Shape, choices_of
from compliance.api.serializers.vessels import VesselShape

SAID_HELP = _("An amount was counted, the books are right, or the container is not there.")
LONGEST_CODE = 300


class CountDayShape(Shape):
    """Somebody walks along the shelves and says what is there."""

    uuid = serializers.UUIDField(help_text=_("The count's identifier."))
    place = Named(allow_null=True, help_text=_("Where it goes along; null for everything."))
    note = serializers.CharField(help_text=_("A note."))
    started_at = serializers.DateTimeField(help_text=_("When it was started."))
    started_by = Person(help_text=_("Who started it."))
    finished_at = serializers.DateTimeField(allow_null=True, help_text=_("When it was over; null while it is open."))
    finished_by = Person(allow_null=True, help_text=_("Who ended it; null while it is open."))
    abandoned = serializers.BooleanField(help_text=_("Whether it was ended without any entry."))
    seen = serializers.IntegerField(help_text=_("How many containers were seen."))
    made = serializers.IntegerField(help_text=_("How many entries followed."))
    unseen = serializers.ListField(
        child=serializers.CharField(help_text=_("One container.")),
        help_text=_("What nobody had seen when it was finished."),
    )


class CountDayInput(Strict):
    """A new count."""

    place = Identifier(required=False, allow_null=True, help_text=_("Only what stands at this place."))
    note = Text(required=False, allow_blank=True, max_length=LONGEST_NOTE, help_text=_("A note."))


def _typed(line: CountLine) -> Estimate:
    return Estimate(line.base, line.sd or 0, line.dimension or "mass")


class CountLineShape(Shape):
    """What was said of a container."""

    uuid = serializers.UUIDField(help_text=_("The line's identifier."))
    vessel = VesselShape(help_text=_("The container."))
    said = choices_of(Seen.values, SAID_HELP)
    typed = serializers.CharField(help_text=_("The amount as it was typed; empty where none was."))
    amount = Figure(source="*", of=_typed, help_text=_("The amount; unknown where none was typed."))
    remark = serializers.CharField(help_text=_("A remark."))
    seen_at = serializers.DateTimeField(help_text=_("When it was said: an entry is dated so."))
    seen_by = Person(help_text=_("Who said it."))
    taken_back_at = serializers.DateTimeField(allow_null=True, help_text=_("When it was taken back, or said anew."))
    taken_back_by = Person(allow_null=True, help_text=_("Who took it back."))
    entry = serializers.UUIDField(
        source="entry.uuid", default=None, allow_null=True, help_text=_("The entry that followed; null for none.")
    )


class CountLineInput(Strict):
    """What was seen of a container; what was said of it before on this count is taken back."""

    code = Text(max_length=LONGEST_CODE, help_text=_("Its code, or the whole address that a label holds."))
    said = Choice(choices=Seen.choices, required=False, help_text=_("Left out: an amount was counted."))
    amount = Amount(
        "mass",
        "volume",
        example="1.2 kg",
        required=False,
        allow_null=True,
        help_text=_("What is there, without the container."),
    )
    sd = Amount(
        "mass", "volume", example="20 g", required=False, allow_null=True, help_text=_("Its standard uncertainty.")
    )
    remark = Text(required=False, allow_blank=True, max_length=LONGEST_NOTE, help_text=_("A remark."))


def _estimate(said: Said | None, dimension: str) -> Estimate:
    return Estimate(None, 0, dimension) if said is None else Estimate(said.amount, said.sd, said.dimension)


def _books(row: Counted) -> Estimate:
    return _estimate(row.books, row.books.dimension)


def _counted(row: Counted) -> Estimate:
    return _estimate(row.counted, row.books.dimension)


def _difference(row: Counted) -> Estimate:
    sd = 0 if row.difference is None else row.difference_sd
    return Estimate(row.difference, sd, row.books.dimension)


class CountedShape(Shape):
    """A line against what the books say of the moment when the container was seen."""

    line = CountLineShape(help_text=_("The line."))
    books = Figure(source="*", of=_books, help_text=_("What the books say of then, without the entry that followed."))
    counted = Figure(source="*", of=_counted, help_text=_("What was counted; unknown where the books were right."))
    difference = Figure(source="*", of=_difference, help_text=_("Counted less books, with its uncertainty."))
    verdict = choices_of(
        VERDICTS,
        _(
            "Whether it differs by more than 1.96 standard uncertainties, agrees within them, agrees exactly, or was "
            "unknown before."
        ),
    )
    makes_entry = serializers.BooleanField(help_text=_("Whether finishing records a count of it."))
    elsewhere = serializers.BooleanField(help_text=_("Whether the books have it at another place."))


class ReckoningShape(Shape):
    """A count against the books. Nothing was written."""

    day = CountDayShape(help_text=_("The count."))
    done = serializers.IntegerField(help_text=_("Of how many that stand there something was said."))
    all = serializers.IntegerField(help_text=_("How many stand there."))
    rows = CountedShape(many=True, help_text=_("What was said, by container."))
    unseen = VesselShape(many=True, help_text=_("What stands there and was not seen yet."))
