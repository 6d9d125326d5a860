"""The supervisor against real process trees: whatever ends it, nothing stays behind."""

import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
GRACE = 0.5

TREE = """
import os, signal, subprocess, sys, time
folder, stubborn = sys.argv[1], sys.argv[2] == "stubborn"
if stubborn:
    signal.signal(signal.SIGTERM, signal.SIG_IGN)
if len(sys.argv) == 3:
    subprocess.Popen([sys.executable, __file__, *sys.argv[1:], "leaf"])
    name = "leader"
else:
    name = "leaf"
open(f"{folder}/{name}-{os.getpid()}", "w").close()
time.sleep(60)
"""

SUPERVISE = """
import sys
from compliance.ops.supervisor import Child, supervise
supervise([Child("tree", [sys.executable, *sys.argv[2:]])], grace=float(sys.argv[1]))
"""


def alive(pid: int) -> bool:
    """Tell whether a process runs; one that is dead and not yet collected does not."""
    try:
        os.kill(pid, 0)
    except ProcessLookupError:
        return False
    stat = Path(f"/proc/{pid}/stat")
    return not (stat.exists() and stat.read_text().rpartition(")")[2].split()[0] == "Z")


def wait_for(condition: Callable[[], bool], seconds: float = 10) -> bool:
    deadline = time.monotonic() + seconds
    while not condition() and time.monotonic() < deadline:
        time.sleep(0.02)
    return condition()


class Tree:
    """A supervised leader with a leaf, each of which leaves a file that names its process."""

    def __init__(self, folder: Path, process: "subprocess.Popen[str]") -> None:
        self.folder = folder
        self.supervisor = process

    def pids(self, name: str) -> list[int]:
        files = sorted(self.folder.glob(f"{name}-*"), key=lambda path: path.stat().st_mtime_ns)
        return [int(path.name.partition("-")[2]) for path in files]

    def living(self) -> list[int]:
        return [pid for name in ("leader", "leaf") for pid in self.pids(name) if alive(pid)]


@contextmanager
def supervised(folder: Path, *arguments: str) -> Iterator[Tree]:
    program = folder / "tree.py"
    program.write_text(TREE)
    command = [sys.executable, "-c", SUPERVISE, str(GRACE), str(program), str(folder), *arguments]
    process = subprocess.Popen(command, cwd=ROOT, stdout=subprocess.PIPE, text=True, start_new_session=True)
    tree = Tree(folder, process)
    try:
        yield tree
    finally:
        process.kill()
        process.communicate()
        for pid in tree.living():
            os.kill(pid, signal.SIGKILL)


@pytest.mark.parametrize("number", [signal.SIGINT, signal.SIGTERM, signal.SIGHUP])
def test_a_signal_ends_the_whole_tree(tmp_path: Path, number: signal.Signals) -> None:
    with supervised(tmp_path, "willing") as tree:
        assert wait_for(lambda: len(tree.living()) == 2)
        tree.supervisor.send_signal(number)
        assert tree.supervisor.wait(10) == 0
        assert tree.living() == []


def test_a_tree_that_ignores_the_request_is_killed_after_the_grace(tmp_path: Path) -> None:
    with supervised(tmp_path, "stubborn") as tree:
        assert wait_for(lambda: len(tree.living()) == 2)
        tree.supervisor.terminate()
        assert tree.supervisor.wait(10) == 0
        assert tree.living() == []


@pytest.mark.parametrize("kind", ["willing", "stubborn"])
def test_nothing_outlives_a_supervisor_that_was_killed(tmp_path: Path, kind: str) -> None:
    """The stubborn tree ignores what Linux sends at the parent's death: there the guard has to act."""
    with supervised(tmp_path, kind) as tree:
        assert wait_for(lambda: len(tree.living()) == 2)
        tree.supervisor.kill()
        tree.supervisor.wait(10)
        assert wait_for(lambda: tree.living() == [])


def test_a_killed_leader_takes_its_leaf_along_and_starts_again(tmp_path: Path) -> None:
    with supervised(tmp_path, "willing") as tree:
        assert wait_for(lambda: len(tree.living()) == 2)
        leader, leaf = tree.pids("leader")[0], tree.pids("leaf")[0]
        os.kill(leader, signal.SIGKILL)
        assert wait_for(lambda: len(tree.pids("leader")) == 2 and len(tree.living()) == 2)
        assert leaf not in tree.living()
        tree.supervisor.terminate()
        output, _ = tree.supervisor.communicate(timeout=10)
        assert "tree ended with status -9; starts again in 0.5 s" in output


def test_a_child_that_cannot_start_is_tried_less_and_less_often(tmp_path: Path) -> None:
    """Without its second argument the program fails at once."""
    with supervised(tmp_path) as tree:
        time.sleep(2.2)
        tree.supervisor.terminate()
        output, _ = tree.supervisor.communicate(timeout=10)
        pauses = [line.rpartition("in ")[2] for line in output.splitlines()]
        assert pauses == ["0.5 s", "1 s", "2 s"][: len(pauses)]
        assert len(pauses) in {2, 3}
