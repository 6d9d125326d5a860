"""`manage.py verify` finds whatever was changed past the program, and names the first broken entry."""

import io
import re
from datetime import datetime
from pathlib import Path

import pytest
from django.core.management import call_command
from django.core.management.base import CommandError
from django.db import connection
from pytest_django import Settings

from chemicals.books import canonical
from chemicals.journal import files, triggers
from chemicals.workshop.models import Membership, Role
from compliance.ops import verify
from compliance.ops.verify import count_crossings, our_models
from tests.conftest import make_member
from tests.ops.books import Books, Execute, intruder, write_books

SQLITE = connection.vendor == "sqlite"


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


@pytest.fixture
def books(transactional_db: None, worker: Membership, now: datetime) -> Books:
    return write_books(worker, now)


def run_verify() -> tuple[str, str | None]:
    """Return what was printed, and the error that makes the exit status 1."""
    out = io.StringIO()
    try:
        call_command("verify", stdout=out)
    except CommandError as error:
        return out.getvalue(), str(error)
    return out.getvalue(), None


def expect_broken(first: int, *sentences: str) -> None:
    """The first broken entry is named; each sentence stands in the report."""
    printed, error = run_verify()
    assert error is not None, "nothing was found"
    assert "restore the last backup" in error
    assert f"First broken entry: {first}" in printed, printed
    for sentence in sentences:
        assert sentence in printed, printed


def expect_wrong(*sentences: str) -> None:
    """Something is wrong that is not one entry's."""
    printed, error = run_verify()
    assert error is not None, "nothing was found"
    for sentence in sentences:
        assert sentence in printed, printed


def test_sound_books_are_counted(books: Books, stranger: Membership) -> None:
    printed, error = run_verify()
    assert error is None
    assert printed.splitlines() == [
        "Alder Court: nothing is wrong.",
        "Birch Yard: nothing is wrong.",
        "2 workshops, 6 entries, 2 files: all is as it was recorded.",
    ]


def body_of(execute: Execute, sequence: int) -> tuple[bytes, bytes]:
    ((body, previous),) = execute("SELECT body, previous_hash FROM journal_entry WHERE sequence = %s", sequence)
    return bytes(body), bytes(previous)


def test_a_changed_byte_of_a_body(books: Books) -> None:
    with intruder() as execute:
        body, _ = body_of(execute, 3)
        forged = body.replace(b'"19 L"', b'"18 L"')
        assert forged != body
        execute("UPDATE journal_entry SET body = %s WHERE sequence = 3", forged)
    expect_broken(3, "entry 3: The bytes were changed", "3 (level reading, recorded by Wim)")


def test_a_changed_body_with_a_fitting_hash(books: Books) -> None:
    """The next entry remembers the old hash, and the ledger the old figure."""
    with intruder() as execute:
        body, previous = body_of(execute, 3)
        forged = body.replace(b":19000000000,", b":18000000000,")
        assert forged != body
        execute(
            "UPDATE journal_entry SET body = %s, hash = %s WHERE sequence = 3",
            forged,
            canonical.chain_hash(previous, forged),
        )
    expect_broken(3, "entry 3: What the ledger keeps", "entry 4: The hash before does not fit")


@pytest.mark.parametrize(
    ("column", "value"),
    [
        ("kind", "run"),
        ("kind_version", 9),
        ("occurred_at", "2026-01-01 00:00:00+00:00"),
        ("precision", "day"),
        ("recorded_at", "2026-01-01 00:00:00+00:00"),
        ("verdict", "overridden"),
        ("uuid", "0123456789abcdef0123456789abcdef"),
    ],
)
def test_a_changed_column(books: Books, column: str, value: object) -> None:
    with intruder() as execute:
        execute(f"UPDATE journal_entry SET {column} = %s WHERE sequence = 2", value)  # noqa: S608  (a constant)
    expect_broken(2, f"entry 2: The column {column} says")


def test_another_author(books: Books) -> None:
    other = make_member(books.member.workshop, Role.OWNER, "eve@alder.example")
    with intruder() as execute:
        execute("UPDATE journal_entry SET member_id = %s WHERE sequence = 2", other.pk)
    expect_broken(2, "entry 2: The column member says")


