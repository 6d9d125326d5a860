"""The scaled set-up: Celery carries ids of jobs over Redis, the job table stays the truth.

Only `celery -A compliance worker` and `celery -A compliance beat` import this module; nothing does while REDIS_URL is
empty. A lost or repeated message costs nothing: `run` claims, and an id that nobody took is sent again.
"""

import os
import secrets
from typing import Any
from uuid import UUID

import django
from celery import Celery
from django.conf import settings
from django.core.exceptions import ImproperlyConfigured
from django.utils import timezone

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "compliance.settings")
django.setup()

from chemicals.jobs import services  # noqa: E402  (needs the apps)

if not settings.REDIS_URL:
    raise ImproperlyConfigured("Set REDIS_URL, like redis://127.0.0.1:6379/0, or run `manage.py work` instead.")

app = Celery("gramledger", broker=settings.REDIS_URL)
app.conf.update(
    timezone="UTC",
    task_acks_late=True,
    task_ignore_result=True,
    task_reject_on_worker_lost=True,
    worker_prefetch_multiplier=1,
    worker_cancel_long_running_tasks_on_connection_loss=True,
    broker_connection_retry_on_startup=True,
    broker_transport_options={
        "visibility_timeout": settings.JOB_LEASE_SECONDS + 5,  # a little over the longest task
        "unacked_restore_interval": 5,  # seconds: the tasks of a killed worker come back after 17 s, not 107 s
        "unacked_restore_throttle": 1,
    },
    beat_schedule={"tick": {"task": "tick", "schedule": 1.0}},
)


def _run_job(job_id: str) -> None:
    """Do the job with this id, unless somebody has it already."""
    services.run(UUID(job_id), now=timezone.now(), worker=f"celery:{os.getpid()}:{secrets.token_hex(4)}")


def _tick() -> None:
    """Enqueue what the schedules say, and send the ids of all that is due."""
    services.tick(now=timezone.now())
    services.dispatch(now=timezone.now(), send=_send)


def _send(job_id: UUID) -> Any:
    return run_job.delay(str(job_id))


run_job = app.task(name="run_job")(_run_job)
tick = app.task(name="tick", expires=5)(_tick)
