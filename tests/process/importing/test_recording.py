"""Imports through their door: all of a file or nothing, once, as if its rows had been recorded one by one."""

from datetime import UTC, datetime, timedelta
from random import Random
from typing import Any
from unittest.mock import patch
from uuid import uuid4

import pytest
from django_scopes import scope

from chemicals.books.clearance import NOT_ASKED
from chemicals.jobs.models import State
from chemicals.jobs.services import run_next
from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_body
from chemicals.journal.verify import verify_chain
from chemicals.ledger import late
from chemicals.ledger.models import Memory
from chemicals.ledger.periods import close_period
from chemicals.ledger.selectors import get_recomputed_to
from chemicals.process.importing.columns import ColumnMap
from chemicals.process.importing.files import add_import, choose_columns, find_map, read_table
from chemicals.process.models import Import
from chemicals.process.selectors import get_import_for, list_imports_for
from chemicals.process.services import record_past
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotFoundError, NotPermittedError
from chemicals.workshop.models import Membership, Role
from compliance.clearance import importing
from compliance.clearance.importing import RefusedImportError, preview_import, record_import
from tests.journal.test_concurrency import at_once
from tests.process.conftest import furnish
from tests.process.importing.sheets import lines
from tests.process.shop import Shop

HEADINGS = (
    "Key,Date,Verb,Vessel,Tank,Source,Amount,Level,Volume,Route,Charge,"
    "ingredients 1 stock,ingredients 1 amount,Analysis,Metal,Result"
)
STORY = (
    HEADINGS,
    "r1,2026-01-05 09:00,receipt,Jar,,,5 kg,,,,,,,,,",
    "m1,2026-01-05 10:00,make-up,,Copper,,,20 L,,,,Jar,4 kg,,,",
    "m2,2026-01-05 10:05,make-up,,First rinse,,,10 L,,,,,,,,",
    "p1,2026-01-06 09:00,run,,,,,,,Plate,1.8 Ah,,,,,",
    "p2,2026-01-07 09:00,run,,,,,,,Plate,2.4 Ah,,,,,",
    "a1,2026-01-08,analysis,Copper,,,,,,,,,,,Cu,48 g/L",
    ",,acceptance,,,,,,,,,,,a1,,",
    "l1,2026-01-09 09:00,level-reading,Copper,,,,,19.2 L,,,,,,,",
    "t1,2026-01-09 09:30,top-up,,Copper,First rinse,,,0.5 L,,,,,,,",
)
FILE = lines(*STORY)


def upload(shop: Shop, data: bytes = FILE, name: str = "book.csv") -> Import:
    return add_import(actor=shop.member, now=shop.now, name=name, data=data)


def record(shop: Shop, data: bytes = FILE, **more: Any) -> Import:
    """Import a file as its headings say."""
    found = upload(shop, data)
    chosen = find_map(found, read_table(found))
    return record_import(**{"actor": shop.member, "now": shop.now, "upload": found, "chosen": chosen, **more})


def entries(shop: Shop) -> list[Entry]:
    with scope(workshop=shop.member.workshop):
        return list(Entry.objects.order_by("sequence"))


def tell_one_by_one(shop: Shop) -> None:
    """Record the story as if somebody had been there."""

    def at(day: int, hour: int, minute: int = 0) -> float:
        return (shop.now - datetime(2026, 1, day, hour, minute, tzinfo=UTC)) / timedelta(days=1)

    shop.record("receipt", days_ago=at(5, 8), vessel="Jar", amount="5 kg")
    made = [{"stock": "Jar", "amount": "4 kg"}]
    shop.record("make-up", days_ago=at(5, 9), tank="Copper", ingredients=made, level="20 L")
    shop.record("make-up", days_ago=at(5, 9, 5), tank="First rinse", level="10 L")
    shop.record("run", days_ago=at(6, 8), route="Plate", charge="1.8 Ah")
    shop.record("run", days_ago=at(7, 8), route="Plate", charge="2.4 Ah")
    shop.record("analysis", days_ago=at(8, 11), label="a1", vessel="Copper", metal="Cu", result="48 g/L")
    shop.record("acceptance", analysis="a1")
    shop.record("level-reading", days_ago=at(9, 8), vessel="Copper", volume="19.2 L")
    shop.record("top-up", days_ago=at(9, 8, 30), tank="Copper", source="First rinse", volume="0.5 L")


@pytest.fixture
def other_shop(stranger: Membership, now: datetime) -> Shop:
    """The same shop in another workshop, of the same zone."""
    stranger.workshop.time_zone = "Europe/Berlin"
    stranger.workshop.save()
    return furnish(Shop(stranger, now))


def test_an_import_says_what_records_one_by_one_say(empty_shop: Shop, other_shop: Shop) -> None:
    done = record(empty_shop)
    tell_one_by_one(other_shop)
    assert empty_shop.ledger() == other_shop.ledger()
    assert empty_shop.is_proved()
    assert verify_chain(empty_shop.member.workshop) == []
    assert (done.first, done.last, done.imported_at) == (1, 9, empty_shop.now)


