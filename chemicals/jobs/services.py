"""Enqueue, claim, run, tick.

A claim is a compare-and-swap on `attempts` with a lease. The effect of a task and the record that it is done are one
transaction, which counts only if the claim still stands: a database effect happens once, whoever dies when.
"""

import json
import logging
from collections.abc import Callable, Mapping
from datetime import datetime, timedelta
from typing import Any
from uuid import UUID

from django.conf import settings
from django.db import connection, transaction
from django.db.models import F, Q, QuerySet

from chemicals.jobs.due import LIMIT, back_off, firings
from chemicals.jobs.models import Job, Schedule, State
from chemicals.jobs.registry import Step, find_task, refuse_writes, require_known
from chemicals.workshop.models import Workshop

logger = logging.getLogger(__name__)


class ClaimLostError(Exception):
    """The lease ran out and another worker has the job: what this one did is rolled back."""


def enqueue(
    *,
    now: datetime,
    task: str,
    payload: Mapping[str, Any],
    due_at: datetime | None = None,
    workshop: Workshop | None = None,
) -> Job:
    """Write a job, due now unless said otherwise, in the caller's transaction: both are there, or neither."""
    require_known(task)
    text = json.dumps(payload, sort_keys=True)
    return Job.objects.create(task=task, payload=text, due_at=due_at or now, workshop=workshop, created_at=now)


def claim(*, now: datetime, worker: str, job_id: UUID | None = None) -> Job | None:
    """Claim the job that waits longest, or the named one; None if nothing is due or others were quicker."""
    rows = _claimable(now)
    if job_id is not None:
        rows = rows.filter(pk=job_id)
    for pk, attempts, tries in rows.values_list("pk", "attempts", "tries")[:20]:
        if tries >= LIMIT:
            _give_up(pk, attempts, now)
        elif _swap(pk, attempts, now, worker):
            return Job.objects.select_related("workshop").get(pk=pk)
    return None


def run(job_id: UUID, *, now: datetime, worker: str) -> bool:
    """Claim the named job and do it. Safe to call twice, at once or later; False if it was not to be had."""
    job = claim(now=now, worker=worker, job_id=job_id)
    if job is not None:
        _perform(job, now)
    return job is not None


def run_next(*, now: datetime, worker: str) -> bool:
    """Claim the job that waits longest and do it; False if there is none."""
    job = claim(now=now, worker=worker)
    if job is not None:
        _perform(job, now)
    return job is not None


def tick(*, now: datetime) -> int:
    """Enqueue each scheduled task that is due, once; return how many. Several processes may tick at once."""
    _add_missing_schedules(now)
    rows = Schedule.objects.values_list("task", "due_at", "every_seconds")
    due = firings([(task, due_at, timedelta(seconds=every)) for task, due_at, every in rows], now)
    count = 0
    for firing in due:
        with transaction.atomic():
            row = Schedule.objects.filter(task=firing.task, due_at=firing.was_due_at)
            if row.update(due_at=firing.next_due_at):
                enqueue(now=now, task=firing.task, payload={}, due_at=now)
                count += 1
    return count


def dispatch(*, now: datetime, send: Callable[[UUID], object]) -> int:
    """Hand the ids of due jobs to a broker; an id that nobody has taken within a lease is sent again."""
    waiting = Q(carried_until=None) | Q(carried_until__lte=now)
    count = 0
    for pk, attempts in _claimable(now).filter(waiting).values_list("pk", "attempts")[:1000]:
        row = _claimable(now).filter(waiting, pk=pk, attempts=attempts)
        if row.update(carried_until=now + _lease()):
            send(pk)
            count += 1
    return count


def retry_failed(*, now: datetime) -> int:
    """Queue every failed job again, after a person has removed the cause; return how many."""
    return Job.objects.filter(state=State.FAILED).update(state=State.QUEUED, due_at=now, tries=0, finished_at=None)


def _lease() -> timedelta:
    return timedelta(seconds=settings.JOB_LEASE_SECONDS)


def _claimable(now: datetime) -> QuerySet[Job]:
    due = Q(state=State.QUEUED, due_at__lte=now) | Q(state=State.RUNNING, lease_until__lte=now)
    return Job.objects.filter(due).order_by("due_at", "pk")


def _swap(pk: UUID, attempts: int, now: datetime, worker: str) -> int:
    return (
        _claimable(now)
        .filter(pk=pk, attempts=attempts)
        .update(
            state=State.RUNNING,
            attempts=F("attempts") + 1,
            tries=F("tries") + 1,
            lease_until=now + _lease(),
            claimed_by=worker,
        )
    )


def _give_up(pk: UUID, attempts: int, now: datetime) -> None:
    """Fail a job whose workers died each time: it would go on killing them."""
    _claimable(now).filter(pk=pk, attempts=attempts).update(
        state=State.FAILED,
        lease_until=None,
        claimed_by="",
        finished_at=now,
        last_error="The worker died or ran out of its lease at every try.",
    )
    logger.error("job_failed id=%s reason=worker_died", pk)


def _perform(job: Job, now: datetime) -> None:
    try:
        with connection.execute_wrapper(refuse_writes):
            effect = find_task(job.task)(json.loads(job.payload), now=now)
        with transaction.atomic():
            step = None if effect is None else effect()
            _finish(job, step if isinstance(step, Step) else None, now)
    except ClaimLostError:
        logger.warning("job_claim_lost id=%s task=%s attempt=%s", job.pk, job.task, job.attempts)
    except Exception as error:  # whatever a task raises is kept on its job, and the worker lives on
        _postpone(job, error, now)


def _finish(job: Job, step: Step | None, now: datetime) -> None:
    if step is None:
        _release(job, state=State.DONE, finished_at=now, last_error="", progress_done=F("progress_total"))
    else:
        _release(
            job,
            state=State.QUEUED,
            payload=json.dumps(step.payload, sort_keys=True),
            progress_done=step.done,
            progress_total=step.total,
            tries=0,
            last_error="",
        )


def _postpone(job: Job, error: Exception, now: datetime) -> None:
    """Keep the error; try again after the back-off, or fail for good where everybody sees it."""
    text = f"{type(error).__name__}: {error}".replace("\0", "")[:1000]
    try:
        if job.tries >= LIMIT:
            _release(job, state=State.FAILED, finished_at=now, last_error=text)
            logger.error("job_failed id=%s task=%s", job.pk, job.task, exc_info=error)
        else:
            _release(job, state=State.QUEUED, due_at=now + back_off(job.tries), last_error=text)
            logger.warning("job_postponed id=%s task=%s error=%s", job.pk, job.task, text)
    except ClaimLostError:
        logger.warning("job_claim_lost id=%s task=%s attempt=%s", job.pk, job.task, job.attempts)


def _release(job: Job, **columns: Any) -> None:
    """End the claim, if it still stands."""
    held = Job.objects.filter(pk=job.pk, attempts=job.attempts, state=State.RUNNING)
    if not held.update(lease_until=None, claimed_by="", carried_until=None, **columns):
        raise ClaimLostError


def _add_missing_schedules(now: datetime) -> None:
    """Give each schedule of the settings its row; a changed interval counts from now on."""
    rows = dict(Schedule.objects.values_list("task", "every_seconds"))
    if rows == settings.JOB_SCHEDULES:
        return
    for task, every in settings.JOB_SCHEDULES.items():
        Schedule.objects.get_or_create(task=task, defaults={"every_seconds": every, "due_at": now})
        Schedule.objects.filter(task=task).exclude(every_seconds=every).update(every_seconds=every)
    Schedule.objects.exclude(task__in=settings.JOB_SCHEDULES).delete()
