"""Which function does which task: the dict `JOB_TASKS` in the settings, nothing cleverer."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, cast

from django.conf import settings
from django.utils.module_loading import import_string

Effect = Callable[[], object]
"""What a task writes: called in the transaction that also records the job as done. It may return the next Step."""

Task = Callable[..., Effect | None]
"""Called as `task(payload, now=now)` outside any transaction: it reads and reckons, as long as a lease at most, and
returns its effect, or None if there is nothing to write. Writing before that is refused: it could happen twice.
"""


@dataclass(frozen=True)
class Step:
    """What the effect of a long task returns: the job continues with this payload.

    A killed worker loses one step at most, and nobody waits for a long transaction.
    """

    payload: Mapping[str, Any]
    done: int
    total: int


class UnknownTaskError(LookupError):
    """No function is registered under this name: a mistake in the code or the settings, not in the data."""


class WriteOutsideEffectError(RuntimeError):
    """A task wrote before it returned its effect: a mistake in the task."""


def require_known(name: str) -> None:
    """Raise UnknownTaskError unless a function stands behind the name."""
    if name not in settings.JOB_TASKS:
        known = ", ".join(sorted(settings.JOB_TASKS))
        raise UnknownTaskError(f"Task {name!r} is not in JOB_TASKS. Known are: {known}.")


def find_task(name: str) -> Task:
    """Return the function behind the name."""
    require_known(name)
    return cast("Task", import_string(settings.JOB_TASKS[name]))


def refuse_writes(execute: Callable[..., Any], sql: str, params: Any, many: bool, context: Any) -> Any:  # noqa: FBT001
    """Let reading pass only; a wrapper for Django's `execute_wrapper`."""
    if not sql.lstrip(" (").upper().startswith(("SELECT", "WITH")):
        raise WriteOutsideEffectError(f"Move this into the function that the task returns: {sql[:80]}")
    return execute(sql, params, many, context)
