"""Moments as people write them: date and time of day in the workshop's zone."""

from datetime import date, time
from zoneinfo import ZoneInfo

from django.utils.translation import gettext as _

from chemicals.books.occurred import Occurred, came_twice, was_skipped

FIRST, SECOND = "first", "second"


class MomentError(ValueError):
    """A clock time that is no moment, or two; the text names the remedy."""


def read_moment(day: date, clock: time | None, which: str, zone: ZoneInfo) -> Occurred:
    """Return the moment; without a time of day only the day is known. Raises MomentError."""
    if clock is None:
        return Occurred.on_day(day, zone)
    if was_skipped(day, clock, zone):
        raise MomentError(_("Clocks were put forward: this time did not exist that day. Read the clock again."))
    if came_twice(day, clock, zone) and which not in (FIRST, SECOND):
        raise MomentError(_("Clocks were put back: this time came twice that day. Choose the first or the second."))
    return Occurred.at_clock(day, clock, zone, second=which == SECOND)
