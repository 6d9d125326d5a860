"""What stands together and must not, and what stands where more than the workshop's own limit allows.

What must never meet needs no line: vessels whose contents must never meet share no place, bund or exhaust duct. The
rest are the workshop's own lines. What is not known is said once for each place.
"""

from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from datetime import date, datetime, timedelta
from functools import cached_property
from typing import TypeVar
from uuid import UUID

from django.db.models import QuerySet
from django_scopes import scope

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.science.reactivity import DANGERS, Danger
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership, Place
from compliance.premises.apart import Stander, find_apart
from compliance.premises.models import Assessment, KeepApart, Measure, QuantityLimit, Reach
from compliance.premises.selectors import Standing, list_standing_for
from compliance.premises.sorts import Nature, nature_of, reacting
from compliance.premises.weighing import Weighed, weigh

R = TypeVar("R", QuantityLimit, KeepApart, Assessment)
STALE = timedelta(days=365)
"""A line that nobody compared for longer is stale."""
MUST_NEVER_MEET, KEPT_APART, OVER_LIMIT, LIMIT_UNDECIDED, NOT_KNOWN, NOT_ENTERED, NO_PLACE = CODES = (
    "must-never-meet",
    "keep-apart",
    "over-limit",
    "limit-undecided",
    "not-known",
    "hazards-not-entered",
    "place-not-stated",
)
"""Codes of violations, the worst first."""
REMARKS = frozenset({NOT_KNOWN, NOT_ENTERED, NO_PLACE})


@dataclass(frozen=True)
class Violation:
    """One thing that is wrong, or (``is_remark``) not known, where something stands.

    ``places`` with ``reach`` and ``shared`` say where: one place, or those over one bund or under one duct, by its
    name. ``ones`` are of the sort ``first``, ``others`` of ``second``; of a limit ``first`` alone. ``danger`` or
    ``line`` speaks against it. ``today`` is the day on which it was looked at.
    """

    code: str
    places: tuple[Place, ...]
    today: date
    ones: tuple[Vessel, ...]
    others: tuple[Vessel, ...] = ()
    first: str = ""
    second: str = ""
    reach: Reach = Reach.PLACE
    shared: str = ""
    danger: Danger | None = None
    line: QuantityLimit | KeepApart | None = None
    weighed: Weighed | None = None
    assessment: Assessment | None = None

    @property
    def place(self) -> Place | None:
        """Return the one place, or the first of several; None where nobody said."""
        return self.places[0] if self.places else None

    @property
    def vessels(self) -> tuple[Vessel, ...]:
        """Return every vessel involved, once."""
        return tuple({vessel.pk: vessel for vessel in (*self.ones, *self.others)}.values())

    @property
    def is_remark(self) -> bool:
        """Whether it says what is not known rather than what is wrong."""
        return self.code in REMARKS

    @property
    def is_stale(self) -> bool:
        """Whether nobody compared its line for a year."""
        return self.line is not None and is_stale(self.line, self.today)

    @property
    def is_assessed(self) -> bool:
        """Whether somebody assessed it, and the day until which that holds is not over."""
        return self.assessment is not None and self.assessment.until >= self.today

    @property
    def can_be_assessed(self) -> bool:
        """Whether it is a pair of sorts that stand together."""
        return self.code in (MUST_NEVER_MEET, KEPT_APART)

    @property
    def is_alarm(self) -> bool:
        """Whether it is wrong, and nobody's assessment holds."""
        return not self.is_remark and not self.is_assessed


def is_stale(line: QuantityLimit | KeepApart, today: date) -> bool:
    """Say whether nobody compared a line for a year."""
    return today - line.checked_on > STALE


def list_limits_for(member: Membership) -> QuerySet[QuantityLimit]:
    """Return the limits of the workshop's places. One query."""
    with scope(workshop=member.workshop):
        rows = QuantityLimit.objects.select_related("place", "entered_by__user")
        return rows.order_by("place__name", "sort", "pk")


def list_keep_apart_for(member: Membership) -> QuerySet[KeepApart]:
    """Return the workshop's lines on what is kept apart. One query."""
    with scope(workshop=member.workshop):
        return KeepApart.objects.select_related("entered_by__user").order_by("first", "second", "reach", "pk")


def list_assessments_for(member: Membership) -> QuerySet[Assessment]:
    """Return what was assessed, the one that holds longest first. One query."""
    with scope(workshop=member.workshop):
        return Assessment.objects.select_related("place", "entered_by__user").order_by("-until", "-pk")


def get_limit_for(member: Membership, uuid: UUID) -> QuantityLimit:
    """Return one limit of the member's workshop."""
    return _get(list_limits_for(member), uuid)


def get_keep_apart_for(member: Membership, uuid: UUID) -> KeepApart:
    """Return one line on what is kept apart in the member's workshop."""
    return _get(list_keep_apart_for(member), uuid)


