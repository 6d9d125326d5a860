"""Imports through their door: all of a file or nothing, once, as if its rows had been recorded one by one."""

from datetime import timedelta
from random import Random
from unittest.mock import patch

import pytest

from chemicals.books.clearance import NOT_ASKED
from chemicals.journal.selectors import read_body
from chemicals.journal.verify import verify_chain
from chemicals.process.importing.columns import ColumnMap
from chemicals.process.importing.files import add_import, choose_columns, find_map, read_table
from chemicals.process.selectors import get_import_for, list_imports_for
from chemicals.process.services import record_past
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotFoundError, NotPermittedError
from chemicals.workshop.models import Membership
from compliance.clearance import importing
from compliance.clearance.importing import RefusedImportError, preview_import, record_import
from tests.journal.test_concurrency import at_once
from tests.process.importing.sheets import lines
from tests.process.importing.story import FILE, STORY, close, entries, record, tell_one_by_one, upload
from tests.process.shop import Shop


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
