"""What must be true before the service starts: each refusal says what to do."""

import socket
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest
from django.db import connection
from django.db.migrations.executor import MigrationExecutor
from django.db.migrations.recorder import MigrationRecorder
from pytest_django import Settings

from compliance.ops import start


@pytest.fixture
def taken_port() -> Iterator[int]:
    with socket.socket() as listener:
        listener.bind(("127.0.0.1", 0))
        listener.listen()
        yield listener.getsockname()[1]


def test_a_taken_port_is_named_with_another_to_choose(taken_port: int) -> None:
    with pytest.raises(start.StartError, match=rf"Another program listens.*BIND=127\.0\.0\.1:{taken_port + 1}"):
        start.require_free_port(f"127.0.0.1:{taken_port}")


def test_an_address_of_another_machine_is_refused() -> None:
    with pytest.raises(start.StartError, match="Set BIND to an address of this machine"):
        start.require_free_port("192.0.2.1:8000")  # RFC 5737: an address for documentation


@pytest.mark.parametrize("bind", ["8000", ":8000", "127.0.0.1:", "127.0.0.1:http", "127.0.0.1:70000"])
def test_an_address_without_host_or_port_is_refused(bind: str) -> None:
    with pytest.raises(start.StartError, match=r"like 127\.0\.0\.1:8000"):
        start.split_address(bind)


def test_addresses_of_both_families_are_split() -> None:
    assert start.split_address("192.168.1.20:80") == ("192.168.1.20", 80)
    assert start.split_address("[::1]:8000") == ("::1", 8000)


def test_a_folder_serves_one_process_at_a_time(tmp_path: Path) -> None:
    program = (
        "import sys, pathlib; from compliance.ops import start\n"
        "with start.hold_folder(pathlib.Path(sys.argv[1])): print('held', flush=True); sys.stdin.read()"
    )
    command = [sys.executable, "-c", program, str(tmp_path)]
    with subprocess.Popen(command, stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True) as other:
        assert other.stdout is not None
        assert other.stdout.readline() == "held\n"
        with pytest.raises(start.StartError, match="already runs"), start.hold_folder(tmp_path):
            pass
        other.communicate("")
    with start.hold_folder(tmp_path / "new"):
        (tmp_path / "new" / "file").touch()
        assert (tmp_path / "new").stat().st_mode & 0o777 == 0o700
        assert (tmp_path / "new" / "file").stat().st_mode & 0o777 == 0o600


@pytest.mark.django_db
def test_the_cheap_look_at_migrations_agrees_with_djangos_plan() -> None:
    executor = MigrationExecutor(connection)
    assert start.pending_migrations() == []
    assert executor.migration_plan(executor.loader.graph.leaf_nodes()) == []
    MigrationRecorder(connection).record_unapplied("jobs", "0001_initial")
    assert start.pending_migrations() == ["jobs.0001_initial"]
    assert not start.is_empty_database()


@pytest.mark.django_db
def test_a_database_newer_than_the_program_is_refused() -> None:
    start.refuse_newer_database()
    MigrationRecorder(connection).record_applied("jobs", "0999_from_the_future")
    with pytest.raises(start.StartError, match=r"newer than this program: it has jobs\.0999_from_the_future"):
        start.refuse_newer_database()


def test_static_files_are_collected_only_when_one_has_changed(tmp_path: Path, settings: Settings) -> None:
    settings.STATIC_ROOT = tmp_path / "static"
    extra = tmp_path / "extra"
    extra.mkdir()
    (extra / "bench.css").write_text("a {}")
    settings.STATICFILES_DIRS = [extra]
    assert start.collect_static(tmp_path)
    assert (tmp_path / "static" / "bench.css").exists()
    assert not start.collect_static(tmp_path)
    (extra / "bench.css").write_text("a { color: red }")
    assert start.collect_static(tmp_path)
    assert (tmp_path / "static" / "bench.css").read_text() == "a { color: red }"


def test_a_private_file_is_for_its_user_only_and_replaces_the_old_one(tmp_path: Path) -> None:
    path = tmp_path / "secret"
    path.write_text("old")
    start.write_private(path, "new")
    assert (path.read_text(), path.stat().st_mode & 0o777) == ("new", 0o600)
    assert list(tmp_path.iterdir()) == [path]
