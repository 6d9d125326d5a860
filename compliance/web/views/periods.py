"""Closed periods: the list, one of them with its proof, closing, opening the last one again."""

from typing import Any
from urllib.parse import urlencode
from uuid import UUID

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseBase
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.books import events
from chemicals.books.fold.state import EVERY, root
from chemicals.journal.selectors import list_entries_for, read_event
from chemicals.ledger.components import dimension_of
from chemicals.ledger.models import ClosingHolding, Period
from chemicals.ledger.periods import close_period, reopen_period
from chemicals.ledger.selectors import (
    get_period_for,
    get_recomputed_to,
    list_closing_holdings_of,
    list_periods_for,
)  # fmt: skip
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_owner
from compliance.documents.words import grouped
from compliance.web import words
from compliance.web.contents import IN_FILES
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.period import CloseForm, ReopenForm, last_day_of, start_after
from compliance.web.views.acts import address, fill_in, sent

COLUMNS = (
    Column("from", lambda row: row.after and timezone.localdate(row.after)),
    Column("through", lambda row: last_day_of(row.until)),
    Column("closed", lambda row: row.closing.recorded_at),
    Column("by", lambda row: str(row.closing.member.user)),
    Column("state", lambda row: "superseded" if row.reopening else "closed"),
    Column("entry", lambda row: row.closing.sequence),
    Column("entries up to", lambda row: row.sequence),
    Column("fold version", lambda row: row.fold_version),
    Column("SHA-256 of what followed", lambda row: row.followed_sha256),
    Column("SHA-256 of what was held", lambda row: row.holdings_sha256),
)


def _in_file(row: ClosingHolding, base: int | None) -> object:
    return None if row.component.code == EVERY else IN_FILES[dimension_of(row.component.code)][1](base)


HOLDING_COLUMNS = (
    Column("vessel", lambda row: row.vessel.name),
    Column("code", lambda row: row.vessel.code),
    Column("what", lambda row: row.component.code or "anything else"),
    Column("unit", lambda row: IN_FILES[dimension_of(row.component.code)][0] if row.component.code else ""),
    Column("amount", lambda row: _in_file(row, row.amount)),
    Column("standard uncertainty", lambda row: None if row.amount is None else _in_file(row, root(row.variance))),
)


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List the closed periods, and say what closing and correcting mean."""
    periods = list_periods_for(member)
    file = wanted_file(request, periods=(COLUMNS, lambda: periods))
    return file or show(
        request,
        member,
        "web/periods.html",
        here="balance",
        periods=periods,
        correction=words.verb_of(events.Correction.KIND),
        recomputing=get_recomputed_to(member.workshop),
    )


@page("GET", "POST", need=require_owner)
def close(request: HttpRequest, member: Membership) -> HttpResponse:
    """Close the books through the end of a day."""

    def act(form: CloseForm) -> str:
        said = form.cleaned_data
        made = close_period(actor=member, now=timezone.now(), key=said["key"], until=start_after(said["until"]))
        messages.success(request, _("Closed. What followed from its entries is proved by two hashes."))
        return address("period", member, made.closing.uuid)

    intro = _(
        "A closed period takes no more entries of matter: an error found later is set right by a correction. "
        "Only an owner can open the last one again."
    )
    texts = {"heading": _("Close a period"), "button": _("Close it"), "intro": intro}
    return fill_in(
        request, member, CloseForm(sent(request)), act, here="balance", back=address("periods", member), **texts
    )


@page()
def period(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponseBase:
    """Show a closed period: its proof, who closed it, and what every vessel held at its end."""
    found = get_period_for(member, uuid)
    holdings = list_closing_holdings_of(found)
    about = str(last_day_of(found.until))
    file = wanted_file(request, about=about, closing_holdings=(HOLDING_COLUMNS, lambda: holdings))
    return file or show(
        request,
        member,
        "web/period.html",
        here="balance",
        period=found,
        followed=grouped(found.followed_sha256),
        held=grouped(found.holdings_sha256),
        holdings=[_tell(row) for row in holdings],
        reason=_reason(found),
        is_last=found == list_periods_for(member).filter(reopening=None).first(),
        query=_days(member, found),
        recomputing=get_recomputed_to(member.workshop),
    )


def _tell(row: ClosingHolding) -> dict[str, Any]:
    code = row.component.code
    amount = str(words.UNKNOWN) if code == EVERY else words.with_uncertainty(row.amount, root(row.variance), code)
    return {"vessel": row.vessel, "what": words.component_name(code), "amount": amount}


def _reason(found: Period) -> str:
    """Return why the period was opened again; empty if it was not."""
    event = None if found.reopening is None else read_event(found.reopening)
    return event.reason if isinstance(event, events.PeriodReopening) else ""


def _days(member: Membership, found: Period) -> str:
    """Return the days of the period as the pages of balances ask for them; the first begins with the first entry."""
    first = list_entries_for(member).order_by("occurred_at").values_list("occurred_at", flat=True).first()
    until = last_day_of(found.until)
    since = until if first is None else min(until, timezone.localdate(first))
    return urlencode({"since": str(timezone.localdate(found.after) if found.after else since), "until": str(until)})


@page("GET", "POST", need=require_owner)
def reopen(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Open the last closed period again."""
    found = get_period_for(member, uuid)

    def act(form: ReopenForm) -> str:
        said = form.cleaned_data
        reopen_period(actor=member, now=timezone.now(), key=said["key"], period=found, reason=said["reason"])
        messages.success(request, _("Open again. What was proved at its closing stays, marked superseded."))
        return address("period", member, uuid)

    texts = {
        "heading": _("Open the period through %(day)s again") % {"day": last_day_of(found.until)},
        "intro": _("Its entries can be cancelled and late ones recorded, until it is closed again."),
        "button": _("Open it again"),
    }
    back = address("period", member, uuid)
    return fill_in(request, member, ReopenForm(sent(request)), act, here="balance", back=back, **texts)
