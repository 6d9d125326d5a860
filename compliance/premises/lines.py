"""Writes of the workshop's own lines: limits of places, what is kept apart, what was assessed. Owners write them."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date, datetime
from typing import TypeVar

from django.db import transaction
from django_scopes import scope

from chemicals.science.quantity import Quantity
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.permissions import require_owner, require_same_workshop
from chemicals.workshop.rows import check_row
from compliance.premises.models import Assessment, KeepApart, Line, Measure, QuantityLimit, Reach
from compliance.premises.sorts import list_sorts

L = TypeVar("L", QuantityLimit, KeepApart)
LONGEST_ASSESSMENT_YEARS = 5
NO_SUCH_SORT = "There is no such sort. Choose one from the list."


@dataclass(frozen=True, kw_only=True)
class LimitInput:
    """How much of a sort may stand in a place, a volume or a mass; where that was read, and when last compared."""

    sort: str
    amount: Quantity
    citation: str
    checked_on: date


@dataclass(frozen=True, kw_only=True)
class KeepApartInput:
    """Two sorts that must not share what ``reach`` says; where that was read, and when last compared."""

    first: str
    second: str
    reach: str
    citation: str
    checked_on: date


@dataclass(frozen=True, kw_only=True)
class AssessmentInput:
    """Who assessed two sorts that share a place, or a bund or duct named ``shared``; until when that holds; why."""

    first: str
    second: str
    reach: str
    place: Place | None = None
    shared: str = ""
    assessed_by: str
    until: date
    reason: str


def add_limit(*, actor: Membership, now: datetime, place: Place, limit: LimitInput) -> QuantityLimit:
    """Add a limit of a place."""
    require_same_workshop(actor, place)
    return _save_limit(QuantityLimit(workshop_id=actor.workshop_id, place=place), actor, now, limit)


def change_limit(*, actor: Membership, now: datetime, row: QuantityLimit, limit: LimitInput) -> QuantityLimit:
    """Change a limit, or say that it was compared again; who did so last is kept."""
    return _save_limit(row, actor, now, limit)


def _save_limit(row: QuantityLimit, actor: Membership, now: datetime, limit: LimitInput) -> QuantityLimit:
    amount = limit.amount
    row.sort, row.typed, row.amount, row.measure = limit.sort, amount.typed, amount.base, amount.dimension
    errors = [] if limit.sort in list_sorts() else [FieldError("sort", NO_SUCH_SORT)]
    if amount.dimension not in Measure.values:
        errors.append(FieldError("amount", "Write a volume or a mass, for example 20 L or 5 kg."))
    return _save(row, actor, now, limit, errors)


def add_keep_apart(*, actor: Membership, now: datetime, line: KeepApartInput) -> KeepApart:
    """Add a line on what is kept apart."""
    return _save_apart(KeepApart(workshop_id=actor.workshop_id), actor, now, line)


def change_keep_apart(*, actor: Membership, now: datetime, row: KeepApart, line: KeepApartInput) -> KeepApart:
    """Change a line on what is kept apart, or say that it was compared again."""
    return _save_apart(row, actor, now, line)


def _save_apart(row: KeepApart, actor: Membership, now: datetime, line: KeepApartInput) -> KeepApart:
    row.first, row.second, row.reach = line.first, line.second, line.reach
    errors = list(_check_pair(line.first, line.second))
    if line.first == line.second:
        errors.append(FieldError("second", "These are the same. Choose another sort, or set a limit."))
    return _save(row, actor, now, line, errors)


def _check_pair(first: str, second: str) -> Iterator[FieldError]:
    for name, sort in (("first", first), ("second", second)):
        if sort not in list_sorts():
            yield FieldError(name, NO_SUCH_SORT)


def _save(row: L, actor: Membership, now: datetime, said: LimitInput | KeepApartInput, wrong: list[FieldError]) -> L:
    """Check and write a line with who and when."""
    require_owner(actor)
    require_same_workshop(actor, row)
    row.citation, row.checked_on = said.citation, said.checked_on
    row.entered_at, row.entered_by = now, actor
    errors = _once(wrong, check_row(row))
    if said.checked_on > now.astimezone(actor.workshop.zone).date():
        errors.append(FieldError("checked_on", "This day is still to come. Write when it was compared."))
    if errors:
        raise InvalidInputError(errors)
    with transaction.atomic(), scope(workshop=actor.workshop):
        row.save()
    return row


def _once(wrong: list[FieldError], found: list[FieldError]) -> list[FieldError]:
    """Return what is wrong with what was said, and what else with the row, by the names that were asked for."""
    asked = [
        FieldError({"typed": "amount", "measure": "amount"}.get(each.field, each.field), each.message) for each in found
    ]
    told = {error.field for error in wrong}
    return [*wrong, *(each for each in asked if each.field not in told)]


def remove_line(*, actor: Membership, row: Line | Assessment) -> None:
    """Remove a limit, a line on what is kept apart, or an assessment: it no longer counts."""
    require_owner(actor)
    require_same_workshop(actor, row)
    with transaction.atomic(), scope(workshop=actor.workshop):
        row.delete()


def note_assessment(*, actor: Membership, now: datetime, assessment: AssessmentInput) -> Assessment:
    """Note that somebody assessed two sorts that stand together, until when that holds, and why. It hides nothing."""
    require_owner(actor)
    require_same_workshop(actor, *([assessment.place] if assessment.place else []))
    row = Assessment(workshop_id=actor.workshop_id, entered_at=now, entered_by=actor, **vars(assessment))
    wrong = [*_check_pair(assessment.first, assessment.second), *_check_where(assessment)]
    errors = _once(wrong, check_row(row))
    today = now.astimezone(actor.workshop.zone).date()
    if assessment.until < today:
        errors.append(FieldError("until", "This day is over. Write until when it holds."))
    elif assessment.until.year > today.year + LONGEST_ASSESSMENT_YEARS:
        most = f"Write a day within {LONGEST_ASSESSMENT_YEARS} years."
        errors.append(FieldError("until", f"Nobody can tell for so long. {most}"))
    if errors:
        raise InvalidInputError(errors)
    with transaction.atomic(), scope(workshop=actor.workshop):
        row.save()
    return row


def _check_where(assessment: AssessmentInput) -> Iterator[FieldError]:
    if assessment.reach not in Reach.values:
        yield FieldError("reach", "Choose the same place, bund or exhaust duct.")
    elif assessment.reach == Reach.PLACE:
        if assessment.place is None:
            yield FieldError("place", "Say which place is meant.")
        if assessment.shared:
            yield FieldError("shared", "This is of a place. Leave the name of the bund or duct out.")
    else:
        if assessment.place is not None:
            yield FieldError("place", "This is of a bund or duct. Leave the place out.")
        if not assessment.shared:
            yield FieldError("shared", "Write the name of the bund or exhaust duct.")
