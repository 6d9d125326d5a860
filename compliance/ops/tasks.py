"""Background tasks of the service itself."""

from collections.abc import Mapping
from datetime import datetime
from typing import Any

from django.contrib.sessions.models import Session

from chemicals.jobs.registry import Effect


def clear_sessions(payload: Mapping[str, Any], *, now: datetime) -> Effect:
    """Delete the sessions that have run out; they hold nothing that is still needed."""
    return Session.objects.filter(expire_date__lt=now).delete