def test_another_subject(books: Books) -> None:
    with intruder() as execute:
        execute(
            "UPDATE journal_entry SET about_id = (SELECT id FROM journal_entry WHERE sequence = 1) WHERE sequence = 2"
        )
    expect_broken(2, "entry 2: The column about says")


def forget(execute: Execute, sequence: int) -> None:
    """Remove an entry with all that hangs on it."""
    for table in ("ledger_posting", "ledger_content", "ledger_finding", "documents_paper"):
        execute(
            f"DELETE FROM {table} WHERE entry_id IN (SELECT id FROM journal_entry WHERE sequence = %s)",  # noqa: S608
            sequence,
        )
    execute("DELETE FROM journal_entry WHERE sequence = %s", sequence)


@pytest.mark.parametrize("sequence", [1, 3])
def test_an_entry_removed_from_the_middle(books: Books, sequence: int) -> None:
    with intruder() as execute:
        forget(execute, sequence)
    expect_broken(sequence, f"entry {sequence}: The entry is missing")


def test_the_last_entry_removed(books: Books) -> None:
    with intruder() as execute:
        forget(execute, 6)
    expect_broken(6, "entry 6: The entry is missing: the chain ends at 6.")


def test_all_entries_removed(books: Books) -> None:
    with intruder() as execute:
        for sequence in range(1, 7):
            forget(execute, sequence)
    expect_broken(1, "entry 1: The entry is missing: the chain ends at 6.")


def test_a_removed_entry_with_the_gap_closed(books: Books) -> None:
    with intruder() as execute:
        forget(execute, 3)
        for sequence in (4, 5, 6):
            execute("UPDATE journal_entry SET sequence = %s WHERE sequence = %s", sequence - 1, sequence)
        execute("UPDATE journal_head SET sequence = 5")
    expect_broken(3, "entry 3: The hash before does not fit", "entry 3: The column sequence says 3, the bytes say 4.")


def test_two_entries_in_another_order(books: Books) -> None:
    with intruder() as execute:
        for old, new in ((2, 100), (3, 2), (100, 3)):
            execute("UPDATE journal_entry SET sequence = %s WHERE sequence = %s", new, old)
    expect_broken(2, "entry 2: The hash before does not fit", "entry 2: The column sequence says 2, the bytes say 3.")


COPIED = "workshop_id, kind, kind_version, occurred_at, precision, recorded_at, member_id, verdict, about_id"


def insert_copy(execute: Execute, sequence: int) -> None:
    """Insert an entry that copies the fourth, chained to the one before its place."""
    ((previous,),) = execute("SELECT hash FROM journal_entry WHERE sequence = %s", sequence - 1)
    body, _ = body_of(execute, 4)
    execute(
        f"INSERT INTO journal_entry ({COPIED}, id, sequence, uuid, body, previous_hash, hash) "  # noqa: S608
        f"SELECT {COPIED}, 999, %s, %s, body, %s, %s FROM journal_entry WHERE sequence = 4",
        sequence,
        "0123456789abcdef0123456789abcdef",
        bytes(previous),
        canonical.chain_hash(bytes(previous), body),
    )


def test_an_entry_inserted_at_the_end(books: Books) -> None:
    with intruder() as execute:
        insert_copy(execute, 7)
    expect_broken(7, "entry 7: The column sequence says 7", "entry 7: The entry is surplus: the chain ends at 6.")


def test_an_entry_inserted_in_the_middle(books: Books) -> None:
    with intruder() as execute:
        for sequence in (6, 5, 4, 3):
            execute("UPDATE journal_entry SET sequence = %s WHERE sequence = %s", sequence + 1, sequence)
        execute("UPDATE journal_entry SET sequence = 100 WHERE sequence = 4")
        execute("UPDATE journal_entry SET sequence = 4 WHERE sequence = 5")
        insert_copy(execute, 3)
        execute("UPDATE journal_entry SET sequence = 5 WHERE sequence = 4")
        execute("UPDATE journal_entry SET sequence = 4 WHERE sequence = 100")
    expect_broken(3, "entry 3: The column uuid says")


