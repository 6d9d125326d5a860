"""Entries of the journal with what followed from them, and the book balance."""

from collections.abc import Mapping
from typing import Any

from django.utils.translation import gettext_lazy as _
from drf_spectacular.utils import extend_schema_field
from rest_framework import serializers

from chemicals.balance.selectors import Amount
from chemicals.books.clearance import VERDICTS
from chemicals.books.events import CURRENT
from chemicals.books.fold.state import FINDINGS
from chemicals.books.occurred import PRECISIONS
from chemicals.ledger.components import dimension_of
from chemicals.ledger.models import Basis, Posting
from chemicals.ledger.search import BY
from compliance.api.fields import Choice, Day, Identifier, Strict, Text, Yes
from compliance.api.serializers.base import STANDS_HELP, End, Estimate, Figure, Hex, Named, Person, Shape, choices_of
from compliance.api.serializers.query import PageQuery
from compliance.documents.export import FORMATS


class EntryFilters(Strict):
    """Which entries are looked for: those that fit everything that is said."""

    kind = Choice(choices=[(kind, kind) for kind in CURRENT], required=False, help_text=_("Only entries of this kind."))
    vessel = Identifier(required=False, help_text=_("Only entries that name this vessel."))
    component = Text(
        required=False,
        max_length=40,
        help_text=_("Only entries that moved, found or analysed this: a metal's symbol, a species, a formula, volume."),
    )
    member = Identifier(required=False, help_text=_("Only what this membership recorded."))
    verdict = Choice(
        choices=[(verdict, verdict) for verdict in VERDICTS],
        required=False,
        help_text=_("Only entries with this recorded answer to: may this be done?"),
    )
    start = Day(required=False, help_text=_("Only what happened on this day of the workshop or later."))
    end = Day(required=False, help_text=_("Only what happened on this day of the workshop or earlier."))
    by = Choice(
        choices=[(time, time) for time in BY],
        required=False,
        help_text=_("Whether start and end mean when it occurred (if left out) or when it was recorded."),
    )
    text = Text(
        required=False, max_length=80, help_text=_("Only entries with these words in parts, lot, receiver or reason.")
    )
    findings = Yes(required=False, help_text=_("true: only entries with findings."))
    cancelled = Yes(required=False, help_text=_("true: only entries that a later one cancelled."))


class EntryQuery(EntryFilters, PageQuery):
    """Which entries to list."""


class ExportQuery(EntryFilters):
    """Which part of the books to write, and how."""

    def get_fields(self) -> dict[str, Any]:
        """Return the filters, and the kind of file: its name is a word of the language this is written in."""
        known = [(ending, ending) for ending in FORMATS]
        text = _("The kind of file: jsonl (JSON lines, if left out), csv or xlsx.")
        return {**super().get_fields(), "as": Choice(choices=known, required=False, help_text=text)}


class Cancelled(serializers.BooleanField):
    """Whether an entry, by its primary key, is among the cancelled ones of the context."""

    def to_representation(self, value: int) -> bool:
        """Say whether it is."""
        return value in self.context["cancelled"]


class EntryShape(Shape):
    """One immutable, dated record of something that happened."""

    uuid = serializers.UUIDField(help_text=_("The entry's identifier: the key that it was recorded with."))
    sequence = serializers.IntegerField(help_text=_("Its number in order of recording, without gaps."))
    kind = choices_of(CURRENT, _("What happened."))
    occurred_at = serializers.DateTimeField(help_text=_("When it happened, in UTC."))
    precision = choices_of(PRECISIONS, _("How finely that is known; a day stands at noon of the workshop."))
    recorded_at = serializers.DateTimeField(help_text=_("When it was recorded, in UTC."))
    recorded_by = Person(source="member", help_text=_("Who recorded it."))
    verdict = choices_of(VERDICTS, _("The recorded answer to: may this be done?"))
    about = serializers.UUIDField(
        source="about.uuid", default=None, allow_null=True, help_text=_("The entry that this one speaks of, if any.")
    )
    cancelled = Cancelled(source="pk", help_text=_("True if a later entry cancelled it."))
    hash = Hex(help_text=_("SHA-256 of the entry's bytes and all before it, in hex: it proves them."))


def _posted(posting: Posting) -> Estimate:
    return Estimate(posting.amount, posting.sd, dimension_of(posting.component.code))


def _posted_at(posting: Posting) -> str:
    return posting.boundary if posting.vessel is None else str(posting.vessel.uuid)


class PostingShape(Shape):
    """A signed amount that followed from an entry; the postings of a transfer sum to zero."""

    transfer = serializers.IntegerField(help_text=_("Which transfer of the entry it belongs to, counted from 0."))
    component = serializers.CharField(source="component.code", help_text=_("The metal, volume or gross mass."))
    end = End(source="*", of=_posted_at, help_text=_("Where it was posted: a vessel or a boundary."))
    amount = Figure(source="*", of=_posted, help_text=_("Above zero it came, below zero it left."))
    basis = choices_of(Basis.values, _("Where the figure comes from."))


