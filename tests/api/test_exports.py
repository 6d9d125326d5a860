"""The books as files: a stranger with nothing but the file proves the chain, and every amount sums up."""

import csv
import hashlib
import io
import json
from collections.abc import Callable, Iterator
from decimal import Decimal
from typing import Any
from unittest.mock import patch

import pytest
from openpyxl import load_workbook

from chemicals.books.events import BOUNDARIES
from chemicals.journal.selectors import get_head
from chemicals.ledger.models import Books, Posting
from chemicals.workshop.models import Membership
from compliance.documents import books
from tests.api.conftest import Caller, Shop, errors_of

MEDIA = {
    "jsonl": "application/jsonl",
    "csv": "text/csv; charset=utf-8",
    "xlsx": "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet",
}


@pytest.fixture
def busy(api: Caller, shop: Shop) -> Shop:
    """Return a shop in which something of most kinds happened, one of them by mistake."""
    bath, rinse, drum = str(shop.bath.uuid), str(shop.rinse.uuid), str(shop.drum.vessel.uuid)
    api.record("receipt", vessel=str(shop.stock.uuid), amount="5 kg", lot="=1+1")
    api.record("make-up", tank=bath, ingredients=[{"stock": str(shop.stock.uuid), "amount": "4 kg"}], level="20 L")
    api.record("make-up", tank=rinse, level="10 L")
    api.record("run", route=str(shop.route.uuid), charge="2 Ah", parts="Türgriffe \u2028 “12”")
    mistake = api.record("drum-off", source=rinse, target=drum, volume="1 L").json()["uuid"]
    api.record("analysis", vessel=bath, metal="Cu", result="50 g/L", occurred_at="2026-03-01")
    api.record("cancellation", entry=mistake, reason="the wrong drum")
    api.record("opening", vessel=str(shop.acid_stock.uuid), volume="1 L")
    return shop


def lines_of(response: Any) -> Iterator[bytes]:
    """Yield the lines of a file of JSON lines; nothing but a line feed ends one."""
    assert response.status_code == 200
    assert response.headers["Content-Type"] == MEDIA["jsonl"]
    return iter(response.getvalue().removesuffix(b"\n").split(b"\n"))


def table_of(response: Any) -> tuple[dict[str, str], list[dict[str, str]]]:
    """Return what a CSV file says of itself, and its rows."""
    assert response.headers["Content-Type"] == MEDIA["csv"]
    text = response.getvalue().decode("utf-8-sig")
    rows = list(csv.reader(io.StringIO(text)))
    about = [row[0].removeprefix("# ") for row in rows if row[0].startswith("# ")]
    headings, *table = rows[len(about) :]
    said = {name: value for name, _colon, value in (line.partition(": ") for line in about)}
    return said, [dict(zip(headings, row, strict=True)) for row in table]


def test_a_stranger_proves_the_chain_with_the_file_alone(api: Caller, busy: Shop) -> None:
    about, *lines = lines_of(api.get("exports/journal"))
    previous, numbers = bytes(32), []
    for line in lines:
        entry = json.loads(line)
        body = json.dumps(entry["body"], ensure_ascii=False, sort_keys=True, separators=(",", ":")).encode()
        assert line.startswith(b'{"body":' + body + b',"previous_hash":')  # the bytes stand there themselves
        assert entry["previous_hash"] == previous.hex()
        previous = hashlib.sha256(b"\x01" + previous + body).digest()
        assert entry["hash"] == previous.hex()
        numbers.append(entry["body"]["sequence"])
    assert numbers == list(range(1, 9))
    said = json.loads(about)["about"]
    assert (said["chain head"], said["chain hash"]) == (8, previous.hex())
    assert (said["workshop uuid"], said["only"]) == (str(busy.workshop.uuid), "everything")


