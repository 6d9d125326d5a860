"""The balance of a metal over a period: table, per vessel, flow picture."""

from datetime import date, timedelta
from typing import Any
from urllib.parse import urlencode

from django.http import HttpRequest, HttpResponseBase
from django.utils import timezone

from chemicals.balance.selectors import BookBalance, get_book_balance, list_metals_for
from chemicals.science.formula import element_name
from chemicals.workshop.models import Membership
from compliance.web import words
from compliance.web.door import page, show
from compliance.web.export import Column, grams, wanted_file
from compliance.web.filters import PeriodForm, start_of
from compliance.web.picture import draw_narrow, draw_wide
from compliance.web.statement import lines_of, verdict_of

COLUMNS = (
    Column("what", lambda row: row.key),
    Column("amount (g)", lambda row: grams(row.value)),
    Column("standard uncertainty (g)", lambda row: grams(row.sd)),
)
FLOW_COLUMNS = (
    Column("from", lambda flow: words.end_name(flow.source)),
    Column("to", lambda flow: words.end_name(flow.target)),
    Column("amount (g)", lambda flow: grams(flow.amount.value)),
    Column("standard uncertainty (g)", lambda flow: grams(flow.amount.sd)),
)
VESSEL_COLUMNS = (
    Column("vessel", lambda row: row.vessel.name),
    Column("code", lambda row: row.vessel.code),
    Column("at the beginning (g)", lambda row: grams(row.opening.value)),
    Column("uncertainty at the beginning (g)", lambda row: grams(row.opening.sd)),
    Column("came (g)", lambda row: grams(row.received)),
    Column("went (g)", lambda row: grams(row.given)),
    Column("at the end (g)", lambda row: grams(row.closing.value)),
    Column("uncertainty at the end (g)", lambda row: grams(row.closing.sd)),
)


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """Show the balance of a metal, this year so far unless another period is chosen."""
    metals = list_metals_for(member)
    today = timezone.localdate()
    data = {"metal": metals[0] if metals else "", "since": date(today.year, 1, 1).isoformat(), "until": str(today)}
    form = PeriodForm([(symbol, f"{element_name(symbol)} ({symbol})") for symbol in metals], data | request.GET.dict())
    if not metals:
        return show(request, member, "web/balance.html", here="balance", form=None)
    if not form.is_valid():
        return show(request, member, "web/balance.html", here="balance", form=form, status=400)
    chosen = form.cleaned_data
    end = start_of(chosen["until"] + timedelta(days=1))
    balance = get_book_balance(member, chosen["metal"], start_of(chosen["since"]), end)
    file = wanted_file(
        request,
        about=f"{chosen['metal']}-{chosen['since']}-{chosen['until']}",
        balance=(COLUMNS, lambda: lines_of(balance)),
        flows=(FLOW_COLUMNS, lambda: balance.flows),
        vessels=(VESSEL_COLUMNS, lambda: balance.vessels),
    )
    more = {**_context(balance), **_kept(form)}
    return file or show(request, member, "web/balance.html", here="balance", form=form, **more)


def _context(balance: BookBalance) -> dict[str, Any]:
    return {
        "balance": balance,
        "name": element_name(balance.component),
        "lines": lines_of(balance),
        "verdict": verdict_of(balance),
        "wide": draw_wide(balance),
        "narrow": draw_narrow(balance),
    }


def _kept(form: PeriodForm) -> dict[str, Any]:
    kept = {name: str(value) for name, value in form.cleaned_data.items()}
    return {"kept": kept, "query": urlencode(kept)}
