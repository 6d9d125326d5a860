"""Entries: the list, and everything about one of them."""

from collections.abc import Iterator
from itertools import islice
from typing import Any
from uuid import UUID

from django.core.paginator import Paginator
from django.db.models import QuerySet
from django.http import HttpRequest, HttpResponseBase
from django.utils import timezone

from chemicals.books import events
from chemicals.books.canonical import Body
from chemicals.journal.models import Entry
from chemicals.journal.selectors import (
    find_neighbours,
    get_entry_for,
    get_head,
    list_attachments_of,
    list_related_to,
    read_body,
)
from chemicals.ledger.search import Search, find_entries
from chemicals.ledger.selectors import get_recomputed_to, list_findings_for, list_transfers_of
from chemicals.process.inputs import INPUTS
from chemicals.workshop.models import Membership
from compliance.documents.books import BOOKS
from compliance.documents.export import FORMATS, send
from compliance.documents.words import grouped
from compliance.web import words
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.entries import EntriesForm
from compliance.web.recorded import Teller
from compliance.web.rows import EntryRow, entry_rows, names_of
from compliance.web.words import Ends

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
UNCANCELLED = (
    events.Cancellation.KIND, events.Paper.KIND, events.PeriodClosing.KIND, events.PeriodReopening.KIND,
)  # fmt: skip
"""Kinds that cannot be cancelled."""
RECORDABLE = [(verb, data.title) for verb, data in INPUTS.items()]


BATCH = 500
"""How many entries of a file are read at once."""


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List entries, newest record first."""
    form = EntriesForm(member, request.GET)
    if not form.is_valid():
        return show(request, member, "web/entries.html", here="entries", status=400, form=form, verbs=RECORDABLE)
    found = find_entries(member, form.search)
    file = wanted_file(request, entries=(COLUMNS, lambda: _all_rows(member, found)))
    if file is not None:
        return file
    listed = Paginator(found, PER_PAGE).get_page(request.GET.get("page"))
    context: dict[str, Any] = {
        "form": form,
        "listed": listed,
        "rows": entry_rows(member, listed.object_list),
        "kept": form.kept,
        "verbs": RECORDABLE,
    }
    return show(request, member, "web/entries.html", here="entries", **context)


def _all_rows(member: Membership, found: QuerySet[Entry]) -> Iterator[EntryRow]:
    """Yield entries as lines, reading some at a time."""
    entries = found.iterator(chunk_size=BATCH)
    while batch := list(islice(entries, BATCH)):
        yield from entry_rows(member, batch)


@page()
def entry(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponseBase:
    """Show an entry: as recorded, what followed, what later ones say of it, its place in the chain."""
    found = get_entry_for(member, uuid)
    ending = request.GET.get("as", "")
    if ending in FORMATS:
        return send(BOOKS["journal"](member, Search(entry=uuid), timezone.now()), ending, about=str(found.sequence))
    body, ends = read_body(found), names_of(member)
    context = {**_recorded(found, body, ends), **_followed(member, found, body, ends), **_history(member, found)}
    chain: dict[str, Any] = {
        "attachments": list_attachments_of(found, body.attachments),
        "hash": grouped(bytes(found.hash).hex()),
        "previous_hash": grouped(bytes(found.previous_hash).hex()),
        "last": get_head(member.workshop)[0],
        "neighbours": find_neighbours(found),
    }
    return show(request, member, "web/entry.html", here="entries", entry=found, **context, **chain)


def _recorded(found: Entry, body: Body, ends: Ends) -> dict[str, Any]:
    """Return what the entry says, in words."""
    teller = Teller(body.payload, ends, found.about.sequence if found.about else None)
    return {"observed": teller.observed(), "used": teller.used(), "clearance": body.clearance}


def _followed(member: Membership, found: Entry, body: Body, ends: Ends) -> dict[str, Any]:
    """Return what followed from the entry, in sentences."""
    event = events.decode(body.kind, body.kind_version, body.payload)
    recomputing = get_recomputed_to(member.workshop)
    return {
        "follows": words.Follows.from_event(event, list_transfers_of(found), ends),
        "findings": words.findings(list_findings_for(member).filter(entry=found).order_by("pk"), ends),
        "pending": recomputing is not None and recomputing.until <= found.occurred_at,
    }


def _history(member: Membership, found: Entry) -> dict[str, Any]:
    """Return what the entry speaks of, and the later entries that speak of it."""
    rows = entry_rows(member, [found, *list_related_to(member, found)])
    row, *related = rows
    mentions = [each for each in related if each.entry.about_id == found.pk]
    cancelled_by = next((each for each in mentions if each.entry.kind == events.Cancellation.KIND), None)
    return {
        "row": row,
        "about": [each for each in related if each.entry.pk == found.about_id],
        "mentions": mentions,
        "cancelled_by": cancelled_by and cancelled_by.entry,
        "may_cancel": cancelled_by is None and found.kind not in UNCANCELLED,
        "may_accept": found.kind == events.Analysis.KIND and not mentions,
    }
