"""Entries of the journal and the book balance."""

from collections.abc import Mapping
from datetime import UTC, date, datetime, time, timedelta
from typing import Any
from zoneinfo import ZoneInfo

from django.db.models import QuerySet
from django.utils.translation import gettext as _
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.balance.selectors import get_book_balance, list_metals_for
from chemicals.journal.models import Entry
from chemicals.journal.selectors import find_cancelled, get_entry_for, read_body
from chemicals.ledger.search import Search, find_entries
from chemicals.ledger.selectors import get_recomputed_to, list_findings_for, list_postings_of, list_vessels_for
from chemicals.workshop.errors import InvalidInputError
from chemicals.workshop.models import Membership
from compliance.api.fields import EARLIEST
from compliance.api.pagination import EntryCursor
from compliance.api.serializers import entries as shapes
from compliance.api.serializers.base import With
from compliance.api.views.base import ListView, WorkshopView


def begin(day: date, zone: ZoneInfo) -> datetime:
    """Return the moment at which a day begins in a zone."""
    return datetime.combine(day, time(), zone).astimezone(UTC)


def end(day: date, zone: ZoneInfo) -> datetime:
    """Return the moment at which a day ends in a zone, which is not part of it."""
    return begin(day + timedelta(days=1), zone)


def name_vessels(member: Membership) -> dict[str, str]:
    """Return the names of all vessels by their identifiers. One query."""
    return {str(uuid): name for uuid, name in list_vessels_for(member).values_list("uuid", "name")}


def stands_to(member: Membership) -> datetime | None:
    """Return up to when the books stand; None if they say all. One query."""
    found = get_recomputed_to(member.workshop)
    return None if found is None else found.until


def read_entry(entry: Entry, member: Membership) -> tuple[With, dict[str, Any]]:
    """Return an entry with its body and what followed from it, and the context that its shape needs."""
    whole = With(
        entry,
        said=read_body(entry),
        postings=list_postings_of(entry),
        findings=list_findings_for(member).filter(entry=entry),
    )
    return whole, {"vessels": name_vessels(member), "cancelled": find_cancelled([entry])}


def read_search(said: Mapping[str, Any], zone: ZoneInfo) -> Search:
    """Return what a query looks for."""
    names = ("kind", "vessel", "component", "member", "verdict", "by", "text", "findings", "cancelled")
    found = {name: said[name] for name in names if name in said}
    if "start" in said:
        found["start"] = begin(said["start"], zone)
    if "end" in said:
        found["end"] = end(said["end"], zone)
    return Search(**found)


class EntriesView(ListView):
    """All entries, the latest record first."""

    shape, query_class, pagination_class = shapes.EntryShape, shapes.EntryQuery, EntryCursor

    def rows(self) -> QuerySet[Entry]:
        """Return the entries that the query asks for."""
        return find_entries(self.member, read_search(self.query, self.member.workshop.zone))

    def list(self, request: Request, *args: Any, **kwargs: Any) -> Response:
        """Return one page, with what was cancelled since."""
        page = self.paginate_queryset(self.get_queryset()) or []
        rows = self.shape(page, many=True, context={"cancelled": find_cancelled(page)})
        return self.get_paginated_response(rows.data)


class EntryView(WorkshopView):
    """One entry with its body, what proves it, and what followed from it."""

    shape = shapes.EntryDetail

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the entry."""
        whole, context = read_entry(get_entry_for(self.member, kwargs["uuid"]), self.member)
        return self.respond(whole, **context)


class BalanceView(WorkshopView):
    """The book balance of one metal over whole days: where every gram went, by the entries."""

    shape, query_class = shapes.BalanceShape, shapes.BalanceQuery

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the balance."""
        zone = self.member.workshop.zone
        first, last = self.query.get("start", EARLIEST), self.query.get("end", self.now.astimezone(zone).date())
        if last < first:
            raise InvalidInputError.of("end", _("The period ends before it begins. Write a later last day."))
        found = get_book_balance(self.member, kwargs["metal"], begin(first, zone), end(last, zone))
        return self.respond(With(found, stands_to=stands_to(self.member)))


class MetalsView(WorkshopView):
    """The metals that the books know: each has a balance of its own."""

    shape = shapes.MetalsShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return their symbols."""
        return self.respond({"metals": list_metals_for(self.member)})
