"""Forms of waste: streams, containers, closing, receivers, drop-offs."""

from collections.abc import Iterable
from contextlib import suppress
from datetime import date
from typing import Any
from uuid import UUID

from django import forms
from django.utils.translation import gettext_lazy as _

from chemicals.ledger.models import Vessel
from chemicals.workshop.models import Membership
from compliance.dropoffs.load import list_ready_stock_for
from compliance.dropoffs.models import Mode
from compliance.dropoffs.selectors import list_ready_containers_for, list_receivers_for
from compliance.waste.selectors import list_streams_for
from compliance.web.forms.base import WebForm
from compliance.web.forms.fields import AmountField, DayField, LineField, MomentField, ThingField, WordField, WordsField
from compliance.web.forms.register import HazardForm, place_field


class StreamForm(HazardForm):
    """What a receiver approved."""

    name = LineField(label=_("Name"), max_length=80, help_text=_("For example spent copper rinse."))
    origin = LineField(label=_("Origin"), max_length=120, help_text=_("The process that this waste comes from."))
    profile_number = LineField(
        label=_("Profile number"), required=False, max_length=40, help_text=_("As the receiver wrote it.")
    )
    code = LineField(
        label=_("Waste code"), required=False, max_length=40, help_text=_("As you chose it from your local list.")
    )
    field_order = ("name", "origin", "profile_number", "code", "reactivity")

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["reactivity"].label = _("May react as")
        self.fields["reactivity"].help_text = _("Whatever is in it today: what the stream may hold counts.")


class ContainerForm(WebForm):
    """A waste container."""

    def __init__(self, member: Membership, data: Any = None) -> None:
        super().__init__(data)
        streams = [(stream.uuid, stream.name) for stream in list_streams_for(member)]
        fields: dict[str, forms.Field] = {
            "name": LineField(label=_("Name"), max_length=80, help_text=_("As written on it.")),
            "stream": ThingField(
                streams, label=_("Waste stream"), missing=_("No stream yet. Add one on the page Waste first.")
            ),
            "place": place_field(member),
            "capacity": AmountField(["volume"], example="25 L", label=_("Holds at most"), required=False),
            "material": LineField(label=_("Material"), required=False, max_length=60, help_text=_("For example HDPE.")),
            "tare": AmountField(["mass"], example="1.2 kg", label=_("Empty weight"), required=False),
        }
        self.fields.update(fields)


class CloseForm(WebForm):
    """The gross weight."""

    gross = AmountField(
        ["mass"], example="22.4 kg", label=_("Gross weight"), help_text=_("Container and contents, as the scale says.")
    )


class MayForm(WebForm):
    """Out of what?"""

    def __init__(self, sources: list[tuple[Any, str]], data: Any) -> None:
        super().__init__(data)
        self.fields["source"] = ThingField(
            sources, label=_("From"), missing=_("No tank yet. Set one up on the page Tanks first.")
        )


class ReceiverForm(WebForm):
    """Who takes waste containers."""

    name = LineField(label=_("Name"), max_length=120)
    address = LineField(label=_("Address"), required=False, lines=3)
    reference = LineField(
        label=_("Our number there"), required=False, max_length=60, help_text=_("Printed on the manifest.")
    )


class DropOffForm(WebForm):
    """A drop-off."""

    def __init__(self, member: Membership, today: date, data: Any = None, *, vessel: str = "") -> None:
        super().__init__(data, initial={"stock": [vessel]})
        receivers = [(receiver.uuid, receiver.name) for receiver in list_receivers_for(member)]
        self.ready = {str(row.vessel.uuid): row for row in list_ready_containers_for(member)}
        labels = [(key, f"{row.vessel.name} ({row.vessel.code}), {row.stream}") for key, row in self.ready.items()]
        stock = list_ready_stock_for(member, today, _uuids([vessel, *(data.getlist("stock") if data else [])]))
        self.ready_stock = {str(row.uuid): row for row, _why in stock}
        told = [(str(row.uuid), f"{row.name} ({row.code}): {why}") for row, why in stock]
        fields: dict[str, forms.Field] = {
            "receiver": ThingField(
                receivers, label=_("Receiver"), missing=_("No receiver yet. Add one on the page Drop-offs first.")
            ),
            "mode": WordField(Mode.choices, label=_("Brought or picked up"), initial=Mode.BROUGHT),
            "planned_for": DayField(label=_("Planned for"), initial=today),
        }
        if labels or not told:
            fields["containers"] = WordsField(labels, label=_("Closed containers"))
        if told:
            fields["stock"] = WordsField(
                told,
                label=_("Stock containers"),
                help_text=_("Empty ones that must not go any other way, and stock that has kept long enough."),
            )
        self.fields.update(fields)

    def containers(self) -> list[Any]:
        """Return the chosen containers."""
        return [self.ready[key] for key in self.cleaned_data.get("containers", ())]

    def stock(self) -> list[Vessel]:
        """Return the chosen stock containers."""
        return [self.ready_stock[key] for key in self.cleaned_data.get("stock", ())]


def _uuids(texts: Iterable[str]) -> list[UUID]:
    """Return those of the texts that may name a container; whatever else was sent names none."""
    found = []
    for text in texts:
        with suppress(ValueError):
            found.append(UUID(text))
    return found


class HandOverForm(WebForm):
    """When the containers went."""

    def __init__(self, member: Membership, data: Any = None) -> None:
        super().__init__(data)
        self.fields["occurred"] = MomentField(
            member.workshop.zone, label=_("When it was handed over"), help_text=_("Empty means now."), required=False
        )
