"""Closed periods: when they can be closed, what they refuse, how they are opened again."""

from collections.abc import Callable
from contextlib import AbstractContextManager
from datetime import UTC, datetime, timedelta
from typing import Any
from uuid import uuid4

import pytest
from django_scopes import scope

from chemicals.books import events, fold
from chemicals.books.clearance import Clearance
from chemicals.books.events import Cancellation, Change, Correction, Measured, PeriodClosing, PeriodReopening
from chemicals.books.occurred import Occurred
from chemicals.jobs import services as jobs
from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_body, read_event
from chemicals.journal.verify import verify_chain
from chemicals.ledger import late
from chemicals.ledger.models import ClosingHolding, Holding, Posting, Vessel
from chemicals.ledger.periods import close_period
from chemicals.ledger.projection import load_closing_state, load_state_before
from chemicals.ledger.selectors import get_closed_until, get_period_for, get_recomputed_to, list_periods_for
from chemicals.ledger.services import refold
from chemicals.process.build import Built
from chemicals.process.services import record_matter
from chemicals.workshop.errors import ConflictError, NotFoundError, NotPermittedError
from chemicals.workshop.models import Membership, Role
from tests.conftest import make_member
from tests.ledger.closing import BEGUN, close, refusal, reopen
from tests.process.shop import G, Shop

# --- closing ---------------------------------------------------------------------------------------------------------


def test_a_closing_says_what_followed_and_what_was_held(week: Shop) -> None:
    period = close(week)
    event = read_event(period.closing)
    assert isinstance(event, PeriodClosing)
    assert (event.after, event.until, event.sequence, event.fold_version) == (None, BEGUN, 8, fold.VERSION)
    assert (period.followed_sha256, period.holdings_sha256) == (event.followed_sha256, event.holdings_sha256)
    assert (period.closing.sequence, period.closing.occurred_at) == (9, week.now)
    assert read_body(period.closing).clearance.verdict == "not asked"
    with scope(workshop=week.member.workshop):
        assert load_closing_state(period) == load_state_before((BEGUN, 0))
        held = ClosingHolding.objects.get(period=period, vessel__name="Copper", component__code="volume")
        later = Holding.objects.get(vessel__name="Copper", component__code="volume")
        assert held.amount is not None
        assert later.amount is not None
        assert held.amount > later.amount
    assert verify_chain(week.member.workshop) == []
    assert week.is_proved()


def test_closing_again_what_did_not_change_gives_the_same_digests(week: Shop) -> None:
    """The period was opened for nothing."""
    owner = make_member(week.member.workshop, Role.OWNER, "olga@alder.example")
    first = close(week)
    reopen(owner, first)
    again = close(week)
    assert again.pk != first.pk
    assert (again.followed_sha256, again.holdings_sha256) == (first.followed_sha256, first.holdings_sha256)


@pytest.mark.parametrize(
    ("until", "sentence"),
    [
        (BEGUN + timedelta(hours=1), "A period ends at midnight"),
        (datetime(2026, 2, 28, tzinfo=UTC), "A period ends at midnight"),
        (datetime(2026, 3, 2, 23, tzinfo=UTC), "This lies in the future"),
    ],
    ids=["one o'clock", "midnight of another zone", "tomorrow"],
)
def test_an_end_that_is_no_past_midnight_of_the_workshop_is_refused(week: Shop, until: datetime, sentence: str) -> None:
    message = refusal(lambda: close(week, until))
    assert message.startswith(f"until: {sentence}")
    assert not list_periods_for(week.member).exists()


def test_a_day_that_begins_without_a_midnight_can_be_closed(stranger: Membership, now: datetime) -> None:
    """Cairo set its clocks from 0:00 to 1:00 on 26 April 2024; the day began at 22:00 UTC (IANA time zone database)."""
    stranger.workshop.time_zone = "Africa/Cairo"
    period = close_period(actor=stranger, now=now, key=uuid4(), until=datetime(2024, 4, 25, 22, tzinfo=UTC))
    assert period.until == datetime(2024, 4, 25, 22, tzinfo=UTC)


def test_periods_follow_each_other_without_gaps(week: Shop) -> None:
    """Whatever lies between two ends belongs to the later one; months in which nothing happened too."""
    ends = [datetime(2026, 1, 31, 23, tzinfo=UTC), BEGUN - timedelta(days=2), BEGUN]
    for until in ends:
        close(week, until)
    rows = list(list_periods_for(week.member).values_list("after", "until"))
    assert rows == [(ends[1], ends[2]), (ends[0], ends[1]), (None, ends[0])]
    assert week.is_proved()


@pytest.mark.parametrize("days", [0, 1], ids=["the same end", "an earlier end"])
def test_what_is_closed_is_not_closed_again(week: Shop, days: int) -> None:
    close(week)
    message = refusal(lambda: close(week, BEGUN - timedelta(days=days)))
    assert message == "until: The books are closed until 2026-02-28 00:00 already. Choose a later day."
    assert list_periods_for(week.member).count() == 1


