"""Limits of places, what is kept apart, what was assessed, and what stands together and must not."""

from typing import Any

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from compliance.api.fields import Amount, Choice, Day, Identifier, Strict, Text
from compliance.api.serializers.base import Estimate, Figure, Named, Person, Shape, choices_of
from compliance.premises.models import Measure, Reach
from compliance.premises.sorts import list_sorts
from compliance.premises.violation_words import remedies, sentence, speaks
from compliance.premises.violations import CODES, Violation

SORT_HELP = _("Everything, a hazard class without its category, a pictogram, or what something reacts as.")
CHECKED_HELP = _("When somebody here last compared it with what was read.")
CITATION_HELP = _("Where it was read.")
SORTS = [(sort, sort) for sort in list_sorts()]
SECOND_HELP = _("The other sort.")


class LineShape(Shape):
    """A line of the workshop's own rules."""

    uuid = serializers.UUIDField(help_text=_("The line's identifier."))
    citation = serializers.CharField(help_text=CITATION_HELP)
    checked_on = serializers.DateField(help_text=CHECKED_HELP)
    entered_at = serializers.DateTimeField(help_text=_("When it was entered, or last changed."))
    entered_by = Person(help_text=_("Who did that."))


class QuantityLimitShape(LineShape):
    """How much of a sort may stand in a place."""

    place = Named(help_text=_("The place."))
    sort = serializers.CharField(help_text=SORT_HELP)
    measure = choices_of(Measure.values, _("Whether it is a volume or a mass."))
    amount = Figure(
        source="*",
        of=lambda row: Estimate(row.amount, 0, row.measure),
        help_text=_("At most so much: whole nanolitres or micrograms."),
    )
    typed = serializers.CharField(help_text=_("The amount as it was written."))


class QuantityLimitChange(Strict):
    """A limit, or that it was compared again."""

    sort = Choice(choices=SORTS, help_text=SORT_HELP)
    amount = Amount("volume", "mass", example="20 L", help_text=_("At most so much: a volume or a mass."))
    citation = Text(max_length=200, help_text=CITATION_HELP)
    checked_on = Day(help_text=CHECKED_HELP)


class QuantityLimitInput(QuantityLimitChange):
    """A new limit of a place."""

    place = Identifier(help_text=_("The place."))


class KeepApartShape(LineShape):
    """Two sorts that must not stand together."""

    first = serializers.CharField(help_text=SORT_HELP)
    second = serializers.CharField(help_text=SECOND_HELP)
    reach = choices_of(Reach.values, _("What they must not share: a place, a bund, an exhaust duct."))


class KeepApartInput(Strict):
    """A line on what is kept apart."""

    first = Choice(choices=SORTS, help_text=SORT_HELP)
    second = Choice(choices=SORTS, help_text=SECOND_HELP)
    reach = Choice(choices=Reach.choices, help_text=_("What they must not share: place, bund or duct."))
    citation = Text(max_length=200, help_text=CITATION_HELP)
    checked_on = Day(help_text=CHECKED_HELP)


class AssessmentShape(Shape):
    """What somebody decided of two sorts that stand together. It hides nothing."""

    uuid = serializers.UUIDField(help_text=_("The assessment's identifier."))
    first = serializers.CharField(help_text=SORT_HELP)
    second = serializers.CharField(help_text=SECOND_HELP)
    reach = choices_of(Reach.values, _("What they share."))
    place = Named(allow_null=True, help_text=_("The place; null for a bund or duct."))
    shared = serializers.CharField(help_text=_("The name of the bund or duct; empty for a place."))
    assessed_by = serializers.CharField(help_text=_("Who assessed it."))
    until = serializers.DateField(help_text=_("The last day on which it holds."))
    reason = serializers.CharField(help_text=_("Why it may stand so."))
    entered_at = serializers.DateTimeField(help_text=_("When it was noted."))
    entered_by = Person(help_text=_("Who noted it."))


class AssessmentInput(Strict):
    """What somebody decided of two sorts that stand together."""

    first = Choice(choices=SORTS, help_text=SORT_HELP)
    second = Choice(choices=SORTS, help_text=SECOND_HELP)
    reach = Choice(choices=Reach.choices, help_text=_("What they share: place, bund or duct."))
    place = Identifier(required=False, help_text=_("The place, where they share that."))
    shared = Text(
        required=False,
        allow_blank=True,
        max_length=80,
        help_text=_("The name of the bund or duct, where they share one."),
    )
    assessed_by = Text(max_length=120, help_text=_("Who assessed it."))
    until = Day(help_text=_("The last day on which it holds."))
    reason = Text(max_length=1000, help_text=_("Why it may stand so."))


class WeighedShape(Shape):
    """What was added up, every vessel whole, against the limit."""

    verdict = choices_of(("within", "outside", "undecided"), _("At a risk of 5 % of the wrong verdict."))
    sum = serializers.SerializerMethodField(help_text=_("The sum of what is known, in base units of the limit."))
    sd = serializers.IntegerField(help_text=_("Its standard uncertainty in the same unit."))
    is_least = serializers.BooleanField(help_text=_("Whether there may be more than the sum."))
    unknown = serializers.IntegerField(help_text=_("In how many vessels the amount is unknown."))
    elsewise = serializers.IntegerField(help_text=_("Of how many only the other measure, volume or mass, is known."))
    unsure = serializers.IntegerField(help_text=_("How many more may be of the sort: nobody entered it."))

    def get_sum(self, weighed: Any) -> int:
        """Return the sum."""
        return int(weighed.least)


class ViolationShape(Shape):
    """What is wrong, or not known, where something stands."""

    code = choices_of(CODES, _("What it is."))
    sentence = serializers.SerializerMethodField(help_text=_("The same in one sentence."))
    is_remark = serializers.BooleanField(help_text=_("Whether it says what is not known rather than what is wrong."))
    is_assessed = serializers.BooleanField(help_text=_("Whether somebody's assessment of it holds today."))
    is_stale = serializers.BooleanField(help_text=_("Whether nobody compared the line for a year."))
    reach = choices_of(Reach.values, _("What is shared."))
    shared = serializers.CharField(help_text=_("The name of the bund or duct; empty for a place."))
    places = Named(many=True, help_text=_("Where; none where nobody said where it stands."))
    first = serializers.CharField(help_text=_("The sort; empty for a remark."))
    second = serializers.CharField(help_text=_("The other sort, if two must not stand together."))
    ones = Named(many=True, help_text=_("The vessels of the first sort, or those of which something is not known."))
    others = Named(many=True, help_text=_("The vessels of the other sort."))
    weighed = WeighedShape(allow_null=True, help_text=_("Of a limit, what was added up."))
    speaks = serializers.SerializerMethodField(help_text=_("What speaks against it: the line with its citation."))
    line = serializers.UUIDField(
        source="line.uuid", default=None, allow_null=True, help_text=_("The line; null if it needs none.")
    )
    remedies = serializers.SerializerMethodField(help_text=_("What can be done."))
    assessment = AssessmentShape(allow_null=True, help_text=_("What was assessed, also where its day is over."))

    def get_sentence(self, violation: Violation) -> str:
        """Return the sentence."""
        return sentence(violation)

    def get_speaks(self, violation: Violation) -> str:
        """Return what speaks against it."""
        return speaks(violation)

    def get_remedies(self, violation: Violation) -> list[str]:
        """Return what can be done."""
        return remedies(violation)


class ViolationsShape(Shape):
    """Everything that is wrong or not known of where things stand, the worst first."""

    violations = ViolationShape(many=True, help_text=_("One for each place, bund or duct and each line."))