@pytest.mark.parametrize(
    ("change", "first", "sentence"),
    [
        ("sequence = 5", 6, "entry 6: The entry is surplus: the chain ends at 5."),
        ("sequence = 9", 7, "entry 7: The entry is missing: the chain ends at 9."),
        ("hash = previous", 6, "entry 6: The hash at the end of the chain does not fit."),
    ],
)
def test_a_changed_head(books: Books, change: str, first: int, sentence: str) -> None:
    with intruder() as execute:
        old = "(SELECT previous_hash FROM journal_entry WHERE sequence = 6)"
        execute(f"UPDATE journal_head SET {change.replace('previous', old)}")  # noqa: S608  (a constant)
    expect_broken(first, sentence)


def test_a_removed_head(books: Books) -> None:
    with intruder() as execute:
        execute("DELETE FROM journal_head")
    expect_broken(1, "entry 1: The entry is surplus: the chain ends at 0.")


MADE_UP_FINDING = (
    "INSERT INTO ledger_finding (workshop_id, entry_id, code, component, source, target, occurred_at) "
    "SELECT workshop_id, id, 'unknown-level', 'Cu', '', '', occurred_at FROM journal_entry WHERE sequence = 5"
)


@pytest.mark.parametrize(
    "sql",
    [
        "UPDATE ledger_posting SET amount = amount + 1 WHERE {of}",
        "UPDATE ledger_posting SET sd = sd + 1 WHERE {of}",
        "UPDATE ledger_posting SET basis = 'observed' WHERE {of}",
        "DELETE FROM ledger_posting WHERE {of}",
        "UPDATE ledger_content SET amount = 1 WHERE {of}",
        "DELETE FROM ledger_content WHERE {of}",
        MADE_UP_FINDING,
    ],
)
def test_rows_of_the_ledger_that_do_not_follow_from_their_entry(books: Books, sql: str) -> None:
    with intruder() as execute:
        execute(sql.format(of="entry_id = (SELECT id FROM journal_entry WHERE sequence = 5)"))
    expect_broken(5, "entry 5: What the ledger keeps of this entry is not what follows from it.")


def test_a_boundary_posting_that_stands_there_twice_is_refused_by_the_database(books: Books) -> None:
    copied = "workshop_id, entry_id, transfer, component_id, vessel_id, boundary, amount, sd, basis, occurred_at"
    with pytest.raises(Exception, match=re.compile("unique", re.IGNORECASE)), intruder() as execute:
        execute(f"INSERT INTO ledger_posting ({copied}) SELECT {copied} FROM ledger_posting WHERE boundary = 'air'")  # noqa: S608


@pytest.mark.parametrize("column", ["amount", "variance", "known_part"])
def test_a_changed_holding(books: Books, column: str) -> None:
    value = "'7'" if column == "variance" else "7"
    with intruder() as execute:
        execute(f"UPDATE ledger_holding SET {column} = {value} WHERE vessel_id = %s", books.bath.pk)  # noqa: S608
    expect_wrong(f"The holding of Cu in vessel {books.bath.uuid} is not what the entries say.", "No entry is broken.")


def test_a_changed_memory_of_what_was_poured_in(books: Books) -> None:
    with intruder() as execute:
        execute("UPDATE ledger_memory SET poured = '[\"something/1\"]'")
    expect_wrong("What was poured into vessel", "No entry is broken.")


def test_a_metal_under_another_name(books: Books) -> None:
    with intruder() as execute:
        execute("UPDATE ledger_component SET code = 'Ni' WHERE code = 'Cu'")
    expect_wrong("The books lack what the entries name: Cu.")


def test_a_vessel_carried_into_another_workshop(books: Books, stranger: Membership) -> None:
    with intruder() as execute:
        execute("UPDATE ledger_vessel SET workshop_id = %s WHERE id = %s", stranger.workshop.pk, books.bath.pk)
    expect_wrong(f"The books lack what the entries name: {books.bath.uuid}.", "ledger.Posting.vessel points into")


def test_a_missing_file(books: Books) -> None:
    files.path_of(books.photo).unlink()
    expect_broken(3, f"entry 3: The file {books.photo} is missing.", "gauge.png: The file")


def test_a_changed_file(books: Books) -> None:
    files.path_of(books.photo).write_bytes(b"another photo")
    expect_broken(3, f"entry 3: The file {books.photo} was changed on disk.")


