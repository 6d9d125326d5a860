"""Writes of the ledger: vessels, and the projection of entries. Called inside the transaction of the whole record."""

from datetime import datetime
from uuid import UUID

from django.db import IntegrityError, transaction
from django_scopes import scope, scopes_disabled

from chemicals.books import events, fold
from chemicals.journal import selectors as journal
from chemicals.journal.models import Entry
from chemicals.ledger import projection
from chemicals.ledger.codes import make_code
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.register.models import Product
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Place, Workshop
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.rows import check_row


def create_vessel(
    *,
    actor: Membership,
    now: datetime,
    kind: VesselKind,
    name: str,
    place: Place | None = None,
    product: Product | None = None,
    capacity: int | None = None,
) -> Vessel:
    """Create a vessel with a fresh code. ``capacity`` in nanolitres."""
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
        created_at=now,
        created_by=actor,
    )
    with scope(workshop=actor.workshop):
        errors = check_row(vessel, leave_out=["code"], unique=True)
        if capacity is not None and capacity <= 0:
            errors.append(
                FieldError("capacity", "A vessel holds more than nothing. Write its capacity, or leave it out.")
            )
        if errors:
            raise InvalidInputError(errors)
        with transaction.atomic():
            vessel.save()
    return vessel


def _free_code() -> str:
    with scopes_disabled():
        for _ in range(20):
            code = make_code()
            if not Vessel.objects.filter(code=code).exists():
                return code
    raise IntegrityError("no free vessel code found")


def project_entry(entry: Entry, event: events.Event) -> fold.Folded:
    """Bring the ledger up to date with a new entry and return what followed from it.

    An entry at the end of time folds on the holdings it touches. A late one, or a cancellation, folds everything
    again in memory and writes only what differs.
    """
    with scope(workshop=entry.workshop):
        if type(event) not in fold.FOLDS and not isinstance(event, events.Cancellation):
            return fold.Folded((), (), ())
        if isinstance(event, events.Cancellation) or _is_late(entry):
            followed = refold(entry.workshop)
            return followed.get(entry.uuid, fold.Folded((), (), ()))
        state = projection.load_state(entry.workshop, event.vessels())
        folded = fold.fold_event(state, event)
        projection.write_incrementally(entry, state, folded)
        return folded


def _is_late(entry: Entry) -> bool:
    folding = [kind.KIND for kind in fold.FOLDS]
    return Entry.objects.filter(kind__in=folding, occurred_at__gt=entry.occurred_at).exists()


def refold(workshop: Workshop) -> dict[UUID, fold.Folded]:
    """Fold all entries of a workshop again and write what differs; return what followed from each entry."""
    with transaction.atomic(), scope(workshop=workshop):
        state, followed = fold.rebuild(journal.iterate_fold_entries(workshop))
        projection.write_differences(workshop, state, followed)
        return followed
