"""What is due, as functions of stored columns and a given moment."""

from datetime import UTC, datetime, timedelta

from hypothesis import given
from hypothesis import strategies as st

from chemicals.jobs.due import back_off, firings, next_due

NIGHT = datetime(2026, 3, 1, 2, 0, tzinfo=UTC)
DAY = timedelta(days=1)


def test_a_tick_before_the_moment_fires_nothing() -> None:
    assert firings([("verify", NIGHT, DAY)], NIGHT - timedelta(microseconds=1)) == []


def test_a_tick_at_the_moment_fires_and_is_due_again_a_day_later() -> None:
    (firing,) = firings([("verify", NIGHT, DAY)], NIGHT)
    assert (firing.task, firing.was_due_at, firing.next_due_at) == ("verify", NIGHT, NIGHT + DAY)


def test_ten_missed_nights_are_caught_up_once() -> None:
    (firing,) = firings([("verify", NIGHT, DAY)], NIGHT + 10 * DAY + timedelta(hours=5))
    assert firing.next_due_at == NIGHT + 11 * DAY


@given(
    late=st.timedeltas(timedelta(0), timedelta(days=4000)),
    every=st.timedeltas(timedelta(seconds=1), timedelta(days=400)),
)
def test_the_next_moment_is_the_first_of_the_grid_after_now(late: timedelta, every: timedelta) -> None:
    now = NIGHT + late
    following = next_due(NIGHT, every, now)
    assert now < following <= now + every
    assert (following - NIGHT) % every == timedelta(0)


def test_pauses_double_up_to_an_hour() -> None:
    assert [back_off(tries).seconds for tries in (1, 2, 3, 4)] == [5, 10, 20, 40]
    assert back_off(11) == back_off(5000) == timedelta(hours=1)
