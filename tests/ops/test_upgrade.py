"""Upgrade, backup and restore when the fold has another version: open periods are folded again, closed ones stay."""

import io
from datetime import datetime
from pathlib import Path
from uuid import uuid4

import pytest
from django.conf import settings as django_settings
from django.core.management import call_command
from django.core.management.base import CommandError
from django.db import connection
from django_scopes import scopes_disabled
from pytest_django import Settings

from chemicals.books import events, fold
from chemicals.ledger.models import Content, Posting
from chemicals.ledger.periods import close_period
from chemicals.ledger.selectors import list_outdated_books
from chemicals.ledger.services import refold_outdated
from chemicals.ledger.verify import verify_projection
from chemicals.workshop.models import Membership
from compliance.ops.archive import BackupError
from compliance.ops.backup import write_backup
from compliance.ops.restore import restore_backup
from tests.ledger.closing import BEGUN
from tests.ops.archives import forge, replace
from tests.ops.books import Books, intruder, write_books
from tests.ops.test_restore import Rows, empty, rows

pytestmark = pytest.mark.django_db(transaction=True)


@pytest.fixture(autouse=True)
def data_folder(tmp_path: Path, settings: Settings) -> None:
    settings.DATA = tmp_path / "data"
    settings.ATTACHMENTS = tmp_path / "data" / "attachments"


@pytest.fixture
def books(owner: Membership, now: datetime) -> Books:
    """Four entries before the end of February's second last day, a drum off and a label after it."""
    return write_books(owner, now)


def fold_by_another_version(patch: pytest.MonkeyPatch) -> None:
    """From now on the fold has another version, by which neither levels nor drums change anything."""
    nothing = dict.fromkeys((events.LevelReading, events.DrumOff), lambda folding, event: None)
    patch.setattr(fold, "VERSION", fold.VERSION + 1)
    patch.setattr(fold, "FOLDS", {**fold.FOLDS, **nothing})


def kinds_with_postings() -> set[str]:
    with scopes_disabled():
        return set(Posting.objects.values_list("entry__kind", flat=True))


def upgrade() -> list[str]:
    out = io.StringIO()
    call_command("upgrade", stdout=out)
    for backup in (django_settings.DATA / "backups").iterdir():
        backup.unlink()  # it has its second in its name, and tests are quicker
    return out.getvalue().splitlines()


def forget_running_state(books: Books) -> None:
    """Let the tables be as the first version of the fold kept them, before there was a note of the version."""
    call_command("migrate", "ledger", "0002_kinds_and_running_state", verbosity=0)
    with intruder() as execute:
        execute("UPDATE ledger_content SET known_part = 0, poured = NULL")
    tables = connection.introspection.table_names()
    assert "ledger_books" not in tables


def test_a_database_of_the_first_version_is_folded_again(books: Books) -> None:
    before = rows()
    forget_running_state(books)
    backup, migrations, again, *_, proof = upgrade()
    assert backup.startswith("Backup: ")
    assert "ledger.0003_periods_and_late_entries" in migrations
    assert again == "Folded again: Alder Court"
    assert proof == "1 workshop, 6 entries, 2 files: all is as it was recorded."
    with scopes_disabled():
        assert Content.objects.filter(component__code="", poured=None).count() == 0
    assert said(rows()) == said(before)


def said(found: Rows) -> Rows:
    """Return rows of the ledger without their numbers: those that were written anew have others."""
    tables = ("ledger.Posting", "ledger.Content", "ledger.Holding", "ledger.Memory", "ledger.Finding")
    return {name: type(found[name])(row[1:] for row in found[name].elements()) for name in tables}


def test_an_upgrade_folds_again_only_when_the_fold_has_another_version(
    books: Books, now: datetime, monkeypatch: pytest.MonkeyPatch
) -> None:
    before = rows()
    assert "Folded again: no books needed it" in upgrade()
    assert rows() == before
    close_period(actor=books.member, now=now, key=uuid4(), until=BEGUN)
    closed = postings_before_the_close()
    fold_by_another_version(monkeypatch)
    assert [workshop.name for workshop in list_outdated_books()] == ["Alder Court"]
    assert "Folded again: Alder Court" in upgrade()
    assert postings_before_the_close() == closed
    assert kinds_with_postings() == {"opening", "level reading"}  # of closed entries; the drum was not
    assert list_outdated_books() == []


def postings_before_the_close() -> set[int]:
    with scopes_disabled():
        return set(Posting.objects.filter(occurred_at__lt=BEGUN).values_list("pk", flat=True))


def test_books_that_cannot_be_folded_again_are_left_and_said_so(books: Books, monkeypatch: pytest.MonkeyPatch) -> None:
    fold_by_another_version(monkeypatch)
    with intruder() as execute:
        execute("UPDATE journal_entry SET body = %s WHERE sequence = 3", b"{}")
    before = rows()
    with pytest.raises(CommandError, match=r"cannot be folded again: .* Run: manage.py verify"):
        upgrade()
    assert rows() == before


def test_a_closed_period_of_another_version_comes_back_from_the_backup(
    books: Books, now: datetime, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """It cannot be folded again: postings, contents, findings and closing holdings are in the file."""
    close_period(actor=books.member, now=now, key=uuid4(), until=BEGUN)
    fold_by_another_version(monkeypatch)
    refold_outdated()
    before, path = rows(), tmp_path / "saved.zip"
    assert before["ledger.ClosingHolding"]
    write_backup(path, now=now)
    empty(tmp_path)
    restore_backup(path)
    assert rows() == before
    assert verify_projection(books.member.workshop) == []


def test_a_backup_of_another_version_is_folded_again_from_its_last_close_on(
    books: Books, now: datetime, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    close_period(actor=books.member, now=now, key=uuid4(), until=BEGUN)
    closed, path = postings_before_the_close(), tmp_path / "saved.zip"
    write_backup(path, now=now)
    empty(tmp_path)
    fold_by_another_version(monkeypatch)
    restore_backup(path)
    assert list_outdated_books() == []
    assert postings_before_the_close() == closed
    assert kinds_with_postings() == {"opening", "level reading"}
    assert verify_projection(books.member.workshop) == []


@pytest.mark.parametrize(
    "change",
    [
        ("ledger.posting", b'"amount":-', b'"amount":-1'),
        ("ledger.closingholding", b'"variance":0', b'"variance":1'),
        ("ledger.period", b'"sequence":6', b'"sequence":5'),
        ("journal.entry", b'"body":"e', b'"body":"f'),
    ],
)
def test_a_forged_closed_period_is_not_restored(
    books: Books, now: datetime, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, change: tuple[str, bytes, bytes]
) -> None:
    close_period(actor=books.member, now=now, key=uuid4(), until=BEGUN)
    write_backup(tmp_path / "saved.zip", now=now)
    empty(tmp_path)
    forged = forge(tmp_path / "saved.zip", replace(*change))
    fold_by_another_version(monkeypatch)
    with pytest.raises(BackupError, match="does not verify"):
        restore_backup(forged)
    assert {name for name, found in rows().items() if found} == set()


def test_serve_leaves_outdated_books_to_the_upgrade(books: Books, monkeypatch: pytest.MonkeyPatch) -> None:
    from compliance.ops.management.commands.serve import Command
    from compliance.ops.start import StartError

    fold_by_another_version(monkeypatch)
    with pytest.raises(StartError, match=r"older version of this program\. Run: make upgrade"):
        Command().prepare()
    assert list_outdated_books() != []
