"""The form that looks for entries: it makes an address that can be kept."""

from collections.abc import Iterable
from datetime import timedelta
from typing import Any
from urllib.parse import urlencode

from django.forms.boundfield import BoundField
from django.http import QueryDict
from django.utils.translation import gettext_lazy as _

from chemicals.ledger.search import OCCURRED, RECORDED, Search
from chemicals.ledger.selectors import list_components_for, list_vessels_for
from chemicals.workshop.models import Membership
from chemicals.workshop.selectors import list_members_for
from compliance.web.forms.base import Shown
from compliance.web.forms.fields import DayField, FlagField, LineField, ThingField, WordField
from compliance.web.forms.period import start_of
from compliance.web.words import KINDS, VERDICTS, component_name

FIRST = ("kind", "vessel", "since", "until")
"""What is asked most; the rest stands behind a fold."""
TIMES = [(RECORDED, _("when it was recorded"))]


class EntriesForm(Shown):
    """Which entries to show. Whatever is left empty does not matter."""

    def __init__(self, member: Membership, data: QueryDict) -> None:
        super().__init__(data)
        vessels = list_vessels_for(member).values_list("uuid", "name")
        people = ((row.uuid, str(row.user)) for row in list_members_for(member))
        components = [(code, component_name(code)) for code in list_components_for(member)]
        optional: dict[str, Any] = {"required": False}
        self.fields |= {
            "kind": WordField(KINDS.items(), label=_("Kind"), empty=_("all kinds"), **optional),
            "vessel": ThingField(vessels, label=_("Vessel"), empty=_("all vessels"), **optional),
            "since": DayField(label=_("From"), **optional),
            "until": DayField(label=_("Through"), **optional),
            "by": WordField(TIMES, label=_("Days are those"), empty=_("when it happened"), **optional),
            "component": WordField(components, label=_("Metal or substance"), empty=_("all"), **optional),
            "person": ThingField(people, label=_("Recorded by"), empty=_("everybody"), **optional),
            "verdict": WordField(VERDICTS.items(), label=_("May this be done?"), empty=_("any answer"), **optional),
            "text": LineField(
                label=_("Words"), help_text=_("In parts, lot, receiver or reason."), max_length=80, **optional
            ),
            "findings": FlagField(label=_("only with findings")),
            "cancelled": FlagField(label=_("only cancelled ones")),
        }

    @property
    def first(self) -> list[BoundField]:
        """Return the fields that are asked most."""
        return [self[name] for name in FIRST]

    @property
    def rest(self) -> list[BoundField]:
        """Return the other fields."""
        return [self[name] for name in self.fields if name not in FIRST]

    @property
    def uses_rest(self) -> bool:
        """Say whether any of the other fields is used, or wrong."""
        return any(field.value() or field.errors for field in self.rest)

    @property
    def kept(self) -> str:
        """Return what was chosen as an address keeps it, whether it can be read or not."""
        pairs: Iterable[tuple[str, Any]] = ((name, self.data.get(name)) for name in self.fields)
        return urlencode([(name, value) for name, value in pairs if value])

    @property
    def search(self) -> Search:
        """Return what is looked for; a field that cannot be read does not count."""
        said = self.cleaned_data
        since, until = said.get("since"), said.get("until")
        return Search(
            kind=said.get("kind", ""),
            vessel=said.get("vessel"),
            component=said.get("component", ""),
            member=said.get("person"),
            verdict=said.get("verdict", ""),
            start=since and start_of(since),
            end=until and start_of(until + timedelta(days=1)),
            by=said.get("by") or OCCURRED,
            text=said.get("text") or "",
            findings=bool(said.get("findings")),
            cancelled=bool(said.get("cancelled")),
        )

    def clean(self) -> dict[str, Any]:
        cleaned: dict[str, Any] = super().clean() or self.cleaned_data
        if cleaned.get("since") and cleaned.get("until") and cleaned["until"] < cleaned["since"]:
            self.add_error("until", _("The period ends before it begins. Turn the two days round."))
        return cleaned
