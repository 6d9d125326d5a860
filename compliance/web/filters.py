"""Filters of lists: they make an address that can be kept."""

from datetime import timedelta
from typing import Any

import django_filters
from django.db.models import QuerySet
from django.utils.translation import gettext_lazy as _

from chemicals.journal.models import Entry
from chemicals.journal.selectors import list_entries_for, list_entries_naming
from chemicals.ledger.selectors import list_vessels_for
from chemicals.workshop.models import Membership
from compliance.web.forms.base import Shown
from compliance.web.forms.fields import DayField, ThingField
from compliance.web.forms.period import start_of
from compliance.web.words import KINDS


class EntryFilterForm(Shown):
    """Kind, vessel, first and last day."""


class EntryFilter(django_filters.FilterSet):  # type: ignore[misc]  # the library ships no types
    """Entries by kind, vessel and day."""

    kind = django_filters.ChoiceFilter(choices=list(KINDS.items()), label=_("Kind"), empty_label=_("all kinds"))
    vessel = django_filters.Filter(label=_("Vessel"), method="naming")
    since = django_filters.DateFilter(label=_("From"), method="not_before")
    until = django_filters.DateFilter(label=_("Through"), method="not_after")

    class Meta:
        model = Entry
        form = EntryFilterForm
        fields: tuple[str, ...] = ()

    def __init__(self, member: Membership, data: Any) -> None:
        super().__init__(data, queryset=list_entries_for(member))
        self.member = member
        vessels = [(vessel.uuid, vessel.name) for vessel in list_vessels_for(member)]
        fields = self.form.fields
        fields["vessel"] = ThingField(vessels, label=_("Vessel"), required=False, empty=_("all vessels"))
        fields["since"] = DayField(label=_("From"), required=False)
        fields["until"] = DayField(label=_("Through"), required=False)

    def naming(self, entries: QuerySet[Entry], _name: str, value: Any) -> QuerySet[Entry]:
        """Keep the entries that name the vessel."""
        return entries.filter(pk__in=list_entries_naming(self.member, value).order_by().values("pk"))

    def not_before(self, entries: QuerySet[Entry], _name: str, value: Any) -> QuerySet[Entry]:
        """Keep what happened on this day or later."""
        return entries.filter(occurred_at__gte=start_of(value))

    def not_after(self, entries: QuerySet[Entry], _name: str, value: Any) -> QuerySet[Entry]:
        """Keep what happened on this day or earlier."""
        return entries.filter(occurred_at__lt=start_of(value + timedelta(days=1)))
