"""Several people and a worker at once: whatever comes first, the books are what the journal says."""

import threading
from collections.abc import Callable, Iterator
from datetime import timedelta
from typing import Any
from uuid import UUID

import pytest
from django.db import connection
from django_scopes import scope

from chemicals.jobs import services as jobs
from chemicals.journal.models import Entry
from chemicals.journal.verify import Problem
from chemicals.ledger import late, periods, recompute
from chemicals.ledger.models import Period
from chemicals.ledger.periods import Digests, close_period
from chemicals.ledger.selectors import get_recomputed_to, list_periods_for
from chemicals.ledger.services import refold
from chemicals.ledger.verify import Proof, verify_projection
from chemicals.workshop.errors import ConflictError, DomainError, InvalidInputError
from chemicals.workshop.models import Membership
from tests.journal.test_concurrency import at_once
from tests.ledger.closing import BEGUN, close, owner_of, refusal, reopen
from tests.process.shop import Shop

pytestmark = pytest.mark.django_db(transaction=True)
BUTTON = UUID(int=1)


def is_as_rebuilt(shop: Shop) -> bool:
    before = shop.ledger()
    proved = shop.is_proved()
    refold(shop.member.workshop)
    return proved and shop.ledger() == before


def level(shop: Shop, days_ago: float, volume: str = "19 L") -> Entry:
    return shop.record("level-reading", days_ago=days_ago, vessel="Copper", volume=volume)


def test_people_who_write_at_once_and_too_late_fold_one_after_the_other(week: Shop) -> None:
    def work(number: int) -> None:
        for step in range(3):
            level(week, days_ago=(number * 3 + step) % 7 + 0.1 * number, volume=f"{20 - step / 10} L")

    at_once(4, work)
    assert is_as_rebuilt(week)


def test_people_who_cancel_and_record_at_once(week: Shop) -> None:
    acts: list[Callable[[], Any]] = [
        lambda: week.record("cancellation", entry="run 4", reason="another rack"),
        lambda: week.record("cancellation", entry="run 2", reason="another rack"),
        lambda: week.record("run", days_ago=3.5, route="Plate", charge="5 Ah"),
        lambda: level(week, days_ago=0.5),
    ]
    at_once(len(acts), lambda number: acts[number]())
    assert is_as_rebuilt(week)


def between(monkeypatch: pytest.MonkeyPatch, act: Callable[[], object], times: int = 1) -> list[Digests]:
    """Let something happen between the reckoning of a closing and its writing; return what was reckoned."""
    reckoned: list[Digests] = []
    reckon = periods._reckon

    def reckon_slowly(*args: Any) -> Digests:
        reckoned.append(reckon(*args))
        if len(reckoned) <= times:
            act()
        return reckoned[-1]

    monkeypatch.setattr(periods, "_reckon", reckon_slowly)
    return reckoned


