"""Files that are too large for a request: a job checks every row and records all of them, or none."""

from datetime import timedelta
from unittest.mock import patch

import pytest
from django_scopes import scope

from chemicals.books import fold
from chemicals.jobs.models import State
from chemicals.jobs.services import run_next
from chemicals.ledger import late
from chemicals.ledger.models import Books, Memory
from chemicals.ledger.selectors import get_recomputed_to
from chemicals.process.importing.files import choose_columns, find_map, read_table
from chemicals.process.selectors import get_import_for, list_imports_for
from chemicals.workshop.errors import ConflictError
from compliance.clearance import importing
from compliance.clearance.importing import RefusedImportError, preview_import
from tests.process.importing.sheets import lines
from tests.process.importing.story import STORY, close, entries, record, tell_one_by_one
from tests.process.shop import Shop


@pytest.fixture
def small_requests(monkeypatch: pytest.MonkeyPatch) -> None:
    """Let a request read four rows and fold four entries."""
    monkeypatch.setattr(importing, "AT_ONCE", 4)
    monkeypatch.setattr(late, "LATE_LIMIT", 4)


def work(shop: Shop) -> int:
    """Let the worker do everything that is due; return how many steps it took."""
    steps = 0
    while run_next(now=shop.now + timedelta(minutes=1), worker="w"):
        steps += 1
    return steps


@pytest.mark.usefixtures("small_requests")
def test_a_large_file_is_left_to_a_job_and_the_books_to_another(empty_shop: Shop, other_shop: Shop) -> None:
    left = record(empty_shop)
    assert left.waits
    assert entries(empty_shop) == []
    assert record(empty_shop) == left
    run_next(now=empty_shop.now, worker="w")
    done = get_import_for(empty_shop.member, left.uuid)
    assert (done.first, done.last, done.waits) == (1, 9, False)
    assert get_recomputed_to(empty_shop.member.workshop) is not None
    assert work(empty_shop) > 0
    assert get_recomputed_to(empty_shop.member.workshop) is None
    tell_one_by_one(other_shop)
    assert empty_shop.ledger() == other_shop.ledger()
    assert empty_shop.is_proved()


@pytest.mark.usefixtures("small_requests")
def test_what_may_be_in_a_vessel_is_remembered_before_the_books_are_recomputed(empty_shop: Shop) -> None:
    record(empty_shop)
    run_next(now=empty_shop.now, worker="w")
    with scope(workshop=empty_shop.member.workshop):
        marks = dict(Memory.objects.values_list("vessel__name", "poured"))
    work(empty_shop)
    with scope(workshop=empty_shop.member.workshop):
        later = dict(Memory.objects.values_list("vessel__name", "poured"))
    assert later["First rinse"] == marks["First rinse"] != []
    assert all(set(later[name]) <= set(marks[name]) for name in later)


@pytest.mark.usefixtures("small_requests")
def test_a_mistake_far_below_is_found_by_the_job_and_nothing_is_recorded(empty_shop: Shop) -> None:
    left = record(empty_shop, lines(*STORY, ",2026-01-10,receipt,Jer,,,1 kg,,,,,,,,,"))
    work(empty_shop)
    refused = get_import_for(empty_shop.member, left.uuid)
    assert (refused.imported_at, refused.waits, refused.wrong) == (None, False, 1)
    assert refused.errors == [[11, "Vessel", 'There is no vessel "Jer". Did you mean "Jar"?']]
    assert entries(empty_shop) == []
    chosen = find_map(refused, read_table(refused))
    again = choose_columns(actor=empty_shop.member, now=empty_shop.now, upload=refused, chosen=chosen)
    assert (again.errors, again.wrong) == ([], 0)


@pytest.mark.usefixtures("small_requests")
def test_a_mistake_near_the_top_is_said_at_once(empty_shop: Shop) -> None:
    heading, first, *rest = STORY
    with pytest.raises(RefusedImportError):
        record(empty_shop, lines(heading, first.replace("Jar", "Jer"), *rest))
    assert not list_imports_for(empty_shop.member).get().waits


