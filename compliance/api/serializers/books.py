"""What vessels held over time, the difference between two moments, closed periods, how far the books have come."""

from typing import Any

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.books.events import BOUNDARIES, CURRENT
from chemicals.books.fold.arithmetic import root
from chemicals.books.occurred import PRECISIONS
from chemicals.ledger.components import dimension_of, dimension_per_litre
from chemicals.ledger.models import Basis, ClosingHolding
from chemicals.ledger.running import Running
from compliance.api.fields import Day, PageSize, Strict, Text
from compliance.api.serializers.base import STANDS_HELP, End, Estimate, Figure, Named, Person, Shape, choices_of
from compliance.api.serializers.entries import FindingShape

COMPONENT_HELP = _("A metal's symbol, a species, the formula of a solute, volume, or gross mass.")
MOST_PAGES = 10**6


def as_it_is(found: Any) -> Any:
    """Return an estimate that was made before."""
    return found


class DaysQuery(Strict):
    """Of which component, over which days of the workshop."""

    start = Day(required=False, help_text=_("The first day; the beginning if left out."))
    end = Day(required=False, help_text=_("The last day, which belongs to the period; today if left out."))
    component = Text(required=False, max_length=40, help_text=COMPONENT_HELP)


class VesselLedgerQuery(DaysQuery):
    """Of which component, over which days; which page of its lines."""

    page = PageSize(
        required=False, min_value=1, max_value=MOST_PAGES, help_text=_("Which page of 100 lines; 1 if left out.")
    )


def _held(running: Running) -> Estimate:
    return Estimate(running.amount, running.sd, dimension_of(running.component))


def _booked(running: Running) -> Estimate:
    return Estimate(running.booked, 0, dimension_of(running.component))


def _per_litre(running: Running) -> Estimate:
    return Estimate(running.concentration, running.concentration_sd, dimension_per_litre(running.component))


class RunningShape(Shape):
    """What a vessel held at a place in its ledger."""

    amount = Figure(source="*", of=_held, help_text=_("How much it held; unknown where nobody knew."))
    booked = Figure(
        source="*", of=_booked, help_text=_("What was recorded sums to: the same, or what is known where that is not.")
    )
    concentration = Figure(
        source="*", of=_per_litre, help_text=_("Amount over volume; unknown where either was unknown.")
    )


class MovementShape(Shape):
    """What came into a vessel or left it by an entry."""

    amount = Figure(of=as_it_is, help_text=_("Above zero it came, below zero it left."))
    end = End(help_text=_("Where it came from, or where it went."))
    basis = choices_of(Basis.values, _("Where the figure comes from."))


class LedgerLineShape(Shape):
    """One entry that changed what a vessel held, or what is known of it."""

    entry = serializers.UUIDField(source="entry.uuid", help_text=_("The entry."))
    sequence = serializers.IntegerField(source="entry.sequence", help_text=_("Its number in order of recording."))
    kind = choices_of(CURRENT, _("What happened."), source="entry.kind")
    occurred_at = serializers.DateTimeField(source="entry.occurred_at", help_text=_("When it happened, in UTC."))
    precision = choices_of(PRECISIONS, _("How finely that is known."), source="entry.precision")
    movements = MovementShape(many=True, help_text=_("What came and went; empty where no amount is known."))
    findings = FindingShape(many=True, help_text=_("What a person should know about it."))
    held = RunningShape(help_text=_("What the vessel held afterwards."))


class VesselLedgerShape(Shape):
    """One page of a vessel's ledger: each line is the one before and what came and went."""

    vessel = Named(help_text=_("The vessel."))
    component = serializers.CharField(help_text=COMPONENT_HELP)
    start = serializers.DateTimeField(help_text=_("The moment at which the period begins."))
    end = serializers.DateTimeField(help_text=_("The moment at which it ends; not part of it."))
    opening = RunningShape(help_text=_("What it held at the beginning of the period."))
    came = Figure(of=as_it_is, help_text=_("What came in the whole period."))
    went = Figure(of=as_it_is, help_text=_("What left in the whole period."))
    closing = RunningShape(help_text=_("What it held at the end of the period."))
    before = RunningShape(help_text=_("What it held before the first line of this page."))
    lines = LedgerLineShape(many=True, help_text=_("The lines of this page, in order of time."))
    after = RunningShape(help_text=_("What it held after the last line of this page."))
    page = serializers.IntegerField(help_text=_("Which page this is."))
    pages = serializers.IntegerField(help_text=_("How many pages there are."))
    stands_to = serializers.DateTimeField(allow_null=True, help_text=STANDS_HELP)


