"""Level tables of tanks: which height, or which mark, stands for how much. Entries keep the rows they relied on."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import datetime

from django.db import transaction
from django_scopes import scope

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.models import LONGEST_TYPED, LevelMark
from chemicals.science.level import Step, find_fall
from chemicals.science.quantity import Quantity, QuantityError, parse
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.texts import find_bad_lines, tidy

MOST_MARKS = 200
"""Rows of a table, cold and hot ones together."""
WITH_TABLE = (VesselKind.BATH, VesselKind.RINSE)


@dataclass(frozen=True, kw_only=True)
class MarkInput:
    """A row of a level table: a height such as "32 cm", or the name of a mark, and its volume in nanolitres."""

    mark: str
    volume: int
    hot: bool = False


def list_level_marks(vessel: Vessel) -> list[LevelMark]:
    """Return the level table of a vessel: cold rows first, from the bottom up, named marks by volume. One query."""
    with scope(workshop=vessel.workshop):
        rows = LevelMark.objects.filter(vessel=vessel).select_related("entered_by__user")
        return sorted(rows, key=lambda mark: (mark.hot, mark.volume, mark.height or 0))


def list_marks_by_vessel(member: Membership) -> dict[int, list[str]]:
    """Return the heights and marks of every level table of the member's workshop, by the vessel's key. One query."""
    found: dict[int, list[str]] = {}
    with scope(workshop=member.workshop):
        for vessel, mark in LevelMark.objects.order_by("volume").values_list("vessel_id", "mark"):
            found.setdefault(vessel, []).append(mark)
    return found


def has_level_tables(member: Membership) -> bool:
    """Say whether any tank of the member's workshop has a level table. One query."""
    with scope(workshop=member.workshop):
        return LevelMark.objects.exists()


def as_height(said: str) -> Quantity | None:
    """Return the height that a text says, in nanometres; None where it is a name."""
    try:
        return parse(said, "length")
    except QuantityError:
        return None


def same_mark(one: str, other: str) -> bool:
    """Say whether two texts name the same mark, whatever their case and spaces."""
    return " ".join(one.split()).casefold() == " ".join(other.split()).casefold()


def set_level_table(*, actor: Membership, now: datetime, vessel: Vessel, marks: Sequence[MarkInput]) -> list[LevelMark]:
    """Replace the level table of a bath or a rinse as a whole; no rows take it away.

    A higher row holds more. Raises InvalidInputError by ``marks.NUMBER.mark`` and ``marks.NUMBER.volume``.
    """
    require_writer(actor)
    require_same_workshop(actor, vessel)
    errors = list(_check_table(vessel, marks))
    if errors:
        raise InvalidInputError(errors)
    rows = [
        LevelMark(
            vessel=vessel,
            hot=said.hot,
            mark=tidy(said.mark),
            height=None if (height := as_height(said.mark)) is None else height.base,
            volume=said.volume,
            entered_at=now,
            entered_by=actor,
        )
        for said in marks
    ]
    with transaction.atomic(), scope(workshop=actor.workshop):
        LevelMark.objects.filter(vessel=vessel).delete()
        LevelMark.objects.bulk_create(rows)
    return list_level_marks(vessel)


def _check_table(vessel: Vessel, marks: Sequence[MarkInput]) -> Iterator[FieldError]:
    if vessel.kind not in WITH_TABLE:
        yield FieldError("marks", "Only a bath or a rinse has a level table.")
    if len(marks) > MOST_MARKS:
        yield FieldError(
            "marks", f"A table has at most {MOST_MARKS} rows. Leave some out: it is straight between them."
        )
    for number, said in enumerate(marks):
        yield from _check_mark(f"marks.{number}.", vessel, said)
    for hot in (False, True):
        yield from _check_order([(number, said) for number, said in enumerate(marks) if said.hot is hot])


def _check_mark(at: str, vessel: Vessel, said: MarkInput) -> Iterator[FieldError]:
    yield from find_bad_lines(**{f"{at}mark": said.mark})
    if not any(map(str.isalpha, said.mark)):
        yield FieldError(f"{at}mark", "Write a height with its unit, such as 32 cm, or a name with letters.")
    if len(tidy(said.mark)) > LONGEST_TYPED:
        yield FieldError(f"{at}mark", "This is too long. Write it in at most 40 characters.")
    if said.volume < 0:
        yield FieldError(f"{at}volume", "A volume is not less than nothing.")
    if vessel.capacity is not None and said.volume > vessel.capacity:
        yield FieldError(f"{at}volume", "This is more than the tank can hold.")


def _check_order(rows: Sequence[tuple[int, MarkInput]]) -> Iterator[FieldError]:
    """Yield rows that stand there twice, and higher rows that hold no more than a lower one."""
    seen: set[object] = set()
    heights = []
    for number, said in rows:
        height = as_height(said.mark)
        known: object = tidy(said.mark).casefold() if height is None else height.base
        if known in seen:
            yield FieldError(f"marks.{number}.mark", "This stands in the table twice. Keep one of them.")
        elif height is not None:
            heights.append((height.base, number, said.volume))
        seen.add(known)
    heights.sort()
    fall = find_fall([Step(height, volume) for height, _number, volume in heights])
    if fall is not None:
        yield FieldError(
            f"marks.{heights[fall][1]}.volume", "A higher row holds more than the one below it. Check both."
        )
