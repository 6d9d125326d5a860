"""A program that lets people act in processes of their own, each of which may be killed before one of its writes.

It is told what to do through a pipe, and forks for each act: nobody waits for Python to start.
"""

import os
import signal
import sys
import traceback
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from importlib import import_module
from multiprocessing.connection import Connection, Pipe
from typing import Any
from unittest import mock

import django

WRITES = ("INSERT", "UPDATE", "DELETE")


@dataclass(frozen=True)
class Act:
    """A call of a service; ``killed_at``: the process dies before that write, commits counted, or before it answers."""

    service: Callable[..., Any]
    said: Mapping[str, Any]
    killed_at: int = 0
    limits: Mapping[str, int] = field(default_factory=dict)
    """Limits that are other than in use, by the names of their modules."""


@dataclass(frozen=True)
class Answer:
    """What somebody was told: what was returned, or why it was refused; ``writes``: at how many places one may die."""

    value: Any
    refusal: str
    writes: int


def main() -> None:
    """Serve until nobody is there any more."""
    django.setup()
    warm_up()
    line = Connection(int(sys.argv[1]))
    line.send("ready")
    try:
        while True:
            line.send(act_at_once(line.recv()))
    except EOFError:
        pass


def warm_up() -> None:
    """Load what a first record would."""
    from chemicals.science.formula import metal_fraction

    import_module("compliance.clearance.services")
    metal_fraction("CuSO4.5H2O", "Cu")


def act_at_once(acts: Sequence[Act]) -> list[Answer | None]:
    """Let each act happen in a process of its own; None in the place of an answer that its process did not live to."""
    return [_wait(*started) for started in [_start(act) for act in acts]]


def _start(act: Act) -> tuple[int, "Connection[Any, Any]"]:
    ours, theirs = Pipe(duplex=False)
    process = os.fork()
    if process:
        theirs.close()
        return process, ours
    try:
        theirs.send(perform(act))
    except BaseException:  # shown in the test's output; nothing may return from here into the loop of the parent
        traceback.print_exc()
        os._exit(1)
    os._exit(0)


def _wait(process: int, answers: "Connection[Any, Any]") -> Answer | None:
    try:
        answer: Answer | None = answers.recv()
    except EOFError:
        answer = None
    _, status = os.waitpid(process, 0)
    assert os.WIFSIGNALED(status) or answer is not None, "an act failed: see the standard error"
    return answer


def perform(act: Act) -> Answer:
    """Call the service; die where the act says."""
    from django.db import connection

    from chemicals.workshop.errors import DomainError

    for name, limit in act.limits.items():
        module, _, constant = name.rpartition(".")
        setattr(import_module(module), constant, limit)
    writes, commit = 0, connection._commit  # type: ignore[attr-defined]  # not in the stubs

    def come_to_a_write() -> None:
        nonlocal writes
        writes += 1
        if writes == act.killed_at:
            os.kill(os.getpid(), signal.SIGKILL)

    def execute(inner: Callable[..., Any], sql: str, *rest: Any) -> Any:
        if sql.startswith(WRITES):
            come_to_a_write()
        return inner(sql, *rest)

    def end() -> None:
        come_to_a_write()
        commit()

    value, refusal = None, ""
    with connection.execute_wrapper(execute), mock.patch.object(connection, "_commit", end):
        try:
            value = act.service(**act.said)
        except DomainError as error:
            refusal = str(error)
        come_to_a_write()
    return Answer(value, refusal, writes)
