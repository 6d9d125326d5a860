"""The same jobs through Celery on a real Redis: a killed worker loses nothing and nothing happens twice."""

import os
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest
from django.utils import timezone

from chemicals.jobs import services
from tests.jobs import effects
from tests.jobs.processes import ROOT, done, environment, kill, running, start, wait_until

REDIS = os.environ.get("TEST_REDIS_URL", "redis://127.0.0.1:6379/15")
CELERY = [sys.executable, "-m", "celery", "--app", "compliance", "--quiet"]
WORKER = [*CELERY, "worker", "--concurrency", "2", "--loglevel", "error", "--without-gossip", "--without-mingle"]
JOBS = 40


@pytest.fixture
def redis_url() -> Iterator[str]:
    """A Redis database that is empty before and after."""
    from redis import Redis

    client = Redis.from_url(REDIS)
    client.flushdb()
    yield REDIS
    client.flushdb()
    client.close()


@pytest.mark.services
@pytest.mark.usefixtures("committed_effect_table")
def test_a_killed_celery_worker_loses_nothing_and_nothing_happens_twice(tmp_path: Path, redis_url: str) -> None:
    now = timezone.now()
    wanted = [f"{number:03}" for number in range(JOBS)]
    for label in wanted:
        services.enqueue(now=now, task="insert", payload={"label": label, "seconds": 0.05})
    variables = environment(tmp_path, REDIS_URL=redis_url)
    beat = [*CELERY, "beat", "--schedule", str(tmp_path / "beat"), "--pidfile", "", "--loglevel", "error"]
    with running([WORKER, beat], variables) as processes:
        for level in (5, 20):
            wait_until(lambda level=level: done() >= level)  # type: ignore[misc]
            kill(processes[0])
            processes[0] = start(WORKER, variables)
        wait_until(lambda: done() == JOBS)
    assert effects.labels() == wanted


def test_celery_is_not_imported_without_a_broker(tmp_path: Path) -> None:
    program = "import sys, compliance.wsgi, chemicals.jobs.services; print('celery' in sys.modules)"
    variables = environment_without_redis(tmp_path)
    result = subprocess.run(
        [sys.executable, "-c", program], cwd=ROOT, env=variables, capture_output=True, text=True, check=True
    )
    assert result.stdout.split() == ["False"]


def environment_without_redis(data: Path) -> dict[str, str]:
    return os.environ | {"DJANGO_SETTINGS_MODULE": "compliance.settings", "GRAMLEDGER_DATA": str(data), "REDIS_URL": ""}
