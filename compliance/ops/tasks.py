"""Background tasks of the service itself."""

from collections.abc import Mapping
from datetime import datetime
from typing import Any

from django.contrib.sessions.models import Session

from chemicals.jobs.registry import Effect
from compliance.ops.verify import verify_workshops


class BrokenBooksError(Exception):
    """The nightly proof found something that cannot be: the job fails, and shows it."""


def clear_sessions(payload: Mapping[str, Any], *, now: datetime) -> Effect:
    """Delete the sessions that have run out; they hold nothing that is still needed."""
    return Session.objects.filter(expire_date__lt=now).delete


def verify(payload: Mapping[str, Any], *, now: datetime) -> None:
    """Prove every workshop's journal and books again. Reads only."""
    wrong = [verdict for verdict in verify_workshops() if verdict.problems]
    if wrong:
        first = wrong[0].problems[0]
        raise BrokenBooksError(
            f"{wrong[0].workshop.name}, entry {first.sequence}: {first.message} Run: manage.py verify"
        )
