"""Real worker processes on the test's own database, and a way to kill them."""

import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path

from django.db import connection

from chemicals.jobs.models import Job, State

ROOT = Path(__file__).resolve().parents[2]
LEASE_SECONDS = 1
WORK = [sys.executable, "manage.py", "work"]


def database_url() -> str:
    """Return the address of the test's database, for other processes."""
    values = connection.settings_dict
    if connection.vendor == "sqlite":
        return f"sqlite://{values['NAME']}"
    account = f"{values['USER']}:{values['PASSWORD']}@{values['HOST']}:{values['PORT']}"
    return f"postgres://{account}/{values['NAME']}"


def environment(data: Path, **more: str) -> dict[str, str]:
    """Return the environment of a worker: the test's database, a short lease."""
    return os.environ | {
        "DJANGO_SETTINGS_MODULE": "tests.jobs.child_settings",
        "DATABASE_URL": database_url(),
        "GRAMLEDGER_DATA": str(data),
        "JOB_LEASE_SECONDS": str(LEASE_SECONDS),
        **more,
    }


def start(command: Sequence[str], variables: dict[str, str]) -> "subprocess.Popen[bytes]":
    """Start a program as the leader of its own group."""
    return subprocess.Popen(command, cwd=ROOT, env=variables, start_new_session=True)


def kill(process: "subprocess.Popen[bytes]") -> None:
    """Kill -9 the whole group."""
    os.killpg(process.pid, signal.SIGKILL)
    process.wait()


@contextmanager
def running(commands: Sequence[Sequence[str]], variables: dict[str, str]) -> Iterator["list[subprocess.Popen[bytes]]"]:
    """Run programs; the test may replace killed ones in the list. None outlives the test."""
    processes = [start(command, variables) for command in commands]
    try:
        yield processes
    finally:
        for process in processes:
            if process.poll() is None:
                kill(process)


def done() -> int:
    """Count the jobs that are done."""
    return Job.objects.filter(state=State.DONE, task="insert").count()


def wait_until(condition: Callable[[], bool], seconds: float = 20) -> None:
    """Wait for a condition, or fail."""
    deadline = time.monotonic() + seconds
    while not condition():
        assert time.monotonic() < deadline, f"only {done()} jobs done; {list(Job.objects.values())[:3]}"
        time.sleep(0.05)