def test_the_same_key_closes_once(week: Shop) -> None:
    key = uuid4()
    assert close(week, key=key) == close(week, key=key)
    assert list_periods_for(week.member).count() == 1
    assert "another closing" in refusal(lambda: close(week, BEGUN + timedelta(days=1), key=key), ConflictError)
    used = week.entries["run 1"].uuid
    assert "used" in refusal(lambda: close(week, BEGUN + timedelta(days=1), key=used), ConflictError)


def test_only_owners_close(week: Shop, observer: Membership, stranger: Membership) -> None:
    assert "Observers only read" in refusal(lambda: close(week, actor=observer), NotPermittedError)
    assert "Only an owner" in refusal(lambda: close(week, actor=week.member), NotPermittedError)
    period = close(week)
    assert list(list_periods_for(observer)) == [period]
    assert list(list_periods_for(stranger)) == []
    assert get_period_for(observer, period.closing.uuid) == period
    assert "no such period" in refusal(lambda: get_period_for(stranger, period.closing.uuid), NotFoundError)
    assert "another workshop" in refusal(lambda: reopen(stranger, period), NotPermittedError)
    assert get_closed_until(week.member.workshop) == BEGUN
    assert get_closed_until(stranger.workshop) is None


def test_nothing_is_closed_while_the_books_are_recomputed(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(late, "LATE_LIMIT", 2)
    week.record("level-reading", days_ago=5.5, vessel="Copper", volume="19 L")
    assert get_recomputed_to(week.member.workshop) is not None
    assert "Close the period when that is done" in refusal(lambda: close(week), ConflictError)
    while jobs.run_next(now=week.now, worker="w1"):
        pass
    close(week)
    assert week.is_proved()


def test_nothing_is_closed_on_books_that_are_not_what_the_journal_says(week: Shop) -> None:
    with scope(workshop=week.member.workshop):
        Posting.objects.filter(entry=week.entries["run 5"]).first().delete()  # type: ignore[union-attr]
    assert "manage.py verify" in refusal(lambda: close(week), ConflictError)
    refold(week.member.workshop)
    close(week)
    assert week.is_proved()


def test_the_list_of_periods_asks_as_often_for_three_as_for_one(
    week: Shop, django_assert_num_queries: Callable[[int], AbstractContextManager[object]]
) -> None:
    for days in (5, 3, 0):
        close(week, BEGUN - timedelta(days=days))
        with django_assert_num_queries(1):
            assert all(str(period.closing.member.user) for period in list_periods_for(week.member))


# --- what a closed period refuses ------------------------------------------------------------------------------------


def test_matter_is_not_recorded_in_a_closed_period(week: Shop) -> None:
    close(week)
    before = week.ledger()
    message = refusal(lambda: week.record("run", days_ago=4, route="Plate", charge="10 Ah"))
    assert message == (
        "occurred_at: The books are closed for everything before 2026-02-28 00:00. "
        "Date this later, record a correction, or let an owner open the period again."
    )
    assert week.ledger() == before
    with scope(workshop=week.member.workshop):
        assert Entry.objects.count() == 9


def test_what_happened_at_the_very_end_belongs_to_the_next_period(week: Shop) -> None:
    period = close(week)
    ago = (week.now - BEGUN) / timedelta(days=1)
    at = week.record("level-reading", days_ago=ago, vessel="Copper", volume="19 L")
    assert at.occurred_at == period.until
    assert week.is_proved()
    assert "closed" in refusal(
        lambda: week.record("level-reading", days_ago=ago + 1 / 1440, vessel="Copper", volume="19 L")
    )


def test_late_entries_after_the_close_fold_from_it_on(week: Shop) -> None:
    period = close(week)
    with scope(workshop=week.member.workshop):
        closed = set(Posting.objects.filter(occurred_at__lt=period.until).values_list("pk", flat=True))
    week.record("level-reading", days_ago=1.5, label="late", vessel="Copper", volume="19 L")
    week.record("cancellation", entry="run 2", reason="it was another rack")
    week.record("cancellation", entry="late", reason="misread")
    with scope(workshop=week.member.workshop):
        assert set(Posting.objects.filter(occurred_at__lt=period.until).values_list("pk", flat=True)) == closed
    assert week.is_proved()
    before = week.ledger()
    refold(week.member.workshop)
    assert week.ledger() == before


def test_what_lies_in_a_closed_period_cannot_be_cancelled(week: Shop) -> None:
    close(week)
    message = refusal(lambda: week.record("cancellation", entry="run 4", reason="never happened"))
    assert message == (
        "occurred_at: The books are closed for everything before 2026-02-28 00:00. "
        "What this entry speaks of lies before: record a correction, or let an owner open the period again."
    )
    assert week.is_proved()


def test_an_analysis_sampled_in_a_closed_period_cannot_be_accepted_any_more(week: Shop) -> None:
    week.record("analysis", days_ago=4, label="a", vessel="Copper", metal="Cu", result="45 g/L")
    close(week)
    assert "occurred_at: The books are closed" in refusal(lambda: week.record("acceptance", analysis="a"))
    later = week.record("analysis", days_ago=3, vessel="Copper", metal="Cu", result="45 g/L")
    assert later.sequence == 11  # an analysis moves no matter: it may still be entered


def test_what_moved_no_matter_can_still_be_cancelled(week: Shop) -> None:
    week.record("analysis", days_ago=4, label="a", vessel="Copper", metal="Cu", result="45 g/L")
    close(week)
    before = week.ledger()
    week.record("cancellation", entry="a", reason="another shop's bottle")
    assert week.ledger() == before
    assert week.is_proved()


def test_a_closing_is_opened_again_not_cancelled(week: Shop) -> None:
    period = close(week)
    cancellation = Cancellation(period.closing.uuid, "too early")
    assert "A closing cannot be cancelled" in refusal(lambda: record_event(week, cancellation))


def test_a_retry_of_what_was_recorded_before_the_close_returns_it(week: Shop) -> None:
    key = uuid4()
    said: dict[str, Any] = {"key": key, "days_ago": 4.5, "vessel": "Copper", "volume": "19 L"}
    first = week.record("level-reading", **said)
    close(week)
    assert week.record("level-reading", **said) == first


def record_event(shop: Shop, event: events.Event, days_ago: float = 0) -> Entry:
    """Record an event as its builder would have made it."""
    built = Built(event, Occurred(shop.now - timedelta(days=days_ago)) if days_ago else None)
    clearance = Clearance("allowed")
    return record_matter(actor=shop.member, now=shop.now, key=uuid4(), built=built, clearance=clearance).entry


def correction(shop: Shop, label: str, days_ago: float = 0) -> Entry:
    """Record that 5 g of copper more are in the bath than an entry said."""
    with scope(workshop=shop.member.workshop):
        bath = str(Vessel.objects.get(name="Copper").uuid)
    found = Change("Cu", Measured("5", "g", 5 * G), found=True)
    return record_event(shop, Correction(shop.entries[label].uuid, bath, (found,), "mistyped"), days_ago)


def test_an_error_in_a_closed_period_is_corrected_now(week: Shop) -> None:
    close(week)
    entry = correction(week, "run 4")
    assert entry.about == week.entries["run 4"]
    assert week.went(entry, "Cu") == {"unaccounted": -5 * G, "Copper": 5 * G}
    assert week.is_proved()


def test_a_correction_may_not_be_dated_into_the_closed_period(week: Shop) -> None:
    close(week)
    assert "occurred_at: The books are closed" in refusal(lambda: correction(week, "run 4", days_ago=4))


def test_what_can_still_be_cancelled_is_not_corrected(week: Shop) -> None:
    assert "entry: The period of this entry is open" in refusal(lambda: correction(week, "run 4"))
    close(week)
    assert "entry: The period of this entry is open" in refusal(lambda: correction(week, "run 1"))


# --- opening again ---------------------------------------------------------------------------------------------------


def test_the_owner_opens_the_last_period_again(week: Shop, owner: Membership) -> None:
    first, last = close(week, BEGUN - timedelta(days=2)), close(week)
    assert "Only an owner" in refusal(lambda: reopen(week.member, last), NotPermittedError)
    assert "period: Only the last closed period" in refusal(lambda: reopen(owner, first))
    opened = reopen(owner, last)
    assert opened.reopening is not None
    event = read_event(opened.reopening)
    assert event == PeriodReopening(last.closing.uuid, "a drum was forgotten")
    assert get_closed_until(week.member.workshop) == first.until
    assert [row.reopening is not None for row in list_periods_for(owner)] == [True, False]
    assert "period: Only the last closed period" in refusal(lambda: reopen(owner, last))
    reopen(owner, first)
    assert get_closed_until(week.member.workshop) is None
    assert week.is_proved()


def test_what_was_forgotten_is_recorded_and_the_period_closed_again(week: Shop, owner: Membership) -> None:
    period = close(week)
    reopen(owner, period)
    week.record("move", days_ago=4.5, source="Copper", target="Rinse", volume="1 L", happened=True)
    week.record("cancellation", entry="run 3", reason="another rack")
    again = close(week)
    assert (again.after, again.until) == (period.after, period.until)
    assert again.followed_sha256 != period.followed_sha256
    assert again.holdings_sha256 != period.holdings_sha256
    assert [row.pk for row in list_periods_for(owner)] == [again.pk, period.pk]
    assert week.is_proved()


@pytest.mark.parametrize("reason", ["", "  ", "two\nlines"])
def test_a_reason_is_needed(week: Shop, owner: Membership, reason: str) -> None:
    period = close(week)
    assert refusal(lambda: reopen(owner, period, reason)).startswith("reason: ")
    assert get_closed_until(week.member.workshop) == BEGUN


def test_the_same_key_opens_once(week: Shop, owner: Membership) -> None:
    period, key = close(week), uuid4()
    assert reopen(owner, period, key=key) == reopen(owner, period, key=key)
    with scope(workshop=week.member.workshop):
        assert Entry.objects.filter(kind=PeriodReopening.KIND).count() == 1
