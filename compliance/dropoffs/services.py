"""Writes about receivers and drop-offs: draft, packed with a manifest, handed over."""

from collections.abc import Iterable, Iterator, Sequence
from datetime import date, datetime
from itertools import combinations
from uuid import uuid5

from django.db import transaction
from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.inputs import HandOverInput
from chemicals.science.quantity import Quantity, parse, show
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.rows import check_row
from compliance.clearance.selectors import compare_marks
from compliance.clearance.services import RefusedError, record
from compliance.documents.models import Paper, PaperKind
from compliance.documents.services import issue_paper
from compliance.dropoffs.load import Load, read_load
from compliance.dropoffs.manifest import build_manifest
from compliance.dropoffs.models import DropOff, DropOffContainer, Mode, Receiver, State
from compliance.waste.models import WasteContainer


def create_receiver(*, actor: Membership, name: str, address: str = "", reference: str = "") -> Receiver:
    """Create a receiver."""
    require_writer(actor)
    receiver = Receiver(workshop=actor.workshop, name=name, address=address, reference=reference)
    errors = check_row(receiver)
    with transaction.atomic(), scope(workshop=actor.workshop):
        if Receiver.objects.filter(name=receiver.name).exists():
            errors.append(FieldError("name", "There is a receiver of this name. Choose it from the list."))
        if errors:
            raise InvalidInputError(errors)
        receiver.save()
        return receiver


def create_drop_off(
    *,
    actor: Membership,
    now: datetime,
    receiver: Receiver,
    mode: str,
    planned_for: date,
    containers: list[WasteContainer],
    stock: Sequence[Vessel] = (),
) -> DropOff:
    """Draft a drop-off of closed waste containers, and of stock containers, empty or not, that shall go."""
    require_writer(actor)
    vessels = [*(container.vessel for container in containers), *stock]
    require_same_workshop(actor, receiver, *vessels)
    with transaction.atomic(), scope(workshop=actor.workshop):
        locked = WasteContainer.objects.select_for_update().filter(pk__in=[container.pk for container in containers])
        rows = {row.pk: row for row in locked.select_related("vessel").order_by("pk")}
        errors = list(_check_draft(mode, vessels))
        errors += _check_closed(rows[container.pk] for container in containers)
        errors += [*_check_stock(stock), *_check_free(vessels)]
        if errors:
            raise InvalidInputError(errors)
        drop_off = DropOff.objects.create(
            workshop=actor.workshop,
            receiver=receiver,
            mode=mode,
            planned_for=planned_for,
            created_at=now,
            created_by=actor,
        )
        DropOffContainer.objects.bulk_create(DropOffContainer(drop_off=drop_off, vessel=vessel) for vessel in vessels)
        return drop_off


def _check_draft(mode: str, vessels: Sequence[Vessel]) -> Iterator[FieldError]:
    if mode not in Mode.values:
        yield FieldError("mode", "Choose brought or picked up.")
    if not vessels:
        yield FieldError("containers", "Choose at least one closed container, or a stock container.")
    for number, vessel in enumerate(vessels):
        if vessel in vessels[:number]:
            yield FieldError(_field_of(vessel), f"{vessel.name} stands twice in the list. Choose it once.")


def _check_closed(containers: Iterable[WasteContainer]) -> Iterator[FieldError]:
    for container in containers:
        if container.closed_at is None:
            yield FieldError("containers", f"{container.vessel.name} is not closed. Weigh and close it first.")


def _check_stock(stock: Sequence[Vessel]) -> Iterator[FieldError]:
    for vessel in stock:
        if vessel.kind != VesselKind.STOCK:
            yield FieldError("stock", f"{vessel.name} is no stock container. Leave it out.")


def _check_free(vessels: Sequence[Vessel]) -> Iterator[FieldError]:
    for row in DropOffContainer.objects.filter(vessel__in=vessels).select_related("vessel"):
        message = f"{row.vessel.name} goes along on another drop-off already."
        yield FieldError(_field_of(row.vessel), message)
    for gone in Vessel.objects.filter(pk__in=[vessel.pk for vessel in vessels], gone_at__isnull=False):
        yield FieldError(_field_of(gone), f"{gone.name} is gone already. Leave it out.")


def _field_of(vessel: Vessel) -> str:
    return "containers" if vessel.kind == VesselKind.WASTE else "stock"


def find_load_dangers(load: Load) -> tuple[str, ...]:
    """Return every pair of containers that must not share a vehicle or a bund, with the danger named."""
    return tuple(
        f"{one.name} and {other.name} must not go in one load: {danger.danger}."
        for (one, left), (other, right) in combinations(load.marks, 2)
        for danger in compare_marks(left, right)
    )


def pack_drop_off(*, actor: Membership, now: datetime, drop_off: DropOff) -> DropOff:
    """Pack: issue the manifest with the contents as the books have them now. From here on the list stands."""
    require_writer(actor)
    require_same_workshop(actor, drop_off)
    with scope(workshop=actor.workshop):
        load = read_load(actor, drop_off)
        if not load.marks and drop_off.state == State.DRAFT:
            raise ConflictError("All that should go along is gone already. Draft another drop-off.")
        dangers = find_load_dangers(load)
        if dangers:
            raise RefusedError(dangers)
        issue_paper(
            actor=actor,
            now=now,
            key=uuid5(drop_off.uuid, "manifest"),
            kind=PaperKind.MANIFEST,
            build=lambda: build_manifest(drop_off, read_load(actor, drop_off)),
            then=lambda paper: _mark_packed(drop_off, paper),
        )
        drop_off.refresh_from_db()
        return drop_off


def _mark_packed(drop_off: DropOff, manifest: Paper) -> None:
    changed = DropOff.objects.filter(pk=drop_off.pk, state=State.DRAFT).update(state=State.PACKED, manifest=manifest)
    if not changed:
        raise ConflictError("This drop-off is packed already.")


def hand_over(*, actor: Membership, now: datetime, drop_off: DropOff, occurred: Occurred | None = None) -> DropOff:
    """Record that every container went to the receiver, all of it; what is gone by itself meanwhile is left out."""
    require_writer(actor)
    require_same_workshop(actor, drop_off)
    with transaction.atomic(), scope(workshop=actor.workshop):
        locked = DropOff.objects.select_for_update().select_related("receiver", "workshop").get(pk=drop_off.pk)
        if locked.state != State.PACKED:
            raise ConflictError("Only a packed drop-off can be handed over. Pack it first.")
        load = read_load(actor, locked)
        weighed = [(each.vessel, _gross(each)) for each in load.waste]
        for vessel, gross in [*weighed, *((each.vessel, None) for each in load.stock)]:
            data = HandOverInput(container=vessel.uuid, receiver=locked.receiver.name, gross=gross)
            record(actor=actor, now=now, key=uuid5(locked.uuid, str(vessel.uuid)), data=data, occurred=occurred)
        locked.state = State.HANDED_OVER
        locked.save(update_fields=["state"])
        return locked


def _gross(container: WasteContainer) -> Quantity | None:
    if container.gross is None:
        return None
    return parse(show(container.gross, "mass", digits=16), "mass")
