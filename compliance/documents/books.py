"""The books as files: the journal with what proves it, what followed from it, what vessels held at a moment.

Each file says at which end of the chain it was taken, and up to when the books were worked out then.
"""

import json
from collections.abc import Callable, Generator, Iterator, Mapping
from dataclasses import dataclass, fields
from datetime import datetime
from decimal import Decimal
from functools import cached_property
from itertools import chain, islice
from typing import Any, NamedTuple, TypeVar
from uuid import UUID

from django.db.models import Exists, OuterRef
from django.utils.translation import gettext as _
from django_scopes import scopes_disabled

from chemicals.books import events
from chemicals.books.fold.state import EVERY
from chemicals.journal.models import Entry
from chemicals.journal.selectors import get_head
from chemicals.ledger.components import dimension_of
from chemicals.ledger.dated import Balance, list_balances_before
from chemicals.ledger.search import Search, find_entries, find_postings
from chemicals.ledger.selectors import get_recomputed_to
from chemicals.workshop.errors import ConflictError
from chemicals.workshop.models import Membership, Workshop
from compliance.documents.export import Column, Table

Row = TypeVar("Row")
Rows = Generator[Row, None, None]

BATCH = 2000
"""How many rows are fetched at once."""

ATTEMPTS = 5
"""How often a file is begun anew because something was recorded at that moment."""

UNITS = {"mass": ("ug", "g"), "volume": ("nL", "mL"), "amount_of_substance": ("nmol", "mmol")}
"""Base unit and plain unit of each dimension; the plain one is a million of the other."""

MILLION = 10**6


@dataclass(frozen=True)
class Standing:
    """At which end of the chain a file was taken, and up to when the books were worked out (None: all of it)."""

    sequence: int
    hash: str
    until: datetime | None


def read_standing(workshop: Workshop) -> Standing:
    """Return how the books stand now. Two queries."""
    recomputing = get_recomputed_to(workshop)
    return Standing(*get_head(workshop), None if recomputing is None else recomputing.until)


def _take(workshop: Workshop, read: Callable[[], Rows[Row]]) -> tuple[Standing, Iterator[Row]]:
    """Return how the books stood when the rows were read, and the rows: nothing was recorded in between.

    A query goes on reading what was there when its first row was read.
    """
    for _attempt in range(ATTEMPTS):
        standing = read_standing(workshop)
        rows = read()
        first = list(islice(rows, 1))
        if read_standing(workshop) == standing:
            return standing, chain(first, rows)
        rows.close()
    raise ConflictError(_("Others are recording at this moment. Ask for the file again."))


def _about(name: str, workshop: Workshop, standing: Standing, wanted: Search, **more: str) -> dict[str, Any]:
    """Return what a file says of itself."""
    said = {field.name: getattr(wanted, field.name) for field in fields(wanted)}
    chosen = [f"{key} {_plain(value)}" for key, value in said.items() if value != getattr(Search(), key)]
    return {
        "list": name,
        "workshop": str(workshop),
        "workshop uuid": str(workshop.uuid),
        "chain head": standing.sequence,
        "chain hash": standing.hash,
        "books worked out": "all" if standing.until is None else f"before {_plain(standing.until)}",
        "only": ", ".join(chosen) or "everything",
        **more,
    }


def _plain(value: object) -> str:
    return value.isoformat() if isinstance(value, datetime) else str(value)


@dataclass(frozen=True)
class JournalRow:
    """An entry of the journal: its bytes, what they say, what proves them, and what is known beside them."""

    raw: bytes
    previous_hash: bytes
    hash: bytes
    by: str
    cancelled: bool

    @cached_property
    def body(self) -> dict[str, Any]:
        """Return what the bytes say, as plain values."""
        body: dict[str, Any] = json.loads(self.raw)
        return body

    def line(self) -> bytes:
        """Return the line of JSON lines: between ``{"body":`` and ``,"previous_hash":`` stand the bytes themselves."""
        hashes = f',"previous_hash":"{self.previous_hash.hex()}","hash":"{self.hash.hex()}"}}\n'
        return b'{"body":' + self.raw + hashes.encode()


def _said(name: str) -> Column:
    """Return a column of the body."""
    return Column(name.replace("_", " "), lambda row: row.body[name])


JOURNAL_COLUMNS = (
    *map(_said, ("format", "workshop", "sequence", "entry", "kind", "kind_version")),
    *map(_said, ("occurred_at", "precision", "recorded_at")),
    Column("recorded by", lambda row: row.by),
    _said("member"),
    Column("clearance", lambda row: row.body["clearance"]["verdict"]),
    Column("reasons", lambda row: " ".join(row.body["clearance"]["reasons"])),
    Column("cancelled", lambda row: "yes" if row.cancelled else "no"),
    Column("payload", lambda row: _compact(row.body["payload"])),
    Column("attachments", lambda row: " ".join(row.body["attachments"])),
    Column("previous hash", lambda row: row.previous_hash.hex()),
    Column("hash", lambda row: row.hash.hex()),
)


def _compact(payload: Any) -> str:
    """Return a payload in its canonical spelling."""
    return json.dumps(payload, ensure_ascii=False, sort_keys=True, separators=(",", ":"))


