"""Bare copies of tables: the same columns, constraints and indexes, no triggers."""

from typing import Any

from django.db import connection


def copy_table(table: str, prefix: str) -> None:
    """Make an empty copy of a table; its name begins with the prefix."""
    if connection.vendor == "sqlite":
        with connection.cursor() as reader:
            reader.execute(
                "SELECT sql FROM sqlite_master WHERE tbl_name = %s AND sql IS NOT NULL AND type <> 'trigger'", [table]
            )
            statements = [row[0] for row in reader.fetchall()]
        for statement in statements:
            with connection.cursor() as writer:
                writer.execute(_renamed(statement, table, prefix))
        return
    with connection.cursor() as writer:
        writer.execute(f"CREATE TABLE {prefix}_{table} (LIKE {table} INCLUDING INDEXES)")


def _renamed(statement: str, table: str, prefix: str) -> str:
    fresh = statement.replace(f'"{table}"', f'"{prefix}_{table}"')
    for kind in ("INDEX ", "UNIQUE INDEX "):
        fresh = fresh.replace(f'CREATE {kind}"', f'CREATE {kind}"{prefix}_')
    return fresh


Rows = tuple[list[str], list[tuple[Any, ...]]]


def read_rows(table: str, where: str, values: list[Any]) -> Rows:
    """Return the columns of a table, and its rows as they are kept."""
    with connection.cursor() as cursor:
        cursor.execute(f"SELECT * FROM {table} WHERE {where}", values)
        return [column[0] for column in cursor.description or ()], list(cursor.fetchall())


def insert_rows(table: str, prefix: str, rows: Rows) -> None:
    """Insert rows into the copy of their table, one statement for all of them."""
    names, values = rows
    marks = ", ".join(["%s"] * len(names))
    with connection.cursor() as cursor:
        cursor.executemany(f"INSERT INTO {prefix}_{table} ({', '.join(names)}) VALUES ({marks})", values)
