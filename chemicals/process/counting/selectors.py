"""Reads of count days: how far they have come, what was counted against what the books say, when something was seen."""

from collections.abc import Sequence
from dataclasses import dataclass, field
from functools import cached_property
from uuid import UUID

from django.db.models import Count, OuterRef, Q, QuerySet, Subquery, Value
from django.db.models.functions import Coalesce
from django_scopes import scope

from chemicals.books.events import GROSS_MASS, VOLUME
from chemicals.books.fold.state import EVERY, root
from chemicals.ledger.codes import tidy_code
from chemicals.ledger.models import Content, Vessel, VesselKind
from chemicals.ledger.selectors import list_vessels_for
from chemicals.process.fields import VesselField, describe
from chemicals.process.inputs import CountInput
from chemicals.process.models import CountDay, CountLine, Seen
from chemicals.workshop.errors import InvalidInputError, NotFoundError
from chemicals.workshop.models import Membership

_counted = dict(describe(CountInput))["vessel"]
assert isinstance(_counted, VesselField)  # noqa: S101  (a table error, not an input error)
COUNTABLE = _counted.kinds
"""Kinds of vessels that are counted: what the verb takes."""

DIFFERS, WITHIN, AGREES, WAS_UNKNOWN = "differs", "within", "agrees", "unknown before"
VERDICTS = (DIFFERS, WITHIN, AGREES, WAS_UNKNOWN)
"""More than uncertainty explains; not more; exactly what the books say; nothing to compare with."""

COVERAGE = 196
"""Hundredths of a standard uncertainty: 1.96 of them hold 95 % of a normal distribution (JCGM 100:2008, G.2.3)."""


def refuse_kind(vessel: Vessel) -> str:
    """Return why a vessel is not counted, and what to do in its place."""
    if vessel.kind == VesselKind.WASTE:
        return f"{vessel} is a waste container: nothing in it is counted. Weigh it on its own page."
    return f"{vessel} is a tank. Read its level on its own page."


def read_code(text: str) -> str:
    """Return the code at the end of what was typed or scanned: the code itself, or the address on a label."""
    return tidy_code(text.strip().partition("?")[0].partition("#")[0].rstrip("/").rpartition("/")[2])


def find_countable_for(member: Membership, text: str) -> Vessel:
    """Return the container that a typed or scanned text names, or raise InvalidInputError that says what to do."""
    code = read_code(text)
    if not code:
        raise InvalidInputError.of("code", "Scan the code on the container, or type it.")
    vessel = list_vessels_for(member).filter(code=code).first()
    if vessel is None:
        message = f"No container of this workshop has the code {code[:20]}. Read it once more; is it a label of yours?"
        raise InvalidInputError.of("code", message)
    if vessel.kind not in COUNTABLE:
        raise InvalidInputError.of("code", refuse_kind(vessel))
    return vessel


def list_count_days_for(member: Membership) -> QuerySet[CountDay]:
    """Return the count days of the member's workshop, the latest first. One query.

    Each with ``seen``, how many containers were seen, and ``made``, how many entries followed.
    """
    with scope(workshop=member.workshop):
        standing = Q(lines__taken_back_at=None)
        rows = CountDay.objects.select_related("workshop", "place", "started_by__user", "finished_by__user")
        counted = rows.annotate(
            seen=Count("lines", filter=standing & ~Q(lines__said=Seen.MISSING)), made=Count("lines__entry")
        )
        return counted.order_by("-pk")


def get_count_day_for(member: Membership, uuid: UUID) -> CountDay:
    """Return one count day of the member's workshop."""
    try:
        return list_count_days_for(member).get(uuid=uuid)
    except CountDay.DoesNotExist as error:
        raise NotFoundError("There is no such count in this workshop.") from error


def get_count_line_for(member: Membership, day: CountDay, uuid: UUID) -> CountLine:
    """Return one line of a count day, also one that was taken back."""
    try:
        return list_lines_of(member, day).get(uuid=uuid)
    except CountLine.DoesNotExist as error:
        raise NotFoundError("There is no such line in this count.") from error


def list_lines_of(member: Membership, day: CountDay) -> QuerySet[CountLine]:
    """Return everything that was said on a count day, the latest first, also what was taken back. One query."""
    with scope(workshop=member.workshop):
        rows = CountLine.objects.filter(day=day).select_related(
            "day", "vessel__place", "vessel__product", "seen_by__user", "taken_back_by__user", "entry"
        )
        return rows.order_by("-pk")


@dataclass(frozen=True)
class Progress:
    """An open count: how many of the containers that stand there were spoken of."""

    day: CountDay
    done: int
    all: int


def list_open_counts_for(member: Membership) -> list[Progress]:
    """Return the counts that are open, with their progress. Three queries, one if none is open."""
    days = list(list_count_days_for(member).filter(finished_at=None).order_by("pk"))
    if not days:
        return []
    with scope(workshop=member.workshop):
        there = list(_there().values_list("pk", "place"))
        rows = CountLine.objects.filter(day__in=days, taken_back_at=None).values_list("day", "vessel")
        spoken_of: dict[int, set[int]] = {}
        for day_key, vessel in rows:
            spoken_of.setdefault(day_key, set()).add(vessel)
    found = []
    for day in days:
        wanted = {vessel for vessel, place in there if day.place_id in (None, place)}
        found.append(Progress(day, len(wanted & spoken_of.get(day.pk, set())), len(wanted)))
    return found


def _there() -> QuerySet[Vessel]:
    """Return what can be counted and is not gone, by place and name."""
    rows = Vessel.objects.filter(kind__in=COUNTABLE, gone_at=None).select_related("place", "product")
    return rows.order_by("place__name", "name")


