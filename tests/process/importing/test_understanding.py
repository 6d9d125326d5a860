"""Rows as entries: what is understood, and everything that is wrong, by row and column."""

from datetime import UTC, datetime, timedelta
from decimal import Decimal
from typing import Any

import pytest

from chemicals.books import events
from chemicals.books.occurred import DAY, MINUTE, Occurred
from chemicals.ledger.periods import close_period
from chemicals.ledger.selectors import get_vessel_for
from chemicals.process.importing import reading
from chemicals.process.importing.columns import COMMA, DAY_FIRST, MONTH_FIRST, ColumnMap, guess
from chemicals.process.importing.table import open_table
from chemicals.process.importing.understanding import Understood, understand
from chemicals.register.services import RevisionInput, create_product
from tests.process.importing.sheets import lines, xlsx
from tests.process.shop import KG, G, L, Shop

SHA = "ab" * 32


def read(shop: Shop, data: bytes, chosen: ColumnMap | None = None, **more: Any) -> Understood:
    """Return what a file says, by its headings unless said otherwise."""
    table = open_table(data)
    return understand(shop.member, shop.now, table, chosen or guess(table.headings), SHA, **more)


def wrong(shop: Shop, data: bytes, chosen: ColumnMap | None = None) -> list[tuple[int, str, str]]:
    return [(error.row, error.column, error.message) for error in read(shop, data, chosen).errors]


def events_of(found: Understood) -> list[events.Event]:
    assert found.errors == ()
    return [each.event for each in found.made]


# --- what is understood ---


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


# --- what is refused, by name ---

HEADINGS = "Date,Verb,Vessel,Source,Target,Amount,Volume,Metal,Result,Lot,Spilled"


@pytest.mark.parametrize(
    ("row", "column", "message"),
    [
        (",receipt,Jar,,,1 kg,,,,,", "Date", "This is needed."),
        ("2026-02-30,receipt,Jar,,,1 kg,,,,,", "Date", 'There is no such day as "2026-02-30".'),
        ("02.03.2026,receipt,Jar,,,1 kg,,,,,", "Date", '"02.03.2026" can be read in two ways.'),
        ("yesterday,receipt,Jar,,,1 kg,,,,,", "Date", '"yesterday" is no date.'),
        ("2026-02-10 25:00,receipt,Jar,,,1 kg,,,,,", "Date", '"25:00" is no time of day.'),
        ("2027-01-01,receipt,Jar,,,1 kg,,,,,", "Date", "This lies in the future."),
        ("0999-01-01,receipt,Jar,,,1 kg,,,,,", "Date", "Write a day between 1900"),
        ("2025-10-26 02:30,receipt,Jar,,,1 kg,,,,,", "Date", "Clocks were put back"),
        ("2025-03-30 02:30,receipt,Jar,,,1 kg,,,,,", "Date", "Clocks were put forward"),
        ("2026-02-10,,Jar,,,1 kg,,,,,", "Verb", "This is needed."),
        ("2026-02-10,melt,Jar,,,1 kg,,,,,", "Verb", '"melt" is nothing that can be imported.'),
        ("2026-02-10,cancellation,Jar,,,1 kg,,,,,", "Verb", '"cancellation" is nothing that can be imported.'),
        ("2026-02-10,receipt,Jer,,,1 kg,,,,,", "Vessel", 'There is no vessel "Jer". Did you mean "Jar"?'),
        ("2026-02-10,receipt,Copper,,,1 kg,,,,,", "Vessel", '"Copper" is a bath. Write the name of a stock container'),
        ("2026-02-10,receipt,Jar,,,NaN kg,,,,,", "Amount", '"NaN kg" is not a finite number'),
        ('2026-02-10,receipt,Jar,,,"1,500 g",,,,,', "Amount", "1500 or 1.5"),
        ('2026-02-10,receipt,Jar,,,"1,5 kg",,,,,', "Amount", "1.5"),
        ("2026-02-10,receipt,Jar,,,1.5,,,,,", "Amount", "unit"),
        ("2026-02-10,receipt,Jar,,,1 furlong,,,,,", "Amount", "furlong"),
        ("2026-02-10,receipt,Jar,,,1 Ah,,,,,", "Amount", "a charge"),
        ("2026-02-10,receipt,Jar,,,-1 kg,,,,,", "Amount", "-1 kg"),
        ("2026-02-10,receipt,Jar,,,,,,,,", "Amount", "This is needed."),
        ("2026-02-10,receipt,Jar,,,1 kg,5 L,,,,", "Volume", 'no such thing where it says "receipt"'),
        (f"2026-02-10,receipt,Jar,,,1 kg,,,,{'x' * 61},", "Lot", "longer than 60 characters"),
        ("2026-02-10,receipt,Jar,,,1 kg,,,,a\x07b,", "Lot", "U+0007"),
        ("2026-02-10,level-reading,Copper,,,,19 L,,,,perhaps", "Spilled", '"perhaps" is neither yes nor no.'),
        ("2026-02-10,level-reading,Drum,,,,5 mL,Cu,,,", "Metal", 'no such thing where it says "level-reading"'),
        ("2026-02-10,analysis,Copper,,,,,Xx,5 g/L,,", "Metal", "This is not balanced here."),
        ("2026-02-10,move,,Copper,Copper,,5 L,,,,", "Target", "Source and target are the same vessel."),
    ],
)
def test_each_mistake_is_said_under_its_column(shop: Shop, row: str, column: str, message: str) -> None:
    ((number, heading, said), *others) = wrong(shop, lines(HEADINGS, "2026-02-01,receipt,Jar,,,1 kg,,,,,", row))
    assert others == []
    assert (number, heading) == (3, column)
    assert message in said


