"""Rows as entries: what is understood, and everything that is wrong, by row and column."""

from datetime import UTC, datetime
from typing import Any

import pytest

from chemicals.books import events
from chemicals.books.occurred import DAY, MINUTE, Occurred
from chemicals.ledger.selectors import get_vessel_for
from chemicals.process.importing.columns import COMMA, DAY_FIRST, MONTH_FIRST, ColumnMap, guess
from chemicals.process.importing.table import open_table
from chemicals.process.importing.understanding import Understood
from tests.process.importing.reading import read
from tests.process.importing.sheets import lines, xlsx
from tests.process.shop import KG, G, Shop


def events_of(found: Understood) -> list[events.Event]:
    assert found.errors == ()
    return [each.event for each in found.made]


def test_each_row_is_an_entry_of_its_own_verb(shop: Shop) -> None:
    found = read(
        shop,
        lines(
            "Date,Verb,Vessel,Tank,Source,Amount,Volume,Route,Charge",
            "2026-02-10,receipt,Jar,,,2 kg,,,",
            "2026-02-11,top-up,,Copper,First rinse,,0.5 L,,",
            "2026-02-12,run,,,,,,Plate,1.8 Ah",
            "2026-02-13,level reading,Copper,,,,19.2 L,,",
        ),
    )
    receipt, top_up, run, level = events_of(found)
    assert isinstance(receipt, events.Receipt)
    assert receipt.mass is not None
    assert (receipt.mass.typed, receipt.mass.base) == ("2 kg", 2 * KG)
    assert isinstance(top_up, events.TopUp)
    assert top_up.source == str(shop.find("vessels", "First rinse"))
    assert isinstance(run, events.Run)
    assert run.charge is not None
    assert run.charge.base == 6_480_000_000  # 1.8 Ah are 6480 C
    assert isinstance(level, events.LevelReading)
    assert (found.rows, found.wrong, found.all_read) == (4, 0, True)


def test_a_verb_may_be_written_by_its_button(shop: Shop) -> None:
    (event,) = events_of(read(shop, lines("Date,What,Vessel,Volume", "2026-02-13,Read the level,Copper,19 L")))
    assert isinstance(event, events.LevelReading)


def test_rows_of_fields_are_flat_columns(shop: Shop) -> None:
    data = lines(
        "Date,Vessel,Volume,held 1 metal,held 1 amount [g/L],held 3 metal,held 3 amount,Complete",
        "2026-02-10,Second rinse,10 L,Cu,2,zinc,40 mg,yes",
    )
    (event,) = events_of(read(shop, data, ColumnMap(guess(open_table(data).headings).columns, "opening")))
    assert isinstance(event, events.Opening)
    assert [(held.component, held.amount.base) for held in event.held] == [("Cu", 20 * G), ("Zn", 40_000)]
    assert event.complete


