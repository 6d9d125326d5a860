"""A jar comes in: its product if the register does not have it, its containers, and what was received into them."""

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from datetime import date, datetime
from functools import partial
from itertools import islice
from typing import TypeVar
from uuid import UUID, uuid5

from django.db import transaction
from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.journal.models import Entry
from chemicals.journal.services import FUTURE, lies_ahead, lock_chain
from chemicals.ledger import recompute
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.naming import LONGEST, list_free_names, split_number
from chemicals.ledger.periods import explain_closed
from chemicals.ledger.services import create_vessel
from chemicals.process.inputs import ReceiptInput
from chemicals.register.models import Product
from chemicals.register.services import RevisionInput, create_product
from chemicals.science.quantity import Quantity
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.texts import find_bad_lines, tidy
from compliance.clearance.services import record

MOST_ALIKE = 20
"""Containers that are received at once."""
LONGEST_LOT = 60
"""Characters."""
T = TypeVar("T")


@dataclass(frozen=True, kw_only=True)
class NewProductInput:
    """A product that is not in the register yet; composition and hazards are entered later, by revising it."""

    name: str
    supplier: str = ""
    form: str


@dataclass(frozen=True, kw_only=True)
class JarInput:
    """Containers of one product, all alike, as they came in.

    Without a ``name`` they are called after their product; several are numbered. ``amount`` is what is in each of them;
    without it they are set up empty. ``capacity`` in nanolitres. ``received_on`` None is now.
    """

    product: Product | None = None
    new_product: NewProductInput | None = None
    name: str = ""
    count: int = 1
    amount: Quantity | None = None
    lot: str = ""
    place: Place | None = None
    capacity: int | None = None
    received_on: date | None = None
    opened_on: date | None = None
    expires_on: date | None = None


@dataclass(frozen=True)
class Received:
    """The containers, by their number; ``is_new`` False if they were here under the same key already."""

    vessels: tuple[Vessel, ...]
    is_new: bool


def receive_containers(*, actor: Membership, now: datetime, key: UUID, jar: JarInput) -> Received:
    """Set up containers alike and record what was received into each, all of it or nothing.

    The same ``key`` with the same content returns the first containers; with another one it raises ConflictError.
    Raises InvalidInputError with everything that is wrong, by field (of a new product ``new_product.name``),
    RefusedError if something may not be poured in.
    """
    require_writer(actor)
    require_same_workshop(actor, *(thing for thing in (jar.product, jar.place) if thing is not None))
    with transaction.atomic(), scope(workshop=actor.workshop):
        lock_chain(actor)  # a second press waits here, and finds the containers of the first
        made = _list_made(actor, key)
        if made:
            _require_same(made, jar)
            _fill(actor, now, made, jar)
            return Received(tuple(made), is_new=False)
        errors = list(_check(actor, now, jar))
        product = _note(errors, lambda: _find_product(actor, now, jar))
        vessels = [
            _note(errors, partial(_set_up, actor, now, jar, uuid=uuid, name=name, product=product))
            for uuid, name in zip(_container_keys(actor, key), _name(actor, jar), strict=False)
        ]
        if errors:
            raise InvalidInputError(list(dict.fromkeys(errors)))
        found = [vessel for vessel in vessels if vessel is not None]
        _fill(actor, now, found, jar)
        return Received(tuple(found), is_new=True)


def _note(errors: list[FieldError], act: Callable[[], T]) -> T | None:
    """Return what is done; note what is wrong with it beside everything else."""
    try:
        return act()
    except InvalidInputError as error:
        errors += error.errors
        return None


def _container_keys(actor: Membership, key: UUID) -> list[UUID]:
    """Return the identifiers of the containers of a key, by their number; workshops do not meet in them."""
    return [uuid5(key, f"{actor.workshop.uuid} container {number}") for number in range(MOST_ALIKE)]


def _receipt_key(vessel: Vessel) -> UUID:
    return uuid5(vessel.uuid, "receipt")


def _list_made(actor: Membership, key: UUID) -> list[Vessel]:
    """Return the containers that were set up under this key, by their number."""
    keys = _container_keys(actor, key)
    rows = Vessel.objects.select_related("product", "place").filter(uuid__in=keys)
    return sorted(rows, key=lambda vessel: keys.index(vessel.uuid))


def _require_same(made: list[Vessel], jar: JarInput) -> None:
    """Refuse a key that stands for other containers. What is cared for may have changed meanwhile."""
    product, new = made[0].product, jar.new_product
    said = jar.product and _named(jar.product) if new is None else _named(new)
    same = product is not None and _named(product) == said
    receipts = Entry.objects.filter(uuid__in=[_receipt_key(vessel) for vessel in made]).count()
    if not same or len(made) != jar.count or receipts != (0 if jar.amount is None else jar.count):
        raise ConflictError("This key was used for other containers. Open a fresh form and set these up again.")