def test_a_file_that_no_entry_names(books: Books, now: datetime) -> None:
    """Safety data sheets hang on the register, not on entries."""
    from chemicals.journal.services import add_attachment

    sheet = add_attachment(actor=books.member, now=now, name="sheet.pdf", data=b"%PDF-1.4")
    files.path_of(sheet.sha256).unlink()
    expect_wrong(f"sheet.pdf: The file {sheet.sha256} is missing.", "No entry is broken.")


def test_a_file_that_is_not_listed_any_more(books: Books) -> None:
    with intruder() as execute:
        execute("DELETE FROM journal_attachment WHERE sha256 = %s", books.photo)
    expect_broken(3, f"entry 3: The file {books.photo} is not listed any more.")


@pytest.mark.parametrize("change", ["number = 9", "pdf_sha256 = '{other}'", "data = {bytes}"])
def test_a_paper_that_is_not_as_it_was_issued(books: Books, change: str) -> None:
    other = "'\\x7b7d'::bytea" if not SQLITE else "x'7b7d'"
    with intruder() as execute:
        execute("UPDATE documents_paper SET " + change.format(other=books.photo, bytes=other))  # noqa: S608
    expect_broken(6, "entry 6: The paper waste-label", "is not as it was issued.")


def test_a_missing_paper(books: Books) -> None:
    with intruder() as execute:
        execute("DELETE FROM documents_paper")
    expect_broken(6, "entry 6: Its paper is missing.")


def test_a_paper_whose_entry_cannot_be_read(books: Books) -> None:
    with intruder() as execute:
        execute("UPDATE journal_entry SET body = %s, kind = 'paper' WHERE sequence = 6", b"{}")
    expect_broken(
        6, "entry 6: The bytes were changed", "The papers cannot be compared", "The ledger cannot be compared"
    )


def test_a_row_that_cannot_be_read(books: Books) -> None:
    """SQLite keeps anything in any column; PostgreSQL refuses it, so there another column is spoiled."""
    with intruder() as execute:
        if SQLITE:
            execute("UPDATE journal_entry SET occurred_at = 'yesterday', uuid = 'none' WHERE sequence = 2")
        else:
            execute("UPDATE journal_entry SET body = %s WHERE sequence = 2", b"\xff")
    expect_broken(
        2, "The ledger cannot be compared", "entry 2: The row cannot be read" if SQLITE else "entry 2: The bytes"
    )


def test_rows_that_point_nowhere(books: Books) -> None:
    """SQLite does not look at what another program wrote; PostgreSQL would have refused it."""
    if SQLITE:
        with intruder() as execute:
            execute("DELETE FROM waste_wastestream")
        expect_wrong("A row points nowhere")
    else:
        with pytest.raises(Exception, match="violates foreign key"), intruder() as execute:
            execute("DELETE FROM waste_wastestream")


def test_lost_triggers(books: Books) -> None:
    """Nothing is wrong with the entries yet, but nothing would stop anybody either."""
    triggers.remove(connection)
    try:
        expect_wrong("The journal of database default lacks the triggers", "nothing is wrong.")
    finally:
        triggers.install(connection)


def test_only_the_broken_workshop_is_called_broken(books: Books, stranger: Membership) -> None:
    with intruder() as execute:
        execute("UPDATE journal_entry SET verdict = 'overridden' WHERE sequence = 4")
    expect_broken(4, "Birch Yard: nothing is wrong.", "Alder Court: wrong in 1 points.")


def test_a_long_list_is_cut(books: Books) -> None:
    with intruder() as execute:
        execute("UPDATE journal_entry SET kind = 'x', kind_version = 9, precision = 'day', verdict = 'y'")
    printed, _ = run_verify()
    assert printed.count("entry ") - printed.count("broken entry ") == 20
    assert "  and 4 more" in printed


@pytest.mark.django_db
def test_every_relation_between_tables_of_a_workshop_is_watched() -> None:
    relations = set(count_crossings())
    assert {
        "ledger.Posting.vessel",
        "process.Tank.anode",
        "process.RouteStep.vessel",
        "journal.Entry.about",
    } <= relations
    homeless = {model.__name__ for model in our_models() if verify._home(model) is None}
    assert homeless == {"User", "Workshop", "Schedule"}
