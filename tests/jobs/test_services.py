"""Enqueue, claim, run, tick: who may have a job, and what stays when something goes wrong."""

from datetime import UTC, datetime, timedelta
from uuid import UUID, uuid4

import pytest
from django.db import IntegrityError, transaction
from pytest_django import Settings

from chemicals.jobs import services
from chemicals.jobs.due import LIMIT
from chemicals.jobs.models import Job, Schedule, State
from chemicals.jobs.registry import UnknownTaskError, find_task
from tests.jobs import effects

NOW = datetime(2026, 3, 1, 9, 0, tzinfo=UTC)
MINUTE = timedelta(minutes=1)
LEASE = timedelta(seconds=60)

pytestmark = pytest.mark.usefixtures("effect_table")


def enqueue(label: str = "a", task: str = "insert", due_at: datetime = NOW) -> Job:
    return services.enqueue(now=NOW, task=task, payload={"label": label}, due_at=due_at)


def claim(worker: str, now: datetime = NOW) -> Job:
    job = services.claim(now=now, worker=worker)
    assert job is not None
    return job


def test_every_registered_task_is_a_function(settings: Settings) -> None:
    assert all(callable(find_task(name)) for name in settings.JOB_TASKS)
    assert set(settings.JOB_SCHEDULES) <= set(settings.JOB_TASKS)


def test_an_unknown_task_is_refused_when_it_is_enqueued() -> None:
    with pytest.raises(UnknownTaskError, match="'brew' is not in JOB_TASKS"):
        enqueue(task="brew")


def test_a_job_is_not_claimed_before_it_is_due() -> None:
    enqueue(due_at=NOW + MINUTE)
    assert services.claim(now=NOW, worker="w1") is None
    assert claim("w1", NOW + MINUTE).attempts == 1


def test_the_job_that_waits_longest_comes_first() -> None:
    enqueue("late", due_at=NOW - MINUTE)
    enqueue("later", due_at=NOW - 2 * MINUTE)
    assert claim("w1").payload == '{"label": "later"}'


def test_a_claimed_job_is_free_again_when_its_lease_has_run_out() -> None:
    enqueue()
    first = claim("w1")
    assert services.claim(now=NOW + LEASE - timedelta(seconds=1), worker="w2") is None
    second = claim("w2", NOW + LEASE)
    assert (second.pk, second.attempts, second.claimed_by) == (first.pk, 2, "w2")


def test_run_does_the_job_once_however_often_it_is_called() -> None:
    job = enqueue()
    assert services.run(job.pk, now=NOW, worker="w1")
    assert not services.run(job.pk, now=NOW, worker="w2")
    job.refresh_from_db()
    assert (job.state, job.finished_at, job.lease_until, job.claimed_by) == (State.DONE, NOW, None, "")
    assert effects.labels() == ["a"]


def test_run_of_an_unknown_id_does_nothing() -> None:
    assert not services.run(uuid4(), now=NOW, worker="w1")


def test_the_effect_of_a_worker_that_lost_its_claim_is_rolled_back() -> None:
    job = enqueue("slow", task="overtaken")
    services.run(job.pk, now=NOW, worker="w1")
    assert effects.labels() == []
    services.run(job.pk, now=NOW + LEASE, worker="w3")
    job.refresh_from_db()
    assert (job.state, job.last_error, effects.labels()) == (State.DONE, "", ["slow"])


def test_a_failure_leaves_no_effect_and_is_tried_again_after_a_pause() -> None:
    job = enqueue(task="insert-then-fail")
    services.run(job.pk, now=NOW, worker="w1")
    job.refresh_from_db()
    assert (job.state, job.due_at, job.tries) == (State.QUEUED, NOW + timedelta(seconds=5), 1)
    assert job.last_error == "ValueError: the ink is empty"
    assert effects.labels() == []


def test_a_task_that_writes_before_it_returns_its_effect_is_stopped() -> None:
    job = enqueue(task="insert-at-once")
    services.run(job.pk, now=NOW, worker="w1")
    job.refresh_from_db()
    assert job.last_error.startswith(
        "WriteOutsideEffectError: Move this into the function that the task returns: INSERT"
    )
    assert effects.labels() == []


def test_after_the_limit_a_job_is_failed_until_a_person_queues_it_again() -> None:
    job = enqueue(task="insert-then-fail")
    for day in range(LIMIT):
        assert services.run(job.pk, now=NOW + timedelta(days=day), worker="w1")
    job.refresh_from_db()
    assert (job.state, job.finished_at) == (State.FAILED, NOW + timedelta(days=LIMIT - 1))
    assert not services.run(job.pk, now=NOW + timedelta(days=99), worker="w1")
    assert services.retry_failed(now=NOW + timedelta(days=99)) == 1
    assert claim("w1", NOW + timedelta(days=99)).tries == 1


