"""A hundred thousand past runs by the bulk path, against the plain insert of the same rows in one transaction."""

import tempfile
import time
from collections.abc import Iterator
from datetime import timedelta

from django.conf import settings
from django.db import transaction
from django_scopes import scopes_disabled

from chemicals.jobs.services import run_next
from chemicals.ledger.selectors import get_recomputed_to
from chemicals.process.importing.files import add_import, find_map, read_table
from chemicals.process.models import Import
from compliance.clearance.importing import record_import
from tests.bench.copies import copy_table, insert_rows, read_rows
from tests.bench.scenario import START, Bench, make_bench

COUNT = 100_000
AIM = 5.0
PREFIX = "plain"
TABLES = ("journal_entry", "ledger_posting", "ledger_content", "ledger_finding")


def measure() -> Iterator[str]:
    """Print both times and their ratio; yield a sentence if it is over the aim."""
    with scopes_disabled(), tempfile.TemporaryDirectory() as folder:
        settings.ATTACHMENTS = folder
        bench = make_bench("imports")
        upload = add_import(actor=bench.member, now=START, name="runs.csv", data=write_runs(COUNT))
        started = time.perf_counter()
        read, steps = record(bench, upload)
        ours = time.perf_counter() - started
        theirs = replay(bench, upload)
    times = f"bulk path {ours:6.1f} s (recorded after {read:5.1f} s, then {steps} steps of the job)"
    print(f"an import of {COUNT} entries   {times}   plain insert {theirs:6.1f} s   ratio {ours / theirs:4.1f}")
    if ours > AIM * theirs:
        yield f"an import takes {ours / theirs:.1f} times the plain insert of its rows"


def write_runs(count: int) -> bytes:
    """Return a file of runs, one a minute."""
    times = (START + timedelta(minutes=10 + number) for number in range(count))
    rows = (f"{at:%Y-%m-%d %H:%M},run,route,{number % 3 + 1}" for number, at in enumerate(times))
    return "\n".join(["Date,Verb,Route,Charge [mAh]", *rows]).encode()


def record(bench: Bench, upload: Import) -> tuple[float, int]:
    """Record a file and let the job bring the books up; return when it was recorded, and the job's steps."""
    now, started = START + timedelta(days=365), time.perf_counter()
    chosen = find_map(upload, read_table(upload))
    record_import(actor=bench.member, now=now, upload=upload, chosen=chosen, whole=True)
    recorded, steps = time.perf_counter() - started, 0
    while get_recomputed_to(bench.member.workshop) is not None:
        run_next(now=now + timedelta(days=1), worker="bench")
        steps += 1
    return recorded, steps


def replay(bench: Bench, upload: Import) -> float:
    """Insert copies of all rows that the import made into bare copies of the tables; return the seconds it took."""
    done = Import.objects.get(pk=upload.pk)
    mine = "workshop_id = %s AND sequence BETWEEN %s AND %s"
    entries = f"SELECT id FROM journal_entry WHERE {mine}"
    values = [bench.member.workshop.pk, done.first, done.last]
    where = {"journal_entry": mine}
    rows = {table: read_rows(table, where.get(table, f"entry_id IN ({entries})"), values) for table in TABLES}
    for table in TABLES:
        copy_table(table, PREFIX)
    started = time.perf_counter()
    with transaction.atomic():
        for table, content in rows.items():
            insert_rows(table, PREFIX, content)
    return time.perf_counter() - started
