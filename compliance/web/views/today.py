"""Today: what happened last, what is full, what must be looked at."""

from django.http import HttpRequest, HttpResponse
from django.utils import timezone

from chemicals.journal.selectors import list_entries_for, list_incidents_for
from chemicals.ledger.selectors import get_recomputed_to, list_findings_for
from chemicals.process.counting.selectors import list_open_counts_for
from chemicals.process.selectors import list_open_analyses_for
from chemicals.workshop.models import Membership
from compliance.premises.empties import list_empties_for
from compliance.premises.expiry import list_running_out
from compliance.waste.selectors import list_filling_for
from compliance.web import words
from compliance.web.door import page, show
from compliance.web.rows import ends_of, entry_rows
from compliance.web.views.places import list_for_today

LAST = 8
"""How many entries, findings and violations the first page shows."""
MOST_RUNNING_OUT = 10


@page()
def today(request: HttpRequest, member: Membership) -> HttpResponse:
    """Show the first page of a workshop."""
    ends = ends_of(member)
    findings = list(list_findings_for(member)[:LAST])
    empties = list_empties_for(member)
    return show(
        request,
        member,
        "web/today.html",
        here="today",
        rows=entry_rows(member, list_entries_for(member)[:LAST]),
        incidents=entry_rows(member, list_incidents_for(member)[:LAST]),
        findings=[(found.entry, words.finding(found, ends)) for found in findings],
        analyses=[(entry, event, ends.name(event.vessel)) for entry, event in list_open_analyses_for(member)],
        filling=list_filling_for(member),
        running_out=list_running_out(member, timezone.localdate(), MOST_RUNNING_OUT),
        wasted=sum(each.stays_waste for each in empties),
        asked=sum(each.must_ask for each in empties),
        counts=list_open_counts_for(member),
        **list_for_today(member, LAST),
        recomputing=get_recomputed_to(member.workshop),
    )
