"""Closed periods under other versions of the fold, and their proof by digest."""

from collections.abc import Callable
from datetime import UTC, datetime, timedelta
from typing import Any

import pytest
from django_scopes import scope

from chemicals.jobs import services as jobs
from chemicals.ledger import late, periods
from chemicals.ledger.models import ClosingHolding, Content, Finding, Period, Posting
from chemicals.ledger.services import refold
from chemicals.workshop.errors import ConflictError
from chemicals.workshop.models import Membership, Workshop
from tests.ledger.closing import BEGUN, close, fold_by_another_version, postings_of, problems, refusal, reopen
from tests.process.shop import Shop

# --- fold versions ---------------------------------------------------------------------------------------------------


def test_another_version_of_the_fold_leaves_closed_periods_alone(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    close(week)
    kept = postings_of(week, "run 4")
    assert postings_of(week, "run 2") == kept > 0
    fold_by_another_version(monkeypatch)
    (_, message), *more = problems(week)
    assert "Run: manage.py upgrade" in message
    assert more == []
    refold(week.member.workshop)
    assert (postings_of(week, "run 4"), postings_of(week, "run 2")) == (kept, 0)
    assert week.is_proved()


def test_a_record_brings_outdated_books_up_to_date(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    fold_by_another_version(monkeypatch)
    week.record("level-reading", vessel="Copper", volume="19 L")
    assert postings_of(week, "run 2") == 0
    assert week.is_proved()


def test_nothing_is_closed_on_outdated_books(week: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    fold_by_another_version(monkeypatch)
    assert "manage.py upgrade" in refusal(lambda: close(week), ConflictError)


@pytest.mark.parametrize("limit", [100, 2], ids=["at once", "by the job"])
def test_a_period_that_another_version_closed_is_folded_again_when_it_is_opened(
    week: Shop, owner: Membership, monkeypatch: pytest.MonkeyPatch, limit: int
) -> None:
    first, last = close(week, BEGUN - timedelta(days=2)), close(week)
    kept = postings_of(week, "run 6")
    fold_by_another_version(monkeypatch)
    refold(week.member.workshop)
    monkeypatch.setattr(late, "LATE_LIMIT", limit)
    reopen(owner, last)
    while jobs.run_next(now=week.now + timedelta(days=1), worker="w1"):
        pass
    assert [postings_of(week, f"run {day}") for day in (6, 4, 3, 1)] == [kept, 0, 0, 0]
    assert week.is_proved()
    reopen(owner, first)
    while jobs.run_next(now=week.now + timedelta(days=1), worker="w1"):
        pass
    assert postings_of(week, "run 6") == 0
    assert week.is_proved()


# --- proof -----------------------------------------------------------------------------------------------------------


def spoil_posting(shop: Shop) -> None:
    Posting.objects.filter(entry=shop.entries["run 4"], sd__gt=0).update(sd=7)


def drop_posting(shop: Shop) -> None:
    Posting.objects.filter(entry=shop.entries["run 4"]).first().delete()  # type: ignore[union-attr]


def spoil_content(shop: Shop) -> None:
    Content.objects.filter(entry=shop.entries["run 4"], component__code="Cu").update(known_part=1)


def add_finding(shop: Shop) -> None:
    entry = shop.entries["run 4"]
    Finding.objects.create(workshop=entry.workshop, entry=entry, code="x", occurred_at=entry.occurred_at)


def move_posting(shop: Shop) -> None:
    Posting.objects.filter(entry=shop.entries["run 4"]).update(occurred_at=shop.now)


SPOILED = [spoil_posting, drop_posting, spoil_content, add_finding, move_posting]
CLOSED = "What the ledger keeps of this closed period is not what was closed."
BROKEN = "What the ledger keeps of this entry is not what follows from it."


@pytest.mark.parametrize("spoil", SPOILED)
def test_a_closed_period_that_was_changed_is_named_with_its_entry(week: Shop, spoil: Callable[[Shop], None]) -> None:
    period = close(week)
    with scope(workshop=week.member.workshop):
        spoil(week)
    assert problems(week) == [(period.closing.sequence, CLOSED), (week.entries["run 4"].sequence, BROKEN)]


@pytest.mark.parametrize("spoil", SPOILED)
def test_a_closed_period_of_another_version_is_proved_by_its_digest(
    week: Shop, monkeypatch: pytest.MonkeyPatch, spoil: Callable[[Shop], None]
) -> None:
    """No fold can say what the rows should be: the digest can say that they are not what they were."""
    period = close(week)
    fold_by_another_version(monkeypatch)
    refold(week.member.workshop)
    assert problems(week) == []
    with scope(workshop=week.member.workshop):
        spoil(week)
    assert (period.closing.sequence, CLOSED) in problems(week)


def test_a_changed_closing_holding_is_named(week: Shop) -> None:
    period = close(week)
    with scope(workshop=week.member.workshop):
        ClosingHolding.objects.filter(component__code="Cu").update(amount=1)
    found = problems(week)
    assert found[0] == (period.closing.sequence, "What was held at the end of this period is not what was closed.")


@pytest.mark.parametrize(
    "changes",
    [{"until": BEGUN + timedelta(days=1)}, {"after": BEGUN - timedelta(days=9)}, {"followed_sha256": "0" * 64},
     {"holdings_sha256": "0" * 64}, {"sequence": 3}, {"fold_version": 9}],
    ids=lambda changes: next(iter(changes)),
)  # fmt: skip
def test_a_period_that_is_not_what_its_entry_says_is_named(week: Shop, changes: dict[str, Any]) -> None:
    period = close(week)
    with scope(workshop=week.member.workshop):
        Period.objects.update(**changes)
    assert problems(week)[0] == (period.closing.sequence, "The ledger says another closed period than this entry.")


def test_a_missing_period_and_one_too_many_are_named(week: Shop) -> None:
    period = close(week)
    with scope(workshop=week.member.workshop):
        ClosingHolding.objects.all().delete()
        Period.objects.all().delete()
        other = week.entries["run 1"]
        columns = {"followed_sha256": "", "holdings_sha256": "", "sequence": 1, "fold_version": 1}
        Period.objects.create(workshop=other.workshop, closing=other, until=BEGUN, **columns)
    missing, surplus = problems(week)
    assert missing == (period.closing.sequence, "The closed period of this entry is missing in the ledger.")
    assert surplus[1].startswith("The ledger has a closed period that no entry speaks of")


def test_a_period_that_is_said_to_be_open_again_is_named(week: Shop) -> None:
    period = close(week)
    with scope(workshop=week.member.workshop):
        Period.objects.update(reopening=week.entries["run 1"])
    assert (period.closing.sequence, "The ledger says another closed period than this entry.") in problems(week)


@pytest.mark.parametrize("event", ["run", "cancellation"])
def test_an_entry_that_was_slipped_into_a_closed_period_is_named(
    week: Shop, monkeypatch: pytest.MonkeyPatch, event: str
) -> None:
    close(week)
    with monkeypatch.context() as careless:
        careless.setattr(periods, "require_open", lambda entry, event: None)
        if event == "run":
            slipped = week.record("run", days_ago=4.5, route="Plate", charge="10 Ah")
        else:
            slipped = week.record("cancellation", entry="run 4", reason="slipped in")
    assert (slipped.sequence, "This was recorded in a closed period.") in problems(week)


def test_what_another_workshop_closes_is_not_ours(week: Shop, stranger: Membership) -> None:
    other = Shop(stranger, week.now)
    other.tank("Copper", "20 L")
    other.record("opening", vessel="Copper", days_ago=5, volume="1 L", complete=True)
    midnight = datetime(2026, 2, 28, 5, tzinfo=UTC)  # in New York
    close(other, midnight)
    week.record("level-reading", days_ago=4, vessel="Copper", volume="19 L")
    assert Workshop.objects.count() == 2
    assert week.is_proved()
    assert other.is_proved()
