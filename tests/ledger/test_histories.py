"""Random histories through the tables: what holds for the fold in memory holds for the ledger too."""

import random
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, replace
from datetime import timedelta
from typing import Any
from uuid import UUID

import pytest
from django.db import transaction
from django_scopes import scope
from hypothesis import given, settings
from hypothesis import strategies as st

from chemicals.books import events
from chemicals.books.clearance import not_asked
from chemicals.books.events import Acceptance, Analysis, Cancellation, Figure, Measured, PeriodClosing, PeriodReopening
from chemicals.books.fold import Entry, Folded, rebuild
from chemicals.books.fold.state import State
from chemicals.books.occurred import Occurred
from chemicals.jobs import services as jobs
from chemicals.journal.models import Entry as Row
from chemicals.journal.selectors import iterate_fold_entries
from chemicals.journal.services import append
from chemicals.ledger import late, recompute
from chemicals.ledger.followed import as_kept, read_followed
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.periods import close_period
from chemicals.ledger.projection import Names, load_state
from chemicals.ledger.selectors import get_recomputed_to
from chemicals.ledger.services import project_entry
from chemicals.ledger.verify import verify_projection
from chemicals.workshop.errors import InvalidInputError
from chemicals.workshop.models import Membership, Role, Workshop
from tests.books.histories import IN_USE, MIDNIGHT, VESSELS, entries_of, histories, orderly_histories
from tests.books.words import G
from tests.conftest import make_member

pytestmark = pytest.mark.django_db
NOW = MIDNIGHT + timedelta(days=3)
FAR = 10**6
NAMES = {name: str(UUID(int=FAR + number)) for number, name in enumerate(VESSELS)}
Told = tuple[State, dict[UUID, Folded]]
few = settings(max_examples=15)


def renamed(value: Any) -> Any:
    """Return a plain value in which vessels have the names that the tables know."""
    if isinstance(value, dict):
        return {key: renamed(item) for key, item in value.items()}
    if isinstance(value, list):
        return [renamed(item) for item in value]
    return NAMES.get(value, value) if isinstance(value, str) else value


@dataclass
class Books:
    """A workshop whose journal is written entry by entry."""

    member: Membership

    @property
    def workshop(self) -> Workshop:
        return self.member.workshop

    def record(self, entry: Entry) -> bool:
        """Record an entry; say whether it could be: what it speaks of is there, and its period is open."""
        about = entry.event.about()
        if isinstance(entry.event, PeriodClosing | PeriodReopening):
            return False
        if about is not None and not Row.objects.filter(uuid=about).exists():
            return False
        event = events.decode(entry.event.KIND, entry.event.VERSION, renamed(events.encode(entry.event)))
        try:
            with transaction.atomic():
                appended = append(
                    actor=self.member,
                    now=NOW,
                    key=entry.uuid,
                    event=event,
                    occurred=Occurred(entry.occurred_at),
                    clearance=not_asked("a random history"),
                )
                project_entry(appended.entry, event)
        except InvalidInputError:
            return False
        return True

    def tell(self) -> Told:
        """Return what the tables say: what is held, and what followed from each entry."""
        rows = list(Row.objects.all())
        kept = read_followed(rows, Names(self.workshop, ()))
        followed = {row.uuid: folded for row in rows if (folded := kept[row.pk]) is not None}
        assert len(followed) == len(rows)
        return load_state(self.workshop), said(followed)

    def tell_rebuilt(self) -> Told:
        """Return what the journal says, folded from the beginning."""
        state, followed = rebuild(iterate_fold_entries(self.workshop))
        return state, said({uuid: as_kept(folded) for uuid, folded in followed.items()})

    def is_proved(self) -> bool:
        return self.tell() == self.tell_rebuilt() and verify_projection(self.workshop) == []

    def work(self) -> bool:
        """Let the job do a step, if there is any."""
        return jobs.run_next(now=NOW, worker="w1")


def said(followed: dict[UUID, Folded]) -> dict[UUID, Folded]:
    """Return those entries from which anything followed."""
    return {uuid: folded for uuid, folded in followed.items() if folded != Folded((), (), ())}


@contextmanager
def fresh_books() -> Iterator[Books]:
    """Give an empty workshop with all vessels; nothing of it stays."""
    with transaction.atomic():
        workshop = Workshop.objects.create(name="Random", time_zone="UTC", created_at=MIDNIGHT)
        member = make_member(workshop, Role.OWNER, "random@alder.example")
        with scope(workshop=workshop):
            Vessel.objects.bulk_create(
                Vessel(
                    uuid=uuid, workshop=workshop, code=f"V{number}", kind=VesselKind.BATH, name=name,
                    created_at=MIDNIGHT, created_by=member,
                )
                for number, (name, uuid) in enumerate(NAMES.items())
            )  # fmt: skip
            yield Books(member)
        transaction.set_rollback(True)


