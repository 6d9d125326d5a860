"""Triggers that make the journal refuse UPDATE, DELETE, replace and TRUNCATE, on both engines.

On SQLite a remake of the table by AlterField drops them silently: a migration that touches the table removes them
first and installs them after; the system check below says so if one is missing.
"""

from typing import Any

from django.core.checks import CheckMessage, Error, Tags, register
from django.db import connections
from django.db.backends.base.base import BaseDatabaseWrapper

TABLE = "journal_entry"
SQLITE = {
    "journal_refuses_update": f"BEFORE UPDATE ON {TABLE} BEGIN SELECT RAISE(ABORT, 'the journal refuses UPDATE'); END",
    "journal_refuses_delete": f"BEFORE DELETE ON {TABLE} BEGIN SELECT RAISE(ABORT, 'the journal refuses DELETE'); END",
    # INSERT OR REPLACE deletes without firing the DELETE trigger, so the replacing row is stopped here
    "journal_refuses_replace": (
        f"BEFORE INSERT ON {TABLE} WHEN EXISTS (SELECT 1 FROM {TABLE} WHERE id = NEW.id OR uuid = NEW.uuid"  # noqa: S608  (a constant)
        " OR (workshop_id = NEW.workshop_id AND sequence = NEW.sequence))"
        " BEGIN SELECT RAISE(ABORT, 'the journal refuses replace'); END"
    ),
}
POSTGRESQL = {
    "journal_refuses_update": f"BEFORE UPDATE ON {TABLE} FOR EACH ROW",
    "journal_refuses_delete": f"BEFORE DELETE ON {TABLE} FOR EACH ROW",
    "journal_refuses_truncate": f"BEFORE TRUNCATE ON {TABLE} FOR EACH STATEMENT",
}
FUNCTION = """
CREATE OR REPLACE FUNCTION journal_refuses() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
    -- 23001 is restrict_violation: Django raises IntegrityError, as on SQLite
    RAISE EXCEPTION 'the journal refuses %', TG_OP USING ERRCODE = '23001';
END $$
"""


def expected(connection: BaseDatabaseWrapper) -> dict[str, str]:
    """Return the triggers that this engine needs."""
    return SQLITE if connection.vendor == "sqlite" else POSTGRESQL


def _statement(connection: BaseDatabaseWrapper, name: str) -> str:
    tail = " EXECUTE FUNCTION journal_refuses()" if connection.vendor == "postgresql" else ""
    return f"CREATE TRIGGER {name} {expected(connection)[name]}{tail}"


def install(connection: BaseDatabaseWrapper) -> None:
    """Create the triggers."""
    with connection.cursor() as cursor:
        if connection.vendor == "postgresql":
            cursor.execute(FUNCTION)
        for name in expected(connection):
            cursor.execute(_statement(connection, name))


def remove(connection: BaseDatabaseWrapper) -> None:
    """Drop the triggers: only migrations of the table and the test suite's own flush do this."""
    on_table = f" ON {TABLE}" if connection.vendor == "postgresql" else ""
    with connection.cursor() as cursor:
        for name in expected(connection):
            cursor.execute(f"DROP TRIGGER IF EXISTS {name}{on_table}")


def present(connection: BaseDatabaseWrapper) -> set[str]:
    """Return the names of the triggers that are there, enabled, and do what they should."""
    with connection.cursor() as cursor:
        if connection.vendor == "sqlite":
            cursor.execute("SELECT name, sql FROM sqlite_master WHERE type = 'trigger' AND tbl_name = %s", [TABLE])
            return {name for name, sql in cursor if name in SQLITE and sql == _statement(connection, name)}
        cursor.execute(
            "SELECT tgname FROM pg_trigger JOIN pg_proc ON pg_proc.oid = tgfoid"
            " WHERE tgrelid = %s::regclass AND tgenabled = 'O' AND proname = 'journal_refuses'",
            [TABLE],
        )
        return {row[0] for row in cursor}


@register(Tags.database)
def check_triggers(databases: Any = None, **kwargs: Any) -> list[CheckMessage]:
    """Compare the triggers that are there with the list (``check --database default``)."""
    problems: list[CheckMessage] = []
    for alias in databases or []:
        connection = connections[alias]
        if TABLE not in connection.introspection.table_names():
            continue
        missing = sorted(set(expected(connection)) - present(connection))
        if missing:
            problems.append(
                Error(
                    f"The journal of database {alias} lacks the triggers {', '.join(missing)}.",
                    hint="Something remade the table or removed them: chemicals.journal.triggers.install makes them.",
                    id="journal.E001",
                )
            )
    return problems