def test_all_mistakes_of_all_rows_are_said_at_once(shop: Shop) -> None:
    found = wrong(
        shop, lines(HEADINGS, "nonsense,receipt,Jer,,,NaN,,,,,", "2026-02-10,receipt,Jar,,,1 kg,,,,,", ",melt,,,,,,,,,")
    )
    assert [(row, column) for row, column, _ in found] == [
        (2, "Date"), (2, "Vessel"), (2, "Amount"), (4, "Verb"), (4, "Date"),
    ]  # fmt: skip


def test_the_mistake_of_a_group_of_fields_is_said_under_its_column(shop: Shop) -> None:
    data = lines(
        "Date,Verb,Vessel,Volume,held 1 metal,held 1 amount,held 4 metal,held 4 amount,held 5 metal",
        "2026-02-10,opening,Second rinse,,Cu,1 g,Zn,2 g/L,Ni",
    )
    assert [(row, column) for row, column, _ in wrong(shop, data)] == [(2, "held 5 amount")]
    complete = data.replace(b",Ni", b",").replace(b",held 5 metal", b",")
    found = wrong(shop, complete)
    assert (2, "held 4 amount", "A concentration needs the volume. Write the volume, or a mass here.") in found


def test_a_key_stands_once_in_a_file(shop: Shop) -> None:
    rows = ["A1,2026-02-10,receipt,Jar,1 kg", "A2,2026-02-11,receipt,Jar,1 kg", "A1,2026-02-12,receipt,Jar,1 kg"]
    assert wrong(shop, lines("Key,Date,Verb,Vessel,Amount", *rows)) == [
        (4, "Key", 'The key "A1" stands in row 2 already. Give each row its own.')
    ]


def test_an_analysis_is_accepted_once(shop: Shop) -> None:
    analysis = shop.record("analysis", days_ago=3, label="a", vessel="Copper", metal="Cu", result="52 g/L")
    other = shop.record("analysis", days_ago=2, label="b", vessel="Copper", metal="Cu", result="51 g/L")
    shop.record("acceptance", analysis="a")
    found = wrong(
        shop,
        lines(
            "Verb,Analysis,Date",
            f"acceptance,#{analysis.sequence},",
            f"acceptance,#{other.sequence},",
            f"acceptance,#{other.sequence},",
            "acceptance,#9999,",
            "acceptance,nowhere,",
            f"acceptance,#{other.sequence - 2},",
            f"acceptance,#{other.sequence},2026-02-10",
        ),
    )
    assert [(row, column) for row, column, _ in found] == [
        (2, "Analysis"), (4, "Analysis"), (5, "Analysis"), (6, "Analysis"), (7, "Analysis"), (8, "Date"),
    ]  # fmt: skip
    messages = [message for _, _, message in found]
    assert messages[0] == "This analysis is accepted already."
    assert messages[1] == "Row 3 accepts this analysis already. Leave one of them out."
    assert messages[2].startswith("There is no entry #9999.")
    assert messages[3].startswith('No analysis has the key "nowhere".')
    assert messages[4].startswith("This is no analysis.")


