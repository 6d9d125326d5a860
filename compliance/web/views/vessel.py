"""The page of a vessel: what it holds, and what is done most at a bench."""

from uuid import UUID

from django.http import HttpRequest, HttpResponse, HttpResponseRedirect

from chemicals.journal.selectors import list_entries_naming
from chemicals.ledger.models import VesselKind
from chemicals.ledger.selectors import get_recomputed_to, get_vessel_for, read_contents
from chemicals.process.selectors import find_last_run, get_tank_of, list_open_analyses_for
from chemicals.science.reactivity import REACTS_AS
from chemicals.workshop.models import Membership
from compliance.clearance.selectors import react_as
from compliance.premises.selectors import list_labels_of
from compliance.web.bench import list_bench, list_groups
from compliance.web.door import page, show
from compliance.web.rows import entry_rows
from compliance.web.views.acts import address

LAST = 10
"""How many entries the page of a vessel shows."""


@page()
def vessel(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Show a vessel; the code on it opens this page."""
    found = get_vessel_for(member, uuid)
    if found.kind == VesselKind.WASTE:
        return HttpResponseRedirect(address("waste-container", member, found.uuid))
    return show(
        request,
        member,
        "web/vessel.html",
        here="register" if found.kind == VesselKind.STOCK else "tanks",
        recomputing=get_recomputed_to(member.workshop),
        vessel=found,
        tank=get_tank_of(found),
        contents=read_contents(found),
        reacts_as=[REACTS_AS[kind] for kind in sorted(react_as(found))],
        bench=list_bench(found),
        groups=list_groups(found),
        again=find_last_run(member, found),
        analyses=[pair for pair in list_open_analyses_for(member) if pair[1].vessel == str(found.uuid)],
        papers=list_labels_of(found, member),
        rows=entry_rows(member, list_entries_naming(member, found.uuid)[:LAST]),
    )