def told_of(history: list[Entry]) -> Told:
    with fresh_books() as books:
        for entry in history:
            books.record(entry)
        assert books.is_proved()
        return books.tell()


@few
@given(histories)
def test_entry_by_entry_is_as_good_as_from_the_beginning(history: list[Entry]) -> None:
    with fresh_books() as books:
        for entry in history:
            books.record(entry)
        assert books.is_proved()


@few
@given(orderly_histories, st.randoms(use_true_random=False))
def test_the_order_of_recording_does_not_matter(history: list[Entry], shuffler: random.Random) -> None:
    """As long as everything that is spoken of is recorded before."""
    known = {entry.uuid for entry in history}
    sound = [e for e in history if (about := e.event.about()) is None or (about in known and about != e.uuid)]
    alone = [entry for entry in sound if entry.event.about() is None]
    others = [entry for entry in sound if entry.event.about() in {entry.uuid for entry in alone}]
    shuffled = alone.copy()
    shuffler.shuffle(shuffled)
    assert told_of([*shuffled, *others]) == told_of([*alone, *others])


@few
@given(histories, histories)
def test_cancelling_restores(history: list[Entry], mistakes: list[Entry]) -> None:
    with fresh_books() as books:
        for entry in history:
            books.record(entry)
        before = books.tell()
        for number, mistake in enumerate(mistakes[-3:]):
            wrong = replace(mistake, uuid=UUID(int=FAR + 100 + number))
            if books.record(wrong) and not isinstance(wrong.event, Cancellation):
                cancelled = Cancellation(wrong.uuid, "a mistake")
                assert books.record(replace(wrong, uuid=UUID(int=FAR + 200 + number), event=cancelled))
                assert books.tell() == before
            else:
                before = books.tell()
        assert books.is_proved()


def over_two_days(history: list[Entry]) -> list[Entry]:
    """Let what happened from minute 15 on happen on the next day."""
    return [
        replace(entry, occurred_at=entry.occurred_at + timedelta(days=entry.occurred_at.minute >= 15))
        for entry in history
    ]


@few
@given(histories.map(over_two_days), st.integers(0, 18))
def test_a_closed_period_stays_as_it_is_whatever_is_recorded_after(history: list[Entry], closed_after: int) -> None:
    until = MIDNIGHT + timedelta(days=1)
    with fresh_books() as books:
        for entry in history[:closed_after]:
            books.record(entry)
        period = close_period(actor=books.member, now=NOW, key=UUID(int=FAR), until=until)
        closed = {row.uuid for row in Row.objects.filter(occurred_at__lt=until)}
        before = {uuid: folded for uuid, folded in books.tell()[1].items() if uuid in closed}
        for entry in history[closed_after:]:
            recorded = books.record(entry)
            assert not (recorded and type(entry.event) in events_that_fold() and entry.occurred_at < until)
        assert {uuid: folded for uuid, folded in books.tell()[1].items() if uuid in closed} == before
        assert books.is_proved()
        assert period.sequence == period.closing.sequence - 1


def events_that_fold() -> set[type[events.Event]]:
    return {kind for kind in events.EVENTS if kind.KIND in recompute.folding_kinds()}


@few
@given(histories, st.lists(st.booleans(), min_size=18, max_size=18), st.integers(1, 3))
def test_what_the_job_does_in_steps_is_what_one_request_does(
    history: list[Entry], works: list[bool], stretch: int
) -> None:
    with pytest.MonkeyPatch.context() as patch, fresh_books() as books:
        patch.setattr(late, "LATE_LIMIT", 0)
        patch.setattr(recompute, "STRETCH", stretch)
        for entry, at_work in zip(history, works, strict=False):
            books.record(entry)
            if at_work:
                books.work()
            assert verify_projection(books.workshop) == []  # as far as the books stand
        while books.work():
            pass
        assert get_recomputed_to(books.workshop) is None
        assert books.is_proved()


def test_an_analysis_that_is_cancelled_past_its_acceptance_takes_it_along() -> None:
    """The door refuses this order; the books do not depend on the door."""
    found = Figure(40 * G, G, "titration")
    analysis = Analysis("bath", "Cu", Measured("40", "g/L", 40 * G), "Cu", MIDNIGHT, found)
    acceptance = Acceptance(UUID(int=2), "bath", "Cu", found)
    history = entries_of([(IN_USE[0], 1), (analysis, 5), (acceptance, 5), (Cancellation(UUID(int=2), "mixed up"), 9)])
    with fresh_books() as books:
        books.record(history[0])
        before = books.tell()
        for entry in history[1:3]:
            books.record(entry)
        assert books.tell() != before
        books.record(history[3])
        assert books.tell() == before
        assert books.is_proved()