@pytest.mark.usefixtures("small_requests")
def test_a_period_that_closes_while_the_job_waits_is_said_on_the_import(shop: Shop) -> None:
    rows = [f"2026-01-{day},receipt,Jar,1 kg" for day in range(10, 16)]
    left = record(shop, lines("Date,Verb,Vessel,Amount", *rows))
    work(shop)
    more = lines("Date,Verb,Vessel,Amount", *rows, "2026-01-16,receipt,Jar,1 kg")
    waiting = record(shop, more)
    close(shop)
    before = len(entries(shop))
    work(shop)
    refused = get_import_for(shop.member, waiting.uuid)
    assert get_import_for(shop.member, left.uuid).imported_at is not None
    assert (refused.imported_at, refused.wrong) == (None, 7)
    assert len(entries(shop)) == before


@pytest.mark.usefixtures("small_requests")
def test_a_period_that_closes_while_the_job_writes_is_said_too(shop: Shop) -> None:
    rows = [f"2026-01-{day},receipt,Jar,1 kg" for day in range(10, 16)]
    left = record(shop, lines("Date,Verb,Vessel,Amount", *rows))
    with patch("compliance.clearance.importing.record_past", side_effect=ConflictError("Others were quicker.")):
        work(shop)
    refused = get_import_for(shop.member, left.uuid)
    assert refused.errors == [[0, "", "Others were quicker."]]
    assert refused.imported_at is None


@pytest.mark.usefixtures("small_requests")
def test_a_job_that_gives_up_can_be_asked_again(empty_shop: Shop) -> None:
    left = record(empty_shop)
    assert left.job is not None
    left.job.state, left.job.finished_at = State.FAILED, empty_shop.now
    left.job.save()
    assert get_import_for(empty_shop.member, left.uuid).failed
    again = record(empty_shop)
    assert again.waits
    assert again.job != left.job


@pytest.mark.usefixtures("small_requests")
def test_a_job_that_comes_too_late_writes_nothing(empty_shop: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    left = record(empty_shop)
    chosen = find_map(left, read_table(left))
    monkeypatch.setattr(importing, "AT_ONCE", 100)
    made = preview_import(empty_shop.member, empty_shop.now, left, chosen).made
    importing.write_import(actor=empty_shop.member, now=empty_shop.now, upload=left, made=made)
    work(empty_shop)
    assert len(entries(empty_shop)) == 9
    assert empty_shop.is_proved()


@pytest.mark.usefixtures("small_requests")
def test_a_small_file_waits_for_the_books_where_a_job_is_at_them(empty_shop: Shop) -> None:
    record(empty_shop)
    run_next(now=empty_shop.now, worker="w")
    behind = get_recomputed_to(empty_shop.member.workshop)
    record(empty_shop, lines("Date,Verb,Vessel,Amount", "2026-01-04,receipt,Jar,1 kg", "2026-01-20,receipt,Jar,1 kg"))
    now_behind = get_recomputed_to(empty_shop.member.workshop)
    assert behind is not None
    assert now_behind is not None
    assert now_behind.until < behind.until
    work(empty_shop)
    assert len(entries(empty_shop)) == 11
    assert empty_shop.is_proved()


def test_books_of_another_version_of_the_fold_are_folded_again_as_a_whole(shop: Shop) -> None:
    with scope(workshop=shop.member.workshop):
        Books.objects.update(fold_version=fold.VERSION - 1)
        record(shop, lines("Date,Verb,Vessel,Amount", "2026-02-27,receipt,Jar,1 kg"))
        assert Books.objects.get().fold_version == fold.VERSION
    assert shop.is_proved()


def test_what_moves_nothing_leaves_the_books_alone(shop: Shop) -> None:
    before = shop.ledger()
    record(shop, lines("Date,Verb,Vessel,Metal,Result", "2026-01-04,analysis,Copper,Cu,50 g/L"))
    assert shop.ledger() == before
    assert shop.is_proved()
