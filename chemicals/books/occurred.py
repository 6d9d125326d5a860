"""When something happened: a moment in UTC with the precision it is known to."""

from dataclasses import dataclass
from datetime import UTC, date, datetime, time
from zoneinfo import ZoneInfo

MINUTE, DAY = "minute", "day"
PRECISIONS = (MINUTE, DAY)


@dataclass(frozen=True)
class Occurred:
    """A time in UTC; with precision ``day`` it is noon of that day in the workshop's zone."""

    at: datetime
    precision: str = MINUTE

    @classmethod
    def on_day(cls, day: date, zone: ZoneInfo) -> "Occurred":
        """Return noon, local time, of a day of which nothing finer is known."""
        return cls(datetime.combine(day, time(12), zone).astimezone(UTC), DAY)

    @classmethod
    def at_clock(cls, day: date, clock: time, zone: ZoneInfo, *, second: bool = False) -> "Occurred":
        """Return the moment that a clock showed; the ``second`` one where it showed that time twice."""
        return cls(datetime.combine(day, clock.replace(fold=int(second)), zone).astimezone(UTC))


def was_skipped(day: date, clock: time, zone: ZoneInfo) -> bool:
    """Say whether no clock showed this time on this day: clocks were put forward."""
    local = datetime.combine(day, clock, zone)
    return local.astimezone(UTC).astimezone(zone).replace(tzinfo=None) != local.replace(tzinfo=None)


def came_twice(day: date, clock: time, zone: ZoneInfo) -> bool:
    """Say whether clocks showed this time twice on this day: they were put back."""
    first, second = (datetime.combine(day, clock.replace(fold=fold), zone) for fold in (0, 1))
    return first.utcoffset() != second.utcoffset() and not was_skipped(day, clock, zone)
