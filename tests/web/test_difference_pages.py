"""The difference between two dates on its page and in its files."""

import re
from decimal import Decimal
from typing import Any
from uuid import uuid4

from chemicals.process.inputs import LevelInput, OpeningInput
from chemicals.science.quantity import parse
from tests.web.conftest import Line, Say, Visitor, text_of
from tests.web.test_lists import rows_of


def plate(visit: Visitor, filled: Line) -> None:
    visit.post("record", "run", key=uuid4(), route=filled.route.uuid, current="1 A", time="1 h", step="save")


def test_it_opens_on_the_main_metal_and_says_what_explains_the_difference(visit: Visitor, filled: Line) -> None:
    plate(visit, filled)
    text = text_of(visit.get("difference"))
    assert "<h2>Copper</h2>" in text
    assert "0 g before," in text
    assert re.search(r"received from suppliers <[^>]*>receipt</span></th> <td[^>]*>\+1\.27\d kg", text)
    assert re.search(r"went onto and with parts <[^>]*>run</span></th> <td[^>]*>−1\.18\d ± [\d.]+ g", text)
    ledger = visit.address("ledger", filled.bath.uuid)
    assert f"{ledger}?component=Cu&amp;since=2026-01-01&amp;until=2026-03-02" in text


def test_everything_is_one_section_for_each_component(visit: Visitor, filled: Line) -> None:
    text = text_of(visit.get("difference", query="?component=everything"))
    assert [name for name in re.findall(r"<h2>([^<]*)</h2>", text) if name != "As files"] == [
        "Copper", "Liquid", "Weight in all",
    ]  # fmt: skip


def test_unknown_is_a_word_and_names_its_vessel(visit: Visitor, filled: Line, say: Say) -> None:
    say(OpeningInput(vessel=filled.cyanide_drum.vessel.uuid, volume=parse("5 L", "volume")))
    text = text_of(visit.get("difference"))
    assert "the difference is unknown. Nobody knows what is in: Can 2. What was recorded sums to +1.2" in text
    assert "recorded in all" in text
    address = visit.address("ledger", filled.cyanide_drum.vessel.uuid)
    page = visit.client.get(f"{address}?component=Cu&since=2026-01-01&until=2026-03-02")
    assert "<dt>at the end</dt> <dd>unknown</dd>" in text_of(page)


def test_the_files_add_up_to_the_last_digit(visit: Visitor, filled: Line) -> None:
    plate(visit, filled)
    query = "?component=everything&as=csv"
    vessels, explained = (
        rows_of(visit.get("difference", query=f"{query}&list={name}")) for name in ("vessels", "explained")
    )
    for what in ("Cu", "volume", "gross mass"):
        difference = sum(Decimal(row["difference"]) for row in vessels if row["what"] == what)
        assert difference == sum(Decimal(row["came or went"]) for row in explained if row["what"] == what) > 0
    for row in vessels:
        assert Decimal(row["before"]) + Decimal(row["came"]) - Decimal(row["went"]) == Decimal(row["after"])
    assert {(row["boundary"], row["kind of entry"]) for row in explained} >= {("supplier", "receipt"), ("parts", "run")}


def test_two_days_turned_round_are_refused(visit: Visitor, filled: Line) -> None:
    page = visit.get("difference", query="?since=2026-03-01&until=2026-02-01")
    assert page.status_code == 400
    assert "ends before it begins" in text_of(page)
    assert visit.get("difference", query="?component=Xx").status_code == 400


def test_balance_links_it_for_the_same_metal_and_days(visit: Visitor, filled: Line) -> None:
    page = visit.get("balance").content.decode()
    assert f"{visit.address('difference')}?component=Cu&amp;since=2026-01-01&amp;until=2026-03-02" in page


def test_empty_books_say_so(visit: Visitor) -> None:
    assert "Nothing is in the books yet." in text_of(visit.get("difference"))


def test_it_asks_as_often_for_three_rows_as_for_one(
    visit: Visitor, filled: Line, say: Say, django_assert_num_queries: Any
) -> None:
    for litres in (14, 13, 12):
        with django_assert_num_queries(15):
            assert visit.get("difference", query="?component=everything").status_code == 200
        say(LevelInput(vessel=filled.bath.uuid, volume=parse(f"{litres} L", "volume")))