def test_every_entry_says_that_it_is_imported_from_which_file_and_row(empty_shop: Shop) -> None:
    done = record(empty_shop)
    bodies = [read_body(entry) for entry in entries(empty_shop)]
    assert {body.clearance.verdict for body in bodies} == {NOT_ASKED}
    assert [body.clearance.reasons[0] for body in bodies[:2]] == [
        f"imported from row {row} of the file {done.file.sha256}: nobody was asked" for row in (2, 3)
    ]
    assert {body.attachments for body in bodies} == {(done.file.sha256,)}


def test_the_order_of_rows_does_not_matter(empty_shop: Shop, other_shop: Shop) -> None:
    heading, *rows = STORY
    Random(7).shuffle(rows)  # noqa: S311  (the same order on every run)
    record(empty_shop)
    record(other_shop, lines(heading, *rows))
    assert empty_shop.ledger() == other_shop.ledger()


def test_past_records_fold_before_what_was_recorded_later(shop: Shop, other_shop: Shop) -> None:
    """The shop has been kept since ten days ago; what the file tells is older than that, and younger."""
    data = lines(
        "Date,Verb,Route,Charge,Vessel,Volume",
        f"{shop.now - timedelta(days=5):%Y-%m-%d %H:%M},run,Plate,1.8 Ah,,",
        f"{shop.now - timedelta(days=300):%Y-%m-%d},opening,,,Second rinse,8 L",
        f"{shop.now - timedelta(days=2):%Y-%m-%d %H:%M},run,Plate,2 Ah,,",
    )
    shop.record("level-reading", days_ago=3, vessel="Copper", volume="19 L")
    record(shop, data)
    assert shop.is_proved()
    assert len(entries(shop)) == 10


@pytest.mark.parametrize(
    "row",
    [
        "x,nonsense,run,,,,,,,Plate,1 Ah,,,,,",
        "r1,2026-01-10,receipt,Jar,,,1 kg,,,,,,,,,",
        ",2026-01-10,run,,,,,,,,,,,,,",
    ],
)
def test_one_wrong_row_keeps_all_of_them_out(empty_shop: Shop, row: str) -> None:
    before = empty_shop.ledger()
    with pytest.raises(RefusedImportError) as refused:
        record(empty_shop, lines(*STORY, row))
    assert all(error.field.startswith("rows.11.") for error in refused.value.errors)
    assert entries(empty_shop) == []
    assert empty_shop.ledger() == before
    assert list_imports_for(empty_shop.member).get().imported_at is None


def test_a_failure_at_the_end_leaves_nothing_behind(empty_shop: Shop) -> None:
    with (
        patch("chemicals.process.services.project_entries", side_effect=RuntimeError("the lights went out")),
        pytest.raises(RuntimeError),
    ):
        record(empty_shop)
    assert entries(empty_shop) == []
    assert list_imports_for(empty_shop.member).get().imported_at is None
    record(empty_shop)
    assert len(entries(empty_shop)) == 9


def test_the_same_file_is_imported_once(empty_shop: Shop) -> None:
    first = record(empty_shop)
    again = record(empty_shop, now=empty_shop.now + timedelta(days=1))
    assert again == first
    assert again.imported_at == empty_shop.now
    assert len(entries(empty_shop)) == 9


def test_two_who_import_the_same_file_at_once_import_it_once(empty_shop: Shop) -> None:
    """Both have read it before either has written."""
    found = upload(empty_shop)
    chosen = find_map(found, read_table(found))
    made = preview_import(empty_shop.member, empty_shop.now, found, chosen).made
    for _ in range(2):
        importing.write_import(actor=empty_shop.member, now=empty_shop.now, upload=found, made=made)
    assert len(entries(empty_shop)) == 9


@pytest.mark.django_db(transaction=True)
def test_threads_that_import_the_same_file_and_others(empty_shop: Shop) -> None:
    others = [lines("Date,Verb,Vessel,Amount", f"2026-01-1{number},receipt,Jar,1 kg") for number in range(2)]
    files = [FILE, FILE, *others]

    def work(number: int) -> None:
        record(empty_shop, files[number])

    at_once(len(files), work)
    assert [entry.sequence for entry in entries(empty_shop)] == list(range(1, 12))
    assert empty_shop.is_proved()
    assert verify_chain(empty_shop.member.workshop) == []


def test_a_row_is_known_by_its_key_in_every_file(empty_shop: Shop) -> None:
    record(empty_shop)
    with pytest.raises(RefusedImportError) as refused:
        record(empty_shop, lines(*STORY[:2], "r2,2026-01-10,receipt,Jar,,,1 kg,,,,,,,,,"))
    assert [(error.field, error.message) for error in refused.value.errors] == [
        ("rows.2.Key", "This was imported already: it is entry 1. Leave the row out.")
    ]
    record(empty_shop, lines(STORY[0], "r2,2026-01-10,receipt,Jar,,,1 kg,,,,,,,,,"))
    assert len(entries(empty_shop)) == 10


