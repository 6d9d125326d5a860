"""Clock times on the days when clocks are changed. The changes of 2026 in Berlin are those of the tz database."""

from datetime import UTC, date, datetime, time
from zoneinfo import ZoneInfo

from chemicals.books.occurred import DAY, Occurred, came_twice, was_skipped

BERLIN = ZoneInfo("Europe/Berlin")
FORWARD, BACK = date(2026, 3, 29), date(2026, 10, 25)


def test_a_day_stands_for_its_noon_there() -> None:
    assert Occurred.on_day(date(2026, 7, 1), BERLIN) == Occurred(datetime(2026, 7, 1, 10, tzinfo=UTC), DAY)


def test_clocks_put_forward_skip_an_hour() -> None:
    assert was_skipped(FORWARD, time(2, 30), BERLIN)
    assert not was_skipped(FORWARD, time(3), BERLIN)
    assert not came_twice(FORWARD, time(2, 30), BERLIN)


def test_clocks_put_back_show_an_hour_twice() -> None:
    assert came_twice(BACK, time(2, 30), BERLIN)
    assert not came_twice(BACK, time(3), BERLIN)
    assert not was_skipped(BACK, time(2, 30), BERLIN)


def test_of_two_moments_one_is_meant() -> None:
    first, second = (Occurred.at_clock(BACK, time(2, 30), BERLIN, second=which) for which in (False, True))
    assert (first.at, second.at) == (
        datetime(2026, 10, 25, 0, 30, tzinfo=UTC),
        datetime(2026, 10, 25, 1, 30, tzinfo=UTC),
    )
