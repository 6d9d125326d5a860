"""What is cared for without anything being poured: names, places, when something was opened, until when it keeps."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import date, datetime
from enum import Enum

from django.db import transaction
from django_scopes import scope

from chemicals.ledger import gone
from chemicals.ledger.models import LONGEST_NOTE, Vessel, VesselChange, VesselFact, VesselKind
from chemicals.ledger.selectors import is_known_empty
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.rows import check_row
from chemicals.workshop.texts import find_bad_lines, tidy


class Keep(Enum):
    """Stands for what shall stay as it is, where None means that it is not known."""

    KEEP = "keep"


KEEP = Keep.KEEP
CONTAINERS = frozenset({VesselKind.STOCK, VesselKind.ANODE})
"""What holds something as bought, and so may be opened, keep until a day, and be gone when it is empty."""


@dataclass(frozen=True, kw_only=True)
class CareInput:
    """What is to change of vessels without anything being poured."""

    name: str | Keep = KEEP
    place: Place | Keep | None = KEEP
    opened_on: date | Keep | None = KEEP
    expires_on: date | Keep | None = KEEP
    gone: bool | Keep = KEEP
    note: str = ""
    """Why, or how: kept beside what changes."""


def change_vessels(*, actor: Membership, now: datetime, vessels: Sequence[Vessel], care: CareInput) -> list[Vessel]:
    """Change vessels alike, all of them or none; each change is noted with who and when. Return them as they are now.

    Raises InvalidInputError with everything that is wrong, by field.
    """
    require_writer(actor)
    place = [care.place] if isinstance(care.place, Place) else []
    require_same_workshop(actor, *vessels, *place)
    with transaction.atomic(), scope(workshop=actor.workshop):
        rows = Vessel.objects.select_for_update(of=("self",)).select_related("place", "workshop", "product")
        found = list(rows.filter(pk__in=[vessel.pk for vessel in vessels]).order_by("name"))
        errors = [] if found else [FieldError("vessels", "Nothing is named. Choose what shall change.")]
        errors += _check_note(care.note)
        notes = [note for vessel in found for note in _change(vessel, care, actor, now)]
        errors += [error for vessel in found for error in _check_care(vessel, care, now)]
        if errors:
            raise InvalidInputError(list(dict.fromkeys(errors)))
        for vessel in {note.vessel.pk: note.vessel for note in notes}.values():
            vessel.save()
        VesselChange.objects.bulk_create(notes)
    return found


def _change(vessel: Vessel, care: CareInput, actor: Membership, now: datetime) -> Iterator[VesselChange]:
    """Put what is said into a row, and yield a note of everything that differs."""
    left: datetime | Keep | None = care.gone if isinstance(care.gone, Keep) else (now if care.gone else None)
    if vessel.gone_at is not None and left is not None:
        left = KEEP
    said = {
        VesselFact.NAME: ("name", care.name),
        VesselFact.PLACE: ("place", care.place),
        VesselFact.OPENED: ("opened_on", care.opened_on),
        VesselFact.EXPIRES: ("expires_on", care.expires_on),
        VesselFact.GONE: ("gone_at", left),
    }
    for fact, (field, value) in said.items():
        before = getattr(vessel, field)
        if value is KEEP or value == before:
            continue
        setattr(vessel, field, value)
        yield VesselChange(
            workshop=vessel.workshop,
            vessel=vessel,
            fact=fact,
            before=_tell(before, vessel),
            after=_tell(value, vessel),
            note=tidy(care.note),
            changed_at=now,
            changed_by=actor,
        )


def _tell(value: object, vessel: Vessel) -> str:
    """Return a fact of a vessel as a person reads it: names, days by the workshop's clock, empty for nothing."""
    if isinstance(value, datetime):
        return value.astimezone(vessel.workshop.zone).date().isoformat()
    return "" if value is None else str(value).strip()[:80]


def _check_care(vessel: Vessel, care: CareInput, now: datetime) -> Iterator[FieldError]:
    """Yield what is wrong with a vessel once it has changed."""
    if care.name is not KEEP:
        yield from check_row(vessel, leave_out=["code"], unique=True)
    dated = isinstance(care.opened_on, date) or isinstance(care.expires_on, date) or care.gone is True
    if dated:
        yield from check_days(vessel, now)
    if care.gone is True and not is_known_empty(vessel):
        yield FieldError("vessels", f"{vessel.name} is not known to be empty. Count it, or record where it went.")
    if care.gone is False and gone.is_handed_over(vessel):
        message = f"{vessel.name} was handed over. Cancel that entry, if it never left; else set up another container."
        yield FieldError("vessels", message)


def _check_note(note: str) -> Iterator[FieldError]:
    yield from find_bad_lines(note=note)
    if len(note) > LONGEST_NOTE:
        yield FieldError("note", f"This is too long. Write it in at most {LONGEST_NOTE} characters.")


def check_days(vessel: Vessel, now: datetime) -> Iterator[FieldError]:
    """Yield what is wrong with the days of a vessel: when it was opened, until when it keeps, since when it is gone."""
    dated = any(day is not None for day in (vessel.opened_on, vessel.expires_on, vessel.gone_at))
    if dated and vessel.kind not in CONTAINERS:
        yield FieldError("vessels", f"{vessel.name} holds nothing as bought. Leave it out.")
    if vessel.opened_on is not None and vessel.opened_on > now.astimezone(vessel.workshop.zone).date():
        yield FieldError("opened_on", "This day is still to come. Write when it was opened.")
