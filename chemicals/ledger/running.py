"""Reads: what a vessel held of a component over time, entry by entry; every line adds up with the one before.

The running content comes from Content, what came and went from the postings. Where a content is unknown, ``booked``
says what the postings sum to all the same: the lines add up whatever is known.
"""

from collections import defaultdict, deque
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from typing import Any

from django.db.models import Q, QuerySet, Sum
from django_scopes import scope

from chemicals.books import events
from chemicals.books.events import GROSS_MASS, VOLUME
from chemicals.books.fold.arithmetic import quotient, root
from chemicals.books.fold.state import EVERY, Holding
from chemicals.journal.models import Entry
from chemicals.ledger.models import Component, Content, Finding, Posting, Vessel
from chemicals.ledger.selectors import NANOLITRES_PER_LITRE, Held, list_held
from chemicals.workshop.errors import NotFoundError

LINES = 100
"""How many lines a page of a ledger has."""

BATCH = 500
"""Of how many entries the movements are read at once."""

READINGS = {VOLUME: events.LevelReading.KIND, GROSS_MASS: events.WeightReading.KIND}
"""The kind of entry by which a content is measured; of everything else it is an accepted analysis."""

Order = tuple[datetime, int]


@dataclass(frozen=True)
class Running(Held):
    """What a vessel held at a place in the fold. ``booked`` is what the postings sum to, also where that is unknown.

    ``volume`` is what it held of liquid then; None for the liquid itself and the weight.
    """

    booked: int
    volume: Holding | None = None

    @property
    def concentration(self) -> int | None:
        """Return how much of it a litre held: ug/L or nmol/L; None where either is unknown."""
        return self._per_litre[0]

    @property
    def concentration_sd(self) -> int:
        """Return the standard uncertainty of that, as if those of amount and volume were independent."""
        return self._per_litre[1]

    @property
    def _per_litre(self) -> tuple[int | None, int]:
        volume = self.volume
        if self.amount is None or volume is None or volume.amount is None or volume.amount <= 0:
            return None, 0
        return quotient(self.amount, self.sd, volume.amount, root(volume.variance), NANOLITRES_PER_LITRE)


@dataclass(frozen=True)
class Movement:
    """What came (above zero) or went: base units with standard uncertainty.

    ``end`` is the other end: a vessel's uuid as text, or a boundary.
    """

    amount: int
    sd: int
    basis: str
    end: str


@dataclass(frozen=True)
class Line:
    """An entry that changed the content, or what is known of it: what came and went, what was held afterwards."""

    entry: Entry
    movements: tuple[Movement, ...]
    findings: tuple[Finding, ...]
    held: Running


@dataclass(frozen=True)
class Point:
    """What was held from a moment on; ``measured``: by a reading or an accepted analysis of that moment."""

    at: datetime
    held: Running
    measured: bool


@dataclass(frozen=True)
class VesselLedger:
    """One page of a vessel's ledger of a component for start <= time < end.

    ``opening`` and ``closing`` stand at the ends of the period, ``before`` and ``after`` at the ends of the page;
    ``came`` and ``went`` sum up the period. ``points`` are those of the whole period.
    """

    vessel: Vessel
    component: str
    start: datetime
    end: datetime
    opening: Running
    closing: Running
    came: int
    went: int
    points: tuple[Point, ...]
    lines: tuple[Line, ...]
    before: Running
    after: Running
    page: int
    pages: int


class _Period:
    """Of which vessel and component, and from when until when, rows are read. One query."""

    def __init__(self, vessel: Vessel, component: str, start: datetime, end: datetime) -> None:
        self.vessel, self.component, self.start, self.end = vessel, component, start, end
        # rows are looked up by the component's key: through its code no database would use their index
        self.keys = dict(
            Component.objects.filter(code__in=(component, EVERY, VOLUME)).values_list("code", "pk"),
        )
        if component not in self.keys:
            raise NotFoundError("The books hold none of this.")

    def read(self, component: str) -> tuple["_Row | None", list["_Row"]]:
        """Return the last row of Content before the period, and those of the period. Two queries."""
        mine = Content.objects.filter(vessel=self.vessel, component=self.keys.get(component))
        ordered = mine.order_by("occurred_at", "sequence")
        fields = ("entry_id", "entry__kind", "occurred_at", "sequence", "amount", "variance", "known_part")
        before = ordered.filter(occurred_at__lt=self.start).reverse().values_list(*fields)[:1]
        rows = ordered.filter(occurred_at__gte=self.start, occurred_at__lt=self.end).values_list(*fields)
        return next(map(_row, before), None), list(map(_row, rows))

    def postings(self) -> QuerySet[Posting]:
        """Return what came and went."""
        mine = Posting.objects.filter(vessel=self.vessel, component=self.keys[self.component])
        return mine.filter(occurred_at__gte=self.start, occurred_at__lt=self.end)


@dataclass(frozen=True)
class _Row:
    """What was held after an entry: its kind, its place in the fold."""

    entry: int
    kind: str
    order: Order
    held: Holding


@dataclass(frozen=True)
class _Series:
    """What a vessel held of a component before the period, and after each entry of the period that changed it."""

    first: Holding
    rows: Sequence[_Row]


def list_components_of(vessel: Vessel) -> list[Held]:
    """Return of what a vessel ever held anything: first the metal of which it holds most now. One query."""

    def place(row: Held) -> tuple[bool, bool, int]:
        return not events.is_metal(row.component), row.component in READINGS, -(row.amount or 0)

    return sorted(list_held(vessel), key=place)


