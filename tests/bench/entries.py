"""Entries per second through the service, against the same rows by plain SQL, one transaction each."""

import time
from collections.abc import Iterator
from typing import Any

from django.db import connection, transaction
from django_scopes import scopes_disabled

from tests.bench.scenario import make_bench

COUNT = 300
TABLES = ("journal_entry", "ledger_posting", "ledger_content")


def measure() -> Iterator[str]:
    """Print both rates and their ratio; there is no aim, only a figure to watch."""
    with scopes_disabled():
        bench = make_bench("entries")
        bench.run()
        started = time.perf_counter()
        entries = [bench.run().entry for _ in range(COUNT)]
        through_service = COUNT / (time.perf_counter() - started)
        plain = _replay([entry.pk for entry in entries])
    rates = (
        f"through the service {through_service:6.0f}   plain SQL {plain:6.0f}   ratio {plain / through_service:5.1f}"
    )
    print(f"entries/s {rates}")
    yield from ()


def _replay(entries: list[int]) -> float:
    """Insert copies of the rows of each entry into bare copies of the tables; return entries per second."""
    rows = {entry: [(table, *_rows_of(table, entry)) for table in TABLES] for entry in entries}
    for table in TABLES:
        _copy_table(table)
    started = time.perf_counter()
    for parts in rows.values():
        with transaction.atomic(), connection.cursor() as cursor:
            for table, names, values in parts:
                marks = ", ".join(["%s"] * len(names))
                cursor.executemany(f"INSERT INTO bench_{table} ({', '.join(names)}) VALUES ({marks})", values)
    return len(rows) / (time.perf_counter() - started)


def _copy_table(table: str) -> None:
    """Make a bare copy with the same columns, constraints and indexes, but no triggers."""
    like = f"CREATE TABLE bench_{table} (LIKE {table} INCLUDING INDEXES)"
    if connection.vendor == "sqlite":
        with connection.cursor() as reader:
            reader.execute(
                "SELECT sql FROM sqlite_master WHERE tbl_name = %s AND sql IS NOT NULL AND type <> 'trigger'", [table]
            )
            statements = [row[0] for row in reader.fetchall()]
        for statement in statements:
            with connection.cursor() as writer:
                writer.execute(_renamed(statement, table))
        return
    with connection.cursor() as writer:
        writer.execute(like)


def _renamed(statement: str, table: str) -> str:
    fresh = statement.replace(f'"{table}"', f'"bench_{table}"')
    for kind in ("INDEX ", "UNIQUE INDEX "):
        fresh = fresh.replace(f'CREATE {kind}"', f'CREATE {kind}"bench_')
    return fresh


def _rows_of(table: str, entry: int) -> tuple[list[str], list[tuple[Any, ...]]]:
    key = "id" if table == "journal_entry" else "entry_id"
    with connection.cursor() as cursor:
        cursor.execute(f"SELECT * FROM {table} WHERE {key} = %s", [entry])
        return [column[0] for column in cursor.description or ()], list(cursor.fetchall())
