"""Forms of what is cared for without anything being poured: name, place, when it was opened, until when it keeps."""

from typing import Any

from django import forms
from django.utils.translation import gettext_lazy as _

from chemicals.ledger.care import CONTAINERS, KEEP, CareInput, Keep
from chemicals.ledger.models import Vessel
from chemicals.ledger.naming import LONGEST
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.selectors import get_place_for
from compliance.web.forms.base import WebForm
from compliance.web.forms.fields import DayField, FlagField, LineField
from compliance.web.forms.register import place_field


class CareForm(WebForm):
    """What of a vessel may change without anything being poured."""

    def __init__(self, member: Membership, vessel: Vessel, data: Any = None) -> None:
        names = ("name", "opened_on", "expires_on")
        place = "" if vessel.place is None else str(vessel.place.uuid)
        super().__init__(data, initial={"place": place, **{name: getattr(vessel, name) for name in names}})
        self.member = member
        self.fields["name"] = LineField(label=_("Name"), max_length=LONGEST, help_text=_("As written on it."))
        self.fields["place"] = place_field(member)
        if vessel.kind in CONTAINERS:
            self.fields["opened_on"] = DayField(label=_("Opened on"), required=False)
            self.fields["expires_on"] = DayField(label=_("Keeps until"), required=False)

    def to_care(self) -> CareInput:
        """Return everything as it stands in the form; what is as it was changes nothing."""
        said = {**self.cleaned_data}
        chosen = said.pop("place")
        return CareInput(place=chosen and get_place_for(self.member, chosen), **said)


class ManyForm(WebForm):
    """What changes of many containers alike: each is set, taken away, or stays as it is."""

    facts = ("place", "opened_on", "expires_on")

    def __init__(self, member: Membership, data: Any = None) -> None:
        super().__init__(data)
        self.member = member
        stays = _("Empty: stays as it is.")
        shown: dict[str, forms.Field] = {
            "place": place_field(member),
            "no_place": FlagField(label=_("No place any more")),
            "opened_on": DayField(label=_("Opened on"), required=False),
            "no_opened_on": FlagField(label=_("Not opened after all")),
            "expires_on": DayField(label=_("Keeps until"), required=False),
            "no_expires_on": FlagField(label=_("No day until which it keeps")),
        }
        for name in self.facts:
            shown[name].help_text = stays
        self.fields.update(shown)

    def clean(self) -> dict[str, Any]:
        """Refuse what is set and taken away at once, and a form in which nothing is said."""
        said: dict[str, Any] = super().clean() or self.cleaned_data
        for name in self.facts:
            if said.get(name) and said.get(f"no_{name}"):
                self.add_error(name, _("This is set and taken away at once. Leave one out."))
        if not any(said.values()) and not self.errors:
            self.add_error(None, _("Nothing is said. Write what shall change."))
        return said

    def to_care(self) -> CareInput:
        """Return what shall change."""
        place: Place | Keep | None = self._said("place")
        if place is not None and place is not KEEP:
            place = get_place_for(self.member, self.cleaned_data["place"])
        return CareInput(place=place, opened_on=self._said("opened_on"), expires_on=self._said("expires_on"))

    def _said(self, name: str) -> Any:
        if self.cleaned_data[f"no_{name}"]:
            return None
        return self.cleaned_data[name] or KEEP