def test_a_name_of_two_things_is_refused_with_their_full_names(shop: Shop) -> None:
    other = RevisionInput(form="solid")
    create_product(actor=shop.member, now=shop.now, name="Anode copper", supplier="Somebody else", revision=other)
    data = lines("Date,Verb,Vessel,Volume,Product", "2026-02-10,opening,Second rinse,1 L,Anode copper")
    ((_, column, message),) = wrong(shop, data)
    assert column == "Product"
    assert '"Anode copper · Anyone" or "Anode copper · Somebody else"' in message
    full = data.replace(b"Anode copper", "Anode copper · Anyone".encode())
    assert read(shop, full).errors == ()


def test_what_a_spreadsheet_made_a_date_of_is_no_amount_and_no_name(shop: Shop) -> None:
    moment = datetime(2026, 5, 1)  # noqa: DTZ001  (a cell has no zone)
    found = wrong(shop, xlsx([["Date", "Verb", "Vessel", "Amount"], ["2026-02-10", "receipt", moment, moment]]))
    assert [column for _, column, _ in found] == ["Vessel", "Amount"]
    assert all("made a date or a time" in message for _, _, message in found)


def test_a_formula_is_refused_under_its_column_and_not_minded_in_others(shop: Shop) -> None:
    rows = [["Date", "Verb", "Vessel", "Amount", "Sum"], ["2026-02-10", "receipt", "Jar", "=1+1", "=D2*2"]]
    ((row, column, message),) = wrong(shop, xlsx(rows))
    assert (row, column) == (2, "Amount")
    assert message.startswith("A formula stands here.")


def test_a_decimal_comma_beside_a_point_is_unclear(shop: Shop) -> None:
    chosen = ColumnMap({"Date": "when", "Vessel": "vessel", "Amount": "amount"}, "receipt", decimal=COMMA)
    ((_, column, message),) = wrong(shop, lines("Date;Vessel;Amount", "2026-02-10;Jar;1.500,5 g"), chosen)
    assert column == "Amount"
    assert '"1.500,5" is unclear' in message


def test_a_closed_period_takes_no_matter(shop: Shop) -> None:
    until = datetime(2026, 2, 10, tzinfo=UTC) - timedelta(hours=1)  # midnight in Berlin
    shop.member.role = "owner"
    shop.member.save()
    close_period(actor=shop.member, now=shop.now, key=shop.find("vessels", "Jar"), until=until)
    found = wrong(
        shop,
        lines(
            "Date,Verb,Vessel,Amount,Metal,Result",
            "2026-02-09,receipt,Jar,1 kg,,",
            "2026-02-10,receipt,Jar,1 kg,,",
            "2026-02-09,analysis,Copper,,Cu,52 g/L",
        ),
    )
    ((row, column, message),) = found
    assert (row, column) == (2, "Date")
    assert message.startswith("The books are closed for everything before 2026-02-10 00:00.")


def test_a_file_without_rows_is_refused(shop: Shop) -> None:
    found = read(shop, lines("Date,Verb,Vessel,Amount", "", ",,,"))
    assert [(error.row, error.column) for error in found.errors] == [(0, "")]
    assert found.errors[0].message.startswith("There is no row below the headings.")


def test_a_wrong_column_map_is_said_before_any_row(shop: Shop) -> None:
    found = read(shop, lines("Date,Vessel", "nonsense,nonsense"))
    assert {error.row for error in found.errors} == {0}
    assert (found.rows, found.made) == (0, ())


def test_of_many_mistakes_the_first_are_kept_and_all_are_counted(shop: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(reading, "MOST_ERRORS", 3)
    found = read(shop, lines("Date,Verb,Vessel,Amount", *[",receipt,Jar,1 kg"] * 7))
    assert (len(found.errors), found.wrong) == (3, 7)


def test_nothing_is_written(shop: Shop) -> None:
    before = shop.ledger()
    read(shop, lines("Date,Verb,Vessel,Amount", "2026-02-10,receipt,Jar,1 kg"))
    assert shop.ledger() == before
    assert Decimal(len(before["holdings"])) > 0
    assert L == KG
