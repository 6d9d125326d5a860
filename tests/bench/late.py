"""A late entry, a day ago in a journal of 10 000 entries, against one at the end of time; then the job over it all."""

import time
from collections.abc import Callable, Iterator
from datetime import timedelta
from uuid import uuid4

from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scopes_disabled

from chemicals.books.occurred import Occurred
from chemicals.jobs.services import run_next
from chemicals.ledger.selectors import get_recomputed_to
from chemicals.process.inputs import RunInput
from chemicals.science.quantity import parse
from compliance.clearance.services import record
from tests.bench.scenario import START, Bench, make_bench

ENTRIES = 10_000
A_DAY = 72
"""Entries in a day: one every twenty minutes."""


def measure() -> Iterator[str]:
    """Print times, ratio and query counts; there is no aim, only figures to watch."""
    with scopes_disabled():
        bench = make_bench("late")
        while bench.minutes < 20 * ENTRIES:
            bench.minutes += 19
            bench.run()
        at_end = [_measured(lambda: _late(bench, 0)) for _ in range(10)]
        a_day_ago = [_measured(lambda: _late(bench, 1)) for _ in range(10)]
        (end, queries), (late, more) = min(at_end), min(a_day_ago)
        print(f"an entry at the end {1000 * end:7.1f} ms in {queries} queries")
        print(f"one a day late      {1000 * late:7.1f} ms in {more} queries   ratio {late / end:5.1f}")
        left, queries = _measured(lambda: _late(bench, ENTRIES // A_DAY))
        assert get_recomputed_to(bench.member.workshop) is not None
        print(f"one left to the job {1000 * left:7.1f} ms in {queries} queries")
        steps = list(_steps(bench))
        print(f"the job             {sum(steps):7.1f} s in {len(steps)} steps, the longest {max(steps):.2f} s")
    yield from ()


def _measured(act: Callable[[], object]) -> tuple[float, int]:
    started = time.perf_counter()
    with CaptureQueriesContext(connection) as captured:
        act()
    return time.perf_counter() - started, len(captured)


def _late(bench: Bench, days: int) -> None:
    now = START + timedelta(minutes=bench.minutes + 1)
    bench.minutes += 1
    run = RunInput(route=bench.route.uuid, charge=parse("2 mAh", "charge"))
    record(actor=bench.member, now=now, key=uuid4(), data=run, occurred=Occurred(now - timedelta(days=days)))


def _steps(bench: Bench) -> Iterator[float]:
    while get_recomputed_to(bench.member.workshop) is not None:
        yield _measured(lambda: run_next(now=START + timedelta(days=365), worker="bench"))[0]
