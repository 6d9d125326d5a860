"""The one form of every verb that records matter, built from the description of its input."""

from collections.abc import Callable, Mapping, Sequence
from contextlib import suppress
from functools import cached_property, partial
from typing import Any
from uuid import UUID, uuid4

from django import forms
from django.urls import reverse
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.books.events import Analysis
from chemicals.books.occurred import Occurred
from chemicals.journal.models import Entry
from chemicals.journal.selectors import get_entry_for, list_entries_for
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import list_vessels_for
from chemicals.process import fields as kinds
from chemicals.process.fields import FieldKind, describe
from chemicals.process.inputs import INPUTS, Input, LevelInput
from chemicals.process.instruments import list_instruments_for
from chemicals.process.levels import has_level_tables
from chemicals.process.models import Instrument
from chemicals.process.selectors import list_open_analyses_for, list_rack_types_for, list_routes_for
from chemicals.register.selectors import list_products_for, list_solutes
from chemicals.science.quantity import Quantity, echo
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership
from compliance.waste.selectors import list_closed_vessels
from compliance.web import words
from compliance.web.forms.base import Row, Rows, WebForm
from compliance.web.forms.fields import (
    AmountField,
    FlagField,
    LineField,
    MomentField,
    PictureSelect,
    ThingField,
    WholeField,
    WordField,
)

UNDATED = ("acceptance", "cancellation")
"""Verbs whose time is given: an acceptance has that of its analysis, a cancellation that of its recording."""

MISSING: Mapping[str, Any] = {
    "product": gettext_lazy("No product yet. Add one on the page Register first."),
    "rack type": gettext_lazy("No rack type yet. Add one on the page Tanks first."),
    "route": gettext_lazy("No route yet. Add a bath, a rack type and a route on the page Tanks first."),
    "analysis": gettext_lazy("No analysis waits. Enter one on the page of its tank first."),
    "entry": gettext_lazy("Nothing is recorded yet, so there is nothing to cancel."),
}
"""What to do first where there is none to choose."""

MISSING_VESSELS = (
    ({VesselKind.BATH, VesselKind.RINSE}, gettext_lazy("No tank yet. Set one up on the page Tanks first.")),
    ({VesselKind.STOCK}, gettext_lazy("No container yet. Set one up on the page of its product first.")),
    (
        {VesselKind.FILTER, VesselKind.CARBON, VesselKind.RESIN, VesselKind.SLUDGE},
        gettext_lazy("Nothing to put it into. Set it up on the page Tanks, or put up a container on the page Waste."),
    ),
    ({VesselKind.WASTE}, gettext_lazy("No open container. Put one up on the page Waste first.")),
)
"""The same for vessels, by the kinds that would do."""

RECENT = 60
"""How many entries a list to choose from offers."""


