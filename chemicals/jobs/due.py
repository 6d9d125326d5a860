"""What is due: functions of stored columns and a given moment, nothing else."""

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import datetime, timedelta

LIMIT = 5
"""Tries before a job counts as failed."""


@dataclass(frozen=True)
class Firing:
    """A scheduled task to enqueue now, and when it is due after that."""

    task: str
    was_due_at: datetime
    next_due_at: datetime


def next_due(due_at: datetime, every: timedelta, now: datetime) -> datetime:
    """Return the first moment after now on the grid of due_at: missed ones are passed over."""
    if due_at > now:
        return due_at
    return due_at + every * ((now - due_at) // every + 1)


def firings(schedules: Iterable[tuple[str, datetime, timedelta]], now: datetime) -> list[Firing]:
    """Return each due task once, however many times it was missed."""
    return [Firing(task, due_at, next_due(due_at, every, now)) for task, due_at, every in schedules if due_at <= now]


def back_off(tries: int) -> timedelta:
    """Return how long to wait after so many tries in vain: 5 s, 10 s, 20 s, up to an hour."""
    return min(timedelta(seconds=5 * 2 ** min(tries - 1, 10)), timedelta(hours=1))
