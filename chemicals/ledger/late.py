"""Late entries and cancellations: from where on the books change, and what is too much for one request.

A change with more than ``LATE_LIMIT`` later entries is left to a job, which folds forward stretch by stretch from the
place noted in ``Books``; whatever is recorded meanwhile is left to it too. Safety does not wait: what a vessel may have
been given meanwhile is remembered at once.
"""

from datetime import datetime

from django.db.models import Q
from django_scopes import scope

from chemicals.books import events, fold
from chemicals.books.fold.state import State, Vessel
from chemicals.jobs.registry import Effect, Step
from chemicals.jobs.services import enqueue
from chemicals.journal import selectors as journal
from chemicals.journal.models import Entry, Head
from chemicals.journal.services import lock_head
from chemicals.ledger import gone, projection, recompute
from chemicals.ledger.followed import components_of
from chemicals.ledger.models import Books
from chemicals.ledger.projection import Names, Order
from chemicals.ledger.recompute import Stretch, order_of
from chemicals.workshop.models import Workshop

LATE_LIMIT = 5000
"""How many later entries are folded again in the request that records a late one; more are left to the job."""

TASK = "recompute"


def find_start(entry: Entry, event: events.Event) -> Order | None:
    """Return from where on the books change with a new entry; None if they do not.

    A cancellation takes away the entry it speaks of, and the acceptance of a cancelled analysis.
    """
    if isinstance(event, events.Cancellation):
        accepted = Q(about=entry.about, kind=events.Acceptance.KIND)
        removed = Entry.objects.filter(Q(uuid=event.entry) | accepted, kind__in=recompute.folding_kinds())
        first = removed.order_by("occurred_at", "sequence").first()
        return None if first is None else order_of(first)
    if type(event) not in fold.FOLDS:
        return None
    if isinstance(event, events.Acceptance) and entry.about is not None and journal.is_cancelled(entry.about):
        return None
    return order_of(entry)


def count_later(start: Order) -> int:
    """Count the entries after a place that fold, no further than is needed to know whether they are too many."""
    at, sequence = start
    return recompute.count_from((at, sequence + 1), LATE_LIMIT + 1)


def fold_again(workshop: Workshop, now: datetime, start: Order | None) -> bool:
    """Fold again from a place (None: the beginning) on, at once or by the job; say whether the books stand.

    Call it under the lock of the chain.
    """
    books = recompute.get_books(workshop)
    start = start or recompute.get_beginning()
    if start is None:
        recompute.stand(workshop)
    elif books.position is not None or count_later(start) > LATE_LIMIT:
        leave_to_job(books, start, now)
        return False
    else:
        recompute.refold_from(workshop, projection.load_state_before(start), start)
    return True


def leave_to_job(books: Books, start: Order, now: datetime) -> None:
    """Let the job fold from a place on; where it works already, from the earlier of the two places."""
    position = books.position
    if position is None:
        payload = {"workshop": books.workshop_id, "done": 0}
        books.job = enqueue(now=now, task=TASK, payload=payload, workshop=books.workshop)
    books.recomputed_to, books.recomputed_sequence = start if position is None else min(start, position)
    books.save(update_fields=["recomputed_to", "recomputed_sequence", "job"])


def remember_meanwhile(workshop: Workshop, entry: Entry, event: events.Event) -> None:
    """Let the vessels of an entry that is left to the job remember at once all that may be in them.

    Marks are added, none is taken away: the job writes what is right. Of a cancelled entry that may be what was in
    its vessels before it.
    """
    if isinstance(event, events.Cancellation):
        entry = Entry.objects.get(uuid=event.entry)
        event = journal.read_event(entry)
    names = Names(workshop, (), event.vessels())
    state = projection.load_state_before(order_of(entry), names.vessels)
    before = State(vessels=dict(state.vessels))
    fold.fold_event(state, event)
    now = projection.load_state(workshop, names.vessels)
    merged = {name: _both(now.vessel(name), before.vessel(name), state.vessel(name)) for name in names.vessels}
    projection.write_memories(workshop, merged, names)


def _both(*vessels: Vessel) -> Vessel:
    poured = frozenset[str]().union(*(vessel.poured for vessel in vessels))
    return Vessel(any(vessel.incomplete for vessel in vessels), poured)


def prepare_step(workshop: Workshop, done: int) -> Effect | None:
    """Fold the next stretch; return the effect that writes it, None if the books stand. ``done``: entries so far.

    The effect writes nothing if the place was moved back, or something was recorded within the stretch, since it was
    read: then the step is repeated.
    """
    head = Head.objects.filter(workshop=workshop).first()
    books = Books.objects.filter(workshop=workshop).first()
    start = None if books is None else books.position
    if head is None or start is None:
        return None
    state = projection.load_state_before(start)
    stretch = recompute.fold_stretch(state, start)
    differing = recompute.find_differing(workshop, stretch)

    def effect() -> Step | None:
        with scope(workshop=workshop):
            lock_head(workshop)
            books = recompute.get_books(workshop)
            if books.position is None:
                return None
            if books.position != start or has_changed(workshop, head.sequence, stretch.beyond):
                return _next_step(books, done)
            recompute.write_differing(workshop, differing)
            return _go_on(books, state, stretch, done)

    return effect


def has_changed(workshop: Workshop, sequence: int, before: Order | None) -> bool:
    """Say whether an entry that was recorded after a sequence changes the books before a place (None: anywhere)."""
    for entry in Entry.objects.filter(sequence__gt=sequence).select_related("about"):
        start = find_start(entry, journal.read_event(entry))
        if start is not None and (before is None or start < before):
            return True
    return False


def _go_on(books: Books, state: State, stretch: Stretch, done: int) -> Step | None:
    """Note the place that the books have come to, or that they stand."""
    names = Names(books.workshop, components_of(stretch.followed.values()))
    if stretch.beyond is None:
        projection.replace_holdings(books.workshop, state, names)
        recompute.stand(books.workshop)
        gone.settle()
        return None
    projection.add_missing_holdings(books.workshop, state, names)
    books.recomputed_to, books.recomputed_sequence = stretch.beyond
    books.save(update_fields=["recomputed_to", "recomputed_sequence"])
    return _next_step(books, done + len(stretch.entries))


def _next_step(books: Books, done: int) -> Step:
    left = recompute.entries_from(books.position).count()
    return Step({"workshop": books.workshop_id, "done": done}, done=done, total=done + left)