class ExplainedShape(Shape):
    """What came through a boundary, or left through it, by entries of one kind."""

    boundary = choices_of(sorted(BOUNDARIES), _("Where it came from, or went."))
    kind = choices_of(CURRENT, _("By entries of which kind."))
    amount = Figure(of=as_it_is, help_text=_("Above zero it came, below zero it left; unknown if any of it is."))
    booked = Figure(of=as_it_is, help_text=_("What was recorded of it."))


class VesselDifferenceShape(Shape):
    """What a vessel held at both moments."""

    vessel = Named(help_text=_("The vessel."))
    before = Figure(of=as_it_is, help_text=_("What it held at the first moment."))
    came = Figure(of=as_it_is, help_text=_("What came between."))
    went = Figure(of=as_it_is, help_text=_("What left between."))
    after = Figure(of=as_it_is, help_text=_("What it held at the second moment."))
    value = Figure(of=as_it_is, help_text=_("How much more it holds; unknown where either is unknown."))


class DifferenceShape(Shape):
    """The difference of one component: explained by what crossed the boundaries, to the unit."""

    component = serializers.CharField(help_text=COMPONENT_HELP)
    before = Figure(of=as_it_is, help_text=_("What all vessels held at the first moment."))
    after = Figure(of=as_it_is, help_text=_("What all vessels held at the second moment."))
    value = Figure(of=as_it_is, help_text=_("How much more they hold; unknown where any content is unknown."))
    booked = Figure(of=as_it_is, help_text=_("What was recorded sums to: the sum of what explains it."))
    explained = ExplainedShape(many=True, help_text=_("What explains it, by boundary and kind of entry."))
    vessels = VesselDifferenceShape(many=True, help_text=_("Every vessel that held or saw any of it."))


class DifferencesShape(Shape):
    """The difference between two moments, component by component."""

    start = serializers.DateTimeField(help_text=_("The first moment: the beginning of the first day."))
    end = serializers.DateTimeField(help_text=_("The second moment: the end of the last day."))
    differences = DifferenceShape(many=True, help_text=_("One for each component, or the one that is asked for."))
    stands_to = serializers.DateTimeField(allow_null=True, help_text=STANDS_HELP)


class PeriodShape(Shape):
    """A closed period, from after the one before it until just before ``until``."""

    uuid = serializers.UUIDField(source="closing.uuid", help_text=_("The entry that closed it."))
    after = serializers.DateTimeField(allow_null=True, help_text=_("Where it begins; null is the beginning."))
    until = serializers.DateTimeField(help_text=_("The moment at which it ends; not part of it."))
    closed_at = serializers.DateTimeField(source="closing.recorded_at", help_text=_("When it was closed."))
    closed_by = Person(source="closing.member", help_text=_("Who closed it."))
    sequence = serializers.IntegerField(help_text=_("The last entry that was recorded by then."))
    fold_version = serializers.IntegerField(help_text=_("The version of the rules by which its entries were folded."))
    followed_sha256 = serializers.CharField(help_text=_("SHA-256 of what followed from its entries."))
    holdings_sha256 = serializers.CharField(help_text=_("SHA-256 of what every vessel held at its end."))
    reopened_by = serializers.UUIDField(
        source="reopening.uuid", default=None, allow_null=True, help_text=_("The entry that opened it again, if any.")
    )


def _closing(row: ClosingHolding) -> Estimate:
    return Estimate(row.amount, root(row.variance), dimension_of(row.component.code))


class ClosingHoldingShape(Shape):
    """What a vessel held of a component at the end of a period."""

    vessel = Named(help_text=_("The vessel."))
    component = serializers.CharField(
        source="component.code", help_text=_("As everywhere; empty, with an unknown amount: anything not listed.")
    )
    amount = Figure(source="*", of=_closing, help_text=_("How much."))


class PeriodDetail(PeriodShape):
    """A closed period with what every vessel held at its end."""

    holdings = ClosingHoldingShape(many=True, help_text=_("What was held at its end, by vessel."))


class PeriodInput(Strict):
    """Closes the books. Only an owner may."""

    until = Day(help_text=_("The first day that is not part of it: the books are closed for everything before."))


class ReopenInput(Strict):
    """Opens the last closed period again. Only an owner may."""

    reason = Text(max_length=200, help_text=_("Why; it stays in the journal."))


class BooksShape(Shape):
    """How far the books have come, and up to when they are closed."""

    closed_until = serializers.DateTimeField(
        allow_null=True, help_text=_("The books are closed for everything before this moment; null if no period is.")
    )
    stands_to = serializers.DateTimeField(allow_null=True, help_text=STANDS_HELP)
    done = serializers.IntegerField(help_text=_("How many entries the recomputing has folded."))
    total = serializers.IntegerField(help_text=_("How many there are to fold; 0 while nobody has counted."))
    failed = serializers.BooleanField(help_text=_("True if the recomputing has given up: a person must look at it."))
