"""The balance of a metal over a period: table, per vessel, flow picture."""

from typing import Any
from urllib.parse import urlencode

from django.http import HttpRequest, HttpResponseBase

from chemicals.balance.selectors import BookBalance, find_main_metal_for, get_book_balance, list_metals_for
from chemicals.ledger.selectors import get_recomputed_to
from chemicals.science.formula import element_name
from chemicals.workshop.models import Membership
from compliance.web import words
from compliance.web.door import page, show
from compliance.web.export import Column, grams, wanted_file
from compliance.web.forms.period import MetalForm
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
    if not metals:
        return show(request, member, "web/balance.html", here="balance", form=None)
    choices = [(symbol, f"{element_name(symbol)} ({symbol})") for symbol in metals]
    form = MetalForm(choices, find_main_metal_for(member) or "", request.GET.dict())
    if not form.is_valid():
        return show(request, member, "web/balance.html", here="balance", form=form, status=400)
    chosen = form.cleaned_data
    balance = get_book_balance(member, chosen["metal"], *form.moments)
    file = wanted_file(
        request,
        about=f"{chosen['metal']}-{chosen['since']}-{chosen['until']}",
        balance=(COLUMNS, lambda: lines_of(balance)),
        flows=(FLOW_COLUMNS, lambda: balance.flows),
        vessels=(VESSEL_COLUMNS, lambda: balance.vessels),
    )
    more = {**_context(member, balance), "kept": form.kept, "query": urlencode(form.kept)}
    return file or show(request, member, "web/balance.html", here="balance", form=form, **more)


def _context(member: Membership, balance: BookBalance) -> dict[str, Any]:
    return {
        "recomputing": get_recomputed_to(member.workshop),
        "balance": balance,
        "name": element_name(balance.component),
        "lines": lines_of(balance),
        "verdict": verdict_of(balance),
        "wide": draw_wide(balance),
        "narrow": draw_narrow(balance),
    }