def get_assessment_for(member: Membership, uuid: UUID) -> Assessment:
    """Return one assessment of the member's workshop."""
    return _get(list_assessments_for(member), uuid)


def _get(rows: QuerySet[R], uuid: UUID) -> R:
    found = rows.filter(uuid=uuid).first()
    if found is None:
        raise NotFoundError("There is no such line in this workshop.")
    return found


def list_violations_for(
    member: Membership, now: datetime, standing: Sequence[Standing] | None = None
) -> list[Violation]:
    """Return everything that is wrong or not known of where things stand, the worst first, assessed ones after.

    Twelve queries; three with what stands where (`list_standing_for`) read already.
    """
    found = list_standing_for(member, brief=True) if standing is None else standing
    today = now.astimezone(member.workshop.zone).date()
    premises = _Premises([each for each in found if each.is_here], today)
    lines, limits = list(list_keep_apart_for(member)), list(list_limits_for(member))
    assessed = _by_pair(list_assessments_for(member))
    violations = [
        *premises.find_dangers(assessed),
        *premises.find_kept_apart(lines, assessed),
        *premises.find_over(limits),
        *premises.find_not_known(),
    ]
    return sorted(violations, key=lambda each: (each.is_remark, each.is_assessed, CODES.index(each.code)))


Pair = tuple[frozenset[str], str, int | None, str]


def _pair(first: str, second: str, reach: str, place: int | None, shared: str) -> Pair:
    return frozenset({first, second}), reach, None if shared else place, shared


def _by_pair(rows: Iterable[Assessment]) -> dict[Pair, Assessment]:
    """Return the assessment that holds longest of each pair of sorts where they stand."""
    found: dict[Pair, Assessment] = {}
    for row in rows:
        found.setdefault(_pair(row.first, row.second, row.reach, row.place_id, row.shared), row)
    return found


Assessed = Mapping[Pair, Assessment]
Group = tuple[Reach, str, Sequence[Stander]]


