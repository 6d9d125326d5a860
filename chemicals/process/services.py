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
from chemicals.journal.services import Appended, Fact
from chemicals.ledger.periods import require_closed
from chemicals.ledger.services import project_entries, project_entry
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
            built.require_here()
            if appended.entry.about is not None:
                require_possible(appended.entry.about, built.event, but=appended.entry)
            project_entry(appended.entry, built.event)
        return appended


def record_past(*, actor: Membership, now: datetime, facts: Sequence[Fact]) -> list[Entry]:
    """Record what happened some time ago, all of it or nothing, and bring the ledger up to date as far as it can be.

    With many entries that fold a job does the rest: see ``ledger.services.project_entries``. None of them is a
    cancellation. Raises InvalidInputError and ConflictError as ``record_matter`` does.
    """
    require_writer(actor)
    with transaction.atomic(), scope(workshop=actor.workshop):
        entries = journal.append_all(actor=actor, now=now, facts=facts)
        recorded = [(entry, fact.event) for entry, fact in zip(entries, facts, strict=True)]
        fresh = {entry.pk for entry in entries}
        for entry, event in recorded:
            if entry.about_id is not None and entry.about_id not in fresh:
                require_possible(Entry.objects.get(pk=entry.about_id), event, but=entry)
        project_entries(actor.workshop, now, recorded)
        return entries


def require_possible(about: Entry, event: events.Event, *, but: Entry | None = None) -> None:
    """Refuse what the entry that an event speaks of makes impossible, or what others (``but`` one) say of it."""
    if isinstance(event, events.Correction):
        require_closed(about)
    if isinstance(event, events.Cancellation) and about.kind in PERIODS:
        raise InvalidInputError.of("entry", "A closing cannot be cancelled. Let an owner open the period again.")
    others = [entry for entry in Entry.objects.filter(about=about) if entry != but]
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
