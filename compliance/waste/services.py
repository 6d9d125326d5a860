"""Writes about waste: streams, containers, closing, labels."""

from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from django.db import transaction
from django_scopes import scope

from chemicals.ledger.models import VesselKind
from chemicals.ledger.services import create_vessel
from chemicals.register.hazards import check_hazards
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.permissions import require_same_workshop, require_writer
from chemicals.workshop.rows import check_row
from chemicals.workshop.texts import tidy
from compliance.documents.models import Paper, PaperKind
from compliance.documents.services import issue_paper
from compliance.waste.label import build_label
from compliance.waste.models import WasteContainer, WasteStream


@dataclass(frozen=True, kw_only=True)
class StreamInput:
    """What a receiver approved, and what the workshop knows of it."""

    name: str
    origin: str
    profile_number: str = ""
    code: str = ""
    reactivity: tuple[str, ...] = ()
    signal_word: str = ""
    pictograms: tuple[str, ...] = ()
    statements: tuple[str, ...] = ()


def create_stream(*, actor: Membership, stream: StreamInput) -> WasteStream:
    """Create a waste stream."""
    require_writer(actor)
    row = WasteStream(
        workshop=actor.workshop,
        name=stream.name,
        origin=stream.origin,
        profile_number=stream.profile_number,
        code=stream.code,
        reactivity=sorted(stream.reactivity),
        signal_word=stream.signal_word,
        pictograms=sorted(stream.pictograms),
        statements=[tidy(text) for text in stream.statements],
    )
    errors = check_row(row)
    errors += check_hazards(
        signal_word=stream.signal_word,
        pictograms=stream.pictograms,
        statements=stream.statements,
        reactivity=stream.reactivity,
    )
    with transaction.atomic(), scope(workshop=actor.workshop):
        if WasteStream.objects.filter(name=row.name).exists():
            errors.append(FieldError("name", "There is a stream of this name. Choose another name."))
        if errors:
            raise InvalidInputError(errors)
        row.save()
        return row


def create_container(
    *,
    actor: Membership,
    now: datetime,
    name: str,
    stream: WasteStream,
    place: Place | None = None,
    capacity: int | None = None,
    material: str = "",
    tare: int | None = None,
) -> WasteContainer:
    """Put up an empty waste container for a stream. Capacity in nanolitres, tare in micrograms."""
    require_writer(actor)
    require_same_workshop(actor, stream)
    with transaction.atomic(), scope(workshop=actor.workshop):
        vessel = create_vessel(actor=actor, now=now, kind=VesselKind.WASTE, name=name, place=place, capacity=capacity)
        container = WasteContainer(vessel=vessel, stream=stream, material=material, tare=tare)
        errors = check_row(container)
        if tare is not None and tare < 0:
            errors.append(FieldError("tare", "Nothing weighs less than nothing. Weigh the empty container."))
        if errors:
            raise InvalidInputError(errors)
        container.save()
        return container


def close_container(*, actor: Membership, now: datetime, container: WasteContainer, gross: int) -> WasteContainer:
    """Close a container for the drop-off with its gross weight in micrograms: the scale rules."""
    require_writer(actor)
    require_same_workshop(actor, container.vessel)
    with transaction.atomic(), scope(workshop=actor.workshop):
        locked = WasteContainer.objects.select_for_update().select_related("vessel", "stream").get(pk=container.pk)
        if locked.closed_at is not None:
            raise ConflictError("This container is closed already.")
        if locked.tare is not None and gross < locked.tare:
            raise InvalidInputError.of("gross", "This is less than the empty container weighs. Read the scale again.")
        locked.gross, locked.closed_at = gross, now
        locked.save(update_fields=["gross", "closed_at"])
        return locked


def issue_label(*, actor: Membership, now: datetime, key: UUID, container: WasteContainer) -> Paper:
    """Issue the numbered label of a waste container as it is now."""
    require_writer(actor)
    require_same_workshop(actor, container.vessel)
    return issue_paper(actor=actor, now=now, key=key, kind=PaperKind.WASTE_LABEL, build=lambda: build_label(container))