def get_vessel_ledger(
    vessel: Vessel, component: str, start: datetime, end: datetime, *, page: int | None = 1
) -> VesselLedger:
    """Return a page of the ledger, the last one if there are fewer; all lines where ``page`` is None.

    Twelve queries at most, however many lines. Raises NotFoundError for what stands in no book of the workshop.
    """
    with scope(workshop=vessel.workshop):
        period = _Period(vessel, component, start, end)
        series = _read_series(period)
        running = list(_run(period, series))
        number, pages, first, last = _cut(page, len(series.rows))
        came, went = _sum_movements(period)
        return VesselLedger(
            vessel=vessel,
            component=component,
            start=start,
            end=end,
            opening=running[0],
            closing=running[-1],
            came=came,
            went=went,
            points=tuple(_points(component, series.rows, running[1:-1])),
            lines=tuple(_lines(period, series.rows[first:last], running[first + 1 : last + 1])),
            before=running[first],
            after=running[last] if number < pages else running[-1],
            page=number,
            pages=pages,
        )


def _cut(page: int | None, count: int) -> tuple[int, int, int, int]:
    """Return the page that there is, how many there are, and which lines it has: from, until."""
    if page is None:
        return 1, 1, 0, count
    pages = max(1, -(-count // LINES))
    number = min(max(page, 1), pages)
    return number, pages, (number - 1) * LINES, min(number * LINES, count)


def _read_series(period: _Period) -> _Series:
    """Return what was held over a period. Until a component is listed, the rows of everything else speak for it."""
    before, rows = period.read(period.component)
    if before is not None:
        return _Series(before.held, rows)
    whole, unlisted = period.read(EVERY)
    first = Holding(0) if whole is None else whole.held
    listed = rows[0].order if rows else (period.end, 0)
    return _Series(first, [*_changes(first, [row for row in unlisted if row.order < listed]), *rows])


def _changes(first: Holding, rows: Sequence[_Row]) -> Iterator[_Row]:
    """Yield the rows after which it is known, and was not before, or the other way round."""
    was = first.amount
    for row in rows:
        if row.held.amount != was:
            yield row
        was = row.held.amount


def _row(fields: tuple[Any, ...]) -> _Row:
    entry, kind, at, sequence, *held = fields
    return _Row(entry, kind, (at, sequence), Holding(*held))


def _run(period: _Period, series: _Series) -> Iterator[Running]:
    """Yield what was held at the beginning, after each row, and at the end; per litre where the volume was known."""
    component = period.component
    before, rows = (None, []) if component in READINGS else period.read(VOLUME)
    volume, later = None if before is None else before.held, deque(rows)
    held = series.first
    yield _running(component, held, volume)
    for row in series.rows:
        while later and later[0].order <= row.order:
            volume = later.popleft().held
        held = row.held
        yield _running(component, held, volume)
    yield _running(component, held, later[-1].held if later else volume)


def _running(component: str, held: Holding, volume: Holding | None) -> Running:
    return Running(component, held.amount, root(held.variance), held.booked, volume)


def _points(component: str, rows: Sequence[_Row], running: Sequence[Running]) -> Iterator[Point]:
    reading = READINGS.get(component, events.Acceptance.KIND)
    for row, held in zip(rows, running, strict=True):
        yield Point(row.order[0], held, held.amount is not None and row.kind == reading)


def _sum_movements(period: _Period) -> tuple[int, int]:
    """Return what came and what went over a period, both not below zero. One query."""
    sums = period.postings().aggregate(
        came=Sum("amount", filter=Q(amount__gt=0)), went=Sum("amount", filter=Q(amount__lt=0))
    )
    return sums["came"] or 0, -(sums["went"] or 0)


def _lines(period: _Period, rows: Sequence[_Row], running: Sequence[Running]) -> Iterator[Line]:
    """Yield the lines of these rows. Three queries for each batch."""
    for first in range(0, len(rows), BATCH):
        batch = rows[first : first + BATCH]
        keys = [row.entry for row in batch]
        entries = Entry.objects.select_related("member__user", "about").in_bulk(keys)
        movements, findings = _read_movements(period, keys), _read_findings(period, keys)
        for number, key in enumerate(keys, first):
            yield Line(entries[key], tuple(movements[key]), tuple(findings[key]), running[number])


def _read_movements(period: _Period, entries: Sequence[int]) -> Mapping[int, list[Movement]]:
    """Return what came and went by each entry: of the two postings of a transfer one is the vessel's."""
    rows = Posting.objects.filter(entry_id__in=entries, component=period.keys[period.component]).select_related(
        "vessel"
    )
    pairs: dict[tuple[int, int], list[Posting]] = defaultdict(list)
    for posting in rows.order_by("entry_id", "transfer"):
        pairs[posting.entry_id, posting.transfer].append(posting)
    found: dict[int, list[Movement]] = defaultdict(list)
    for (entry, _transfer), pair in pairs.items():
        for mine, other in (pair, pair[::-1]):
            if mine.vessel_id == period.vessel.pk:
                end = other.boundary if other.vessel is None else str(other.vessel.uuid)
                found[entry].append(Movement(mine.amount, mine.sd, mine.basis, end))
    return found


def _read_findings(period: _Period, entries: Sequence[int]) -> Mapping[int, list[Finding]]:
    """Return what a person should know of each entry about the component in this vessel."""
    here = Q(source=str(period.vessel.uuid)) | Q(target=str(period.vessel.uuid))
    found: dict[int, list[Finding]] = defaultdict(list)
    about = Finding.objects.filter(here, entry_id__in=entries, component__in=(period.component, EVERY))
    for finding in about.order_by("pk"):
        found[finding.entry_id].append(finding)
    return found