def test_a_later_file_may_speak_of_an_analysis_by_its_key(empty_shop: Shop) -> None:
    record(empty_shop, lines(*(row for row in STORY if "acceptance" not in row)))
    record(empty_shop, lines("Verb,Analysis,Date", "acceptance,a1,"))
    assert entries(empty_shop)[-1].kind == "acceptance"
    assert empty_shop.is_proved()


def test_rows_without_a_key_may_be_the_same_in_two_files(empty_shop: Shop) -> None:
    rows = ("Date,Verb,Vessel,Amount", "2026-01-10,receipt,Jar,1 kg", "2026-01-10,receipt,Jar,1 kg")
    record(empty_shop, lines(*rows))
    record(empty_shop, lines(*rows, ""))
    assert len(entries(empty_shop)) == 4


def test_a_period_that_was_closed_meanwhile_takes_nothing(shop: Shop) -> None:
    data = lines("Date,Verb,Vessel,Amount", "2026-01-10,receipt,Jar,1 kg", "2026-02-28,receipt,Jar,1 kg")
    found = upload(shop, data)
    made = preview_import(shop.member, shop.now, found, find_map(found, read_table(found))).made
    close(shop)
    before = len(entries(shop))
    with pytest.raises(InvalidInputError, match="The books are closed"):
        importing.write_import(actor=shop.member, now=shop.now, upload=found, made=made)
    assert len(entries(shop)) == before


def close(shop: Shop) -> None:
    """Close the books until the first of February, Berlin time."""
    Membership.objects.filter(pk=shop.member.pk).update(role=Role.OWNER)
    shop.member.refresh_from_db()
    close_period(actor=shop.member, now=shop.now, key=uuid4(), until=datetime(2026, 1, 31, 23, tzinfo=UTC))


# --- what is kept between upload and import ---


def test_nothing_is_recorded_by_an_upload(empty_shop: Shop) -> None:
    first, second = upload(empty_shop), upload(empty_shop, name="the same again.csv")
    assert first == second
    assert (first.file.name, first.file.media_type, first.mapping) == ("book.csv", "text/csv", {})
    assert entries(empty_shop) == []


def test_what_is_no_table_is_not_kept(empty_shop: Shop) -> None:
    with pytest.raises(InvalidInputError, match="This file is empty"):
        upload(empty_shop, b"")
    assert list(list_imports_for(empty_shop.member)) == []


def test_what_columns_mean_is_remembered_with_who_and_when(empty_shop: Shop, owner: Membership) -> None:
    heading = "Tag;Gebinde;Menge [kg]"
    chosen = ColumnMap({"Tag": "when", "Gebinde": "vessel", "Menge [kg]": "amount"}, "receipt", "day first", "comma")
    first = upload(empty_shop, lines(heading, "5.1.2026;Jar;1,5"))
    assert find_map(first, read_table(first)).used == {}
    kept = choose_columns(actor=owner, now=empty_shop.now, upload=first, chosen=chosen)
    assert (kept.changed_by, kept.changed_at) == (owner, empty_shop.now)
    second = upload(empty_shop, lines(heading, "6.1.2026;Jar;2,5"))
    assert find_map(second, read_table(second)) == chosen
    record_import(actor=empty_shop.member, now=empty_shop.now, upload=second, chosen=chosen)
    assert len(entries(empty_shop)) == 1


def test_what_the_columns_of_an_imported_file_mean_is_settled(empty_shop: Shop) -> None:
    done = record(empty_shop)
    with pytest.raises(ConflictError, match="imported"):
        choose_columns(actor=empty_shop.member, now=empty_shop.now, upload=done, chosen=ColumnMap({}))
    assert get_import_for(empty_shop.member, done.uuid).mapping["columns"]


def test_an_observer_imports_nothing_and_a_stranger_finds_nothing(
    empty_shop: Shop, observer: Membership, stranger: Membership
) -> None:
    found = upload(empty_shop)
    chosen = find_map(found, read_table(found))
    for who, refusal in ((observer, NotPermittedError), (stranger, NotPermittedError)):
        with pytest.raises(refusal):
            record_import(actor=who, now=empty_shop.now, upload=found, chosen=chosen)
        with pytest.raises(refusal):
            choose_columns(actor=who, now=empty_shop.now, upload=found, chosen=chosen)
    with pytest.raises(NotPermittedError):
        add_import(actor=observer, now=empty_shop.now, name="x.csv", data=FILE)
    with pytest.raises(NotPermittedError):
        record_past(actor=observer, now=empty_shop.now, facts=[])
    with pytest.raises(NotFoundError):
        get_import_for(stranger, found.uuid)
    assert entries(empty_shop) == []


# --- large files: a job does it ---


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
    monkey = lines("Date,Verb,Vessel,Amount", *rows, "2026-01-16,receipt,Jar,1 kg")
    waiting = record(shop, monkey)
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
