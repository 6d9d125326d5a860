"""A table of effects, and tasks that write into it."""

from collections.abc import Iterator

import pytest
from pytest_django import Settings

from tests.jobs import effects
from tests.jobs.task_names import TASKS


@pytest.fixture
def effect_table(db: None, settings: Settings) -> Iterator[None]:
    """Inside the test's transaction."""
    settings.JOB_TASKS = settings.JOB_TASKS | TASKS
    effects.create_table()
    yield
    effects.drop_table()


@pytest.fixture
def committed_effect_table(transactional_db: None, settings: Settings) -> Iterator[None]:
    """Committed, for other processes to see."""
    settings.JOB_TASKS = settings.JOB_TASKS | TASKS
    effects.create_table()
    yield
    effects.drop_table()
