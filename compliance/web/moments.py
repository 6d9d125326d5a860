"""Moments as people write them: date and time of day in the workshop's zone."""

from datetime import UTC, date, datetime, time
from zoneinfo import ZoneInfo

from django.utils.translation import gettext as _

from chemicals.books.occurred import Occurred

FIRST, SECOND = "first", "second"


class MomentError(ValueError):
    """A clock time that is no moment, or two; the text names the remedy."""


def is_ambiguous(day: date, clock: time, zone: ZoneInfo) -> bool:
    """Say whether a clock shows this time twice on this day: clocks are put back."""
    first, second = (datetime.combine(day, clock.replace(fold=fold), zone) for fold in (0, 1))
    return first.utcoffset() != second.utcoffset() and _exists(first)


def _exists(moment: datetime) -> bool:
    return moment.astimezone(UTC).astimezone(moment.tzinfo).replace(tzinfo=None) == moment.replace(tzinfo=None)


def read_moment(day: date, clock: time | None, which: str, zone: ZoneInfo) -> Occurred:
    """Return the moment; without a time of day only the day is known. Raises MomentError."""
    if clock is None:
        return Occurred.on_day(day, zone)
    local = datetime.combine(day, clock.replace(fold=int(which == SECOND)), zone)
    if not _exists(local):
        raise MomentError(_("Clocks were put forward: this time did not exist that day. Read the clock again."))
    if is_ambiguous(day, clock, zone) and which not in (FIRST, SECOND):
        raise MomentError(_("Clocks were put back: this time came twice that day. Choose the first or the second."))
    return Occurred(local.astimezone(UTC))
