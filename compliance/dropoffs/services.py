"""Writes about receivers and drop-offs: draft, packed with a manifest, handed over."""

from collections.abc import Iterable, Iterator
from datetime import date, datetime
from itertools import combinations
from uuid import uuid5

from django.db import transaction
from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.process.inputs import HandOverInput
from chemicals.science.quantity import Quantity, parse, show
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.rows import check_row
from compliance.clearance.selectors import find_dangers_between
from compliance.clearance.services import RefusedError, record
from compliance.documents.models import Paper, PaperKind
from compliance.documents.services import issue_paper
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
) -> DropOff:
    """Draft a drop-off of closed containers."""
    require_writer(actor)
    require_same_workshop(actor, receiver, *(container.vessel for container in containers))
    with transaction.atomic(), scope(workshop=actor.workshop):
        locked = WasteContainer.objects.select_for_update().filter(pk__in=[container.pk for container in containers])
        rows = {row.pk: row for row in locked.select_related("vessel").order_by("pk")}
        errors = [*_check_draft(mode, [rows[container.pk] for container in containers]), *_check_free(rows.values())]
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
        DropOffContainer.objects.bulk_create(
            DropOffContainer(drop_off=drop_off, vessel=container.vessel) for container in containers
        )
        return drop_off


def _check_draft(mode: str, containers: list[WasteContainer]) -> Iterator[FieldError]:
    if mode not in Mode.values:
        yield FieldError("mode", "Choose brought or picked up.")
    if not containers:
        yield FieldError("containers", "Choose at least one closed container.")
    for number, container in enumerate(containers):
        if container.closed_at is None:
            yield FieldError("containers", f"{container.vessel.name} is not closed. Weigh and close it first.")
        if container in containers[:number]:
            yield FieldError("containers", f"{container.vessel.name} stands twice in the list. Choose it once.")


def _check_free(containers: Iterable[WasteContainer]) -> Iterator[FieldError]:
    taken = DropOffContainer.objects.filter(vessel__in=[container.vessel for container in containers])
    for row in taken.select_related("vessel"):
        yield FieldError("containers", f"{row.vessel.name} goes along on another drop-off already.")


def find_load_dangers(containers: list[WasteContainer]) -> tuple[str, ...]:
    """Return every pair of containers that must not share a vehicle or a bund, with the danger named."""
    return tuple(
        f"{one.vessel.name} and {other.vessel.name} must not go in one load: {danger.danger}."
        for one, other in combinations(containers, 2)
        for danger in find_dangers_between(one.vessel, other.vessel)
    )


def pack_drop_off(*, actor: Membership, now: datetime, drop_off: DropOff) -> DropOff:
    """Pack: issue the manifest with the contents as the books have them now. From here on the list stands."""
    require_writer(actor)
    require_same_workshop(actor, drop_off)
    with scope(workshop=actor.workshop):
        containers = _containers_of(drop_off)
        dangers = find_load_dangers(containers)
        if dangers:
            raise RefusedError(dangers)
        issue_paper(
            actor=actor,
            now=now,
            key=uuid5(drop_off.uuid, "manifest"),
            kind=PaperKind.MANIFEST,
            build=lambda: build_manifest(drop_off, containers),
            then=lambda paper: _mark_packed(drop_off, paper),
        )
        drop_off.refresh_from_db()
        return drop_off


def _mark_packed(drop_off: DropOff, manifest: Paper) -> None:
    changed = DropOff.objects.filter(pk=drop_off.pk, state=State.DRAFT).update(state=State.PACKED, manifest=manifest)
    if not changed:
        raise ConflictError("This drop-off is packed already.")


def hand_over(*, actor: Membership, now: datetime, drop_off: DropOff, occurred: Occurred | None = None) -> DropOff:
    """Record that every container went to the receiver, all of it."""
    require_writer(actor)
    require_same_workshop(actor, drop_off)
    with transaction.atomic(), scope(workshop=actor.workshop):
        locked = DropOff.objects.select_for_update().select_related("receiver", "workshop").get(pk=drop_off.pk)
        if locked.state != State.PACKED:
            raise ConflictError("Only a packed drop-off can be handed over. Pack it first.")
        for container in _containers_of(locked):
            record(
                actor=actor,
                now=now,
                key=uuid5(locked.uuid, str(container.vessel.uuid)),
                data=HandOverInput(
                    container=container.vessel.uuid, receiver=locked.receiver.name, gross=_gross(container)
                ),
                occurred=occurred,
            )
        locked.state = State.HANDED_OVER
        locked.save(update_fields=["state"])
        return locked


def _containers_of(drop_off: DropOff) -> list[WasteContainer]:
    rows = WasteContainer.objects.filter(vessel__drop_off_container__drop_off=drop_off)
    return list(rows.select_related("vessel__workshop", "stream").order_by("vessel__name"))


def _gross(container: WasteContainer) -> Quantity | None:
    if container.gross is None:
        return None
    return parse(show(container.gross, "mass", digits=16), "mass")