class RecordForm(WebForm):
    """What a person says when something happened. Cleans to the input of its verb."""

    key = forms.UUIDField(widget=forms.HiddenInput)

    def __init__(self, member: Membership, verb: str, data: Any = None, **kwargs: Any) -> None:
        initial = {"key": uuid4(), **kwargs.pop("initial", {})}
        super().__init__(data, initial=initial, **kwargs)
        self.member, self.verb, self.input = member, verb, INPUTS[verb]
        self.details = frozenset(name for name, kind in describe(self.input) if kind.detail)
        if self.input is LevelInput and has_level_tables(member):
            self.details -= {"mark", "hot"}
        for name, kind in describe(self.input):
            if isinstance(kind, kinds.InstrumentField) and not self.offer(kind):
                continue  # whoever has no instrument is not asked
            if isinstance(kind, kinds.RowsField):
                make = partial(InputRow, self, kind.of)
                self.add_rows(Rows(name, kind.label, kind.help, make, kind.blank_rows))
            else:
                self.fields[name] = self.build(name, kind)
        if verb not in UNDATED:
            self.fields["occurred"] = MomentField(
                member.workshop.zone,
                label=_("When"),
                help_text=_("Empty means now. Only the date, if you do not know the time."),
                required=False,
            )

    def build(self, name: str, kind: FieldKind) -> forms.Field:
        """Return the form field of a described field."""
        return BUILDERS[type(kind)](self, name, kind)

    def offer(self, kind: kinds.InstrumentField) -> list[Instrument]:
        """Return the instruments in use that measure what is read."""
        read = "" if self.is_bound else str(self.initial.get(kind.by, ""))
        measures = (read,) if read in kind.measures else kind.measures
        return [row for row in self.instruments if row.measures in measures]

    @cached_property
    def instruments(self) -> Sequence[Instrument]:
        """Return the instruments in use, once for all fields of the form."""
        return list(list_instruments_for(self.member, retired=False))

    @cached_property
    def vessels(self) -> Sequence[Vessel]:
        """Return all vessels, once for all fields of the form."""
        return list(list_vessels_for(self.member))

    @cached_property
    def solutes(self) -> Sequence[str]:
        """Return the formulas of what the workshop declared inert, once for all fields of the form."""
        return sorted(list_solutes(self.member.workshop))

    @cached_property
    def closed(self) -> frozenset[UUID]:
        """Return the closed waste containers: nothing goes in any more."""
        return list_closed_vessels(self.member)

    def to_input(self) -> Input:
        """Return the input that the valid form describes."""
        values = _values(self.input, self.cleaned_data)
        for name, rows in self.rows.items():
            of = dict(describe(self.input))[name]
            assert isinstance(of, kinds.RowsField)  # noqa: S101  (rows are built for these only)
            values[name] = tuple(of.of(**_values(of.of, form.cleaned_data)) for form in rows.filled)
        return self.input(**values)

    @property
    def occurred(self) -> Occurred | None:
        """Return when it happened; None means now."""
        found: Occurred | None = self.cleaned_data.get("occurred")
        return found

    def understood(self) -> list[tuple[str, str]]:
        """Return what was written as it was understood, in the order of the form."""
        said = []
        for part in self.all_parts:
            if isinstance(part, Rows):
                for form in part.filled:
                    texts = [_understood(form, name) for name in form.fields]
                    said.append((str(part.label), ", ".join(text for text in texts if text)))
            else:
                said.append((str(part.label), _understood(self, part.name)))
        return [(label, text) for label, text in said if text]


class InputRow(Row):
    """A row of an input."""

    def __init__(self, form: RecordForm, of: type[Any], **kwargs: Any) -> None:
        super().__init__(**kwargs)
        for name, kind in describe(of):
            self.fields[name] = form.build(name, kind)
            self.fields[name].initial = None  # a row that nobody touched stays empty


def _values(of: type[Any], cleaned: Mapping[str, Any]) -> dict[str, Any]:
    """Return the values of an input's plain fields as its dataclass takes them."""
    values = {}
    for name, kind in describe(of):
        if not isinstance(kind, kinds.RowsField):
            value = cleaned.get(name)
            values[name] = value.at if isinstance(value, Occurred) else value
    return values


def _understood(form: forms.Form, name: str) -> str:
    value, field = form.cleaned_data.get(name), form.fields[name]
    if isinstance(value, Quantity):
        return echo(value)
    if isinstance(value, Occurred):
        return words.moment(value.at, value.precision)
    if isinstance(value, bool):
        return _("yes") if value else ""
    if isinstance(field, ThingField | WordField):
        return str(field.labels[str(value)]) if value else ""
    return "" if value is None else str(value)


def _build_amount(form: RecordForm, name: str, kind: kinds.AmountField) -> forms.Field:
    return AmountField(
        kind.dimensions, example=kind.example, label=kind.label, help_text=kind.help, required=kind.required
    )


def _build_vessel(form: RecordForm, name: str, kind: kinds.VesselField) -> forms.Field:
    chosen = str(form.initial.get(name, "") or form.data.get(name, ""))
    things = [
        (vessel.uuid, f"{vessel.name} ({vessel.code})")
        for vessel in form.vessels
        if vessel.kind in kind.kinds
        and not (kind.fills and vessel.uuid in form.closed)
        and (vessel.gone_at is None or str(vessel.uuid) == chosen)
    ]
    missing = next(text for some, text in MISSING_VESSELS if some & set(kind.kinds)) if kind.required else ""
    return ThingField(things, missing=missing, label=kind.label, help_text=kind.help, required=kind.required)


def _build_reference(form: RecordForm, name: str, kind: kinds.ReferenceField) -> forms.Field:
    things = REFERENCES[kind.to](form, str(form.initial.get(name, "") or form.data.get(name, "")))
    missing = MISSING[kind.to] if kind.required else ""
    return ThingField(things, missing=missing, label=kind.label, help_text=kind.help, required=kind.required)


