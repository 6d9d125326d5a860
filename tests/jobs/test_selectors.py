"""How background work stands, and whose jobs a member sees."""

from collections.abc import Callable
from contextlib import AbstractContextManager
from datetime import UTC, datetime, timedelta
from uuid import uuid4

import pytest

from chemicals.jobs import services
from chemicals.jobs.due import LIMIT
from chemicals.jobs.models import Job
from chemicals.jobs.selectors import Overview, get_job_for, get_overview, list_failed, list_jobs_for
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership
from chemicals.workshop.services import create_user, create_workshop

NOW = datetime(2026, 3, 1, 9, 0, tzinfo=UTC)

pytestmark = pytest.mark.usefixtures("effect_table")


def owner(name: str) -> Membership:
    user = create_user(email=f"{name}@example.org", password=None, name=name)
    return create_workshop(now=NOW, name=name, time_zone="UTC", owner=user)


def enqueue(label: str, task: str = "insert", minutes: int = 0, member: Membership | None = None) -> Job:
    due_at = NOW + timedelta(minutes=minutes)
    workshop = member.workshop if member else None
    return services.enqueue(now=NOW, task=task, payload={"label": label}, due_at=due_at, workshop=workshop)


def fail_for_good(job: Job) -> None:
    for day in range(1, LIMIT + 1):
        services.run(job.pk, now=NOW + timedelta(days=day), worker="w1")


def test_the_overview_counts_in_one_query(
    django_assert_num_queries: Callable[[int], AbstractContextManager[object]],
) -> None:
    failing = enqueue("bad", task="insert-then-fail")
    fail_for_good(failing)
    enqueue("late", minutes=-6)
    enqueue("soon", minutes=6)
    enqueue("taken", minutes=-7)
    services.claim(now=NOW, worker="w1")
    with django_assert_num_queries(1):
        assert get_overview(now=NOW) == Overview(queued=2, late=1, running=1, failed=1)
    assert list(list_failed()) == [failing]


def test_a_member_sees_the_jobs_of_the_own_workshop_only() -> None:
    ada, eve = owner("ada"), owner("eve")
    job = enqueue("a", member=ada)
    enqueue("service")
    assert list(list_jobs_for(ada)) == [job]
    assert get_job_for(ada, job.pk) == job
    for member, job_id in ((eve, job.pk), (ada, uuid4())):
        with pytest.raises(NotFoundError):
            get_job_for(member, job_id)
