"""Entries: the list, and everything about one of them."""

from typing import Any
from uuid import UUID

from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse, HttpResponseBase

from chemicals.books import events
from chemicals.journal.selectors import get_entry_for, list_mentions_of, read_body
from chemicals.ledger.selectors import list_findings_for, list_transfers_of
from chemicals.process.inputs import INPUTS
from chemicals.workshop.models import Membership
from compliance.documents.words import grouped
from compliance.web import words
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.filters import EntryFilter
from compliance.web.rows import entry_rows, names_of, tell

PER_PAGE = 50
COLUMNS = (
    Column("sequence", lambda row: row.entry.sequence),
    Column("kind", lambda row: row.entry.kind),
    Column("happened", lambda row: row.entry.occurred_at),
    Column("precision", lambda row: row.entry.precision),
    Column("recorded", lambda row: row.entry.recorded_at),
    Column("summary", lambda row: row.summary),
    Column("by", lambda row: str(row.entry.member.user)),
    Column("clearance", lambda row: row.entry.verdict),
    Column("cancelled", lambda row: "yes" if row.cancelled else "no"),
    Column("uuid", lambda row: str(row.entry.uuid)),
    Column("hash", lambda row: bytes(row.entry.hash).hex()),
)
RECORDABLE = [(verb, data.title) for verb, data in INPUTS.items()]


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List entries, newest record first."""
    chosen = EntryFilter(member, request.GET)
    file = wanted_file(request, entries=(COLUMNS, lambda: entry_rows(member, chosen.qs)))
    if file is not None:
        return file
    listed = Paginator(chosen.qs, PER_PAGE).get_page(request.GET.get("page"))
    kept = request.GET.copy()
    kept.pop("page", None)
    context: dict[str, Any] = {
        "form": chosen.form,
        "listed": listed,
        "rows": entry_rows(member, listed.object_list),
        "kept": kept.urlencode(),
        "verbs": RECORDABLE,
    }
    return show(request, member, "web/entries.html", here="entries", **context)


@page()
def entry(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Show an entry: as recorded, what followed, its place in the chain."""
    found = get_entry_for(member, uuid)
    body, ends = read_body(found), names_of(member)
    mentions = list(list_mentions_of(found))
    cancelled_by = next((row for row in mentions if row.kind == events.Cancellation.KIND), None)
    findings = list_findings_for(member).filter(entry=found)
    context: dict[str, Any] = {
        "row": entry_rows(member, [found])[0],
        "observed": tell(body.payload["observed"], ends),
        "used": tell(body.payload["used"], ends),
        "clearance": body.clearance,
        "attachments": body.attachments,
        "follows": words.Follows.of(list_transfers_of(found), ends),
        "findings": [words.finding(each, ends) for each in findings],
        "mentions": mentions,
        "cancelled_by": cancelled_by,
        "hash": grouped(bytes(found.hash).hex()),
        "previous_hash": grouped(bytes(found.previous_hash).hex()),
        "may_cancel": cancelled_by is None and found.kind not in (events.Cancellation.KIND, events.Paper.KIND),
    }
    return show(request, member, "web/entry.html", here="entries", **context)
