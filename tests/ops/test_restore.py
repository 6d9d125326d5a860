"""`manage.py restore`: all or nothing, and every refusal says what to do."""

import errno
import json
import os
from collections import Counter
from collections.abc import Callable
from datetime import datetime
from pathlib import Path
from typing import Any
from uuid import uuid4

import pytest
from django.core.management import call_command
from django.core.management.base import CommandError
from django.db import connection
from django_scopes import scope
from pytest_django import Settings

from chemicals.ledger.models import Vessel
from chemicals.process.inputs import LevelInput
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from compliance.clearance.services import record
from compliance.ops import start
from compliance.ops.archive import BackupError, our_migrations
from compliance.ops.backup import write_backup
from compliance.ops.restore import check_backup, restore_backup
from compliance.ops.verify import our_models
from tests.conftest import make_member
from tests.ops.archives import Members, forge, read_members, relist, replace, write_archive
from tests.ops.books import PHOTO, Books, write_books

Rows = dict[str, Counter[tuple[Any, ...]]]


@pytest.fixture(autouse=True)
def data_folder(tmp_path: Path, settings: Settings) -> None:
    settings.DATA = tmp_path / "data"
    settings.ATTACHMENTS = tmp_path / "data" / "attachments"


@pytest.fixture
def books(transactional_db: None, worker: Membership, now: datetime) -> Books:
    return write_books(worker, now)


def rows() -> Rows:
    """Return everything that our tables hold."""
    found: Rows = {}
    for model in our_models():
        names = [field.attname for field in model._meta.concrete_fields]
        values = model._base_manager.values_list(*names)
        found[model._meta.label] = Counter(tuple(_comparable(value) for value in row) for row in values)
    return found


def _comparable(value: Any) -> Any:
    if isinstance(value, memoryview):
        return bytes(value)
    return json.dumps(value) if isinstance(value, list | dict) else value


def kept_files(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in (folder / "data" / "attachments").rglob("*") if path.is_file()}


def empty(folder: Path) -> None:
    """Make database and folder as new."""
    call_command("flush", interactive=False, verbosity=0)
    for path in (folder / "data" / "attachments").rglob("*"):
        if path.is_file():
            path.unlink()


_saved: list[bytes] = []
"""The backup that most tests start from, made by the first of them."""


@pytest.fixture
def saved(request: pytest.FixtureRequest, transactional_db: None, now: datetime, tmp_path: Path) -> Path:
    """Return a backup of the books; database and folder are empty."""
    path = tmp_path / "saved.zip"
    if _saved:
        path.write_bytes(_saved[0])
    else:
        request.getfixturevalue("books")
        write_backup(path, now=now)
        _saved.append(path.read_bytes())
        empty(tmp_path)
    return path


def expect_refusal(path: Path, sentence: str) -> None:
    """Nothing is restored, and the sentence says why and what to do."""
    folder = path.parent
    with pytest.raises(BackupError, match=sentence):
        restore_backup(path)
    assert {name for name, found in rows().items() if found} == set()
    assert kept_files(folder) == {}


def test_what_was_saved_comes_back(books: Books, now: datetime, tmp_path: Path) -> None:
    path = tmp_path / "saved.zip"
    write_backup(path, now=now)
    before, attached = rows(), kept_files(tmp_path)
    assert len(attached) == 2
    empty(tmp_path)
    manifest = restore_backup(path)
    assert rows() == before
    assert kept_files(tmp_path) == attached
    assert manifest.made_at == now
    call_command("verify")


def test_recording_goes_on_after_a_restore(saved: Path, now: datetime) -> None:
    """Numbers of new rows do not meet those that were restored."""
    restore_backup(saved)
    member = Membership.objects.select_related("workshop", "user").get()
    with scope(workshop=member.workshop):
        bath = Vessel.objects.get(kind="bath")
    data = LevelInput(vessel=bath.uuid, volume=parse("17 L", "volume"))
    assert record(actor=member, now=now, key=uuid4(), data=data).entry.sequence == 7
    make_member(member.workshop, member.role, "new@alder.example")  # type: ignore[arg-type]
    call_command("verify")


