"""The database itself refuses to change the journal, on both engines; missing triggers are noticed."""

import os
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest
from django.core.management import call_command
from django.core.management.base import CommandError
from django.db import DatabaseError, IntegrityError, connection, models, transaction
from django_scopes import scopes_disabled

from chemicals.journal import triggers
from chemicals.journal.models import Entry
from tests.journal.conftest import Note

ROOT = Path(__file__).resolve().parents[2]
SQLITE = connection.vendor == "sqlite"
COLUMNS = (
    "id, workshop_id, sequence, uuid, kind, kind_version, occurred_at, precision, recorded_at, member_id, verdict, "
    "about_id, body, previous_hash, hash"
)


def run_sql(sql: str) -> None:
    with transaction.atomic(), connection.cursor() as cursor:
        cursor.execute(sql)


def rows() -> list[tuple[Any, ...]]:
    with connection.cursor() as cursor:
        cursor.execute(f"SELECT {COLUMNS} FROM journal_entry ORDER BY id")  # noqa: S608  (a constant)
        return [tuple(bytes(v) if isinstance(v, memoryview) else v for v in row) for row in cursor.fetchall()]


CHANGES = [
    ("UPDATE", "UPDATE journal_entry SET kind = 'other'"),
    ("UPDATE", "UPDATE journal_entry SET body = body"),
    ("DELETE", "DELETE FROM journal_entry"),
]


def copy(verb: str = "INSERT", tail: str = "", **columns: str) -> str:
    """Return the SQL that copies all entries onto themselves, some columns changed."""
    names = COLUMNS.split(", ")
    values = ", ".join(columns.get(name, name) for name in names)
    return f"{verb} INTO journal_entry ({COLUMNS}) SELECT {values} FROM journal_entry WHERE true {tail}"  # noqa: S608


UPSERT = copy(tail="ON CONFLICT (id) DO UPDATE SET kind = 'other'")
REPLACING = [  # SQLite deletes the replaced row without firing the DELETE trigger
    copy("INSERT OR REPLACE"),
    copy("REPLACE", id="id + 100"),
    copy("INSERT OR REPLACE", id="NULL", sequence="sequence + 9"),
    copy("INSERT OR REPLACE", id="NULL", uuid="'0123456789abcdef0123456789abcdef'"),
    "UPDATE OR REPLACE journal_entry SET sequence = 1",
    UPSERT,
]
TRUNCATING = ["TRUNCATE journal_entry CASCADE", "TRUNCATE workshop_workshop CASCADE", UPSERT]


@pytest.mark.django_db(transaction=True)  # PostgreSQL truncates nothing that its own transaction has written
@pytest.mark.parametrize("sql", [sql for _, sql in CHANGES] + (REPLACING if SQLITE else TRUNCATING))
def test_the_database_refuses_to_change_the_journal(note: Note, sql: str) -> None:
    note()
    note()
    before = rows()
    with pytest.raises(IntegrityError, match="the journal refuses"):
        run_sql(sql)
    assert rows() == before


@pytest.mark.parametrize(("verb", "sql"), CHANGES)
def test_both_engines_say_the_same_sentence(note: Note, verb: str, sql: str) -> None:
    note()
    with pytest.raises(IntegrityError, match=f"the journal refuses {verb}"):
        run_sql(sql)
    assert len(rows()) == 1


def test_the_framework_is_refused_as_well(note: Note) -> None:
    entry = note().entry
    entry.kind = "other"
    with scopes_disabled():
        for change in (
            entry.save,
            lambda: Entry.objects.all().update(kind="other"),
            lambda: Entry.objects.all().delete(),
            lambda: Entry.objects.bulk_update([entry], ["kind"]),
        ):
            with pytest.raises((IntegrityError, models.ProtectedError)), transaction.atomic():
                change()
    assert rows()[0][4] == "hand-over"


def test_inserting_goes_on(note: Note) -> None:
    assert [note().entry.sequence for _ in range(3)] == [1, 2, 3]


@pytest.mark.django_db
def test_all_triggers_are_there_after_the_migrations() -> None:
    assert triggers.present(connection) == set(triggers.expected(connection))
    assert triggers.check_triggers(databases=["default"]) == []


@pytest.mark.django_db
def test_a_missing_trigger_is_named_by_the_check() -> None:
    table = "" if SQLITE else " ON journal_entry"
    run_sql(f"DROP TRIGGER journal_refuses_delete{table}")
    (problem,) = triggers.check_triggers(databases=["default"])
    assert problem.id == "journal.E001"
    assert "lacks the triggers journal_refuses_delete." in problem.msg
    with pytest.raises(CommandError, match="journal_refuses_delete"):
        call_command("check", databases=["default"])