def test_a_changed_file_does_not_prove_itself(api: Caller, busy: Shop) -> None:
    lines = list(lines_of(api.get("exports/journal")))[1:]
    entry = json.loads(lines[3].replace(b"2 Ah", b"3 Ah"))
    body = json.dumps(entry["body"], ensure_ascii=False, sort_keys=True, separators=(",", ":")).encode()
    digest = hashlib.sha256(b"\x01" + bytes.fromhex(entry["previous_hash"]) + body).hexdigest()
    assert digest != entry["hash"]


def test_the_journal_as_a_table_says_all_that_the_bytes_say(api: Caller, busy: Shop) -> None:
    _about, *lines = lines_of(api.get("exports/journal"))
    bodies = [json.loads(line)["body"] for line in lines]
    said, rows = table_of(api.get("exports/journal", {"as": "csv"}))
    assert said["chain head"] == "8"
    for row, body in zip(rows, bodies, strict=True):
        assert json.loads(row["payload"]) == body["payload"]
        for name in ("format", "workshop", "sequence", "entry", "kind", "occurred_at", "precision", "recorded_at"):
            assert row[name.replace("_", " ")] == str(body[name])
        assert row["recorded by"] == "Olga"
    assert [row["kind"] for row in rows if row["cancelled"] == "yes"] == ["drum off"]


def test_postings_sum_to_zero_in_every_transfer_and_stand_in_both_units(api: Caller, busy: Shop) -> None:
    _said, rows = table_of(api.get("exports/postings", {"as": "csv"}))
    assert len(rows) == Posting._base_manager.count()
    sums: dict[tuple[str, str], int] = {}
    for row in rows:
        key = row["sequence"], row["transfer"]
        sums[key] = sums.get(key, 0) + int(row["amount (base units)"])
        assert Decimal(row["amount"]) == Decimal(row["amount (base units)"]) / 10**6
        assert (row["base unit"], row["unit"]) == {"volume": ("nL", "mL")}.get(row["component"], ("ug", "g"))
        assert bool(row["vessel code"]) == (row["vessel or boundary"] not in BOUNDARIES)
    assert set(sums.values()) == {0}
    assert {row["basis"] for row in rows} == {"observed", "computed", "assumed"}
    assert {row["kind of component"] for row in rows} == {"metal", "volume", "gross mass"}


def test_balances_say_what_is_unknown(api: Caller, busy: Shop) -> None:
    said, rows = table_of(api.get("exports/balances", {"as": "csv"}))
    assert said["just before"].startswith("2026-03-02T15:00")
    held = {(row["vessel"], row["component"]): row for row in rows}
    copper = held["Copper bath", "Cu"]
    assert (copper["known"], copper["unit"]) == ("yes", "g")
    assert Decimal(copper["amount"]) > 900
    other = held["Battery acid, can 1", "everything else"]
    assert (other["known"], other["amount"], other["amount (base units)"], other["unit"]) == ("no", "", "", "")
    booked = sum(p.amount for p in Posting._base_manager.filter(vessel=busy.bath, component__code="Cu"))
    assert int(copper["amount (base units)"]) == booked


def test_balances_are_those_of_the_end_of_a_day(api: Caller, busy: Shop) -> None:
    _said, rows = table_of(api.get("exports/balances", {"as": "csv", "end": "2026-03-01"}))
    assert rows == []
    said, rows = table_of(api.get("exports/balances", {"as": "csv", "end": "2026-03-02", "component": "Cu"}))
    assert said["just before"] == "2026-03-02T23:00:00+00:00"
    assert {row["component"] for row in rows} == {"Cu"}


def test_every_file_follows_the_filters_and_says_so(api: Caller, busy: Shop) -> None:
    query = {"kind": "run", "component": "Cu", "vessel": str(busy.rinse.uuid)}
    about, *lines = map(json.loads, lines_of(api.get("exports/journal", query)))
    assert [line["body"]["kind"] for line in lines] == ["run"]
    assert about["about"]["only"] == f"kind run, vessel {busy.rinse.uuid}, component Cu"
    _about, *postings = map(json.loads, lines_of(api.get("exports/postings", query)))
    assert {row["vessel or boundary"] for row in postings} == {"Drag-out rinse"}
    assert {row["component"] for row in postings} == {"Cu"}
    _about, *balances = map(json.loads, lines_of(api.get("exports/balances", query)))
    assert [(row["vessel"], row["component"]) for row in balances] == [("Drag-out rinse", "Cu")]


