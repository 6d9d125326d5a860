"""Runs `make run` in the clone that the argument names, with an empty environment and home, as a stranger would.

It must answer, end on Ctrl-C without leaving a process, and answer within five seconds the second time.
"""

import os
import signal
import subprocess
import sys
import tempfile
import time
import urllib.request
from pathlib import Path

CLONE = Path(sys.argv[1])
URL = "http://127.0.0.1:8000/"
FIRST_SECONDS, SECOND_SECONDS = 600, 5


def answers() -> bool:
    try:
        with urllib.request.urlopen(URL, timeout=2) as response:
            return bool(response.status == 200)
    except OSError:
        return False


def processes() -> list[str]:
    """Return the command lines of others that name the clone or work in it."""
    found = []
    for path in Path("/proc").glob("[0-9]*/cmdline"):
        if path.parent.name == str(os.getpid()):
            continue
        try:
            line = path.read_bytes().replace(b"\0", b" ").decode(errors="replace")
            where = str((path.parent / "cwd").readlink())
        except OSError:
            continue
        if str(CLONE) in line or where.startswith(str(CLONE)):
            found.append(line)
    return found


def start_and_stop(limit: float) -> float:
    """Start, wait for an answer, press Ctrl-C; return the seconds to the first answer."""
    with tempfile.TemporaryDirectory() as home:
        begun = time.monotonic()
        command = ["/usr/bin/env", "-i", f"HOME={home}", "make", "run"]
        process = subprocess.Popen(command, cwd=CLONE, process_group=0)  # noqa: S603  (a command of our own)
        try:
            while not answers():
                if process.poll() is not None:
                    sys.exit("`make run` ended by itself.")
                if time.monotonic() - begun > limit:
                    sys.exit(f"`make run` did not answer within {limit} s.")
                time.sleep(0.1)
            seconds = time.monotonic() - begun
        finally:
            os.killpg(process.pid, signal.SIGINT)
            process.wait(30)
    if left := processes():
        sys.exit(f"Ctrl-C left: {left}")
    return seconds


if __name__ == "__main__":
    if answers():
        sys.exit(f"Something answers at {URL} already: end it first.")
    for limit in (FIRST_SECONDS, SECOND_SECONDS):
        print(f"answered after {start_and_stop(limit):.1f} s", flush=True)  # noqa: T201
