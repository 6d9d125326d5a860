"""All balances on a date at 1e4, 1e5 and 1e6 postings, against one hand-written GROUP BY."""

import random
import time
from collections.abc import Callable, Iterator
from datetime import timedelta

from django.db import connection
from django_scopes import scopes_disabled

from chemicals.journal.models import Entry
from chemicals.ledger.models import Component, Posting, Vessel, VesselKind
from chemicals.ledger.selectors import get_balances_before
from chemicals.ledger.services import create_vessel
from tests.bench.scenario import START, Bench, make_bench

SIZES = (10_000, 100_000, 1_000_000)
AIM = 2.0
VESSELS = 40
END = START + timedelta(days=300)
GROUP_BY = """
SELECT vessel_id, component_id, SUM(amount) FROM ledger_posting
WHERE workshop_id = %s AND vessel_id IS NOT NULL AND occurred_at < %s GROUP BY vessel_id, component_id
"""


def measure() -> Iterator[str]:
    """Print both times and their ratio at each size; yield a sentence for each over the aim."""
    with scopes_disabled():
        bench = make_bench("balances")
        bench.run()
        made = 0
        for size in SIZES:
            _add_postings(bench, made, size)
            made = size
            ours = _best(lambda: get_balances_before(bench.member.workshop, END))
            theirs = _best(lambda: _by_hand(bench))
            times = f"selector {ours:7.3f} s   GROUP BY {theirs:7.3f} s   ratio {ours / theirs:4.2f}"
            print(f"balances at {size:9} postings   {times}")
            if ours > AIM * theirs:
                yield f"balances at {size} postings take {ours / theirs:.2f} times the GROUP BY"


def _add_postings(bench: Bench, start: int, size: int) -> None:
    """Insert synthetic postings in bulk: the reads are measured, not the writes."""
    workshop = bench.member.workshop
    if not start:
        for number in range(VESSELS):
            create_vessel(actor=bench.member, now=START, kind=VesselKind.RINSE, name=f"tank {number}")
    vessels = list(Vessel.objects.filter(workshop=workshop).values_list("pk", flat=True))
    components = list(Component.objects.filter(workshop=workshop).exclude(code="").values_list("pk", flat=True))
    entry = Entry.objects.filter(workshop=workshop).order_by("-sequence").values_list("pk", flat=True)[0]
    chance = random.Random(size)  # noqa: S311  (the same figures on every run)
    template = {"workshop": workshop, "entry_id": entry, "sd": 0, "basis": "computed", "boundary": ""}
    for first in range(start, size, 20_000):
        Posting.objects.bulk_create(
            Posting(
                **template,
                transfer=100 + number // len(vessels),  # above the entry's own
                component_id=chance.choice(components),
                vessel_id=vessels[number % len(vessels)],
                amount=chance.randrange(-(10**9), 10**9),
                occurred_at=START + timedelta(minutes=chance.randrange(500_000)),
            )
            for number in range(first, min(first + 20_000, size))
        )
    with connection.cursor() as cursor:
        cursor.execute("ANALYZE")


def _by_hand(bench: Bench) -> list[tuple[object, ...]]:
    with connection.cursor() as cursor:
        cursor.execute(GROUP_BY, [bench.member.workshop.pk, END])
        return list(cursor.fetchall())


def _best(act: Callable[[], object]) -> float:
    """Return the shortest of five times: the others wait for something else."""
    times = []
    for _ in range(5):
        started = time.perf_counter()
        act()
        times.append(time.perf_counter() - started)
    return min(times)
