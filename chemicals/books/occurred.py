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
