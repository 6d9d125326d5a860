"""Writes of the ledger: vessels, and the projection of entries. Called inside the transaction of the whole record."""

from collections.abc import Sequence
from datetime import date, datetime
from uuid import UUID

from django.db import IntegrityError, transaction
from django_scopes import scope, scopes_disabled

from chemicals.books import events, fold
from chemicals.books.events import BOUNDARIES
from chemicals.journal.models import Entry
from chemicals.journal.services import lock_head
from chemicals.ledger import gone, late, periods, projection, recompute
from chemicals.ledger.care import check_days
from chemicals.ledger.codes import make_code
from chemicals.ledger.followed import NOTHING, components_of, read_followed, write_followed
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import list_outdated_books
from chemicals.ledger.together import find_first, remember_all
from chemicals.register.models import Product
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Place, Workshop
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.rows import check_row

BATCH = 500
"""Vessels that are written at once."""


def create_vessel(
    *,
    actor: Membership,
    now: datetime,
    kind: VesselKind,
    name: str,
    place: Place | None = None,
    product: Product | None = None,
    capacity: int | None = None,
    opened_on: date | None = None,
    expires_on: date | None = None,
    uuid: UUID | None = None,
) -> Vessel:
    """Create a vessel with a fresh code. ``capacity`` in nanolitres; only what holds something as bought has days.

    ``uuid`` where the caller must know it again, else a fresh one.
    """
    require_writer(actor)
    require_same_workshop(actor, *(thing for thing in (place, product) if thing is not None))
    vessel = Vessel(
        workshop=actor.workshop,
        code=_free_code(),
        kind=kind,
        name=name,
        place=place,
        product=product,
        capacity=capacity,
        opened_on=opened_on,
        expires_on=expires_on,
        created_at=now,
        created_by=actor,
    )
    if uuid is not None:
        vessel.uuid = uuid
    with scope(workshop=actor.workshop):
        errors = [*check_row(vessel, leave_out=["code"], unique=True), *check_days(vessel, now)]
        if capacity is not None and capacity <= 0:
            errors.append(
                FieldError("capacity", "A vessel holds more than nothing. Write its capacity, or leave it out.")
            )
        if errors:
            raise InvalidInputError(errors)
        with transaction.atomic():
            vessel.save()
    return vessel


def check_vessel(vessel: Vessel, now: datetime) -> list[FieldError]:
    """Return everything that is wrong with a vessel that is not written yet, but whether its name is free."""
    others = ["code", "workshop", "place", "product", "created_at", "created_by"]
    return [*check_row(vessel, leave_out=others), *check_days(vessel, now)]


def create_vessels(*, actor: Membership, now: datetime, vessels: Sequence[Vessel]) -> None:
    """Write vessels of the actor's own workshop that were checked, each with a fresh code; a few queries for all.

    Raises IntegrityError where a name was taken meanwhile.
    """
    require_writer(actor)
    for vessel, code in zip(vessels, _free_codes(len(vessels)), strict=True):
        vessel.code, vessel.created_at, vessel.created_by = code, now, actor
        vessel.note_searched()
    with transaction.atomic(), scope(workshop=actor.workshop):
        Vessel.objects.bulk_create(vessels, batch_size=BATCH)


def _free_codes(count: int) -> list[str]:
    free: set[str] = set()
    with scopes_disabled():
        while len(free) < count:
            fresh = {make_code() for _ in range(min(BATCH, count - len(free)))}
            free |= fresh - set(Vessel.objects.filter(code__in=fresh).values_list("code", flat=True))
    return list(free)


def _free_code() -> str:
    with scopes_disabled():
        for _ in range(20):
            code = make_code()
            if not Vessel.objects.filter(code=code).exists():
                return code
    raise IntegrityError("no free vessel code found")


def project_entry(entry: Entry, event: events.Event) -> fold.Folded:
    """Bring the ledger up to date with a new entry and return what followed from it; call it under the chain's lock.

    An entry at the end of time folds on the holdings it touches. A late one, or a cancellation, folds again what comes
    after it in fold order: (``occurred_at``, ``sequence``), so that of two entries of the same minute the one that was
    recorded first counts first. With more than LATE_LIMIT later entries, or while a job is at it already, the job does
    it, and nothing is known to have followed yet. Raises InvalidInputError for what would change a closed period.
    """
    with transaction.atomic(), scope(workshop=entry.workshop):
        start = late.find_start(entry, event)
        if start is None:
            return NOTHING
        periods.require_open(entry, event)
        books = recompute.get_books(entry.workshop)
        if books.position is None and books.fold_version != fold.VERSION:
            refold(entry.workshop)
        elif books.position is None and start == recompute.order_of(entry) and not late.count_later(start):
            folded = _fold_at_the_end(entry, event)
            gone.settle(gone.concerned([(entry, event)]))
            return folded
        elif not late.fold_again(entry.workshop, entry.recorded_at, start):
            late.remember_meanwhile(entry.workshop, entry, event)
            return NOTHING
        gone.settle(gone.concerned([(entry, event)]))
        return read_followed([entry], projection.Names(entry.workshop, ()))[entry.pk] or NOTHING


def project_entries(workshop: Workshop, now: datetime, recorded: Sequence[tuple[Entry, events.Event]]) -> bool:
    """Bring the ledger up to date with entries that were recorded together; say whether the books stand now.

    Call it under the chain's lock; none of them is a cancellation. Everything is folded again from the earliest of them
    on, at once or, with more than LATE_LIMIT entries from there on, by the job. Raises InvalidInputError for what would
    change a closed period.
    """
    with transaction.atomic(), scope(workshop=workshop):
        first = find_first(recorded)
        if first is None:
            return True
        periods.require_open(*first)
        books = recompute.get_books(workshop)
        if books.position is None and books.fold_version != fold.VERSION:
            refold(workshop)
        elif not late.fold_again(workshop, now, recompute.order_of(first[0])):
            remember_all(workshop, recorded)
            return False
        gone.settle(gone.concerned(recorded))
        return True


def _fold_at_the_end(entry: Entry, event: events.Event) -> fold.Folded:
    state = projection.load_state(entry.workshop, event.vessels())
    folded = fold.fold_event(state, event)
    ends = {end for transfer in folded.transfers for end in (transfer.source, transfer.target)} - BOUNDARIES
    vessels = ends | {vessel for vessel, _, _ in folded.contents}
    names = projection.Names(entry.workshop, components_of([folded]), vessels)
    write_followed([(entry, folded)], names)
    projection.write_touched(entry.workshop, state, names)
    return folded


def refold(workshop: Workshop) -> None:
    """Fold everything again that lies in no closed period, and write what differs; the books stand afterwards."""
    with transaction.atomic(), scope(workshop=workshop):
        lock_head(workshop)
        last = recompute.get_last_close()
        recompute.get_books(workshop)
        recompute.refold_from(workshop, projection.load_closing_state(last), recompute.start_after(last))
        gone.settle()


def refold_outdated() -> list[Workshop]:
    """Fold the books again that another version of the fold kept; return their workshops."""
    outdated = list_outdated_books()
    for workshop in outdated:
        refold(workshop)
    return outdated
