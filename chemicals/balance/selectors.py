"""The book balance of a metal over a period: what the entries say, before any reconciliation."""

import math
from collections import defaultdict
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from datetime import datetime

from django.db.models import Min, OuterRef, Subquery, Sum
from django_scopes import scope

from chemicals.books.events import BOUNDARIES, OPENING, SUPPLIER, UNACCOUNTED, WATER_SUPPLY
from chemicals.books.fold.state import EVERY, UNKNOWN_AMOUNT, UNKNOWN_CONTENTS, root
from chemicals.ledger.models import Component, ComponentKind, Content, Finding, Posting, Vessel
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership, Workshop

INFLOWS = (OPENING, SUPPLIER, WATER_SUPPLY)


@dataclass(frozen=True)
class Amount:
    """Base units with standard uncertainty; ``value`` None is unknown."""

    value: int | None
    sd: int


@dataclass(frozen=True)
class VesselRow:
    """One vessel over the period: what it held at both ends, what came and went between."""

    vessel: Vessel
    opening: Amount
    received: int
    given: int
    closing: Amount


FlowEnd = Vessel | str
"""Where a flow begins or ends: a vessel, or the name of a boundary (one of ``BOUNDARIES``)."""


@dataclass(frozen=True)
class Flow:
    """What went from one end to another over the period."""

    source: FlowEnd
    target: FlowEnd
    amount: Amount

    @property
    def between_vessels(self) -> bool:
        """Say whether both ends are vessels: nothing entered or left."""
        return isinstance(self.source, Vessel) and isinstance(self.target, Vessel)


@dataclass(frozen=True)
class BookBalance:
    """opening + inflows - outflows + unaccounted = closing, exactly, in base units of the component.

    ``boundaries`` holds the net amount from each boundary into the vessels: what came is above zero, what left below.
    """

    component: str
    start: datetime
    end: datetime
    opening: Amount
    closing: Amount
    boundaries: Mapping[str, Amount]
    vessels: tuple[VesselRow, ...]
    flows: tuple[Flow, ...]

    @property
    def unaccounted(self) -> Amount:
        """Return what nobody recorded: above zero it was found, below zero it is missing. Unknown if anything is."""
        net = self.boundaries.get(UNACCOUNTED, Amount(0, 0))
        others = (self.opening, self.closing, *self.boundaries.values())
        if any(amount.value is None for amount in others):
            return Amount(None, 0)
        return net

    @property
    def smallest_visible(self) -> int | None:
        """Return the smallest loss that this balance could have seen: twice the uncertainty of its two ends."""
        if self.opening.value is None or self.closing.value is None:
            return None
        parts = [self.opening.sd, self.closing.sd]
        parts += [amount.sd for name, amount in self.boundaries.items() if name != UNACCOUNTED]
        return 2 * math.isqrt(sum(sd * sd for sd in parts))


def list_metals_for(member: Membership) -> list[str]:
    """Return the metals that the member's workshop has in its books, by symbol. One query."""
    with scope(workshop=member.workshop):
        metals = Component.objects.filter(kind=ComponentKind.METAL)
        return sorted(metals.values_list("code", flat=True))


def find_main_metal_for(member: Membership) -> str | None:
    """Return the metal of which the workshop's vessels hold most now; None if the books know no metal. One query."""
    with scope(workshop=member.workshop):
        metals = Component.objects.filter(kind=ComponentKind.METAL).order_by("code")
        sums = dict(metals.annotate(held=Sum("holdings__amount")).values_list("code", "held"))
        return max(sums, key=lambda code: sums[code] or 0, default=None)


def get_book_balance(member: Membership, component: str, start: datetime, end: datetime) -> BookBalance:
    """Return the balance of a component for start <= time < end. Eight queries, whatever the number of entries."""
    workshop = member.workshop
    with scope(workshop=workshop):
        row = Component.objects.filter(code=component).first()
        if row is None:
            raise NotFoundError("The books hold none of this.")
        opening, closing = _held_before(workshop, row, start), _held_before(workshop, row, end)
        flows = _sum_flows(row, start, end)
        unknown = _unknown_flows(component, start, end)
        vessels = {vessel.pk: vessel for vessel in Vessel.objects.order_by("name")}
    return BookBalance(
        component=component,
        start=start,
        end=end,
        opening=sum_up(opening.values()),
        closing=sum_up(closing.values()),
        boundaries=_boundaries(flows, unknown),
        vessels=tuple(_vessel_rows(vessels, opening, closing, flows)),
        flows=tuple(_named_flows(vessels, flows, unknown)),
    )


End = int | str
Flows = Mapping[tuple[End, End], tuple[int, int]]


