"""Tasks for the tests. `insert` adds a row to a table without any unique constraint: a second effect would show."""

import time
from collections.abc import Mapping
from datetime import datetime
from typing import Any

from django.db import connection

from chemicals.jobs.models import Job
from chemicals.jobs.registry import Step


def insert(payload: Mapping[str, Any], *, now: datetime) -> None:
    """Insert the payload's label, after the time it takes."""
    with connection.cursor() as cursor:
        cursor.execute("INSERT INTO effect (label) VALUES (%s)", [payload["label"]])
    time.sleep(payload.get("seconds", 0))


def insert_then_fail(payload: Mapping[str, Any], *, now: datetime) -> None:
    """Insert, then fail: the row must not stay."""
    insert(payload, now=now)
    raise ValueError("the ink is empty\0")


def insert_in_steps(payload: Mapping[str, Any], *, now: datetime) -> Step | None:
    """Insert one row per step, until the payload's list is empty."""
    label, *rest = payload["labels"]
    insert({"label": label}, now=now)
    total = payload.get("total", len(rest) + 1)
    return Step({"labels": rest, "total": total}, done=total - len(rest), total=total) if rest else None


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


def be_overtaken(payload: Mapping[str, Any], *, now: datetime) -> None:
    """Insert; while the first worker is at it, another claims the job."""
    insert(payload, now=now)
    Job.objects.filter(task="overtaken", claimed_by="w1").update(attempts=2, tries=2, claimed_by="w2")