@pytest.mark.parametrize("book", books.BOOKS)
def test_a_sheet_holds_what_the_other_files_hold(book: str, api: Caller, busy: Shop) -> None:
    response = api.get(f"exports/{book}", {"as": "xlsx"})
    assert response.headers["Content-Type"] == MEDIA["xlsx"]
    found = load_workbook(io.BytesIO(response.getvalue()))
    headings, *rows = found[book].iter_rows(values_only=True)
    _said, table = table_of(api.get(f"exports/{book}", {"as": "csv"}))
    assert [list(row) for row in table] == [list(headings)] * len(rows)
    about = dict(found["about"].iter_rows(values_only=True))
    assert about["chain hash"] == get_head(busy.workshop)[1]


def test_a_lot_that_looks_like_a_formula_stays_text_in_the_payload(api: Caller, busy: Shop) -> None:
    _said, rows = table_of(api.get("exports/journal", {"as": "csv", "kind": "receipt"}))
    assert json.loads(rows[0]["payload"])["observed"]["lot"] == "=1+1"


def test_a_file_says_up_to_when_the_books_were_worked_out(
    api: Caller, busy: Shop, monkeypatch: pytest.MonkeyPatch
) -> None:
    said, _rows = table_of(api.get("exports/postings", {"as": "csv"}))
    assert said["books worked out"] == "all"
    recomputing = type("Recomputing", (), {"until": Books._base_manager.get().workshop.created_at})()
    monkeypatch.setattr(books, "get_recomputed_to", lambda workshop: recomputing)
    said, _rows = table_of(api.get("exports/postings", {"as": "csv"}))
    assert said["books worked out"] == "before 2026-03-02T15:00:00+00:00"


def test_a_file_is_begun_anew_if_something_was_recorded_meanwhile(api: Caller, busy: Shop) -> None:
    heads = iter([(7, "aa"), (8, "bb"), (8, "bb"), (8, "bb")])
    with patch.object(books, "get_head", lambda workshop: next(heads)):
        about, *lines = lines_of(api.get("exports/journal"))
    assert json.loads(about)["about"]["chain head"] == 8
    assert len(lines) == 8


def test_if_others_never_stop_recording_the_file_is_refused(api: Caller, busy: Shop) -> None:
    heads = iter((number, "aa") for number in range(100))
    with patch.object(books, "get_head", lambda workshop: next(heads)):
        assert "Ask for the file again" in errors_of(api.get("exports/postings"), 409)[""]


def test_what_cannot_be_read_is_refused_by_name(api: Caller) -> None:
    query = {"as": "pdf", "findings": "yes", "cancelled": "1", "by": "moon", "verdict": "fine", "member": "me"}
    assert set(errors_of(api.get("exports/journal", query), 400)) == set(query)
    assert set(errors_of(api.get("exports/journal", {"cursor": "cD0x"}), 400)) == {"cursor"}


def test_an_observer_may_have_them_and_a_stranger_not(
    call: Callable[[Membership], Caller], observer: Membership, stranger: Membership, busy: Shop
) -> None:
    for book in books.BOOKS:
        assert call(observer).get(f"exports/{book}").status_code == 200
        away = call(stranger)
        away.workshop = busy.workshop.uuid
        assert away.get(f"exports/{book}").status_code == 404


def test_the_query_of_a_file_is_one_however_long_it_is(api: Caller, busy: Shop, django_assert_num_queries: Any) -> None:
    for count in (0, 3):
        for number in range(count):
            api.record("level-reading", vessel=str(busy.bath.uuid), volume=f"{19 - number} L")
        with django_assert_num_queries(6):
            list(lines_of(api.get("exports/journal")))
        with django_assert_num_queries(6):
            list(lines_of(api.get("exports/postings")))
        with django_assert_num_queries(9):
            list(lines_of(api.get("exports/balances")))
