"""`manage.py work` as real processes: killed at any moment, they lose nothing and do nothing twice."""

import signal
from pathlib import Path

import pytest
from django.utils import timezone

from chemicals.jobs import services
from chemicals.jobs.models import Job, Schedule, State
from tests.jobs import effects
from tests.jobs.processes import WORK, done, environment, kill, running, start, wait_until

JOBS = 60

pytestmark = pytest.mark.usefixtures("committed_effect_table")


def enqueue(count: int, seconds: float = 0.02) -> list[str]:
    wanted = [f"{number:03}" for number in range(count)]
    now = timezone.now()
    for label in wanted:
        services.enqueue(now=now, task="insert", payload={"label": label, "seconds": seconds})
    return wanted


def test_two_workers_killed_again_and_again_lose_nothing_and_do_nothing_twice(tmp_path: Path) -> None:
    wanted = enqueue(JOBS)
    variables = environment(tmp_path)
    with running([WORK, WORK], variables) as workers:
        for count, level in enumerate((5, 20, 35, 45)):
            wait_until(lambda level=level: done() >= level)  # type: ignore[misc]
            victim = count % 2
            kill(workers[victim])
            workers[victim] = start(WORK, variables)
        wait_until(lambda: done() == JOBS)
    assert effects.labels() == wanted
    assert Job.objects.filter(attempts__gt=1).count() <= 4


def test_a_worker_that_is_asked_to_stop_finishes_the_job_in_hand(tmp_path: Path) -> None:
    enqueue(2, seconds=0.8)
    with running([WORK], environment(tmp_path)) as (worker,):
        wait_until(lambda: Job.objects.filter(state=State.RUNNING).exists())
        worker.send_signal(signal.SIGTERM)
        assert worker.wait(10) == 0
    assert len(effects.labels()) == 1
    assert sorted(Job.objects.filter(task="insert").values_list("state", flat=True)) == ["done", "queued"]


def test_once_does_what_is_due_and_ends(tmp_path: Path) -> None:
    wanted = enqueue(3, seconds=0)
    with running([[*WORK, "--once"]], environment(tmp_path)) as (worker,):
        assert worker.wait(20) == 0
    assert effects.labels() == wanted
    assert Schedule.objects.filter(task="clear-sessions", due_at__gt=timezone.now()).exists()
    assert Job.objects.get(task="clear-sessions").state == State.DONE
