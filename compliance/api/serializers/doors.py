"""What goes through the two doors: one serializer for each verb, generated from the table of inputs."""

from collections.abc import Callable, Mapping
from datetime import date, datetime
from functools import cache
from typing import Any

from django.utils.text import format_lazy
from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.books.clearance import VERDICTS
from chemicals.books.events import ASSUMED, COMPUTED, OBSERVED
from chemicals.books.fold.state import Transfer
from chemicals.books.occurred import PRECISIONS, Occurred
from chemicals.ledger.components import dimension_of
from chemicals.process import fields as kinds
from chemicals.process.inputs import INPUTS, Input
from chemicals.workshop.models import Workshop
from compliance.api.fields import (
    Amount,
    Choice,
    Component,
    Flag,
    Identifier,
    Moment,
    MomentOrDay,
    Strict,
    Text,
    Whole,
    Words,
    rows,
)
from compliance.api.serializers.base import End, Estimate, Figure, Shape, choices_of
from compliance.api.serializers.entries import FindingShape, PayloadShape

MOST_ROWS = 100


REFERENCES = {
    "product": _("a product"),
    "rack type": _("a rack type"),
    "route": _("a route"),
    "analysis": _("the entry of an analysis"),
    "entry": _("an entry"),
    "instrument": _("an instrument"),
}
"""What a reference may name, in words."""


class Door(Strict):
    """What may be said of every verb, besides its own fields."""

    occurred_at = MomentOrDay(
        required=False,
        allow_null=True,
        help_text=_("When it happened: a time with its offset, or only the day; now if left out."),
    )
    already_happened = Flag(
        required=False,
        allow_null=True,
        help_text=_(
            "True if it has happened and cannot be undone: then it is recorded even if it must not be done, as an "
            "incident, or as overridden where somebody answers for it, as for a discharge."
        ),
    )
    attachments = Words(
        child=Text(max_length=64, help_text=_("SHA-256 of an uploaded file.")),
        required=False,
        allow_null=True,
        help_text=_("Files that belong to it, uploaded before."),
    )


def _build_door(verb: type[Input]) -> type[Door]:
    """Return the serializer of a verb: its own fields and those of every verb."""
    own = {name: _build_field(kind) for name, kind in kinds.describe(verb)}
    return type(verb.__name__, (Door,), {**own, "__doc__": verb.__doc__, "__module__": __name__})


@cache
def _build_rows(row: type[Any]) -> type[Strict]:
    own = {name: _build_field(kind) for name, kind in kinds.describe(row)}
    return type(row.__name__, (Strict,), {**own, "__doc__": row.__doc__, "__module__": __name__})


def _build_field(kind: kinds.FieldKind) -> Any:
    """Return the field that takes what a description asks for."""
    options: dict[str, Any] = {"required": kind.required, "allow_null": not kind.required}
    options["help_text"] = format_lazy("{} {}", _name(kind), kind.help) if kind.help else _name(kind)
    return BUILDERS[type(kind)](kind, options)


def _name(kind: kinds.FieldKind) -> kinds.Text:
    """Return what a field takes: its label, and of vessels, things and amounts also which."""
    if isinstance(kind, kinds.VesselField):
        which = format_lazy(", ".join(["{}"] * len(kind.kinds)), *(each.label for each in kind.kinds))
        return format_lazy("{}: {} ({}).", kind.label, _("a vessel"), which)
    if isinstance(kind, kinds.ReferenceField):
        return format_lazy("{}: {}.", kind.label, REFERENCES[kind.to])
    if isinstance(kind, kinds.ComponentField):
        return format_lazy("{}: {} ({}).", kind.label, _("a formula declared inert, or one of"), ", ".join(kind.known))
    if isinstance(kind, kinds.AmountField):
        return format_lazy('{}, {} "{}".', kind.label, _("such as"), kind.example)
    return format_lazy("{}.", kind.label)