def alter_kind(old: "models.Field[Any, Any]", new: "models.Field[Any, Any]") -> None:
    with connection.schema_editor() as editor:
        editor.alter_field(Entry, old, new, strict=True)


@pytest.mark.django_db(transaction=True)
def test_a_remake_of_the_table_drops_them_on_sqlite_and_the_check_says_so() -> None:
    """Django alters a column on SQLite by remaking the table; PostgreSQL keeps its triggers."""
    kind, wider = Entry._meta.get_field("kind"), models.CharField(max_length=99)
    wider.set_attributes_from_name("kind")
    wider.model = Entry
    alter_kind(kind, wider)
    try:
        found = triggers.check_triggers(databases=["default"])
        assert [problem.id for problem in found] == (["journal.E001"] if SQLITE else [])
    finally:
        alter_kind(wider, kind)
        triggers.remove(connection)
        triggers.install(connection)
    assert triggers.check_triggers(databases=["default"]) == []


@pytest.mark.django_db
def test_a_trigger_that_is_switched_off_counts_as_missing() -> None:
    if SQLITE:  # it has no such switch: an altered trigger is one of another name or none
        run_sql("DROP TRIGGER journal_refuses_update")
    else:
        run_sql("ALTER TABLE journal_entry DISABLE TRIGGER journal_refuses_update")
    (problem,) = triggers.check_triggers(databases=["default"])
    assert "journal_refuses_update" in problem.msg


@pytest.mark.django_db
def test_a_trigger_of_the_right_name_that_does_nothing_counts_as_missing() -> None:
    if SQLITE:
        run_sql("DROP TRIGGER journal_refuses_delete")
        run_sql("CREATE TRIGGER journal_refuses_delete BEFORE DELETE ON journal_entry BEGIN SELECT 1; END")
    else:
        run_sql("DROP TRIGGER journal_refuses_delete ON journal_entry")
        run_sql(
            "CREATE FUNCTION pass_by() RETURNS trigger LANGUAGE plpgsql AS 'BEGIN RETURN OLD; END'; "
            "CREATE TRIGGER journal_refuses_delete BEFORE DELETE ON journal_entry "
            "FOR EACH ROW EXECUTE FUNCTION pass_by()"
        )
    (problem,) = triggers.check_triggers(databases=["default"])
    assert "journal_refuses_delete" in problem.msg


PROGRAM = """
import json, pathlib, sys
import django
django.setup()
from django.core.management import call_command
from django.core.management.base import CommandError
from django.db import DatabaseError
command, *args = sys.argv[1:]
try:
    call_command(command, *args, verbosity=0, **({"interactive": False} if command == "flush" else {}))
except (CommandError, DatabaseError) as error:
    print("refused:", error.__cause__ or error)
"""


def run_command(*words: str) -> str:
    """Run a management command as product code does: in a process without this suite's own flush."""
    from tests.jobs.processes import database_url

    variables = os.environ | {"DJANGO_SETTINGS_MODULE": "compliance.settings", "DATABASE_URL": database_url()}
    result = subprocess.run(
        [sys.executable, "-c", PROGRAM, *words], cwd=ROOT, env=variables, capture_output=True, text=True, check=False
    )
    return result.stdout + result.stderr


@pytest.mark.django_db(transaction=True)
def test_flush_fails_over_a_journal(note: Note) -> None:
    note()
    assert "the journal refuses" in run_command("flush")
    assert len(rows()) == 1


@pytest.mark.django_db(transaction=True)
def test_loaddata_fails_over_a_journal(note: Note, tmp_path: Path) -> None:
    from django.core import serializers

    note()
    dump = tmp_path / "entries.json"
    with scopes_disabled():
        dump.write_text(serializers.serialize("json", Entry.objects.all()).replace("hand-over", "receipt"))
    assert "the journal refuses" in run_command("loaddata", str(dump))
    assert rows()[0][4] == "hand-over"


@pytest.mark.django_db(transaction=True)
def test_people_and_workshops_behind_an_entry_cannot_be_deleted(note: Note) -> None:
    entry = note().entry
    with scopes_disabled():
        for thing in (entry.member, entry.workshop, entry.member.user):
            with pytest.raises(models.ProtectedError):
                thing.delete()
    with pytest.raises(DatabaseError):
        run_sql("DELETE FROM workshop_membership")
    assert len(rows()) == 1