def _held_before(workshop: Workshop, component: Component, moment: datetime) -> dict[int, Amount]:
    """Return what each vessel held just before a moment: its last content of the component, or of everything else."""

    def last(code: str) -> Subquery:
        rows = Content.objects.filter(
            vessel=OuterRef("pk"), component__workshop=workshop, component__code=code, occurred_at__lt=moment
        )
        return Subquery(rows.order_by("-occurred_at", "-sequence").values("pk")[:1])

    rows = Vessel.objects.annotate(own=last(component.code), rest=last(EVERY)).values_list("pk", "own", "rest")
    contents = Content.objects.in_bulk({pk for _, *pair in rows for pk in pair if pk is not None})
    held = {}
    for vessel, own, rest in rows:
        content = contents.get(own) or contents.get(rest)
        if content is not None:
            held[vessel] = Amount(content.amount, root(content.variance))
    return held


def _sum_flows(component: Component, start: datetime, end: datetime) -> dict[tuple[End, End], tuple[int, int]]:
    """Return (from, to) -> (amount, variance), pairing the two postings of each transfer."""
    rows = Posting.objects.filter(component=component, occurred_at__gte=start, occurred_at__lt=end)
    ordered = rows.order_by("entry_id", "transfer", "amount")
    pairs: dict[tuple[int, int], list[tuple[End, int, int]]] = defaultdict(list)
    for entry, transfer, vessel, boundary, amount, sd in ordered.values_list(
        "entry_id", "transfer", "vessel_id", "boundary", "amount", "sd"
    ):
        pairs[entry, transfer].append((boundary if vessel is None else vessel, amount, sd))
    flows: dict[tuple[End, End], tuple[int, int]] = defaultdict(lambda: (0, 0))
    for (source, _, _), (target, amount, sd) in pairs.values():
        total, variance = flows[source, target]
        flows[source, target] = total + amount, variance + sd * sd
    return dict(flows)


def _unknown_flows(component: str, start: datetime, end: datetime) -> set[tuple[str, str]]:
    """Return the ends between which an unknown amount moved (vessel uuids or boundaries)."""
    rows = Finding.objects.filter(
        occurred_at__gte=start,
        occurred_at__lt=end,
        code__in=(UNKNOWN_AMOUNT, UNKNOWN_CONTENTS),
        component__in=(component, EVERY),
    )
    listed_since = {
        str(vessel): first
        for vessel, first in Content.objects.filter(component__code=component)
        .order_by()
        .values_list("vessel__uuid")
        .annotate(first=Min("occurred_at"))
    }
    return {
        (source, target)
        for source, target, code, at in rows.values_list("source", "target", "code", "occurred_at")
        # what an incomplete list names is known all the same
        if code == UNKNOWN_AMOUNT or source not in listed_since or listed_since[source] > at
    }


def sum_up(amounts: Iterable[Amount]) -> Amount:
    """Return the sum, as if the uncertainties were independent; unknown if any of them is."""
    known = list(amounts)
    if any(amount.value is None for amount in known):
        return Amount(None, 0)
    return Amount(sum(amount.value or 0 for amount in known), root(sum(amount.sd**2 for amount in known)))


def _boundaries(flows: Flows, unknown: set[tuple[str, str]]) -> dict[str, Amount]:
    sums: dict[str, tuple[int, int]] = defaultdict(lambda: (0, 0))
    for (source, target), (amount, variance) in flows.items():
        for end, signed in ((source, amount), (target, -amount)):
            if isinstance(end, str):
                total, before = sums[end]
                sums[end] = total + signed, before + variance
    blank = {end for pair in unknown for end in pair if end in BOUNDARIES}
    sums.update(dict.fromkeys(blank - set(sums), (0, 0)))
    return {name: Amount(None if name in blank else total, root(v)) for name, (total, v) in sorted(sums.items())}


def _vessel_rows(
    vessels: Mapping[int, Vessel], opening: Mapping[int, Amount], closing: Mapping[int, Amount], flows: Flows
) -> Iterable[VesselRow]:
    nothing = Amount(0, 0)
    for pk, vessel in vessels.items():
        received = sum(amount for (_, target), (amount, _) in flows.items() if target == pk)
        given = sum(amount for (source, _), (amount, _) in flows.items() if source == pk)
        row = VesselRow(vessel, opening.get(pk, nothing), received, given, closing.get(pk, nothing))
        if row.opening != nothing or row.closing != nothing or received or given:
            yield row


def _named_flows(vessels: Mapping[int, Vessel], flows: Flows, unknown: set[tuple[str, str]]) -> Iterable[Flow]:
    """Yield the flows, the largest first, then those of which nothing is known but that there were some."""
    by_uuid = {str(vessel.uuid): vessel for vessel in vessels.values()}

    def key(end: End) -> str:
        return str(vessels[end].uuid) if isinstance(end, int) else end

    def named(source: str, target: str, amount: Amount) -> Flow:
        return Flow(by_uuid.get(source, source), by_uuid.get(target, target), amount)

    known = set()
    for (source, target), (amount, variance) in sorted(flows.items(), key=lambda item: -item[1][0]):
        pair = key(source), key(target)
        known.add(pair)
        yield named(*pair, Amount(None if pair in unknown else amount, root(variance)))
    for pair in sorted(unknown - known):
        yield named(*pair, Amount(None, 0))
