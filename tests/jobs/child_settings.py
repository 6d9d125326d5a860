"""Settings of the worker processes that the tests start: as in use, with the tests' tasks."""

from compliance.settings import *  # noqa: F403
from compliance.settings import JOB_TASKS as _TASKS
from tests.jobs.task_names import TASKS

JOB_TASKS = _TASKS | TASKS
