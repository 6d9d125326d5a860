"""`check --deploy` says what a real installation lacks, and is silent about one that lacks nothing."""

import os
import subprocess
import sys
from pathlib import Path

import pytest
from django.db import connection
from pytest_django import Settings

from chemicals.journal import triggers
from compliance.ops import checks

ROOT = Path(__file__).resolve().parents[2]


@pytest.mark.parametrize(
    ("url", "found"),
    [
        ("https://gramledger.example.org", []),
        ("http://127.0.0.1:8000", []),
        ("http://workshop.local:8000", ["ops.W001"]),
    ],
)
def test_passwords_in_the_open_are_named(settings: Settings, url: str, found: list[str]) -> None:
    settings.PUBLIC_URL = url
    assert [problem.id for problem in checks.check_public_url()] == found


@pytest.fixture
def data(tmp_path: Path, settings: Settings) -> Path:
    folder = tmp_path / "data"
    folder.mkdir(mode=0o700)
    (folder / "secret-key").touch(mode=0o600)
    settings.DATA = folder
    settings.ATTACHMENTS = folder / "attachments"
    return folder


def test_a_private_folder_is_as_it_should_be(data: Path) -> None:
    assert checks.check_data_folder() == []


@pytest.mark.parametrize("name", [".", "secret-key"])
def test_what_others_can_read_is_named(data: Path, name: str) -> None:
    path = data / name
    path.chmod(0o750)
    (problem,) = checks.check_data_folder()
    assert (problem.id, problem.hint) == ("ops.W002", f"Run: chmod go-rwx {path}")


def test_a_folder_that_takes_no_files_is_named(data: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    asked = []

    def access(path: Path, mode: int) -> bool:  # whoever runs the tests may write anywhere
        asked.append((path, mode))
        return False

    monkeypatch.setattr(os, "access", access)
    (problem,) = checks.check_data_folder()
    assert problem.id == "ops.E003"
    assert asked == [(data, os.W_OK | os.X_OK)]


@pytest.mark.django_db
def test_a_sound_database_is_passed_over() -> None:
    assert checks.check_database() == []


@pytest.mark.django_db
def test_missing_triggers_are_named() -> None:
    triggers.remove(connection)
    assert [problem.id for problem in checks.check_database()] == ["journal.E001"]


def run_check(data: Path, **variables: str) -> "subprocess.CompletedProcess[str]":
    ours = ("DATABASE_URL", "DJANGO_SETTINGS_MODULE", "DJANGO_ALLOW_ASYNC_UNSAFE", "BIND", "REDIS_URL")
    outer = {name: value for name, value in os.environ.items() if name not in ours}
    variables = outer | {"GRAMLEDGER_DATA": str(data), "PUBLIC_URL": "https://gramledger.example.org"} | variables
    command = [sys.executable, "manage.py", "check", "--deploy", "--fail-level", "WARNING"]
    return subprocess.run(command, cwd=ROOT, env=variables, capture_output=True, text=True, check=False)


def test_a_proper_environment_is_clean_and_no_database_is_made(tmp_path: Path) -> None:
    result = run_check(tmp_path / "data")
    assert result.returncode == 0, result.stderr
    assert not (tmp_path / "data" / "gramledger.sqlite3").exists()


def test_a_database_that_does_not_answer_is_named(tmp_path: Path) -> None:
    (tmp_path / "gramledger.sqlite3").write_text("no database " * 99)
    tmp_path.chmod(0o700)
    result = run_check(tmp_path)
    assert result.returncode == 1
    assert "(ops.E005) The database does not answer: file is not a database" in result.stderr


@pytest.mark.django_db
def test_another_journal_mode_is_named(tmp_path: Path) -> None:
    """A database on a folder that cannot share memory stays in the mode of old."""
    from django.db.backends.sqlite3.base import DatabaseWrapper

    options = connection.settings_dict | {"NAME": str(tmp_path / "old.sqlite3"), "OPTIONS": {}}
    old = DatabaseWrapper(options)
    try:
        (problem,) = checks._check_journal_mode(old)
    finally:
        old.close()
    assert problem.id == "ops.E004"
    assert "in mode delete" in problem.msg
