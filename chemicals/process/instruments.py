"""Instruments of a workshop: set up, changed, retired. Plain settings: entries keep the figures that they relied on."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date, datetime
from uuid import UUID

from django.db import transaction
from django.db.models import QuerySet
from django_scopes import scope

from chemicals.books.events import Event
from chemicals.journal.models import Attachment, Entry
from chemicals.journal.selectors import list_entries_naming, read_event
from chemicals.ledger.models import Vessel
from chemicals.process.models import LONGEST_TYPED, Instrument
from chemicals.science.quantity import Quantity, QuantityError, parse
from chemicals.science.reading import MEASURED
from chemicals.workshop.errors import FieldError, InvalidInputError, NotFoundError
from chemicals.workshop.models import Membership, Workshop
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.rows import check_row

LARGEST_PICTURE = 5 * 1024 * 1024
"""Bytes of the largest picture: it is shown at the bench, on a phone."""
PICTURES = ("image/png", "image/jpeg")
NO_SHARE = ("pH", "temperature")
"""Of these a share means nothing: their zero lies where somebody put it."""
RECENT = 20
"""How far back the instrument used last at a vessel is looked for."""


@dataclass(frozen=True, kw_only=True)
class InstrumentInput:
    """An instrument; ``sd`` and ``relative_sd`` as typed: "0.1 L", "2 %"."""

    name: str
    measures: str
    sd: str = ""
    relative_sd: str = ""
    calibrated_on: date | None = None
    valid_until: date | None = None
    picture: Attachment | None = None
    retired: bool = False


def list_instruments_for(member: Membership, *measures: str, retired: bool = True) -> QuerySet[Instrument]:
    """Return the instruments of the member's workshop, by what they measure and name. One query.

    ``measures``: only those that measure one of these; without ``retired``: only those in use.
    """
    with scope(workshop=member.workshop):
        rows = Instrument.objects.select_related("picture", "changed_by__user").order_by("retired", "measures", "name")
    if measures:
        rows = rows.filter(measures__in=measures)
    return rows if retired else rows.filter(retired=False)


def get_instrument_for(member: Membership, uuid: UUID) -> Instrument:
    """Return one instrument of the member's workshop."""
    try:
        return list_instruments_for(member).get(uuid=uuid)
    except Instrument.DoesNotExist as error:
        raise NotFoundError("There is no such instrument in this workshop.") from error


def find_last_instrument(member: Membership, vessel: Vessel, kind: str, quantity: str = "") -> UUID | None:
    """Return which instrument the last entry of this kind at a vessel names, cancelled or not. One query.

    ``quantity``: of readings, only those of this one.
    """
    rows: QuerySet[Entry] = list_entries_naming(member, vessel.uuid).filter(kind=kind)
    for event in map(read_event, rows[:RECENT]):
        if not quantity or getattr(event, "quantity", quantity) == quantity:
            found: UUID | None = getattr(event, "instrument", None)
            return found
    return None


def find_expired_instrument(workshop: Workshop, event: Event, at: datetime) -> Instrument | None:
    """Return the instrument that an event names, if its calibration had run out by then. At most one query."""
    uuid: UUID | None = getattr(event, "instrument", None)
    if uuid is None:
        return None
    day = at.astimezone(workshop.zone).date()
    with scope(workshop=workshop):
        return Instrument.objects.filter(uuid=uuid, valid_until__lt=day).first()


def create_instrument(*, actor: Membership, now: datetime, instrument: InstrumentInput) -> Instrument:
    """Enter an instrument. Raises InvalidInputError with everything that is wrong."""
    row = Instrument(workshop=actor.workshop)
    return _write(actor, now, row, instrument)


def change_instrument(*, actor: Membership, now: datetime, row: Instrument, instrument: InstrumentInput) -> Instrument:
    """Change an instrument, a new calibration included, or retire it; what it measures stays."""
    require_same_workshop(actor, row)
    if instrument.measures != row.measures:
        raise InvalidInputError.of("measures", "What it measures stays. Enter another instrument, and retire this one.")
    return _write(actor, now, row, instrument)


def _write(actor: Membership, now: datetime, row: Instrument, said: InstrumentInput) -> Instrument:
    require_writer(actor)
    if said.picture is not None:
        require_same_workshop(actor, said.picture)
    errors = list(_check(said))
    in_order = not any(error.field == "valid_until" for error in errors)
    row.name, row.measures, row.retired = said.name, said.measures, said.retired
    row.calibrated_on, row.valid_until = said.calibrated_on, said.valid_until if in_order else None
    row.picture = said.picture
    row.changed_at, row.changed_by = now, actor
    doubt = MEASURED[said.measures].doubt if said.measures in MEASURED else None
    row.sd_typed, row.sd = _uncertainty(errors, "sd", said.sd, doubt)
    row.relative_typed, row.relative_sd = _uncertainty(errors, "relative_sd", said.relative_sd, "fraction")
    with transaction.atomic(), scope(workshop=actor.workshop):
        errors += check_row(row, unique=True, leave_out=["sd_typed", "relative_typed"])
        if errors:
            raise InvalidInputError(errors)
        row.save()
    return row


def _uncertainty(errors: list[FieldError], field: str, typed: str, dimension: str | None) -> tuple[str, int | None]:
    """Return an uncertainty as typed and in base units; one that cannot be read is noted."""
    text = typed.strip()
    if not text or dimension is None:
        return "", None
    try:
        found: Quantity = parse(text, dimension)
    except QuantityError as error:
        errors.append(FieldError(field, error.message))
        return "", None
    if len(text) > LONGEST_TYPED:
        errors.append(FieldError(field, "This is too long. Write a number and a unit."))
    return text, found.base


def _check(said: InstrumentInput) -> Iterator[FieldError]:
    measurable = MEASURED.get(said.measures)
    if said.sd.strip() and measurable is not None and measurable.doubt is None:
        yield FieldError("sd", f"Of a {said.measures} write the uncertainty as a share, such as 2 %.")
    if said.relative_sd.strip() and said.measures in NO_SHARE:
        yield FieldError("relative_sd", f"A share of a {said.measures} means nothing. Write the uncertainty itself.")
    if said.calibrated_on is not None and said.valid_until is not None and said.valid_until < said.calibrated_on:
        yield FieldError("valid_until", "This lies before the calibration. Check both days.")
    if said.picture is not None and said.picture.media_type not in PICTURES:
        yield FieldError("picture", "This is no picture. Choose a PNG or JPEG file.")
    if said.picture is not None and said.picture.size > LARGEST_PICTURE:
        yield FieldError("picture", "This picture is larger than 5 MB. Make it smaller.")
