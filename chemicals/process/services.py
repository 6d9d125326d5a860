"""Every verb that records matter: one door, one transaction. Set-up of tanks stands in ``setup``."""

from collections.abc import Sequence
from datetime import datetime
from uuid import UUID

from django.db import transaction
from django_scopes import scope

from chemicals.books import events
from chemicals.books.clearance import Clearance
from chemicals.journal import services as journal
from chemicals.journal.models import Entry
from chemicals.journal.services import Appended
from chemicals.ledger.periods import require_closed
from chemicals.ledger.services import project_entry
from chemicals.process.build import Built
from chemicals.workshop.errors import ConflictError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer

PERIODS = (events.PeriodClosing.KIND, events.PeriodReopening.KIND)


def record_matter(
    *,
    actor: Membership,
    now: datetime,
    key: UUID,
    built: Built,
    clearance: Clearance,
    attachments: Sequence[str] = (),
) -> Appended:
    """Record what happened: append the entry and bring the ledger up to date.

    ``built`` comes from ``process.build``, under the same lock of the chain. ``clearance`` is the recorded answer to
    "may this be done?"; only compliance.clearance makes one from the rules.
    The same ``key`` with the same content returns the first entry and changes nothing.
    """
    require_writer(actor)
    with transaction.atomic(), scope(workshop=actor.workshop):
        appended = journal.append(
            actor=actor,
            now=now,
            key=key,
            event=built.event,
            occurred=built.occurred,
            clearance=clearance,
            attachments=attachments,
        )
        if appended.is_new:
            _require_possible(appended.entry, built.event)
            project_entry(appended.entry, built.event)
        return appended


def _require_possible(entry: Entry, event: events.Event) -> None:
    """Refuse what earlier entries make impossible; the transaction is rolled back with the entry in it."""
    if entry.about is None:
        return
    if isinstance(event, events.Correction):
        require_closed(entry.about)
    if isinstance(event, events.Cancellation) and entry.about.kind in PERIODS:
        raise InvalidInputError.of("entry", "A closing cannot be cancelled. Let an owner open the period again.")
    others = list(Entry.objects.filter(about=entry.about).exclude(pk=entry.pk))
    cancelled = set(
        Entry.objects.filter(kind=events.Cancellation.KIND, about__in=others).values_list("about_id", flat=True)
    )
    standing = [other for other in others if other.pk not in cancelled]
    if any(other.kind == events.Cancellation.KIND for other in standing):
        raise ConflictError("This entry is cancelled already.")
    accepted = any(other.kind == events.Acceptance.KIND for other in standing)
    if accepted and isinstance(event, events.Cancellation):
        raise ConflictError("The books follow this analysis. Cancel its acceptance first.")
    if accepted and isinstance(event, events.Acceptance):
        raise ConflictError("This analysis is accepted already.")
