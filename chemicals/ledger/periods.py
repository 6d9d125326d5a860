"""Closed periods: closing, reopening the last one, and what may no longer be recorded in them.

A period reaches from the end of the one before (or the beginning) until just before ``until``. What happened at
exactly ``until`` belongs to the next one.
"""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import UTC, datetime, time
from typing import Any
from uuid import UUID

from django.db import transaction
from django_scopes import scope

from chemicals.books import events, fold
from chemicals.books.clearance import not_asked
from chemicals.books.digest import digest_followed, digest_holdings
from chemicals.books.fold import Folded
from chemicals.books.fold.state import State
from chemicals.journal import services as journal
from chemicals.journal.models import Entry
from chemicals.journal.selectors import get_head
from chemicals.ledger import gone, late, projection, recompute
from chemicals.ledger.models import Period
from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership, Workshop
from chemicals.workshop.permissions import require_owner, require_same_workshop
from chemicals.workshop.texts import find_bad_lines, tidy

ATTEMPTS = 5
"""How often the digests are taken anew because something was recorded in the period meanwhile."""


class BooksBehindError(ConflictError):
    """The books do not say yet, or not any more, what the journal says: nothing can be closed on them."""


@dataclass(frozen=True)
class Digests:
    """What a closing entry will say, and the last entry that was recorded before it was reckoned."""

    recorded: int
    after: Period | None
    followed_sha256: str
    holdings_sha256: str
    state: State


def close_period(*, actor: Membership, now: datetime, key: UUID, until: datetime) -> Period:
    """Close the books for everything that happened before ``until``, a midnight of the workshop that has passed.

    Only an owner may. The same ``key`` returns the first closing. The digests are reckoned before the chain is locked,
    and again if somebody recorded anything in the period meanwhile. Raises InvalidInputError by the field ``until``,
    and ConflictError while the books are being recomputed.
    """
    require_owner(actor)
    with scope(workshop=actor.workshop):
        for _attempt in range(ATTEMPTS):
            first = _find_closing(key, until)
            if first is not None:
                return first
            _require_end(actor.workshop, now, until)
            digests = _reckon(actor.workshop, until)
            period = _close(actor, now, key, until, digests)
            if period is not None:
                return period
    raise ConflictError("Others are recording in this period at this moment. Try again.")


def _find_closing(key: UUID, until: datetime) -> Period | None:
    period = Period.objects.filter(closing__uuid=key).select_related("closing").first()
    if period is not None and period.until != until:
        raise ConflictError("This key was used for another closing. Open a fresh form and close again.")
    return period


def _require_end(workshop: Workshop, now: datetime, until: datetime) -> None:
    """Refuse an end that is no midnight, lies in the future, or in a closed period."""
    last = recompute.get_last_close()
    day = until.astimezone(workshop.zone).date()
    if until.astimezone(UTC) != datetime.combine(day, time(), workshop.zone).astimezone(UTC):
        message = "A period ends at midnight. Choose the first day of the next one."
    elif until > now:
        message = "This lies in the future. Choose a day that has begun."
    elif last is not None and until <= last.until:
        message = f"The books are closed until {_spell(workshop, last.until)} already. Choose a later day."
    else:
        return
    raise InvalidInputError.of("until", message)


def _spell(workshop: Workshop, moment: datetime) -> str:
    return moment.astimezone(workshop.zone).strftime("%Y-%m-%d %H:%M")


def _require_books(workshop: Workshop) -> None:
    books = recompute.get_books(workshop)
    if books.position is not None:
        raise BooksBehindError("The books are being recomputed after a late entry. Close the period when that is done.")
    if books.fold_version != fold.VERSION:
        raise BooksBehindError("The books were kept by an older version of the program. Run: manage.py upgrade")


def _reckon(workshop: Workshop, until: datetime) -> Digests:
    """Fold the period from the last close on, and take the digests if the tables say the same."""
    recorded, _hash = get_head(workshop)
    _require_books(workshop)
    after = recompute.get_last_close()
    state = projection.load_closing_state(after)
    followed = digest_followed(_follow(workshop, state, after, until))
    return Digests(recorded, after, followed, digest_holdings(state), state)


