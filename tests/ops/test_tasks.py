"""The service's own background tasks."""

from datetime import UTC, datetime, timedelta
from pathlib import Path

import pytest
from django.contrib.sessions.models import Session
from pytest_django import Settings

from chemicals.jobs.due import LIMIT
from chemicals.jobs.models import State
from chemicals.jobs.selectors import list_failed
from chemicals.jobs.services import enqueue, run
from chemicals.journal import files
from chemicals.workshop.models import Membership
from compliance.ops.tasks import clear_sessions
from tests.ops.books import Books, write_books

NOW = datetime(2026, 3, 1, 9, 0, tzinfo=UTC)


@pytest.mark.django_db
def test_only_sessions_that_have_run_out_are_cleared() -> None:
    for key, date in (("over", NOW - timedelta(seconds=1)), ("open", NOW + timedelta(seconds=1))):
        Session.objects.create(session_key=key, session_data="", expire_date=date)
    clear_sessions({}, now=NOW)()
    assert list(Session.objects.values_list("session_key", flat=True)) == ["open"]


@pytest.fixture
def books(transactional_db: None, worker: Membership, settings: Settings, tmp_path: Path) -> Books:
    settings.ATTACHMENTS = tmp_path / "attachments"
    return write_books(worker, NOW)


def test_the_nightly_proof_is_done_if_nothing_is_wrong(books: Books) -> None:
    job = enqueue(now=NOW, task="verify", payload={})
    run(job.pk, now=NOW, worker="w1")
    job.refresh_from_db()
    assert (job.state, job.last_error) == (State.DONE, "")


def test_the_nightly_proof_fails_where_everybody_sees_it(books: Books) -> None:
    files.path_of(books.photo).unlink()
    job = enqueue(now=NOW, task="verify", payload={})
    for day in range(LIMIT):
        run(job.pk, now=NOW + timedelta(days=day), worker="w1")
    (failed,) = list_failed()
    assert failed == job
    assert failed.last_error.startswith("BrokenBooksError: Alder Court, entry 3: The file")
    assert failed.last_error.endswith("Run: manage.py verify")
