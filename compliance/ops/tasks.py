"""Background tasks of the service itself."""

from collections.abc import Mapping
from datetime import datetime
from typing import Any

from django.contrib.sessions.models import Session


def clear_sessions(payload: Mapping[str, Any], *, now: datetime) -> None:
    """Delete the sessions that have run out; they hold nothing that is still needed."""
    Session.objects.filter(expire_date__lt=now).delete()