@dataclass(frozen=True)
class _Premises:
    """What stands where on a day, in the forms in which it is looked at; each is made once."""

    here: Sequence[Standing]
    today: date
    _natures: dict[object, Nature] = field(default_factory=dict)

    def nature(self, standing: Standing) -> Nature:
        """Return the nature of a vessel's contents."""
        return self.natures[standing.vessel.pk]

    @cached_property
    def natures(self) -> dict[int, Nature]:
        """Return the nature of every vessel's contents by primary key; one for all that were filled alike."""
        return {each.vessel.pk: self._look_up(each) for each in self.here}

    def _look_up(self, standing: Standing) -> Nature:
        key = (standing.stream, standing.unnamed, *(row.pk for row in standing.revisions))
        if key not in self._natures:
            self._natures[key] = nature_of(standing.parts, standing.kinds)
        return self._natures[key]

    @cached_property
    def by_place(self) -> dict[Place, list[Standing]]:
        """Return what stands in each place, by name; what has no place is left out."""
        found: dict[Place, list[Standing]] = {}
        for each in self.here:
            if each.vessel.place is not None:
                found.setdefault(each.vessel.place, []).append(each)
        return dict(sorted(found.items(), key=lambda pair: pair[0].name.casefold()))

    @cached_property
    def places(self) -> dict[int, Place]:
        """Return the places by primary key."""
        return {place.pk: place for place in self.by_place}

    @cached_property
    def vessels(self) -> dict[str, Vessel]:
        """Return the vessels by name."""
        return {each.vessel.name: each.vessel for each in self.here}

    @cached_property
    def standers(self) -> list[Stander]:
        """Return every vessel that stands somewhere, place by place."""
        return [
            Stander(
                name=each.vessel.name,
                place=place.pk,
                bund=place.bund,
                duct=place.exhaust_duct,
                nature=self.nature(each),
                recipe=_recipe_of(each),
                in_line=each.vessel.kind not in (VesselKind.STOCK, VesselKind.WASTE),
                is_bath=each.vessel.kind == VesselKind.BATH,
            )
            for place, things in self.by_place.items()
            for each in things
        ]

    def group(self, reach: Reach) -> Iterator[Group]:
        """Yield what shares a place, a bund or a duct, with the name of the latter two."""
        key: Callable[[Stander], int | str] = {
            Reach.PLACE: lambda each: each.place,
            Reach.BUND: lambda each: each.bund,
            Reach.DUCT: lambda each: each.duct,
        }[reach]
        found: dict[int | str, list[Stander]] = {}
        for each in self.standers:
            if key(each):
                found.setdefault(key(each), []).append(each)
        for shared, group in found.items():
            yield reach, str(shared) if reach != Reach.PLACE else "", group

    def find_dangers(self, assessed: Assessed) -> Iterator[Violation]:
        """Yield what must never meet and shares a place, else a bund, else a duct: each pair where it is nearest."""
        for reach, cell in ((Reach.PLACE, None), (Reach.BUND, _place_of), (Reach.DUCT, _bund_or_place_of)):
            for group in self.group(reach):
                said: set[object] = set()
                sorts = frozenset[str]().union(*{each.nature.sorts for each in group[2]})
                for danger in DANGERS:
                    first, second = reacting(danger.first), reacting(danger.second)
                    if not {first, second} <= sorts:
                        continue
                    ones, others = find_apart(group[2], first, second, cell)
                    alike = (danger.danger, *(each.name for each in ones), "", *(each.name for each in others))
                    if ones and alike not in said:
                        said.add(alike)
                        violation = self.tell(MUST_NEVER_MEET, group, (first, ones), (second, others), assessed)
                        yield violation(danger, None)

    def find_kept_apart(self, lines: Iterable[KeepApart], assessed: Assessed) -> Iterator[Violation]:
        """Yield what a line of the workshop keeps apart and stands together."""
        groups = {reach: list(self.group(reach)) for reach in {Reach(line.reach) for line in lines}}
        for line in lines:
            for group in groups[Reach(line.reach)]:
                ones, others = find_apart(group[2], line.first, line.second)
                if ones:
                    yield self.tell(KEPT_APART, group, (line.first, ones), (line.second, others), assessed)(None, line)

    def tell(
        self,
        code: str,
        group: Group,
        one: tuple[str, Sequence[Stander]],
        other: tuple[str, Sequence[Stander]],
        assessed: Assessed,
    ) -> Callable[[Danger | None, KeepApart | None], Violation]:
        """Return how a violation of two sorts is made of what speaks against it."""
        reach, shared, _all = group
        places = tuple(self.places[pk] for pk in dict.fromkeys(each.place for each in (*one[1], *other[1])))
        return lambda danger, line: Violation(
            code=code,
            places=places,
            today=self.today,
            first=one[0],
            second=other[0],
            ones=tuple(self.vessels[each.name] for each in one[1]),
            others=tuple(self.vessels[each.name] for each in other[1]),
            reach=reach,
            shared=shared,
            danger=danger,
            line=line,
            assessment=assessed.get(_pair(one[0], other[0], reach, places[0].pk, shared)),
        )

    def find_over(self, limits: Iterable[QuantityLimit]) -> Iterator[Violation]:
        """Yield the limits that are passed, or of which that cannot be told."""
        for limit in limits:
            weighed = self.weigh(limit)
            if weighed.verdict != "within":
                yield Violation(
                    code=OVER_LIMIT if weighed.verdict == "outside" else LIMIT_UNDECIDED,
                    places=(limit.place,),
                    today=self.today,
                    ones=tuple(each.vessel for each in weighed.counted),
                    first=limit.sort,
                    line=limit,
                    weighed=weighed,
                )

    def weigh(self, limit: QuantityLimit) -> Weighed:
        """Compare what stands in a place with its limit."""
        things = [(each, self.nature(each)) for each in self.by_place.get(limit.place, ())]
        return weigh(things, limit.sort, Measure(limit.measure), limit.amount)

    def find_not_known(self) -> Iterator[Violation]:
        """Yield what is not known, once for each place."""
        for place, things in self.by_place.items():
            unknown = [each.vessel for each in things if not self.nature(each).reactivity_known]
            bare = [each.vessel for each in things if not self.nature(each).hazards_known]
            if unknown:
                yield Violation(NOT_KNOWN, (place,), self.today, tuple(unknown))
            if bare:
                yield Violation(NOT_ENTERED, (place,), self.today, tuple(bare))
        homeless = [each.vessel for each in self.here if each.vessel.place is None]
        if homeless:
            yield Violation(NO_PLACE, (), self.today, tuple(homeless))


def _place_of(stander: Stander) -> object:
    return stander.place


def _bund_or_place_of(stander: Stander) -> object:
    return stander.bund or stander.place


def _recipe_of(standing: Standing) -> frozenset[object]:
    """Return what a vessel was filled with: its waste stream, else its products; nobody's liquid is like no other."""
    if standing.stream is not None:
        return frozenset({("stream", standing.stream.pk)})
    unnamed = {("unnamed", standing.vessel.pk)} if standing.unnamed else set()
    return frozenset({*unnamed, *(row.product_id for row in standing.revisions)})


@dataclass(frozen=True)
class Weighing:
    """A limit of a place with what stands there now."""

    limit: QuantityLimit
    weighed: Weighed
    stale: bool


def weigh_limits(member: Membership, now: datetime, standing: Sequence[Standing], place: Place) -> list[Weighing]:
    """Return every limit of a place with what stands there and the verdict. One query."""
    today = now.astimezone(member.workshop.zone).date()
    premises = _Premises([each for each in standing if each.is_here], today)
    limits = list_limits_for(member).filter(place=place)
    return [Weighing(limit, premises.weigh(limit), is_stale(limit, today)) for limit in limits]