def test_a_late_entry_during_a_close_is_closed_with_the_rest(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    reckoned = between(monkeypatch, lambda: level(week, days_ago=4.5))
    period = close(week)
    assert len(reckoned) == 2
    assert reckoned[0].followed_sha256 != reckoned[1].followed_sha256 == period.followed_sha256
    assert (period.sequence, period.closing.sequence) == (9, 10)
    assert is_as_rebuilt(week)


def test_a_cancellation_during_a_close_counts_too(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    between(monkeypatch, lambda: week.record("cancellation", entry="run 5", reason="another rack"))
    close(week)
    assert week.went(week.entries["run 5"], "Cu") == {}
    assert is_as_rebuilt(week)


def test_what_happens_after_the_end_does_not_hold_a_close_up(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    reckoned = between(monkeypatch, lambda: level(week, days_ago=0.5))
    period = close(week)
    assert len(reckoned) == 1
    assert period.sequence == 9
    assert is_as_rebuilt(week)


def test_who_is_always_overtaken_is_told_to_try_again(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    between(monkeypatch, lambda: level(week, days_ago=4.5), times=99)
    assert "Try again" in refusal(lambda: close(week), ConflictError)
    assert not list_periods_for(week.member).exists()
    assert is_as_rebuilt(week)


def test_a_change_that_is_left_to_the_job_during_a_close_stops_it(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    between(monkeypatch, lambda: level(week, days_ago=4.5))
    monkeypatch.setattr(late, "LATE_LIMIT", 2)
    assert "being recomputed" in refusal(lambda: close(week), ConflictError)
    assert not list_periods_for(week.member).exists()


def test_two_who_close_at_once_close_once(week: Shop) -> None:
    closed: list[Period] = []
    refused: list[str] = []

    def work(number: int) -> None:
        try:
            closed.append(close(week))
        except InvalidInputError as error:
            refused.append(str(error))

    at_once(3, work)
    assert len(closed) == 1
    assert len(refused) == 2
    assert all("are closed until" in text for text in refused)
    assert is_as_rebuilt(week)


def test_a_press_twice_on_the_button_closes_once(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    inner: list[Period] = []
    between(monkeypatch, lambda: inner.append(close(week, key=BUTTON)))
    assert close(week, key=BUTTON) == inner[0]
    assert list_periods_for(week.member).count() == 1


def test_late_entries_while_somebody_closes_are_in_the_period_or_refused(week: Shop) -> None:
    """Whoever gets the lock of the chain first; none is recorded behind a close."""
    recorded: list[Entry] = []
    refused: list[int] = []

    def close_at_last() -> Period:
        try:
            return close(week)
        except ConflictError:  # overtaken too often
            return close_at_last()

    def work(number: int) -> None:
        if number == 0:
            close_at_last()
            return
        for step in range(4):
            try:
                recorded.append(level(week, days_ago=4 + number / 10 + step / 100))
            except InvalidInputError:
                refused.append(number)

    at_once(3, work)
    period = list_periods_for(week.member).get()
    assert len(recorded) + len(refused) == 8
    assert all(entry.sequence < period.closing.sequence for entry in recorded)
    assert is_as_rebuilt(week)


def test_the_job_and_people_at_once(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(late, "LATE_LIMIT", 2)
    monkeypatch.setattr(recompute, "STRETCH", 1)
    level(week, days_ago=5.5)
    ended = threading.Event()

    def work(number: int) -> None:
        if number == 0:
            while not ended.is_set():
                jobs.run_next(now=week.now + timedelta(days=1), worker="w1")
            return
        try:
            for step in range(5):
                level(week, days_ago=5 - step)
                week.record("run", route="Plate", charge="1 Ah")
        finally:
            ended.set()

    at_once(2, work)
    while jobs.run_next(now=week.now + timedelta(days=1), worker="w1"):
        pass
    assert get_recomputed_to(week.member.workshop) is None
    assert is_as_rebuilt(week)


def test_opening_and_recording_at_once(week: Shop, owner: Membership) -> None:
    period = close(week)
    refused: list[str] = []

    def work(number: int) -> None:
        if number == 0:
            reopen(owner, period)
            return
        try:
            level(week, days_ago=4.5)
        except DomainError as error:
            refused.append(str(error))

    at_once(2, work)
    with scope(workshop=week.member.workshop):
        late_ones = Entry.objects.filter(kind="level reading").count()
    assert late_ones + len(refused) == 1
    assert is_as_rebuilt(week)


def test_closing_asks_for_no_lock_while_it_reckons(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    """Others record while a long period is folded: their transactions need not wait for it."""
    in_transaction: list[bool] = []
    between(monkeypatch, lambda: in_transaction.append(connection.in_atomic_block))
    close_period(actor=owner_of(week), now=week.now, key=BUTTON, until=BEGUN)
    assert in_transaction == [False]


def test_what_is_recorded_while_the_books_are_proved_is_no_damage(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    """Entries are read first and rows after them: a late entry between the two changes the rows of others."""
    of_periods, times = Proof.of_periods, []

    def prove_slowly(proof: Proof) -> Iterator[Problem]:
        times.append(proof)
        if len(times) == 1:
            level(week, days_ago=4.5)
        return of_periods(proof)

    monkeypatch.setattr(Proof, "of_periods", prove_slowly)
    assert verify_projection(week.member.workshop) == []
    assert len(times) == 2