def test_people_sign_in_with_their_old_passwords(saved: Path) -> None:
    restore_backup(saved)
    assert Membership.objects.get().user.check_password("wim@alder.example")


def test_two_backups_of_the_same_books_hold_the_same_rows(saved: Path, now: datetime, tmp_path: Path) -> None:
    restore_backup(saved)
    again = tmp_path / "again.zip"
    write_backup(again, now=now)
    assert read_members(again) == read_members(saved)


def test_a_newer_version_is_refused(saved: Path) -> None:
    def change(listed: dict[str, Any]) -> None:
        listed["program"] = "9.0.0"
        listed["migrations"] = sorted([*listed["migrations"], "journal.0099_later"])

    expect_refusal(forge(saved, relist(change)), r"newer version of the program \(9\.0\.0; .*Install that version")


def test_an_older_version_is_refused(saved: Path) -> None:
    def change(listed: dict[str, Any]) -> None:
        listed["program"] = "0.0.1"
        listed["migrations"] = sorted(our_migrations() - {"journal.0002_triggers"})

    expect_refusal(forge(saved, relist(change)), r"older version of the program \(0\.0\.1; .*make upgrade")


def test_another_format_is_refused(saved: Path) -> None:
    forged = forge(saved, relist(lambda listed: listed.update(format=2)))
    expect_refusal(forged, "has the format 2, this program reads 1")


def test_a_changed_byte_anywhere_is_refused(saved: Path, tmp_path: Path) -> None:
    data = saved.read_bytes()
    changed = tmp_path / "changed.zip"
    places = [*range(0, len(data), len(data) // 40), *range(len(data) - 90, len(data), 7)]
    for place in places:
        changed.write_bytes(data[:place] + bytes([data[place] ^ 1]) + data[place + 1 :])
        with pytest.raises(BackupError, match="Copy it again, or take another backup"):
            check_backup(changed)
    assert check_backup(saved).rows["journal.entry"] == 6


def test_a_truncated_file_is_refused(saved: Path, tmp_path: Path) -> None:
    data = saved.read_bytes()
    cut = tmp_path / "cut.zip"
    for length in (0, 1, 63, 64, 100, len(data) // 2, len(data) - 64, len(data) - 1):
        cut.write_bytes(data[:length])
        with pytest.raises(BackupError, match="Copy it again, or take another backup"):
            check_backup(cut)
    cut.write_bytes(data + b"\0")
    with pytest.raises(BackupError, match="Copy it again, or take another backup"):
        check_backup(cut)


def test_a_missing_file_is_named(tmp_path: Path) -> None:
    with pytest.raises(BackupError, match="There is no file"):
        check_backup(tmp_path / "none.zip")


def test_a_database_in_use_is_refused_and_stays_as_it_is(books: Books, now: datetime, tmp_path: Path) -> None:
    path = tmp_path / "saved.zip"
    write_backup(path, now=now)
    before = rows()
    with pytest.raises(BackupError, match=r"is in use: there are rows in .* Name an empty folder"):
        restore_backup(path)
    assert rows() == before


@pytest.mark.parametrize(
    "name",
    ["../evil", "/etc/evil", "files/../../evil", "files/" + "a" * 63 + "/", "tables/journal.entry.jsonl/x", "C:\\evil"],
)
def test_names_that_no_backup_holds_are_refused(saved: Path, name: str) -> None:
    def change(members: Members) -> None:
        members[name] = b"x"

    expect_refusal(forge(saved, change), "which no backup holds. Do not use it")
    assert not list(saved.parent.parent.glob("evil"))


def test_a_name_that_stands_there_twice_is_refused(saved: Path) -> None:
    members = list(read_members(saved).items())
    with pytest.warns(UserWarning, match="Duplicate name"):
        twice = write_archive(saved.with_name("twice.zip"), [*members, members[0]])
    expect_refusal(twice, "which no backup holds")


def without(name: str) -> Callable[[Members], None]:
    return lambda members: members.pop(name)  # type: ignore[return-value]


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        (without("tables/journal.entry.jsonl"), "does not hold what its list says"),
        (replace("workshop.user", b"wim@", b"eve@"), "tables/workshop.user.jsonl in the backup is not what its list"),
        (without("manifest.json"), "The list of the backup cannot be read"),
        (relist(lambda listed: listed.update(made_at="today")), "The list of the backup cannot be read"),
    ],
)
def test_a_backup_that_is_not_what_its_list_says(saved: Path, change: Callable[[Members], None], sentence: str) -> None:
    expect_refusal(forge(saved, change, relist=False), sentence)


def test_a_file_under_another_hash_is_refused(saved: Path) -> None:
    def change(members: Members) -> None:
        name = next(name for name, data in members.items() if data == PHOTO)
        members[name] = b"\x89PNG\r\n\x1a\n another photo"

    expect_refusal(forge(saved, change), "is not what its list says")


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        (replace("journal.entry", b'"verdict":"allowed"', b'"verdict":"incident"'), "does not verify .*column verdict"),
        (replace("ledger.posting", b'"amount":-', b'"amount":-1'), "does not verify .*What the ledger keeps"),
        (replace("journal.head", b'"sequence":6', b'"sequence":7'), "does not verify .*The entry is missing"),
        (replace("journal.attachment", b'"name":"gauge', b'"nime":"gauge'), "Row 1 of journal.attachment cannot"),
        (replace("journal.attachment", b'"name":', b'"more":1,"name":'), "has columns too many: more"),
        (replace("workshop.workshop", b"2026-03-02", b"yesterday"), "Row 1 of workshop.workshop cannot be read"),
        (replace("workshop.user", b"{", b"["), "Row 1 of workshop.user cannot be read"),
        (
            replace("workshop.membership", b'"role":"worker"', b'"role":"king"'),
            "database refuses a row of workshop.memb",
        ),
        (replace("journal.entry", b'"member_id":', b'"member_id":9'), "points nowhere|refuses|does not verify"),
        (without("tables/ledger.finding.jsonl"), "tables of the backup are not those of its version: ledger.finding"),
    ],
)
def test_a_forger_who_knows_the_seal_is_found_by_the_proof(
    saved: Path, change: Callable[[Members], None], sentence: str
) -> None:
    expect_refusal(forge(saved, change), sentence)


