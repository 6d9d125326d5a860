"""The door through which every record of matter goes: ask first, then record the answer with the fact."""

from collections.abc import Sequence
from datetime import datetime
from uuid import UUID

from django.db import transaction
from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.journal.selectors import list_entries_for
from chemicals.journal.services import Appended, lock_chain
from chemicals.process.build import build
from chemicals.process.inputs import Input
from chemicals.process.services import record_matter
from chemicals.workshop.errors import ConflictError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.clearance.selectors import ask


class RefusedError(ConflictError):
    """This may not be done, or only by somebody who answers for it.

    If it has happened already, it is recorded: as an incident, or as overridden where only a question was open.
    """

    def __init__(self, reasons: Sequence[str]) -> None:
        super().__init__(" ".join(reasons))
        self.reasons = tuple(reasons)


def record(
    *,
    actor: Membership,
    now: datetime,
    key: UUID,
    data: Input,
    occurred: Occurred | None = None,
    already_happened: bool = False,
    attachments: Sequence[str] = (),
) -> Appended:
    """Record what happened, if it may be done; else raise RefusedError, unless it has happened already."""
    require_writer(actor)
    with transaction.atomic(), scope(workshop=actor.workshop):
        lock_chain(actor)  # nothing is poured in between the answer and the record
        built = build(actor, now, data, occurred)
        answer = ask(actor.workshop, built.event, now if built.occurred is None else built.occurred.at)
        if not answer.allowed and not already_happened and not _is_retry(actor, key):
            raise RefusedError(answer.reasons)
        return record_matter(
            actor=actor,
            now=now,
            key=key,
            built=built,
            clearance=answer.clearance,
            attachments=attachments,
        )


def _is_retry(actor: Membership, key: UUID) -> bool:
    """Say whether an entry of this key is there: what was allowed then is answered with it, whatever holds by now."""
    return list_entries_for(actor).filter(uuid=key).exists()
