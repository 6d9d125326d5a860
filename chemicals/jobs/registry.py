"""Which function does which task: the dict `JOB_TASKS` in the settings, nothing cleverer."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, cast

from django.conf import settings
from django.utils.module_loading import import_string


@dataclass(frozen=True)
class Step:
    """What a long task returns after a bounded piece of work: the job continues with this payload, later.

    Each step and the record of it are one transaction, so a killed worker loses one step at most, and nobody
    waits for a long transaction.
    """

    payload: Mapping[str, Any]
    done: int
    total: int


Task = Callable[..., Step | None]
"""Called as `task(payload, now=now)` inside a transaction; None says that the job is done."""


class UnknownTaskError(LookupError):
    """No function is registered under this name: a mistake in the code or the settings, not in the data."""


def require_known(name: str) -> None:
    """Raise UnknownTaskError unless a function stands behind the name."""
    if name not in settings.JOB_TASKS:
        known = ", ".join(sorted(settings.JOB_TASKS))
        raise UnknownTaskError(f"Task {name!r} is not in JOB_TASKS. Known are: {known}.")


def find_task(name: str) -> Task:
    """Return the function behind the name."""
    require_known(name)
    return cast("Task", import_string(settings.JOB_TASKS[name]))
