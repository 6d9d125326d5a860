"""`manage.py backup`: one private file, consistent while people write, or none."""

import errno
import hashlib
import json
import os
import threading
from datetime import datetime
from pathlib import Path
from uuid import uuid4

import pytest
from django.core.management import call_command
from django.core.management.base import CommandError
from django.db import connection
from django_scopes import scopes_disabled
from pytest_django import Settings

from chemicals.journal import files
from chemicals.journal.models import Entry
from chemicals.process.inputs import LevelInput
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from compliance.clearance.services import record
from compliance.ops import backup
from compliance.ops.archive import BackupError, open_checked, our_migrations, program_version
from compliance.ops.backup import write_backup
from compliance.ops.verify import our_models
from tests.ops.archives import read_members
from tests.ops.books import Books, write_books


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path / "attachments"


@pytest.fixture
def books(transactional_db: None, worker: Membership, now: datetime) -> Books:
    return write_books(worker, now)


def read_level(books: Books, now: datetime, level: str = "18 L") -> None:
    data = LevelInput(vessel=books.bath.uuid, volume=parse(level, "volume"))
    record(actor=books.member, now=now, key=uuid4(), data=data)


def rows_of(path: Path, table: str) -> list[dict[str, object]]:
    return [json.loads(line) for line in read_members(path)[f"tables/{table}.jsonl"].splitlines()]


def test_the_list_says_version_counts_and_hashes(books: Books, now: datetime, tmp_path: Path) -> None:
    path = tmp_path / "today.zip"
    written = write_backup(path, now=now)
    with open_checked(path) as (_, manifest):
        assert manifest == written
    assert (manifest.format, manifest.program, manifest.made_at) == (1, program_version(), now)
    assert set(manifest.migrations) == our_migrations()
    assert manifest.rows["journal.entry"] == 6
    assert manifest.rows["workshop.user"] == 1
    members = read_members(path)
    for member in manifest.members:
        assert member.sha256 == hashlib.sha256(members[member.name]).hexdigest()
        assert member.size == len(members[member.name])


def test_the_file_ends_with_the_digest_of_all_before_it(books: Books, now: datetime, tmp_path: Path) -> None:
    path = tmp_path / "today.zip"
    write_backup(path, now=now)
    data = path.read_bytes()
    assert data[-64:].decode() == hashlib.sha256(data[:-64]).hexdigest()


def test_only_its_user_may_read_it(books: Books, now: datetime, tmp_path: Path) -> None:
    path = tmp_path / "today.zip"
    write_backup(path, now=now)
    assert path.stat().st_mode & 0o777 == 0o600


def test_it_holds_every_table_of_ours_and_every_file_but_no_sessions(
    books: Books, now: datetime, tmp_path: Path
) -> None:
    path = tmp_path / "today.zip"
    manifest = write_backup(path, now=now)
    assert set(manifest.rows) == {model._meta.label_lower for model in our_models()}
    assert not [name for name in manifest.rows if name.startswith(("sessions.", "axes.", "auth."))]
    names = set(read_members(path))
    assert f"files/{books.photo}" in names
    assert len([name for name in names if name.startswith("files/")]) == 2


def test_rows_are_free_of_any_engine(books: Books, now: datetime, tmp_path: Path) -> None:
    path = tmp_path / "today.zip"
    write_backup(path, now=now)
    entry = rows_of(path, "journal.entry")[0]
    assert entry["recorded_at"] == "2026-03-02T15:00:00+00:00"
    assert len(str(entry["uuid"])) == 36
    assert isinstance(entry["body"], str)
    assert all(isinstance(row["amount"], int) for row in rows_of(path, "ledger.posting"))
    memory = rows_of(path, "ledger.memory")[0]
    assert memory["incomplete"] is False
    assert memory["poured"] == [f"unknown/{books.bath.uuid}"]


def test_an_existing_file_is_never_overwritten(books: Books, now: datetime, tmp_path: Path) -> None:
    path = tmp_path / "today.zip"
    path.write_text("precious")
    with pytest.raises(BackupError, match=r"exists already\. Choose another name"):
        write_backup(path, now=now)
    assert path.read_text() == "precious"


def test_a_missing_folder_is_named(books: Books, now: datetime, tmp_path: Path) -> None:
    with pytest.raises(BackupError, match=r"There is no folder .*nowhere"):
        write_backup(tmp_path / "nowhere" / "today.zip", now=now)


@pytest.mark.parametrize("damage", ["missing", "changed"])
def test_a_damaged_file_stops_the_backup_and_leaves_nothing(
    books: Books, now: datetime, tmp_path: Path, damage: str
) -> None:
    path = files.path_of(books.photo)
    path.unlink() if damage == "missing" else path.write_bytes(b"other")
    folder = tmp_path / "backups"
    folder.mkdir()
    with pytest.raises(BackupError, match=f"{books.photo} .*upload the same file again"):
        write_backup(folder / "today.zip", now=now)
    assert list(folder.iterdir()) == []


def test_a_full_disk_leaves_nothing(
    books: Books, now: datetime, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def fail(handle: int) -> None:
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(os, "fsync", fail)
    folder = tmp_path / "backups"
    folder.mkdir()
    with pytest.raises(BackupError, match=r"No space left on device\. Choose another folder"):
        write_backup(folder / "today.zip", now=now)
    assert list(folder.iterdir()) == []


def test_others_record_while_a_backup_reads(books: Books, now: datetime) -> None:
    """The backup sees the books as they were, and holds nobody up."""

    def work() -> None:
        read_level(books, now)
        connection.close()

    with backup._snapshot(), scopes_disabled():
        assert Entry.objects.count() == 6
        writer = threading.Thread(target=work)
        writer.start()
        writer.join(10)
        assert not writer.is_alive()
        assert Entry.objects.count() == 6
    with scopes_disabled():
        assert Entry.objects.count() == 7


def test_a_backup_while_people_write_is_of_one_moment(books: Books, now: datetime, tmp_path: Path) -> None:
    stop = threading.Event()

    def work() -> None:
        while not stop.is_set():
            read_level(books, now)
        connection.close()

    writer = threading.Thread(target=work)
    writer.start()
    try:
        for number in range(3):
            write_backup(tmp_path / f"{number}.zip", now=now)
    finally:
        stop.set()
        writer.join()
    for number in range(3):
        path = tmp_path / f"{number}.zip"
        entries, (head,) = rows_of(path, "journal.entry"), rows_of(path, "journal.head")
        assert [entry["sequence"] for entry in entries] == list(range(1, len(entries) + 1))
        assert (head["sequence"], head["hash"]) == (len(entries), entries[-1]["hash"])
        followed = {row["entry_id"] for row in rows_of(path, "ledger.content")}
        assert followed == {entry["id"] for entry in entries if entry["kind"] != "paper"}


def test_an_older_database_is_backed_up_in_its_own_shape(books: Books, now: datetime, tmp_path: Path) -> None:
    """Before an upgrade the program is newer than the tables."""
    call_command("migrate", "dropoffs", "zero", verbosity=0)
    try:
        manifest = write_backup(tmp_path / "before.zip", now=now)
    finally:
        call_command("migrate", verbosity=0)
    assert "dropoffs.0001_initial" not in manifest.migrations
    assert "dropoffs.dropoff" not in manifest.rows
    assert manifest.rows["journal.entry"] == 6


def test_the_command_says_what_it_wrote(books: Books, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "today.zip"
    call_command("backup", str(path))
    assert "1 workshop, 6 entries, 2 files. Keep a copy away" in capsys.readouterr().out
    with pytest.raises(CommandError, match="exists already"):
        call_command("backup", str(path))
