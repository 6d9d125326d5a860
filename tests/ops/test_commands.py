"""`run` and `serve` as a person starts them."""

import http.client
import os
import re
import shutil
import signal
import socket
import sqlite3
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from contextlib import closing, contextmanager
from pathlib import Path

import pytest
from pytest_django import Settings

from compliance.ops.management.commands.run import Command as Run
from compliance.ops.start import StartError, write_private

ROOT = Path(__file__).resolve().parents[2]


def free_address() -> str:
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return f"127.0.0.1:{probe.getsockname()[1]}"


def environment(**values: str) -> dict[str, str]:
    ours = {"DJANGO_SETTINGS_MODULE", "GRAMLEDGER_DATA", "DATABASE_URL", "REDIS_URL", "BIND", "PUBLIC_URL"}
    return {name: value for name, value in os.environ.items() if name not in ours} | values


def succeed(*command: str, **values: str) -> str:
    """Run a command of manage.py to its good end, return what it printed."""
    program = [sys.executable, "manage.py", *command]
    return subprocess.run(
        program, check=True, cwd=ROOT, env=environment(**values), stdout=subprocess.PIPE, text=True, timeout=60
    ).stdout


def refusal(command: str, **values: str) -> str:
    """Start, expect a refusal, return its sentence."""
    program = [sys.executable, "manage.py", command]
    variables = environment(**values)
    result = subprocess.run(program, check=False, cwd=ROOT, env=variables, capture_output=True, text=True, timeout=30)
    assert result.returncode == 1, result.stdout
    return result.stderr


@pytest.mark.parametrize(
    ("url", "vendor"),
    [({}, "sqlite"), ({"DATABASE_URL": ""}, "sqlite"), ({"DATABASE_URL": "postgres://"}, "postgresql")],
)
def test_an_empty_variable_counts_as_not_set(tmp_path: Path, url: dict[str, str], vendor: str) -> None:
    program = "import django; django.setup(); from django.db import connection; print(connection.vendor)"
    variables = environment(DJANGO_SETTINGS_MODULE="compliance.settings", GRAMLEDGER_DATA=str(tmp_path), **url)
    output = subprocess.check_output([sys.executable, "-c", program], cwd=ROOT, env=variables, text=True)
    assert output.split() == [vendor]


def test_serve_asks_for_a_data_folder() -> None:
    assert "Set GRAMLEDGER_DATA to the folder" in refusal("serve")


def test_serve_refuses_the_folder_of_the_demo(tmp_path: Path) -> None:
    write_private(tmp_path / "demo-users.txt", "")
    assert "holds the demo" in refusal("serve", GRAMLEDGER_DATA=str(tmp_path))


@pytest.mark.parametrize("command", ["run", "serve"])
def test_serving_the_whole_network_needs_the_address_that_labels_contain(command: str, tmp_path: Path) -> None:
    sentence = refusal(command, GRAMLEDGER_DATA=str(tmp_path), BIND="0.0.0.0:8000")
    assert "Set PUBLIC_URL" in sentence


def test_a_taken_port_is_said_in_one_sentence(tmp_path: Path) -> None:
    with socket.socket() as listener:
        listener.bind(("127.0.0.1", 0))
        listener.listen()
        bind = f"127.0.0.1:{listener.getsockname()[1]}"
        for command in ("run", "serve"):
            sentence = refusal(command, GRAMLEDGER_DATA=str(tmp_path), BIND=bind)
            assert sentence.startswith(f"CommandError: Another program listens at {bind}.")


def test_the_demo_does_not_touch_a_folder_that_it_did_not_make(tmp_path: Path) -> None:
    with pytest.raises(StartError, match="holds people but no demo"):
        Run().read(tmp_path / "demo-users.txt")


def test_the_demos_people_are_read_as_they_were_written(tmp_path: Path) -> None:
    write_private(tmp_path / "demo-users.txt", "ada@example.org\tquiet copper\towner\n")
    assert Run().read(tmp_path / "demo-users.txt") == [("ada@example.org", "quiet copper", "owner")]


