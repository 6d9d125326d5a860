"""When something happened, as a page says it."""

from datetime import datetime

from django.utils import timezone

from chemicals.books.occurred import DAY


def moment(at: datetime, precision: str = "") -> str:
    """Return a moment in the workshop's zone, ISO 8601: the day alone where no more is known."""
    local = timezone.localtime(at)
    return local.date().isoformat() if precision == DAY else local.strftime("%Y-%m-%d %H:%M")
