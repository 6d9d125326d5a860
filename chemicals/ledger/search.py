"""Which entries are looked for: by what they say, who recorded them, and what followed from them."""

import unicodedata
from dataclasses import dataclass, replace
from datetime import datetime
from functools import reduce
from operator import or_
from typing import Any
from uuid import UUID

from django.db.backends.base.base import BaseDatabaseWrapper
from django.db.models import Exists, Func, OuterRef, Q, QuerySet, Subquery, TextField
from django.db.models.lookups import Exact, IContains
from django.db.models.sql.compiler import SQLCompiler
from django_scopes import scope, scopes_disabled

from chemicals.books import events
from chemicals.journal.models import Entry
from chemicals.journal.selectors import list_entries_for, list_entries_naming
from chemicals.ledger.models import Component, Finding, Posting
from chemicals.workshop.models import Membership

OCCURRED, RECORDED = "occurred", "recorded"
BY = (OCCURRED, RECORDED)
"""By which of its two times an entry lies in a period."""

Compiled = tuple[str, tuple[str | int, ...]]
"""SQL and its parameters."""

TEXTS = {
    "parts": (events.Run.KIND,),
    "lot": (events.Receipt.KIND,),
    "receiver": (events.HandOver.KIND,),
    "reason": (events.Cancellation.KIND, events.Correction.KIND, events.PeriodReopening.KIND),
}
"""Fields of what was observed in which people write words of their own, and the kinds that have them."""


@dataclass(frozen=True)
class Search:
    """Which entries are looked for: those that fit everything that is said here.

    ``entry`` is the uuid of the only one. ``component`` is a code: entries that moved it, found it, or analysed it.
    ``member`` is the uuid of who recorded; ``start`` <= time < ``end`` goes ``by`` when it happened or when it was
    recorded. ``text`` stands in one of TEXTS.
    """

    entry: UUID | None = None
    kind: str = ""
    vessel: UUID | None = None
    component: str = ""
    member: UUID | None = None
    verdict: str = ""
    start: datetime | None = None
    end: datetime | None = None
    by: str = OCCURRED
    text: str = ""
    findings: bool = False
    cancelled: bool = False


def find_entries(member: Membership, wanted: Search) -> QuerySet[Entry]:
    """Return the entries of the member's workshop that are looked for, newest record first. One query."""
    entries = list_entries_for(member) if wanted.vessel is None else list_entries_naming(member, wanted.vessel)
    with scope(workshop=member.workshop):
        return entries.filter(_by_columns(wanted), *_by_rows(wanted))


def find_postings(member: Membership, wanted: Search) -> QuerySet[Posting]:
    """Return what followed from the entries that are looked for, in order of recording. One query.

    Of a vessel or a component that is looked for only its own.
    """
    of_entries = replace(wanted, vessel=None, component="")
    with scope(workshop=member.workshop):
        postings = Posting.objects.order_by("entry__sequence", "transfer", "amount")
        if of_entries != Search():
            postings = postings.filter(entry__in=find_entries(member, of_entries).order_by().values("pk"))
        if wanted.vessel is not None:
            postings = postings.filter(vessel__uuid=wanted.vessel)
        return postings.filter(component__code=wanted.component) if wanted.component else postings


def _by_columns(wanted: Search) -> Q:
    """Return what the entry's own columns must say."""
    time = "recorded_at" if wanted.by == RECORDED else "occurred_at"
    said = {
        "uuid": wanted.entry,
        "kind": wanted.kind,
        "member__uuid": wanted.member,
        "verdict": wanted.verdict,
        f"{time}__gte": wanted.start,
        f"{time}__lt": wanted.end,
    }
    return Q(**{name: value for name, value in said.items() if value})


def _by_rows(wanted: Search) -> list[Q]:
    """Return what must stand in other rows, or inside the entry.

    Rows of an entry are of its workshop. That is not asked again: it would lead a query to the rows of a workshop, or
    of a component, in place of the few of an entry.
    """
    mine, found = {"entry": OuterRef("pk")}, []
    component = Subquery(Component.objects.filter(code=wanted.component).values("pk")[:1])
    with scopes_disabled():
        if wanted.component:
            moved = Q(Exists(Posting.objects.filter(**mine, component=component)))
            noted = Q(Exists(Finding.objects.filter(**mine, component=wanted.component)))
            found.append(moved | noted | _analysed(wanted.component))
        if wanted.text:
            found.append(_says(unicodedata.normalize("NFC", wanted.text)))
        if wanted.findings:
            found.append(Q(Exists(Finding.objects.filter(**mine))))
        if wanted.cancelled:
            found.append(Q(Exists(Entry.objects.filter(about=OuterRef("pk"), kind=events.Cancellation.KIND))))
    return found


def _analysed(component: str) -> Q:
    return Q(Exact(Observed("component"), component), kind=events.Analysis.KIND)


def _says(text: str) -> Q:
    says = [Q(IContains(Observed(field), text), kind__in=kinds) for field, kinds in TEXTS.items()]
    return reduce(or_, says)


class Observed(Func):
    """A field of what was observed, as text, read from the entry's bytes."""

    output_field = TextField()

    def __init__(self, field: str) -> None:
        super().__init__("body")
        self.named = field

    def as_sqlite(self, compiler: SQLCompiler, connection: BaseDatabaseWrapper, **_context: Any) -> Compiled:
        body, params = compiler.compile(self.get_source_expressions()[0])
        return f"JSON_EXTRACT(CAST({body} AS TEXT), %s)", (*params, f"$.payload.observed.{self.named}")

    def as_postgresql(self, compiler: SQLCompiler, connection: BaseDatabaseWrapper, **_context: Any) -> Compiled:
        body, params = compiler.compile(self.get_source_expressions()[0])
        path = f"{{payload,observed,{self.named}}}"
        return f"(CONVERT_FROM({body}, 'UTF8')::jsonb #>> %s::text[])", (*params, path)
