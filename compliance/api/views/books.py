"""Vessels' ledgers, differences between two moments, closed periods, how far the books have come."""

from datetime import datetime
from typing import Any

from django.db.models import QuerySet
from django.utils.translation import gettext as _
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.balance.difference import Difference, get_differences_for
from chemicals.balance.selectors import Amount
from chemicals.books.events import VOLUME
from chemicals.ledger.components import dimension_of
from chemicals.ledger.models import Period
from chemicals.ledger.periods import close_period, reopen_period
from chemicals.ledger.running import VesselLedger, get_vessel_ledger, list_components_of
from chemicals.ledger.selectors import (
    get_closed_until,
    get_period_for,
    get_recomputed_to,
    get_vessel_for,
    list_closing_holdings_of,
    list_periods_for,
)  # fmt: skip
from chemicals.workshop.errors import InvalidInputError
from compliance.api.fields import EARLIEST
from compliance.api.keys import read_key
from compliance.api.pagination import NewestFirst
from compliance.api.serializers import books as shapes
from compliance.api.serializers.base import Estimate, With
from compliance.api.views.base import ListView, WorkshopView
from compliance.api.views.entries import begin, end, name_vessels, stands_to


def read_days(view: WorkshopView) -> tuple[datetime, datetime]:
    """Return the moments between which the query's days lie."""
    zone, said = view.member.workshop.zone, view.query
    first, last = said.get("start", EARLIEST), said.get("end", view.now.astimezone(zone).date())
    if last < first:
        raise InvalidInputError.of("end", _("The period ends before it begins. Write a later last day."))
    return begin(first, zone), end(last, zone)


class VesselLedgerView(WorkshopView):
    """A vessel's ledger of one component: what came and went, and what it held after each entry."""

    shape, query_class = shapes.VesselLedgerShape, shapes.VesselLedgerQuery

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return a page; of what it holds most of, unless a component is asked for."""
        vessel, days = get_vessel_for(self.member, kwargs["uuid"]), read_days(self)
        component = self.query.get("component") or next((row.component for row in list_components_of(vessel)), VOLUME)
        ledger = get_vessel_ledger(vessel, component, *days, page=self.query.get("page", 1))
        return self.respond(
            With(ledger, **_measured(ledger), stands_to=stands_to(self.member)), vessels=name_vessels(self.member)
        )


def _measured(ledger: VesselLedger) -> dict[str, Any]:
    """Return the parts of a ledger whose figures need the component's dimension."""
    dimension = dimension_of(ledger.component)
    lines = [
        With(
            line,
            movements=[
                {"amount": Estimate(each.amount, each.sd, dimension), "end": each.end, "basis": each.basis}
                for each in line.movements
            ],
        )
        for line in ledger.lines
    ]
    came, went = (Estimate(amount, 0, dimension) for amount in (ledger.came, ledger.went))
    return {"came": came, "went": went, "lines": lines}


class DifferencesView(WorkshopView):
    """The difference between the beginning of one day and the end of another, and what explains it."""

    shape, query_class = shapes.DifferencesShape, shapes.DaysQuery

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return it for every component, or for the one that is asked for."""
        days = read_days(self)
        found = get_differences_for(self.member, *days, self.query.get("component"))
        said = {"start": days[0], "end": days[1], "differences": [_difference(each) for each in found]}
        return self.respond({**said, "stands_to": stands_to(self.member)})


def _difference(found: Difference) -> With:
    """Return a difference whose figures know their component's dimension."""

    def figure(amount: Amount | int | None) -> Estimate:
        known = amount if isinstance(amount, Amount) else Amount(amount, 0)
        return Estimate(known.value, known.sd, dimension_of(found.component))

    def told(row: object, *names: str, **more: Any) -> With:
        return With(row, **{name: figure(getattr(row, name)) for name in names}, **more)

    explained = [told(row, "amount", "booked") for row in found.explained]
    vessels = [told(row, "before", "came", "went", "after", "value") for row in found.vessels]
    return told(found, "before", "after", "value", "booked", explained=explained, vessels=vessels)


class BooksView(WorkshopView):
    """How far the books have come, and up to when they are closed."""

    shape = shapes.BooksShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return it."""
        workshop = self.member.workshop
        behind = get_recomputed_to(workshop)
        return self.respond(
            {
                "closed_until": get_closed_until(workshop),
                "stands_to": behind and behind.until,
                "done": behind.done if behind else 0,
                "total": behind.total if behind else 0,
                "failed": behind is not None and behind.failed,
            }
        )


class PeriodsView(ListView):
    """Closed periods, the latest closing first. A POST closes one."""

    shape, input_class, pagination_class = shapes.PeriodShape, shapes.PeriodInput, NewestFirst
    needs_key = True

    def rows(self) -> QuerySet[Period]:
        """Return the periods, those that were opened again too."""
        return list_periods_for(self.member)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Close the books for everything before a day; the same key closes once."""
        key, said = read_key(request), self.read_body(request)
        until = begin(said["until"], self.member.workshop.zone)
        made = close_period(actor=self.member, now=self.now, key=key, until=until)
        return self.respond(get_period_for(self.member, made.closing.uuid), 201)


class PeriodView(WorkshopView):
    """One closed period with its proof, and what every vessel held at its end."""

    shape = shapes.PeriodDetail

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the period."""
        found = get_period_for(self.member, kwargs["uuid"])
        return self.respond(With(found, holdings=list_closing_holdings_of(found)))


class ReopenView(WorkshopView):
    """Opens the last closed period again; what proved it stays, superseded."""

    shape, input_class, statuses, needs_key = shapes.PeriodShape, shapes.ReopenInput, (200,), True

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Open it; the same key changes nothing more."""
        key, said = read_key(request), self.read_body(request)
        found = get_period_for(self.member, kwargs["uuid"])
        reopen_period(actor=self.member, now=self.now, key=key, period=found, reason=said["reason"])
        return self.respond(get_period_for(self.member, kwargs["uuid"]))