@pytest.mark.django_db
def test_the_demo_is_loaded_once_and_its_people_are_kept_for_its_user_only(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path / "attachments"
    kept = tmp_path / "demo-users.txt"
    people = Run().load_or_read(kept)
    assert {role for _, _, role in people} == {"owner", "worker", "observer"}
    assert kept.stat().st_mode & 0o777 == 0o600
    assert Run().load_or_read(kept) == people


@pytest.fixture(scope="module")
def migrated(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Return a database file of this version."""
    data = tmp_path_factory.mktemp("migrated")
    succeed("migrate", "--verbosity", "0", GRAMLEDGER_DATA=str(data))
    return data / "gramledger.sqlite3"


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ("DROP TRIGGER journal_refuses_update", "journal_refuses_update"),
        ("DELETE FROM django_migrations WHERE app = 'jobs'", "older than this program (jobs.0001_initial ...)"),
        (
            "INSERT INTO django_migrations (app, name, applied) VALUES ('jobs', '0999_later', '2026-03-01')",
            "newer than this program: it has jobs.0999_later",
        ),
    ],
)
def test_serve_refuses_a_database_that_is_not_as_this_version_needs_it(
    migrated: Path, tmp_path: Path, change: str, sentence: str
) -> None:
    shutil.copy(migrated, tmp_path / migrated.name)
    with closing(sqlite3.connect(tmp_path / migrated.name)) as database, database:
        database.execute(change)
    assert sentence in refusal("serve", GRAMLEDGER_DATA=str(tmp_path), BIND=free_address())


def test_upgrade_backs_up_then_migrates_then_verifies(migrated: Path, tmp_path: Path) -> None:
    shutil.copy(migrated, tmp_path / migrated.name)
    succeed("migrate", "dropoffs", "zero", GRAMLEDGER_DATA=str(tmp_path))
    output = succeed("upgrade", GRAMLEDGER_DATA=str(tmp_path))
    backup, migrations, *_, proof = output.splitlines()
    (written,) = (tmp_path / "backups").iterdir()
    assert backup == f"Backup: {written}"
    assert migrations == "Migrations: dropoffs.0001_initial"
    assert proof == "0 workshops, 0 entries, 0 files: all is as it was recorded."


def test_upgrade_of_nothing_is_refused(tmp_path: Path) -> None:
    assert "There is no database" in refusal("upgrade", GRAMLEDGER_DATA=str(tmp_path))
    assert not (tmp_path / "backups").exists()


class Service:
    """A service that runs: its output so far and its address."""

    def __init__(self, process: "subprocess.Popen[str]", bind: str, log: Path) -> None:
        self.process = process
        self.bind = bind
        self.log = log

    def answers(self) -> bool:
        connection = http.client.HTTPConnection(self.bind, timeout=2)
        try:
            connection.request("GET", "/")
            return connection.getresponse().status < 500
        except OSError:
            return False
        finally:
            connection.close()

    def wait_for(self, condition: Callable[[], bool], seconds: float = 30) -> None:
        deadline = time.monotonic() + seconds
        while not condition():
            assert time.monotonic() < deadline, self.log.read_text()
            time.sleep(0.05)


@contextmanager
def serving(data: Path, log: Path) -> Iterator[Service]:
    bind = free_address()
    variables = environment(GRAMLEDGER_DATA=str(data), BIND=bind)
    with log.open("w") as output:
        command = [sys.executable, "manage.py", "serve"]
        process = subprocess.Popen(command, cwd=ROOT, env=variables, stdout=output, stderr=output, text=True)
    try:
        yield Service(process, bind, log)
    finally:
        process.kill()
        process.wait()


def test_serve_from_the_first_start_to_ctrl_c_and_again(tmp_path: Path) -> None:
    data, log = tmp_path / "data", tmp_path / "log"
    tokens = []
    for _ in range(2):
        with serving(data, log) as service:
            service.wait_for(service.answers)
            tokens += re.findall(r"/first-start\?token=([\w-]+)", log.read_text())
            assert "already runs on the folder" in refusal("serve", GRAMLEDGER_DATA=str(data), BIND=free_address())
            service.process.send_signal(signal.SIGINT)
            assert service.process.wait(15) == 0
            assert not service.answers()
    assert len(set(tokens)) == 2
    assert (data / "gramledger.sqlite3").stat().st_mode & 0o077 == 0


def test_killing_the_service_leaves_nobody_at_its_port(tmp_path: Path) -> None:
    with serving(tmp_path / "data", tmp_path / "log") as service:
        service.wait_for(service.answers)
        service.process.kill()
        service.process.wait()
        service.wait_for(lambda: not service.answers())
        assert not service.answers()