@dataclass(frozen=True)
class Said:
    """How much was there: base units of a dimension with standard uncertainty; ``amount`` None is unknown."""

    amount: int | None
    sd: int
    dimension: str


@dataclass(frozen=True)
class Counted:
    """A line against what the books say of the moment when the container was seen.

    ``counted`` is what the entry would say; None of a line that says that the books are right.
    """

    line: CountLine
    books: Said
    counted: Said | None
    elsewhere: bool
    """The books have it at another place than the one that is counted."""

    @property
    def difference(self) -> int | None:
        """Return counted less books; None where either is not known, or nothing was counted."""
        if self.counted is None or self.counted.amount is None or self.books.amount is None:
            return None
        return self.counted.amount - self.books.amount

    @property
    def difference_sd(self) -> int:
        """Return the standard uncertainty of the difference, as if those of books and count were independent."""
        return root(self._variance)

    @property
    def _variance(self) -> int:
        return self.books.sd**2 + (0 if self.counted is None else self.counted.sd**2)

    @property
    def verdict(self) -> str:
        """Return one of VERDICTS."""
        if self.counted is None:
            return AGREES
        difference = self.difference
        if difference is None:
            return WAS_UNKNOWN
        if not difference:
            return AGREES
        return DIFFERS if (100 * difference) ** 2 > COVERAGE**2 * self._variance else WITHIN

    @property
    def makes_entry(self) -> bool:
        """Say whether finishing records a count: it does unless exactly that much is in the books."""
        return self.verdict != AGREES


@dataclass(frozen=True)
class Reckoning:
    """A count day against the books: what was said, and which containers nobody has spoken of."""

    day: CountDay
    rows: Sequence[Counted]
    unseen: Sequence[Vessel] = field(default=())

    @cached_property
    def differing(self) -> Sequence[Counted]:
        """Return the rows that become entries."""
        return [row for row in self.rows if row.makes_entry]

    @property
    def done(self) -> int:
        """Return how many of those that stand there were spoken of."""
        return sum(not row.elsewhere and row.line.vessel.gone_at is None for row in self.rows)

    @property
    def all(self) -> int:
        """Return how many stand there."""
        return self.done + len(self.unseen)


def reckon_count(member: Membership, day: CountDay) -> Reckoning:
    """Return what was said on a count day against what the books say of then, by name. Three queries.

    Of a day that is over it leaves out the entries that it made, and nobody is asked what was not seen.
    """
    with scope(workshop=member.workshop):
        lines = list(_with_books(list_lines_of(member, day).filter(taken_back_at=None).order_by("vessel__name")))
        keys = {key for line in lines for key in (line.volume_then, line.mass_then, line.all_then) if key is not None}  # type: ignore[attr-defined]  # annotated
        contents = Content.objects.in_bulk(list(keys))
        unseen: list[Vessel] = []
        if day.finished_at is None:
            there = _there() if day.place is None else _there().filter(place=day.place)
            unseen = list(there.exclude(pk__in=[line.vessel_id for line in lines]))
    rows = [_compare(line, day, contents) for line in lines]
    return Reckoning(day, rows, unseen)


def _with_books(lines: QuerySet[CountLine]) -> QuerySet[CountLine]:
    """Add the key of what the books say of each line's moment: the content just after the last entry until then."""

    def last(component: str) -> Subquery:
        rows = Content.objects.filter(
            vessel=OuterRef("vessel"), component__code=component, occurred_at__lte=OuterRef("seen_at")
        )
        others = rows.exclude(entry=Coalesce(OuterRef("entry"), Value(0)))
        return Subquery(others.order_by("-occurred_at", "-sequence").values("pk")[:1])

    return lines.annotate(volume_then=last(VOLUME), mass_then=last(GROSS_MASS), all_then=last(EVERY))


def _compare(line: CountLine, day: CountDay, contents: dict[int, Content]) -> Counted:
    every = contents.get(line.all_then)  # type: ignore[attr-defined]  # annotated
    incomplete = every is not None and every.amount is None
    volume = _said(contents.get(line.volume_then), "volume", incomplete=incomplete)  # type: ignore[attr-defined]  # annotated
    mass = _said(contents.get(line.mass_then), "mass", incomplete=incomplete)  # type: ignore[attr-defined]  # annotated
    books, counted = _whole(volume, mass), None
    if line.said == Seen.AMOUNT:
        books = volume if line.dimension == "volume" else mass
        counted = Said(line.base, line.sd or 0, line.dimension)
    elif line.said == Seen.MISSING:
        counted = Said(0, 0, books.dimension)
    elsewhere = day.place_id is not None and line.vessel.place_id != day.place_id
    return Counted(line, books, counted, elsewhere)


def _said(content: Content | None, dimension: str, *, incomplete: bool) -> Said:
    if content is None:
        return Said(None if incomplete else 0, 0, dimension)
    return Said(content.amount, root(content.variance), dimension)


def _whole(volume: Said, mass: Said) -> Said:
    """Return by what the books know how much is there: the volume, else the weight; what is unknown before nothing."""
    by_volume_first = (volume, mass)
    something = [said for said in by_volume_first if said.amount]
    unknown = [said for said in by_volume_first if said.amount is None]
    return next(iter([*something, *unknown]), mass)


def find_last_seen(member: Membership, vessel: Vessel) -> CountLine | None:
    """Return the latest line by which somebody saw a container on a count that was not abandoned. One query."""
    with scope(workshop=member.workshop):
        rows = CountLine.objects.filter(vessel=vessel, taken_back_at=None, day__abandoned=False)
        seen = rows.exclude(said=Seen.MISSING).select_related("day__place", "seen_by__user")
        return seen.order_by("-seen_at", "-pk").first()