def test_a_file_that_was_there_before_stays_after_a_refusal(saved: Path, tmp_path: Path) -> None:
    from chemicals.journal import files

    files.keep(PHOTO)
    with pytest.raises(BackupError):
        restore_backup(forge(saved, replace("journal.head", b'"sequence":6', b'"sequence":7')))
    assert list(kept_files(tmp_path).values()) == [PHOTO]


def test_a_full_disk_leaves_nothing(saved: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(handle: int) -> None:
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(os, "fsync", fail)
    with pytest.raises(BackupError, match=r"Nothing was restored: .*No space left.*Make room"):
        restore_backup(saved)
    assert {name for name, found in rows().items() if found} == set()
    assert kept_files(saved.parent) == {}


def test_the_command_restores_verifies_and_refuses_a_second_time(
    saved: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    call_command("restore", str(saved))
    printed = capsys.readouterr().out
    assert "Restored as of 2026-03-02T15:00:00+00:00." in printed
    assert "1 workshop, 6 entries, 2 files: all is as it was recorded." in printed
    with pytest.raises(CommandError, match="is in use"):
        call_command("restore", str(saved))


def test_the_command_does_not_restore_under_a_running_service(saved: Path, settings: Settings) -> None:
    with start.hold_folder(settings.DATA), pytest.raises(CommandError, match="already runs on the folder"):
        call_command("restore", str(saved))
    assert sum(len(found) for found in rows().values()) == 0


def test_the_command_leaves_an_older_database_alone(saved: Path) -> None:
    call_command("migrate", "dropoffs", "zero", verbosity=0)
    try:
        with pytest.raises(CommandError, match="older than this program"):
            call_command("restore", str(saved))
        assert "dropoffs_dropoff" not in connection.introspection.table_names()
    finally:
        call_command("migrate", verbosity=0)