def _follow(workshop: Workshop, state: State, after: Period | None, until: datetime) -> Iterator[tuple[UUID, Folded]]:
    for stretch in recompute.fold_stretches(state, recompute.start_after(after), until):
        if recompute.find_differing(workshop, stretch):
            raise BooksBehindError("The books do not say what the journal says. Run: manage.py verify")
        for entry in stretch.entries:
            yield entry.uuid, stretch.followed[entry.pk]


def _close(actor: Membership, now: datetime, key: UUID, until: datetime, digests: Digests) -> Period | None:
    """Write entry, period and closing holdings, unless the period has changed since it was reckoned."""
    with transaction.atomic():
        head = journal.lock_chain(actor)
        _require_books(actor.workshop)
        moved = late.has_changed(actor.workshop, digests.recorded, (until, 0))
        if moved or recompute.get_last_close() != digests.after or _find_closing(key, until) is not None:
            return None
        event = events.PeriodClosing(
            after=None if digests.after is None else digests.after.until,
            until=until,
            sequence=head.sequence,
            fold_version=fold.VERSION,
            followed_sha256=digests.followed_sha256,
            holdings_sha256=digests.holdings_sha256,
        )
        entry = _append(actor, now, key, event)
        period = Period.objects.create(**as_columns(event), workshop=actor.workshop, closing=entry)
        projection.write_closing_state(period, digests.state)
        return period


def as_columns(event: events.PeriodClosing) -> dict[str, Any]:
    """Return what the row of a period copies from its closing entry."""
    names = ("after", "until", "sequence", "fold_version", "followed_sha256", "holdings_sha256")
    return {name: getattr(event, name) for name in names}


def _append(actor: Membership, now: datetime, key: UUID, event: events.Event) -> Entry:
    clearance = not_asked("a period moves no matter")
    return journal.append(actor=actor, now=now, key=key, event=event, occurred=None, clearance=clearance).entry


def reopen_period(*, actor: Membership, now: datetime, key: UUID, period: Period, reason: str) -> Period:
    """Open the last closed period again; its row stays, superseded by the entry that opened it.

    Only an owner may. The same ``key`` changes nothing more. A period that an older version of the fold closed is
    folded again. Raises InvalidInputError by the fields ``reason`` and ``period``.
    """
    require_owner(actor)
    require_same_workshop(actor, period)
    reason = _require_reason(reason)
    with transaction.atomic(), scope(workshop=actor.workshop):
        journal.lock_chain(actor)
        period = Period.objects.select_related("closing", "reopening").get(pk=period.pk)
        if period.reopening is not None and period.reopening.uuid == key:
            return period
        last = recompute.get_last_close()
        if last != period:
            raise InvalidInputError.of("period", "Only the last closed period can be opened again. Open that one.")
        period.reopening = _append(actor, now, key, events.PeriodReopening(period.closing.uuid, reason))
        period.save(update_fields=["reopening"])
        start = recompute.start_after(recompute.get_last_close())
        if period.fold_version != fold.VERSION and late.fold_again(actor.workshop, now, start):
            gone.settle()
        return period


def _require_reason(reason: str) -> str:
    errors = find_bad_lines(reason=reason)
    if not tidy(reason):
        errors.append(FieldError("reason", "Write why the period is opened again."))
    if errors:
        raise InvalidInputError(errors)
    return tidy(reason)


def require_open(entry: Entry, event: events.Event) -> None:
    """Refuse what changes the books of a closed period; call it under the lock of the chain."""
    last = recompute.get_last_close()
    start = late.find_start(entry, event)
    if last is None or start is None or min(start[0], entry.occurred_at) >= last.until:
        return
    message = explain_closed(last)
    if entry.occurred_at >= last.until:
        remedy = "What this entry speaks of lies before: record a correction, or let an owner open the period again."
        message = f"{_say_closed(last)} {remedy}"
    raise InvalidInputError.of("occurred_at", message)


def explain_closed(period: Period) -> str:
    """Return why nothing that happened before the end of a closed period is recorded any more, and what to do."""
    return f"{_say_closed(period)} Date this later, record a correction, or let an owner open the period again."


def _say_closed(period: Period) -> str:
    return f"The books are closed for everything before {_spell(period.workshop, period.until)}."


def require_closed(entry: Entry) -> None:
    """Refuse the correction of an entry that can still be cancelled; call it under the lock of the chain."""
    last = recompute.get_last_close()
    if last is None or entry.occurred_at >= last.until:
        raise InvalidInputError.of("entry", "The period of this entry is open: cancel the entry and record it again.")
