"""A small supervisor: starts the processes of the service, starts them again, leaves none behind.

Each child leads a session of its own, so its whole process group can be ended with it. Two nets hold when the
supervisor itself is killed: Linux tells the children (PR_SET_PDEATHSIG), and everywhere a guard process, which notices
that its pipe has closed, ends the groups.
"""

import contextlib
import ctypes
import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from types import FrameType, TracebackType
from typing import IO, Self

from compliance.ops import guard

PR_SET_PDEATHSIG = 1  # linux/prctl.h
POLL_SECONDS = 0.1
FIRST_PAUSE, LONGEST_PAUSE, HEALTHY_AFTER = 0.5, 30.0, 60.0
"""Seconds: pause before the first restart, the longest pause, and the life after which pauses start small again."""

_libc = ctypes.CDLL(None, use_errno=True) if sys.platform == "linux" else None


@dataclass(frozen=True)
class Child:
    """A program to keep running: a name for messages and its command line."""

    name: str
    command: Sequence[str]


class Guard:
    """Our end of the guard process."""

    def __init__(self, grace: float) -> None:
        command = [sys.executable, "-I", "-S", str(Path(guard.__file__)), str(grace)]
        self.process = subprocess.Popen(command, stdin=subprocess.PIPE, text=True, start_new_session=True)  # noqa: S603

    def tell(self, sign: str, group: int) -> None:
        """Say that a group has begun (+) or ended (-)."""
        pipe: IO[str] | None = self.process.stdin
        if pipe is not None:
            with contextlib.suppress(BrokenPipeError):  # somebody killed the guard: the other net still holds
                pipe.write(f"{sign}{group}\n")
                pipe.flush()

    def __enter__(self) -> Self:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        if self.process.stdin is not None:
            with contextlib.suppress(BrokenPipeError):
                self.process.stdin.close()  # ends the guard, and whatever it still watches
        self.process.wait()


class Runner:
    """One child: running, or waiting for its next start."""

    def __init__(self, child: Child, watch: Guard) -> None:
        self.child = child
        self.watch = watch
        self.process: subprocess.Popen[bytes] | None = None
        self.pause = FIRST_PAUSE
        self.next_start = self.started = 0.0

    def start(self) -> None:
        """Start the child as the leader of its own session."""
        self.started = time.monotonic()
        self.process = subprocess.Popen(  # noqa: S603  (our own programs)
            self.child.command,
            stdin=subprocess.DEVNULL,
            start_new_session=True,
            preexec_fn=_die_with_parent(os.getpid()),  # noqa: PLW1509  (no threads here)
        )
        self.watch.tell("+", self.process.pid)

    def look(self, say: Callable[[str], object]) -> None:
        """Start the child if it is time; if its leader has ended, end its group and note the next start."""
        if self.process is None:
            if time.monotonic() >= self.next_start:
                self.start()
            return
        status = self.process.poll()
        if status is None:
            return
        self.bury(self.process.pid)
        if time.monotonic() - self.started > HEALTHY_AFTER:
            self.pause = FIRST_PAUSE
        say(f"{self.child.name} ended with status {status}; starts again in {self.pause:g} s")
        self.next_start = time.monotonic() + self.pause
        self.pause = min(self.pause * 2, LONGEST_PAUSE)

    def bury(self, group: int) -> None:
        """Kill what the leader left of its group."""
        guard.signal_group(group, signal.SIGKILL)
        self.watch.tell("-", group)
        self.process = None


def supervise(children: Sequence[Child], *, grace: float = 10.0, say: Callable[[str], object] = print) -> None:
    """Keep the children running until SIGINT, SIGTERM or SIGHUP, then end them all; kills after the grace (seconds)."""
    stopping = False

    def stop(number: int, frame: FrameType | None) -> None:
        nonlocal stopping
        stopping = True

    before = {number: signal.signal(number, stop) for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP)}
    try:
        with Guard(grace) as watch:
            runners = [Runner(child, watch) for child in children]
            while not stopping:
                for runner in runners:
                    runner.look(say)
                time.sleep(POLL_SECONDS)
            _end(runners, grace)
    finally:
        for number, handler in before.items():
            signal.signal(number, handler)


def _end(runners: Sequence[Runner], grace: float) -> None:
    """Ask every leader to end its group; after the grace kill what is left."""
    alive = [(runner, runner.process) for runner in runners if runner.process is not None]
    for _, process in alive:
        guard.signal_group(process.pid, signal.SIGTERM)
    deadline = time.monotonic() + grace
    for runner, process in alive:
        with contextlib.suppress(subprocess.TimeoutExpired):
            process.wait(max(0.0, deadline - time.monotonic()))
        runner.bury(process.pid)
        process.wait()


def _die_with_parent(parent: int) -> Callable[[], None] | None:
    """Return what a new child does before its program starts: on Linux, ask to be ended when the parent dies."""
    if _libc is None:
        return None
    prctl = _libc.prctl

    def ask() -> None:
        prctl(PR_SET_PDEATHSIG, signal.SIGTERM)
        if os.getppid() != parent:  # it died before we asked
            os.kill(os.getpid(), signal.SIGKILL)

    return ask