BUILDERS: Mapping[type[kinds.FieldKind], Callable[[Any, dict[str, Any]], Any]] = {
    kinds.AmountField: lambda kind, options: Amount(*kind.dimensions, example=kind.example, **options),
    kinds.ChoiceField: lambda kind, options: Choice(choices=kind.choices, **options),
    kinds.ComponentField: lambda kind, options: Component(known=kind.known, **options),
    kinds.WholeField: lambda kind, options: Whole(min_value=kind.least, max_value=kind.most, **options),
    kinds.TextField: lambda kind, options: Text(max_length=kind.longest, allow_blank=not kind.required, **options),
    kinds.FlagField: lambda kind, options: Flag(**options),
    kinds.MomentField: lambda kind, options: Moment(**options),
    kinds.VesselField: lambda kind, options: Identifier(**options),
    kinds.ReferenceField: lambda kind, options: Identifier(**options),
    kinds.InstrumentField: lambda kind, options: Identifier(**options),
    kinds.RowsField: lambda kind, options: rows(_build_rows(kind.of), most=MOST_ROWS, **options),
}
"""Which field takes which kind."""

DOORS = {name: _build_door(verb) for name, verb in INPUTS.items()}
"""What may be said of each verb, by its name in addresses."""


def build_input(verb: type[Any], said: Mapping[str, Any]) -> Any:
    """Return the input that validated values describe; what is null or left out has its default."""
    values = {}
    for name, kind in kinds.describe(verb):
        value = said.get(name)
        if isinstance(kind, kinds.RowsField) and value is not None:
            value = tuple(build_input(kind.of, row) for row in value)
        if value is not None:
            values[name] = value
    return verb(**values)


def build_occurred(when: datetime | date | None, workshop: Workshop) -> Occurred | None:
    """Return when it happened; a day is noon of that day in the workshop's zone."""
    if isinstance(when, datetime):
        return Occurred(when)
    return None if when is None else Occurred.on_day(when, workshop.zone)


class EchoRow(Shape):
    """How one amount was understood."""

    field = serializers.CharField(help_text=_("The dotted path of the field."))
    typed = serializers.CharField(help_text=_("The amount as it was written."))
    understood = serializers.CharField(help_text=_("What it was taken for, such as 2.5 gal = 9.464 L."))


def _moved(transfer: Transfer) -> Estimate:
    return Estimate(transfer.amount, transfer.sd, dimension_of(transfer.component))


class TransferShape(Shape):
    """An amount of one component that would go from one end to another."""

    component = serializers.CharField(help_text=_("The metal, species or solute, volume or gross mass."))
    source = End(help_text=_("Where it would come from."))  # type: ignore[assignment]  # a field of the answer
    target = End(help_text=_("Where it would go."))
    amount = Figure(source="*", of=_moved, help_text=_("How much."))
    basis = choices_of((OBSERVED, COMPUTED, ASSUMED), _("Where the figure comes from."))


class PreviewShape(Shape):
    """The answer before anything is written."""

    allowed = serializers.BooleanField(help_text=_("Whether it may be done."))
    verdict = choices_of(VERDICTS, _("What would be recorded as the answer, if it is recorded."))
    reasons = serializers.ListField(
        child=serializers.CharField(help_text=_("One danger or obstacle, named, or what a person answers for.")),
        help_text=_("Why it may not be done unless it has happened already."),
    )
    cautions = serializers.ListField(
        child=serializers.CharField(help_text=_("One caution.")), help_text=_("What whoever does it should know.")
    )
    first_steps = serializers.ListField(
        child=serializers.CharField(help_text=_("One step.")), help_text=_("What to do first if it has gone wrong.")
    )
    occurred_at = serializers.DateTimeField(allow_null=True, help_text=_("When it happened, in UTC; null is now."))
    precision = choices_of(PRECISIONS, _("How finely that is known."))
    echo = EchoRow(many=True, help_text=_("Every amount as it was understood."))
    payload = PayloadShape(help_text=_("What the entry would say."))
    transfers = TransferShape(many=True, help_text=_("What would follow, at the end of the books as they stand."))
    findings = FindingShape(many=True, help_text=_("What a person should know before it is recorded."))