def test_a_job_that_kills_every_worker_is_given_up() -> None:
    job = enqueue()
    for count in range(LIMIT):
        claim("doomed", NOW + count * LEASE)
    assert services.claim(now=NOW + LIMIT * LEASE, worker="w1") is None
    job.refresh_from_db()
    assert job.state == State.FAILED
    assert job.last_error == "The worker died or ran out of its lease at every try."


def test_a_long_task_goes_on_in_steps_and_shows_its_progress() -> None:
    job = services.enqueue(now=NOW, task="steps", payload={"labels": [str(number) for number in range(2 * LIMIT)]})
    seen = []
    while services.run_next(now=NOW, worker="w1"):
        job.refresh_from_db()
        seen.append((job.progress_done, job.progress_total))
    assert seen == [(count, 2 * LIMIT) for count in range(1, 2 * LIMIT + 1)]
    assert job.state == State.DONE
    assert len(effects.labels()) == 2 * LIMIT


def test_a_schedule_fires_once_for_all_that_was_missed(settings: Settings) -> None:
    settings.JOB_SCHEDULES = {"clear-sessions": 24 * 3600}
    day = timedelta(days=1)
    assert [services.tick(now=now) for now in (NOW, NOW, NOW + 10 * day, NOW + 10 * day)] == [1, 0, 1, 0]
    assert Job.objects.count() == 2
    assert Schedule.objects.get().due_at == NOW + 11 * day


def test_schedules_follow_the_settings(settings: Settings) -> None:
    settings.JOB_SCHEDULES = {"clear-sessions": 3600, "insert": 60}
    services.tick(now=NOW)
    settings.JOB_SCHEDULES = {"clear-sessions": 7200}
    services.tick(now=NOW)
    assert list(Schedule.objects.values_list("task", "every_seconds")) == [("clear-sessions", 7200)]


def test_an_id_is_sent_to_the_broker_once_per_lease_until_somebody_takes_it() -> None:
    sent: list[UUID] = []
    job = enqueue()
    enqueue("later", due_at=NOW + timedelta(days=1))
    for now in (NOW, NOW + MINUTE / 2, NOW + MINUTE, NOW + MINUTE):
        services.dispatch(now=now, send=sent.append)
    assert sent == [job.pk, job.pk]
    services.run(job.pk, now=NOW + MINUTE, worker="w1")
    assert services.dispatch(now=NOW + 5 * MINUTE, send=sent.append) == 0


def test_a_job_of_a_killed_worker_is_sent_again() -> None:
    sent: list[UUID] = []
    job = enqueue()
    services.dispatch(now=NOW, send=sent.append)
    claim("doomed")
    services.dispatch(now=NOW + LEASE, send=sent.append)
    assert sent == [job.pk, job.pk]


@pytest.mark.parametrize(
    ("name", "columns"),
    [
        ("job_state_known", {"state": "lost"}),
        ("job_lease_while_running", {"state": State.RUNNING}),
        ("job_lease_while_running", {"lease_until": NOW}),
        ("job_lease_while_running", {"claimed_by": "w1"}),
        ("job_finished_when_over", {"finished_at": NOW}),
        ("job_progress_in_total", {"progress_done": 2, "progress_total": 1}),
        ("job_tries_in_attempts", {"tries": 1}),
    ],
)
def test_the_database_refuses_a_job_that_contradicts_itself(name: str, columns: dict[str, object]) -> None:
    job = enqueue()
    with pytest.raises(IntegrityError, match=name), transaction.atomic():
        Job.objects.filter(pk=job.pk).update(**columns)


def test_the_database_refuses_a_finished_job_without_its_date() -> None:
    job = enqueue()
    with pytest.raises(IntegrityError, match="job_finished_when_over"), transaction.atomic():
        Job.objects.filter(pk=job.pk).update(state=State.DONE)


def test_the_database_refuses_a_second_schedule_of_a_task_and_one_without_interval() -> None:
    Schedule.objects.create(task="insert", every_seconds=60, due_at=NOW)
    with pytest.raises(IntegrityError, match="schedule_every_positive"), transaction.atomic():
        Schedule.objects.create(task="steps", every_seconds=0, due_at=NOW)
    with pytest.raises(IntegrityError, match=r"schedule_task_once|jobs_schedule\.task"), transaction.atomic():
        Schedule.objects.create(task="insert", every_seconds=60, due_at=NOW)
