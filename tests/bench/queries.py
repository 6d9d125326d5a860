"""Query counts of a record and of the reads, with 10 and with 10 000 entries: they must not grow."""

from collections.abc import Callable, Iterator
from datetime import timedelta

from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scopes_disabled

from chemicals.balance.selectors import get_book_balance
from chemicals.journal.selectors import list_entries_for
from chemicals.ledger.selectors import get_balances_before, list_held
from tests.bench.scenario import START, Bench, make_bench

FEW, MANY = 10, 10_000


def measure() -> Iterator[str]:
    """Print the counts at both sizes; yield a sentence for each that grew."""
    with scopes_disabled():
        bench = make_bench("queries")
        while bench.minutes < FEW:
            bench.run()
        few = _counts(bench)
        while bench.minutes < MANY:
            bench.run()
        many = _counts(bench)
    for name, count in few.items():
        print(f"queries of {name:16} at {FEW}: {count:3}   at {MANY}: {many[name]:3}")
        if many[name] != count:
            yield f"queries of {name} grew from {count} to {many[name]}"


def _counts(bench: Bench) -> dict[str, int]:
    end = START + timedelta(days=365)
    reads: dict[str, Callable[[], object]] = {
        "a record": bench.run,
        "balances": lambda: get_balances_before(bench.member.workshop, end),
        "a page of entries": lambda: list(list_entries_for(bench.member)[:50]),
        "a vessel": lambda: list_held(bench.bath.vessel),
        "a book balance": lambda: get_book_balance(bench.member, "Cu", START, end),
    }
    counts = {}
    for name, read in reads.items():
        with CaptureQueriesContext(connection) as captured:
            read()
        counts[name] = len(captured)
    return counts