def _named(product: Product | NewProductInput) -> tuple[str, str]:
    """Return by what a product is known; no other of the workshop has the same."""
    return tidy(product.name), tidy(product.supplier)


def _check(actor: Membership, now: datetime, jar: JarInput) -> Iterator[FieldError]:
    if jar.product is not None and jar.new_product is not None:
        yield FieldError("product", "This is one of the register and a new one. Choose, or write a new one: not both.")
    if jar.product is None and jar.new_product is None:
        yield FieldError("product", "Choose the product, or write a new one.")
    if not 1 <= jar.count <= MOST_ALIKE:
        yield FieldError("count", f"Write how many are alike, from 1 to {MOST_ALIKE}.")
    if jar.amount is not None and jar.amount.base <= 0:
        yield FieldError("amount", "Write how much is in each, or leave it out for an empty container.")
    yield from _check_day(actor, now, jar)
    yield from find_bad_lines(lot=jar.lot)
    if len(jar.lot) > LONGEST_LOT:
        yield FieldError("lot", f"This is too long. Write it in at most {LONGEST_LOT} characters.")
    if jar.lot and jar.amount is None:
        yield FieldError("amount", "A lot belongs to what was received. Write the amount, or leave the lot out.")


def _check_day(actor: Membership, now: datetime, jar: JarInput) -> Iterator[FieldError]:
    """Yield what is wrong with the day on which something came: to come, or in a closed period."""
    when, last = _occurred(actor, now, jar), recompute.get_last_close()
    if when is None or jar.amount is None:
        return
    if lies_ahead(actor.workshop, now, when):
        yield FieldError("received_on", FUTURE)
    elif last is not None and when.at < last.until:
        yield FieldError("received_on", explain_closed(last))


def _occurred(actor: Membership, now: datetime, jar: JarInput) -> Occurred | None:
    """Return when it came in: a day, of which nothing finer is known; None is now."""
    zone = actor.workshop.zone
    if jar.received_on is None or jar.received_on == now.astimezone(zone).date():
        return None
    return Occurred.on_day(jar.received_on, zone)


def _find_product(actor: Membership, now: datetime, jar: JarInput) -> Product | None:
    """Return the product; one that is new is created with a first revision, of which nobody said what is in it."""
    new = jar.new_product
    if new is None:
        return jar.product
    try:
        revision = create_product(
            actor=actor,
            now=now,
            name=new.name,
            supplier=new.supplier,
            revision=RevisionInput(form=new.form, complete=False),
        )
    except InvalidInputError as error:
        errors = [FieldError(f"new_product.{each.field}", each.message) for each in error.errors]
        raise InvalidInputError(errors) from error
    return revision.product


def _name(actor: Membership, jar: JarInput) -> list[str]:
    """Return the names of the containers: as written, numbered if there are several, else after their product.

    What cannot be a name is returned as it is, to be refused with the container.
    """
    written, count = tidy(jar.name), max(1, min(jar.count, MOST_ALIKE))
    product = jar.product if jar.new_product is None else jar.new_product
    stem, start = split_number(written) if written else (tidy(product.name) if product else "", 1)
    if not stem or find_bad_lines(name=stem):
        return [written] if written else []
    if written and (count == 1 or len(written) > LONGEST):
        return [written]
    return list(islice(list_free_names(actor, stem, start), count))


def _set_up(
    actor: Membership, now: datetime, jar: JarInput, *, uuid: UUID, name: str, product: Product | None
) -> Vessel:
    return create_vessel(
        actor=actor,
        now=now,
        kind=VesselKind.STOCK,
        name=name,
        place=jar.place,
        product=product,
        capacity=jar.capacity,
        opened_on=jar.opened_on,
        expires_on=jar.expires_on,
        uuid=uuid,
    )


def _fill(actor: Membership, now: datetime, vessels: list[Vessel], jar: JarInput) -> None:
    """Record what was received into each container, if anything was."""
    if jar.amount is None:
        return
    for vessel in vessels:
        data = ReceiptInput(vessel=vessel.uuid, amount=jar.amount, lot=tidy(jar.lot))
        try:
            record(actor=actor, now=now, key=_receipt_key(vessel), data=data, occurred=_occurred(actor, now, jar))
        except InvalidInputError as error:
            names = {"occurred_at": "received_on", "vessel": "product"}
            errors = [FieldError(names.get(each.field, each.field), each.message) for each in error.errors]
            raise InvalidInputError(errors) from error
