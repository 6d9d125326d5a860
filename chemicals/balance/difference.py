"""The difference between two moments: what every vessel held of each component then and later, and what explains it.

What crossed a boundary explains the difference of the workshop, to the unit; what moved between vessels explains those
of the vessels. Where a content is unknown so is its difference; what was recorded adds up all the same: ``booked``.
"""

from collections import defaultdict
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from datetime import datetime

from django.db.models import Min, Q, QuerySet, Sum
from django_scopes import scope

from chemicals.balance.selectors import Amount, sum_up
from chemicals.books.events import BOUNDARIES
from chemicals.books.fold.arithmetic import root
from chemicals.books.fold.state import UNKNOWN_AMOUNT, UNKNOWN_CONTENTS, Holding
from chemicals.ledger.models import Content, Finding, Posting, Vessel
from chemicals.ledger.projection import load_state_before
from chemicals.ledger.selectors import list_components_for
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership, Workshop


@dataclass(frozen=True)
class Explained:
    """What came through a boundary (above zero) or left through it, by entries of one kind.

    ``amount`` is unknown where some of them moved an unknown amount; ``booked`` is what the others moved.
    """

    boundary: str
    kind: str
    amount: Amount
    booked: int


@dataclass(frozen=True)
class VesselDifference:
    """What a vessel held before and after, and what came and went between; ``booked`` is came less went."""

    vessel: Vessel
    before: Amount
    after: Amount
    came: int
    went: int

    @property
    def value(self) -> int | None:
        """Return by how much the vessel holds more; None where either is unknown."""
        return _less(self.after, self.before)

    @property
    def booked(self) -> int:
        """Return by how much it holds more according to what was recorded, whatever is unknown."""
        return self.came - self.went


@dataclass(frozen=True)
class Difference:
    """The difference of one component over the whole workshop: the sum of its vessels, explained by its boundaries."""

    component: str
    before: Amount
    after: Amount
    vessels: tuple[VesselDifference, ...]
    explained: tuple[Explained, ...]

    @property
    def value(self) -> int | None:
        """Return by how much the vessels hold more; None where any content is unknown."""
        return _less(self.after, self.before)

    @property
    def booked(self) -> int:
        """Return the sum of what crossed the boundaries, as far as it was recorded."""
        return sum(row.booked for row in self.explained)


def _less(one: Amount, other: Amount) -> int | None:
    return None if one.value is None or other.value is None else one.value - other.value


def get_differences_for(
    member: Membership, start: datetime, end: datetime, component: str | None = None
) -> tuple[Difference, ...]:
    """Return the difference of each component, or of one, between just before ``start`` and just before ``end``.

    Ten queries at most, whatever the number of entries, vessels and components. Raises NotFoundError for what stands in
    no book of the workshop.
    """
    wanted = [code for code in list_components_for(member) if component in (None, code)]
    if component is not None and not wanted:
        raise NotFoundError("The books hold none of this.")
    with scope(workshop=member.workshop):
        reader = _Reader(member.workshop, start, end)
        return tuple(reader.read(code) for code in wanted)


Key = tuple[str, str]


class _Reader:
    """Everything that is read for a pair of moments, by component. Nine queries."""

    def __init__(self, workshop: Workshop, start: datetime, end: datetime) -> None:
        self.before, self.after = load_state_before((start, 0)), load_state_before((end, 0))
        self.vessels = {str(vessel.uuid): vessel for vessel in workshop.vessels.order_by("name")}
        between = Q(occurred_at__gte=start, occurred_at__lt=end)
        self.moved = _sum_movements(Posting.objects.filter(between, vessel__isnull=False))
        self.crossed = _sum_crossings(Posting.objects.filter(between, vessel=None))
        self.unknown = _Unknown(Finding.objects.filter(between))

    def read(self, component: str) -> Difference:
        """Return the difference of a component."""
        rows = [self._vessel(vessel, component) for vessel in self.vessels]
        return Difference(
            component=component,
            before=sum_up(row.before for row in rows),
            after=sum_up(row.after for row in rows),
            vessels=tuple(row for row in rows if _says_anything(row)),
            explained=tuple(self._explain(component)),
        )

    def _vessel(self, uuid: str, component: str) -> VesselDifference:
        before, after = (_amount(state.holding(uuid, component)) for state in (self.before, self.after))
        return VesselDifference(self.vessels[uuid], before, after, *self.moved.get((uuid, component), (0, 0)))

    def _explain(self, component: str) -> Iterator[Explained]:
        crossed, unknown = self.crossed[component], self.unknown.crossings(component)
        for boundary, kind in sorted({*crossed, *unknown}):
            amount, variance = crossed.get((boundary, kind), (0, 0))
            known = Amount(None if (boundary, kind) in unknown else amount, root(variance))
            yield Explained(boundary, kind, known, amount)


def _amount(holding: Holding) -> Amount:
    return Amount(holding.amount, root(holding.variance))


def _says_anything(row: VesselDifference) -> bool:
    nothing = Amount(0, 0)
    return (row.before, row.after, row.came, row.went) != (nothing, nothing, 0, 0)


def _sum_movements(postings: QuerySet[Posting]) -> dict[Key, tuple[int, int]]:
    """Return (vessel, component) -> (what came, what went). One query."""
    rows = (
        postings.order_by()
        .values_list("vessel__uuid", "component__code")
        .annotate(came=Sum("amount", filter=Q(amount__gt=0)), went=Sum("amount", filter=Q(amount__lt=0)))
    )
    return {(str(vessel), component): (came or 0, -(went or 0)) for vessel, component, came, went in rows}


def _sum_crossings(postings: QuerySet[Posting]) -> Mapping[str, Mapping[Key, tuple[int, int]]]:
    """Return component -> (boundary, kind of entry) -> (what came in, its variance). One query."""
    found: dict[str, dict[Key, tuple[int, int]]] = defaultdict(lambda: defaultdict(lambda: (0, 0)))
    rows = postings.values_list("component__code", "boundary", "entry__kind", "amount", "sd")
    for component, boundary, kind, amount, sd in rows.iterator():
        total, variance = found[component][boundary, kind]
        found[component][boundary, kind] = total - amount, variance + sd * sd
    return found


class _Unknown:
    """Where an unknown amount crossed a boundary. Two queries."""

    def __init__(self, findings: QuerySet[Finding]) -> None:
        across = findings.filter(Q(source__in=BOUNDARIES) | Q(target__in=BOUNDARIES))
        rows = across.filter(code__in=(UNKNOWN_AMOUNT, UNKNOWN_CONTENTS))
        fields = ("code", "component", "source", "target", "entry__kind", "occurred_at")
        self.rows = list(rows.values_list(*fields))
        sources = {source for _code, _component, source, *_rest in self.rows if source not in BOUNDARIES}
        listed = Content.objects.filter(vessel__uuid__in=sources).order_by()
        first = listed.values_list("vessel__uuid", "component__code").annotate(first=Min("occurred_at"))
        self.listed_since = {(str(vessel), component): at for vessel, component, at in first}

    def crossings(self, component: str) -> set[Key]:
        """Return the (boundary, kind of entry) through which an unknown amount of a component went."""
        return {
            (end, kind)
            for code, named, source, target, kind, at in self.rows
            if named == component or (code == UNKNOWN_CONTENTS and not self._is_listed(source, component, at))
            for end in (source, target)
            if end in BOUNDARIES
        }

    def _is_listed(self, vessel: str, component: str, at: datetime) -> bool:
        """Say whether the list of a vessel, incomplete as it was, named a component."""
        first = self.listed_since.get((vessel, component))
        return first is not None and first <= at
