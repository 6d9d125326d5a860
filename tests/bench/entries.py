"""Entries per second through the service, against the same rows by plain SQL, one transaction each."""

import time
from collections.abc import Iterator

from django.db import transaction
from django_scopes import scopes_disabled

from tests.bench.copies import copy_table, insert_rows, read_rows
from tests.bench.scenario import make_bench

COUNT = 300
PREFIX = "bench"
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
    keys = {table: "id" if table == "journal_entry" else "entry_id" for table in TABLES}
    rows = {pk: [(table, read_rows(table, f"{key} = %s", [pk])) for table, key in keys.items()] for pk in entries}
    for table in TABLES:
        copy_table(table, PREFIX)
    started = time.perf_counter()
    for parts in rows.values():
        with transaction.atomic():
            for table, content in parts:
                insert_rows(table, PREFIX, content)
    return len(rows) / (time.perf_counter() - started)
