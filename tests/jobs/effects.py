"""Tasks for the tests. `insert` adds a row to a table without any unique constraint: a second effect would show."""

import time
from collections.abc import Mapping
from datetime import datetime
from typing import Any

from django.db import connection

from chemicals.jobs.models import Job
from chemicals.jobs.registry import Effect, Step


def write(label: str, seconds: float = 0) -> None:
    """Insert a label, after the time it takes."""
    with connection.cursor() as cursor:
        cursor.execute("INSERT INTO effect (label) VALUES (%s)", [label])
    time.sleep(seconds)


def insert(payload: Mapping[str, Any], *, now: datetime) -> Effect:
    """Insert the payload's label."""
    return lambda: write(payload["label"], payload.get("seconds", 0))


def insert_at_once(payload: Mapping[str, Any], *, now: datetime) -> None:
    """Write outside the effect: a mistake that must not pass."""
    write(payload["label"])


def insert_then_fail(payload: Mapping[str, Any], *, now: datetime) -> Effect:
    """Insert, then fail: the row must not stay."""

    def effect() -> None:
        write(payload["label"])
        raise ValueError("the ink is empty\0")

    return effect


def insert_in_steps(payload: Mapping[str, Any], *, now: datetime) -> Effect:
    """Insert one row per step, until the payload's list is empty."""
    label, *rest = payload["labels"]
    total = payload.get("total", len(rest) + 1)

    def effect() -> Step | None:
        write(label)
        return Step({"labels": rest, "total": total}, done=total - len(rest), total=total) if rest else None

    return effect


def be_overtaken(payload: Mapping[str, Any], *, now: datetime) -> Effect:
    """Insert; while the first worker is at it, another claims the job."""

    def effect() -> None:
        write(payload["label"])
        Job.objects.filter(task="overtaken", claimed_by="w1").update(attempts=2, tries=2, claimed_by="w2")

    return effect


def labels() -> list[str]:
    """Return what has been inserted, sorted."""
    with connection.cursor() as cursor:
        cursor.execute("SELECT label FROM effect ORDER BY label")
        return [label for (label,) in cursor.fetchall()]


def create_table() -> None:
    """Create the table of effects."""
    with connection.cursor() as cursor:
        cursor.execute("CREATE TABLE effect (label varchar(80) NOT NULL)")


def drop_table() -> None:
    """Drop the table of effects."""
    with connection.cursor() as cursor:
        cursor.execute("DROP TABLE effect")