class Meaning(serializers.CharField):
    """A finding code in words."""

    def to_representation(self, value: str) -> str:
        """Return the meaning of the code."""
        return FINDINGS[value]


class FindingShape(Shape):
    """What a person should know about an entry."""

    code = choices_of(FINDINGS, _("A code that does not change with the language."))
    message = Meaning(source="code", help_text=_("What the code means."))
    component = serializers.CharField(help_text=_("The metal, volume or gross mass; empty means everything else."))
    source = End(help_text=_("Where it came from."))  # type: ignore[assignment]  # a field of the answer
    target = End(help_text=_("Where it went."))


class DatedFinding(FindingShape):
    """A finding with the entry that it belongs to."""

    entry = serializers.UUIDField(source="entry.uuid", help_text=_("The entry that it belongs to."))
    occurred_at = serializers.DateTimeField(help_text=_("When that happened, in UTC."))


class PayloadShape(Shape):
    """What an entry says, in the journal's own words; its fields follow from its kind."""

    observed = serializers.DictField(help_text=_("What was observed, as typed and in base units."))
    used = serializers.DictField(help_text=_("The figures that were relied on that day."))


class EntryDetail(EntryShape):
    """An entry with its body, what proves it, and what followed from it."""

    previous_hash = Hex(help_text=_("The hash before it, in hex."))
    reasons = serializers.ListField(
        child=serializers.CharField(help_text=_("One reason.")),
        source="said.clearance.reasons",
        help_text=_("The reasons of the verdict; for an incident also what to do first."),
    )
    payload = PayloadShape(source="said.payload", help_text=_("What the entry says."))
    attachments = serializers.ListField(
        child=serializers.CharField(help_text=_("SHA-256 of one file.")),
        source="said.attachments",
        help_text=_("The files that belong to it."),
    )
    postings = PostingShape(many=True, help_text=_("What followed from it; empty once it is cancelled."))
    findings = FindingShape(many=True, help_text=_("What a person should know about it."))


class BalanceQuery(Strict):
    """Over which days."""

    start = Day(required=False, help_text=_("The first day, in the workshop's zone; the beginning if left out."))
    end = Day(required=False, help_text=_("The last day, which belongs to the period; today if left out."))


def _estimate(amount: Amount) -> Estimate:
    return Estimate(amount.value, amount.sd, "mass")


class BoundaryShape(Shape):
    """What came through a boundary over the period."""

    name = serializers.CharField(help_text=_("The boundary: opening, supplier, parts, receiver and so on."))
    net = Figure(of=_estimate, help_text=_("Above zero it came in, below zero it went out."))


@extend_schema_field(BoundaryShape(many=True))
class Boundaries(serializers.DictField):
    """The boundaries of a balance as a list, one row each."""

    def to_representation(self, value: Mapping[str, Amount]) -> Any:
        """Return one row for each boundary."""
        return BoundaryShape([{"name": name, "net": net} for name, net in value.items()], many=True).data


class BalanceRow(Shape):
    """One vessel over the period."""

    vessel = Named(help_text=_("The vessel."))
    opening = Figure(of=_estimate, help_text=_("What it held at the beginning."))
    received = Figure(help_text=_("What came into it."))
    given = Figure(help_text=_("What left it."))
    closing = Figure(of=_estimate, help_text=_("What it held at the end."))


class FlowShape(Shape):
    """What went from one end to another over the period."""

    source = serializers.CharField(  # type: ignore[assignment]  # a field of the answer
        help_text=_("Where it came from: a vessel's name, or a boundary.")
    )
    target = serializers.CharField(help_text=_("Where it went."))
    amount = Figure(of=_estimate, help_text=_("How much."))
    between_vessels = serializers.BooleanField(help_text=_("True if both ends are vessels: nothing entered or left."))


class BalanceShape(Shape):
    """The book balance of a metal: what the entries say, before any reconciliation."""

    metal = serializers.CharField(source="component", help_text=_("The metal's symbol."))
    start = serializers.DateTimeField(help_text=_("The moment at which the period begins."))
    end = serializers.DateTimeField(help_text=_("The moment at which it ends; not part of it."))
    opening = Figure(of=_estimate, help_text=_("What all vessels held at the beginning."))
    closing = Figure(of=_estimate, help_text=_("What all vessels held at the end."))
    boundaries = Boundaries(help_text=_("What came in and went out, by boundary."))
    vessels = BalanceRow(many=True, help_text=_("Every vessel that held or saw any of it."))
    flows = FlowShape(many=True, help_text=_("Where it went, the largest first."))
    unaccounted = Figure(
        of=_estimate, help_text=_("What nobody recorded: above zero it was found, below zero it is missing.")
    )
    smallest_visible = Figure(
        allow_null=True, help_text=_("The smallest loss that this balance could have seen; null where unknown.")
    )
    stands_to = serializers.DateTimeField(allow_null=True, help_text=STANDS_HELP)


class MetalsShape(Shape):
    """The metals that the books know."""

    metals = serializers.ListField(
        child=serializers.CharField(help_text=_("A metal's symbol.")), help_text=_("Their symbols, sorted.")
    )