@pytest.mark.parametrize(
    ("heading", "cell", "typed", "base"),
    [
        ("Amount", "1.5 kg", "1.5 kg", 3 * KG // 2),
        ("Amount [kg]", "1.5", "1.5", 3 * KG // 2),
        ("Amount (g)", "1500", "1500", 3 * KG // 2),
        ("Amount [g]", "1.5 kg", "1.5 kg", 3 * KG // 2),
        ("Amount", "2 lb", "2 lb", 907_184_740),  # the pound of 0.453 592 37 kg (NIST Handbook 44, appendix C)
    ],
)
def test_a_bare_number_has_the_unit_of_its_heading(shop: Shop, heading: str, cell: str, typed: str, base: int) -> None:
    (event,) = events_of(read(shop, lines(f"Date,Verb,Vessel,{heading}", f"2026-02-10,receipt,Jar,{cell}")))
    assert isinstance(event, events.Receipt)
    assert event.mass is not None
    assert (event.mass.typed, event.mass.base) == (typed, base)


def test_a_spreadsheet_says_the_same(shop: Shop) -> None:
    rows: list[list[Any]] = [
        ["Date", "Verb", "Vessel", "Amount [kg]", "Lot", "Complete"],
        [datetime(2026, 2, 10, 9, 15), "receipt", "Jar", 1.5, 4711, None],  # noqa: DTZ001  (a cell has no zone)
    ]
    (made,) = read(shop, xlsx(rows)).made
    assert isinstance(made.event, events.Receipt)
    assert made.event.mass is not None
    assert (made.event.mass.typed, made.event.mass.base, made.event.lot) == ("1.5", 3 * KG // 2, "4711")
    assert made.occurred == Occurred(datetime(2026, 2, 10, 8, 15, tzinfo=UTC), MINUTE)


def test_a_decimal_comma_is_read_where_it_was_chosen(shop: Shop) -> None:
    data = lines("Date;Vessel;Amount", "2026-02-10;Jar;1,5 kg", "2026-02-10;Jar;2 kg")
    chosen = ColumnMap({"Date": "when", "Vessel": "vessel", "Amount": "amount"}, "receipt", decimal=COMMA)
    first, second = events_of(read(shop, data, chosen))
    assert isinstance(first, events.Receipt)
    assert isinstance(second, events.Receipt)
    assert first.mass is not None
    assert (first.mass.typed, first.mass.base) == ("1,5 kg", 3 * KG // 2)
    assert second.mass is not None
    assert second.mass.base == 2 * KG


def test_the_numbers_of_a_spreadsheet_have_points_whatever_its_texts_have(shop: Shop) -> None:
    chosen = ColumnMap({"Date": "when", "Vessel": "vessel", "Amount [kg]": "amount"}, "receipt", decimal=COMMA)
    data = xlsx([["Date", "Vessel", "Amount [kg]"], ["2026-02-10", "Jar", 1.5], ["2026-02-11", "Jar", "2,5"]])
    bases = [e.mass.base for e in events_of(read(shop, data, chosen)) if isinstance(e, events.Receipt) and e.mass]
    assert bases == [3 * KG // 2, 5 * KG // 2]


@pytest.mark.parametrize(
    ("cell", "dates", "occurred"),
    [
        ("2026-02-10", "iso", Occurred(datetime(2026, 2, 10, 11, tzinfo=UTC), DAY)),
        ("2026-02-10 14:30", "iso", Occurred(datetime(2026, 2, 10, 13, 30, tzinfo=UTC))),
        ("2026-02-10T14:30:05", "iso", Occurred(datetime(2026, 2, 10, 13, 30, 5, tzinfo=UTC))),
        ("2026-02-10T14:30+05:30", "iso", Occurred(datetime(2026, 2, 10, 9, 0, tzinfo=UTC))),
        ("2026-02-10T14:30Z", "iso", Occurred(datetime(2026, 2, 10, 14, 30, tzinfo=UTC))),
        ("10.2.2026", DAY_FIRST, Occurred(datetime(2026, 2, 10, 11, tzinfo=UTC), DAY)),
        ("10/02/2026 14:30", DAY_FIRST, Occurred(datetime(2026, 2, 10, 13, 30, tzinfo=UTC))),
        ("2/10/2026", MONTH_FIRST, Occurred(datetime(2026, 2, 10, 11, tzinfo=UTC), DAY)),
        ("2026-02-10", DAY_FIRST, Occurred(datetime(2026, 2, 10, 11, tzinfo=UTC), DAY)),
        ("2025-10-26T02:30+01:00", "iso", Occurred(datetime(2025, 10, 26, 1, 30, tzinfo=UTC))),
    ],
)
def test_a_day_or_a_moment_of_the_workshops_zone(shop: Shop, cell: str, dates: str, occurred: Occurred) -> None:
    chosen = ColumnMap({"Date": "when", "Vessel": "vessel", "Volume": "volume"}, "level-reading", dates)
    (made,) = read(shop, lines("Date,Vessel,Volume", f"{cell},Copper,19 L"), chosen).made
    assert made.occurred == occurred


def test_the_time_of_day_may_stand_in_a_column_of_its_own(shop: Shop) -> None:
    found = read(
        shop,
        lines(
            "Date,Time,Which,Verb,Vessel,Volume",
            "2026-02-10,9:05,,level-reading,Copper,19 L",
            "2025-10-26,02:30,first,level-reading,Copper,19 L",
            "2025-10-26,02:30,second,level-reading,Copper,19 L",
        ),
    )
    assert found.errors == ()
    assert [made.occurred.at.isoformat() for made in found.made] == [
        "2025-10-26T00:30:00+00:00",
        "2025-10-26T01:30:00+00:00",
        "2026-02-10T08:05:00+00:00",
    ]


def test_things_are_known_by_name_or_code(shop: Shop) -> None:
    code = get_vessel_for(shop.member, shop.find("vessels", "Copper")).code
    (event,) = events_of(read(shop, lines("Date,Verb,Vessel,Volume", f"2026-02-10,level-reading,{code},19 L")))
    assert isinstance(event, events.LevelReading)
    assert event.vessel == str(shop.find("vessels", "Copper"))


def test_an_acceptance_speaks_of_the_row_of_its_analysis(shop: Shop) -> None:
    found = read(
        shop,
        lines(
            "Key,Date,Verb,Analysis,Vessel,Metal,Result",
            ",,acceptance,lab 7,,,",
            "lab 7,2026-02-10,analysis,,Copper,Cu,52.5 g/L",
        ),
    )
    analysis, acceptance = events_of(found)
    assert isinstance(analysis, events.Analysis)
    assert isinstance(acceptance, events.Acceptance)
    assert acceptance.analysis == found.made[0].said.key
    assert acceptance.concentration == analysis.concentration
    assert found.made[0].occurred == found.made[1].occurred


def test_an_acceptance_may_speak_of_an_entry_by_its_number(shop: Shop) -> None:
    entry = shop.record("analysis", days_ago=3, vessel="Copper", metal="Cu", result="52 g/L")
    (event,) = events_of(read(shop, lines("Verb,Analysis,Date", f"acceptance,#{entry.sequence},")))
    assert isinstance(event, events.Acceptance)
    assert event.analysis == entry.uuid


def test_the_order_of_rows_does_not_matter_where_time_orders_them(shop: Shop) -> None:
    rows = [f"2026-02-{day},level-reading,Copper,{day} L" for day in (14, 11, 13, 12)]
    found = read(shop, lines("Date,Verb,Vessel,Volume", *rows))
    assert [made.occurred.at.day for made in found.made] == [11, 12, 13, 14]


def test_rows_of_the_same_day_count_in_the_order_of_the_file(shop: Shop) -> None:
    rows = [f"2026-02-11,level-reading,Copper,{litres} L" for litres in (14, 11, 13)]
    found = read(shop, lines("Date,Verb,Vessel,Volume", *rows))
    assert [made.said.row for made in found.made] == [2, 3, 4]


def test_a_file_is_read_as_far_as_it_is_asked_for(shop: Shop) -> None:
    data = lines("Date,Verb,Vessel,Volume", *["2026-02-11,level-reading,Copper,11 L"] * 3)
    part = read(shop, data, most=2)
    assert (part.rows, len(part.made), part.all_read) == (2, 2, False)
    assert read(shop, data, most=3).all_read


def test_no_row_asks_for_what_another_has_found(shop: Shop, django_assert_max_num_queries: Any) -> None:
    row = "2026-02-12,run,,Plate,Small part,1.8 Ah,\r\n2026-02-10,receipt,Jar,,,,1 kg\r\n2026-02-10,opening,Drum,,,,"
    data = lines("Date,Verb,Vessel,Route,Rack,Charge,Amount", *[row] * 40)
    with django_assert_max_num_queries(30):
        found = read(shop, data)
    assert found.rows == 120