def _build_instrument(form: RecordForm, name: str, kind: kinds.InstrumentField) -> forms.Field:
    rows = form.offer(kind)
    several = len({row.measures for row in rows}) > 1
    things = [(row.uuid, f"{row.name} ({row.measures})" if several else row.name) for row in rows]
    pictures = {
        str(row.uuid): reverse("file", args=[form.member.workshop.uuid, row.picture.sha256])
        for row in rows
        if row.picture is not None
    }
    return ThingField(
        things,
        empty=_("none of these"),
        label=kind.label,
        help_text=kind.help,
        required=False,
        widget=PictureSelect(pictures),
    )


def _build_choice(form: RecordForm, name: str, kind: kinds.ChoiceField) -> forms.Field:
    return WordField(kind.choices, label=kind.label, help_text=kind.help, required=kind.required)


def _build_component(form: RecordForm, name: str, kind: kinds.ComponentField) -> forms.Field:
    choices = [(code, words.component_name(code)) for code in (*kind.known, *form.solutes)]
    return WordField(choices, label=kind.label, help_text=kind.help, required=kind.required)


def _build_whole(form: RecordForm, name: str, kind: kinds.WholeField) -> forms.Field:
    return WholeField(kind.least, kind.most, label=kind.label, help_text=kind.help, required=kind.required)


def _build_text(form: RecordForm, name: str, kind: kinds.TextField) -> forms.Field:
    return LineField(
        label=kind.label,
        help_text=kind.help,
        required=kind.required,
        max_length=kind.longest,
        lines=3 if kind.longest > 200 else 1,
    )


def _build_flag(form: RecordForm, name: str, kind: kinds.FlagField) -> forms.Field:
    return FlagField(label=kind.label, help_text=kind.help)


def _build_moment(form: RecordForm, name: str, kind: kinds.MomentField) -> forms.Field:
    zone = form.member.workshop.zone
    return MomentField(zone, label=kind.label, help_text=kind.help, required=kind.required)


BUILDERS: Mapping[type[FieldKind], Callable[[RecordForm, str, Any], forms.Field]] = {
    kinds.AmountField: _build_amount,
    kinds.VesselField: _build_vessel,
    kinds.ReferenceField: _build_reference,
    kinds.InstrumentField: _build_instrument,
    kinds.ChoiceField: _build_choice,
    kinds.ComponentField: _build_component,
    kinds.WholeField: _build_whole,
    kinds.TextField: _build_text,
    kinds.FlagField: _build_flag,
    kinds.MomentField: _build_moment,
}

Things = list[tuple[UUID, str]]


def _products(form: RecordForm, chosen: str) -> Things:
    return [(row.uuid, " · ".join(filter(None, (row.name, row.supplier)))) for row in list_products_for(form.member)]


def _rack_types(form: RecordForm, chosen: str) -> Things:
    return [(row.uuid, row.name) for row in list_rack_types_for(form.member)]


def _routes(form: RecordForm, chosen: str) -> Things:
    return [
        (row.uuid, f"{row.name}: {' → '.join(step.vessel.name for step in row.steps.all())}")
        for row in list_routes_for(form.member)
    ]


def _analyses(form: RecordForm, chosen: str) -> Things:
    names = {str(vessel.uuid): vessel.name for vessel in form.vessels}

    def label(entry: Entry, event: Analysis) -> str:
        found = f"{event.component} {event.result.typed}"
        return f"{names.get(event.vessel, '')}, {found}, {words.moment(entry.occurred_at, entry.precision)}"

    return [(entry.uuid, label(entry, event)) for entry, event in list_open_analyses_for(form.member)]


def _entries(form: RecordForm, chosen: str) -> Things:
    """Return the latest entries, and the chosen one however old it is."""
    rows = list(list_entries_for(form.member)[:RECENT])
    if chosen and chosen not in {str(row.uuid) for row in rows}:
        with suppress(NotFoundError, ValueError):
            rows.append(get_entry_for(form.member, UUID(chosen)))
    return [
        (
            row.uuid,
            f"{row.sequence} · {words.KINDS[row.kind]} · {words.moment(row.occurred_at, row.precision)}",
        )
        for row in rows
    ]


REFERENCES: Mapping[str, Callable[[RecordForm, str], Things]] = {
    "product": _products,
    "rack type": _rack_types,
    "route": _routes,
    "analysis": _analyses,
    "entry": _entries,
}
