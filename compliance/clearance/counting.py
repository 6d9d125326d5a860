"""The door for a count day: every line that differs from the books becomes a count, all of them or none."""

from collections.abc import Sequence
from datetime import datetime
from uuid import uuid5

from django.db import transaction
from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.journal.services import Fact, lock_chain
from chemicals.ledger.selectors import get_closed_until
from chemicals.process.build import build
from chemicals.process.counting.selectors import Counted, reckon_count
from chemicals.process.counting.services import OVER, close_count, lock_count
from chemicals.process.draft import Known
from chemicals.process.inputs import CountInput
from chemicals.process.models import CountDay
from chemicals.process.services import record_past
from chemicals.science.quantity import Quantity, parse
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_same_workshop, require_writer
from compliance.clearance.selectors import ask

NOTHING = {"mass": "0 g", "volume": "0 L"}


def finish_count(*, actor: Membership, now: datetime, day: CountDay) -> CountDay:
    """Record a count for every line that differs from the books, dated when it was seen; the day is over then.

    A day that was finished before is returned as it is. Raises InvalidInputError with everything that is wrong, each
    under ``lines.`` and the container's code; nothing is recorded then. Raises ConflictError for an abandoned one.
    """
    require_writer(actor)
    require_same_workshop(actor, day)
    with transaction.atomic(), scope(workshop=actor.workshop):
        lock_chain(actor)
        found = lock_count(actor, day)
        if found.abandoned:
            raise ConflictError(OVER)
        if found.finished_at is not None:
            return found
        reckoning = reckon_count(actor, found)
        facts = _make_facts(actor, now, found, reckoning.differing)
        entries = record_past(actor=actor, now=now, facts=facts) if facts else []
        made = {row.line.pk: entry for row, entry in zip(reckoning.differing, entries, strict=True)}
        unseen = [f"{vessel.name} ({vessel.code})" for vessel in reckoning.unseen]
        close_count(actor=actor, now=now, day=found, entries=made, unseen=unseen)
        return found


def _make_facts(actor: Membership, now: datetime, day: CountDay, rows: Sequence[Counted]) -> list[Fact]:
    """Return what is to be recorded, or raise everything that is wrong with it."""
    errors: list[FieldError] = []
    facts: list[Fact] = []
    known, closed = Known(), get_closed_until(actor.workshop)
    for row in rows:
        field = f"lines.{row.line.vessel.code}"
        if closed is not None and row.line.seen_at < closed:
            errors.append(FieldError(field, f"{row.line.vessel}: the period is closed by now. Look at it once more."))
            continue
        try:
            facts.append(_make_fact(actor, now, day, row, known))
        except InvalidInputError as error:
            errors += [FieldError(field, f"{row.line.vessel}: {each.message}") for each in error.errors]
    if errors:
        raise InvalidInputError(errors)
    return facts


def _make_fact(actor: Membership, now: datetime, day: CountDay, row: Counted, known: Known) -> Fact:
    line, occurred = row.line, Occurred(row.line.seen_at)
    data = CountInput(vessel=line.vessel.uuid, amount=_amount(row), sd=_sd(row))
    built = build(actor, now, data, occurred, known)
    built.require_here()
    return Fact(
        uuid5(day.uuid, str(line.uuid)), built.event, occurred, ask(actor.workshop, built.event, line.seen_at).clearance
    )


def _amount(row: Counted) -> Quantity:
    """Return what was typed, read as it was then: not there is none of what the books know."""
    assert row.counted is not None  # noqa: S101  (else it makes no entry)
    return parse(row.line.typed or NOTHING[row.counted.dimension], row.counted.dimension)


def _sd(row: Counted) -> Quantity | None:
    return parse(row.line.typed_sd, row.line.dimension) if row.line.typed_sd else None
