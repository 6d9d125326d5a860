"""Writes of a count day: started, noted line by line, each saved at once, and ended. Entries are made by clearance."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime

from django.db import transaction
from django.db.models import QuerySet
from django_scopes import scope

from chemicals.journal.models import Entry
from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import Contents, Held, read_contents
from chemicals.process.counting.selectors import COUNTABLE, refuse_kind
from chemicals.process.models import CountDay, CountLine, Seen
from chemicals.science.quantity import Quantity
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.texts import find_bad_lines, tidy

LONGEST_NOTE = 200
LONGEST_AMOUNT = 60
OVER = "This count is over. Start another one."
STARTED = "Somebody counts there already. Go on with that count: several people may note what they see."
WEIGHED = "The books know what is in {vessel} by its weight. Weigh it, and write a mass such as 1.2 kg."
MEASURED = "The books know what is in {vessel} by its volume. Write a volume such as 1.2 L."
UNKNOWN = "The books do not know how much is in {vessel}. Weigh or measure it, and write what is there."


@dataclass(frozen=True, kw_only=True)
class SeenInput:
    """What was said of a container: a value of `Seen`, and with an amount how much, without the container."""

    said: Seen
    amount: Quantity | None = None
    sd: Quantity | None = None
    remark: str = ""


def start_count(*, actor: Membership, now: datetime, place: Place | None = None, note: str = "") -> CountDay:
    """Start a count of what stands at a place; without one, of everything.

    Raises ConflictError if one is open there already.
    """
    require_writer(actor)
    require_same_workshop(actor, *([] if place is None else [place]))
    errors = _check_texts(note=note)
    if errors:
        raise InvalidInputError(errors)
    with transaction.atomic(), scope(workshop=actor.workshop):
        _lock(actor)
        if CountDay.objects.filter(place=place, finished_at=None).exists():
            raise ConflictError(STARTED)
        return CountDay.objects.create(
            workshop=actor.workshop, place=place, note=tidy(note), started_at=now, started_by=actor
        )


def note_line(*, actor: Membership, now: datetime, day: CountDay, vessel: Vessel, seen: SeenInput) -> CountLine:
    """Note what was seen of a container; what was said of it before on this day is taken back, and kept.

    Raises InvalidInputError with everything that is wrong, ConflictError if the count is over.
    """
    require_writer(actor)
    require_same_workshop(actor, day, vessel)
    errors = [*_check(vessel, seen), *_check_texts(remark=seen.remark)]
    if errors:
        raise InvalidInputError(errors)
    amount, sd = seen.amount, seen.sd
    with transaction.atomic(), scope(workshop=actor.workshop):
        _require_open(actor, day)
        _standing(day, vessel).update(taken_back_at=now, taken_back_by=actor)
        return CountLine.objects.create(
            day=day,
            vessel=vessel,
            said=seen.said,
            typed="" if amount is None else amount.typed.strip(),
            dimension="" if amount is None else amount.dimension,
            base=None if amount is None else amount.base,
            typed_sd="" if sd is None else sd.typed.strip(),
            sd=None if sd is None else sd.base,
            remark=tidy(seen.remark),
            seen_at=now,
            seen_by=actor,
        )


def _check(vessel: Vessel, seen: SeenInput) -> list[FieldError]:
    """Return what is wrong with what was said of a container, as the books stand."""
    if vessel.kind not in COUNTABLE:
        return [FieldError("code", refuse_kind(vessel))]
    contents = read_contents(vessel)
    if seen.said != Seen.AMOUNT:
        known = seen.said == Seen.MISSING or _whole(contents) is not None
        return [] if known else [FieldError("amount", UNKNOWN.format(vessel=vessel))]
    if seen.amount is None:
        return [FieldError("amount", "Write what is there, without the container: 1.2 kg, 0.8 L.")]
    errors = []
    if seen.sd is not None and seen.sd.dimension != seen.amount.dimension:
        errors.append(FieldError("sd", "Write the uncertainty in a unit of the same kind as the amount."))
    for name, said in (("amount", seen.amount), ("sd", seen.sd)):
        if said is not None and len(said.typed.strip()) > LONGEST_AMOUNT:
            errors.append(FieldError(name, f"This is too long. Write at most {LONGEST_AMOUNT} characters."))
    weighed, measured = _holds(contents.mass), _holds(contents.volume)
    if seen.amount.dimension == "volume" and weighed and not measured:
        errors.append(FieldError("amount", WEIGHED.format(vessel=vessel)))
    if seen.amount.dimension == "mass" and measured and not weighed:
        errors.append(FieldError("amount", MEASURED.format(vessel=vessel)))
    return errors


def _holds(held: Held | None) -> bool:
    return held is not None and held.amount is not None and held.amount > 0


def _whole(contents: Contents) -> int | None:
    """Return how much the books say is there, by volume or else by weight; None where they do not know."""
    if contents.incomplete and contents.volume is None and contents.mass is None:
        return None
    wholes = [held for held in (contents.volume, contents.mass) if held is not None]
    known = [held.amount for held in wholes if held.amount is not None]
    return 0 if not wholes else next(iter(known), None)


def take_line_back(*, actor: Membership, now: datetime, line: CountLine) -> None:
    """Take a line back, as if nothing had been said of the container; it is kept. Once more changes nothing."""
    require_writer(actor)
    require_same_workshop(actor, line.day)
    with transaction.atomic(), scope(workshop=actor.workshop):
        _require_open(actor, line.day)
        rows = CountLine.objects.filter(pk=line.pk, taken_back_at=None)
        rows.update(taken_back_at=now, taken_back_by=actor)


def abandon_count(*, actor: Membership, now: datetime, day: CountDay) -> CountDay:
    """End a count without any entry; what was noted stays to be read. Once more changes nothing."""
    require_writer(actor)
    require_same_workshop(actor, day)
    with transaction.atomic(), scope(workshop=actor.workshop):
        found = lock_count(actor, day)
        if found.abandoned:
            return found
        if found.finished_at is not None:
            raise ConflictError(OVER)
        found.finished_at, found.finished_by, found.abandoned = now, actor, True
        found.save(update_fields=["finished_at", "finished_by", "abandoned"])
        return found


def close_count(
    *, actor: Membership, now: datetime, day: CountDay, entries: Mapping[int, Entry], unseen: Sequence[str]
) -> None:
    """Finish a count under its lock: ``entries`` by the key of their line, ``unseen`` the names that nobody saw."""
    require_writer(actor)
    require_same_workshop(actor, day)
    with transaction.atomic(), scope(workshop=actor.workshop):
        lines = CountLine.objects.in_bulk(list(entries))
        for key, entry in entries.items():
            lines[key].entry = entry
        CountLine.objects.bulk_update(lines.values(), ["entry"])
        day.finished_at, day.finished_by, day.unseen = now, actor, list(unseen)
        day.save(update_fields=["finished_at", "finished_by", "unseen"])


def lock_count(actor: Membership, day: CountDay) -> CountDay:
    """Lock a count until the transaction ends, and return it as it is now."""
    rows = CountDay.objects.select_for_update(of=("self",)).select_related("workshop", "place")
    return rows.get(pk=day.pk, workshop=actor.workshop)


def _require_open(actor: Membership, day: CountDay) -> None:
    if lock_count(actor, day).finished_at is not None:
        raise ConflictError(OVER)


def _lock(actor: Membership) -> None:
    """Let two people who start at once meet: the second one finds the count of the first."""
    type(actor.workshop).objects.select_for_update().get(pk=actor.workshop_id)


def _standing(day: CountDay, vessel: Vessel) -> QuerySet[CountLine]:
    return CountLine.objects.filter(day=day, vessel=vessel, taken_back_at=None)


def _check_texts(**texts: str) -> list[FieldError]:
    long = f"This is too long. Write at most {LONGEST_NOTE} characters."
    return find_bad_lines(**texts) + [
        FieldError(name, long) for name, text in texts.items() if len(text) > LONGEST_NOTE
    ]