def make_journal(member: Membership, wanted: Search, _now: datetime) -> Table:
    """Return the entries that are looked for, in order of recording."""

    def read() -> Rows[JournalRow]:
        with scopes_disabled():  # what speaks of an entry is of its workshop
            later = Entry.objects.filter(about=OuterRef("pk"), kind=events.Cancellation.KIND)
        rows = find_entries(member, wanted).order_by("sequence").annotate(cancelled=Exists(later))
        names = ("body", "previous_hash", "hash", "member__user__name", "member__user__email", "cancelled")
        for body, previous, own, name, email, cancelled in rows.values_list(*names).iterator(BATCH):
            yield JournalRow(bytes(body), bytes(previous), bytes(own), name or email, cancelled)

    standing, rows = _take(member.workshop, read)
    return Table(
        "journal",
        JOURNAL_COLUMNS,
        rows,
        about=_about("journal", member.workshop, standing, wanted),
        line=lambda row: row.line(),
    )


class PostingRow(NamedTuple):
    """A posting with its entry and its end, as it is read."""

    sequence: int
    entry: UUID
    kind: str
    occurred_at: datetime
    precision: str
    transfer: int
    component: str
    component_kind: str
    vessel: UUID | None
    code: str | None
    name: str | None
    boundary: str
    amount: int
    sd: int
    basis: str


POSTING_FIELDS = (
    "entry__sequence", "entry__uuid", "entry__kind", "entry__occurred_at", "entry__precision", "transfer",
    "component__code", "component__kind", "vessel__uuid", "vessel__code", "vessel__name", "boundary", "amount", "sd",
    "basis",
)  # fmt: skip
"""What PostingRow has, as a query calls it."""


def _known_sd(row: PostingRow | Balance) -> int | None:
    return None if row.amount is None else row.sd


def _units(row: PostingRow | Balance) -> tuple[str, str]:
    return ("", "") if row.component == EVERY else UNITS[dimension_of(row.component)]


def _shown(base: int | None) -> Decimal | None:
    return None if base is None else Decimal(base) / MILLION


AMOUNT_COLUMNS = (
    Column("amount (base units)", lambda row: row.amount),
    Column("standard uncertainty (base units)", _known_sd),
    Column("base unit", lambda row: _units(row)[0]),
    Column("amount", lambda row: _shown(row.amount)),
    Column("standard uncertainty", lambda row: _shown(_known_sd(row))),
    Column("unit", lambda row: _units(row)[1]),
)
"""An amount with its uncertainty: in base units, and in grams, millilitres or millimoles."""

POSTING_COLUMNS = (
    Column("sequence", lambda row: row.sequence),
    Column("entry", lambda row: row.entry),
    Column("kind", lambda row: row.kind),
    Column("happened", lambda row: row.occurred_at),
    Column("precision", lambda row: row.precision),
    Column("transfer", lambda row: row.transfer),
    Column("component", lambda row: row.component),
    Column("kind of component", lambda row: row.component_kind),
    Column("vessel or boundary", lambda row: row.boundary or row.name),
    Column("vessel code", lambda row: row.code),
    Column("vessel uuid", lambda row: row.vessel),
    *AMOUNT_COLUMNS,
    Column("basis", lambda row: row.basis),
)


def make_postings(member: Membership, wanted: Search, _now: datetime) -> Table:
    """Return what followed from the entries that are looked for: one row for each end of a movement, summing to 0."""

    def read() -> Rows[PostingRow]:
        for row in find_postings(member, wanted).values_list(*POSTING_FIELDS).iterator(BATCH):
            yield PostingRow(*row)

    standing, rows = _take(member.workshop, read)
    return Table("postings", POSTING_COLUMNS, rows, about=_about("postings", member.workshop, standing, wanted))


BALANCE_COLUMNS = (
    Column("vessel", lambda row: row.vessel.name),
    Column("vessel code", lambda row: row.vessel.code),
    Column("vessel uuid", lambda row: row.vessel.uuid),
    Column("kind", lambda row: row.vessel.kind),
    Column("component", lambda row: row.component or "everything else"),
    Column("kind of component", lambda row: row.kind),
    Column("known", lambda row: "no" if row.amount is None else "yes"),
    *AMOUNT_COLUMNS,
)


def make_balances(member: Membership, wanted: Search, now: datetime) -> Table:
    """Return what the vessels held at the end of the period that is looked for, now if it has none.

    Only its vessel and its component count. What is unknown is empty.
    """
    moment = wanted.end or now

    def read() -> Rows[Balance]:
        yield from list_balances_before(member, moment, vessel=wanted.vessel, component=wanted.component)

    standing, rows = _take(member.workshop, read)
    only = Search(vessel=wanted.vessel, component=wanted.component)
    about = _about("balances", member.workshop, standing, only, **{"just before": _plain(moment)})
    return Table("balances", BALANCE_COLUMNS, rows, about=about)


BOOKS: Mapping[str, Callable[[Membership, Search, datetime], Table]] = {
    "journal": make_journal,
    "postings": make_postings,
    "balances": make_balances,
}
"""The books by name, and how each is made for a member, as a search limits it, now."""
