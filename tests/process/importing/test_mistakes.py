"""Mistakes in a file: each is said by its row and column, all of them at once."""

from datetime import UTC, datetime, timedelta
from decimal import Decimal

import pytest

from chemicals.ledger.periods import close_period
from chemicals.process.importing import reading
from chemicals.process.importing.columns import COMMA, ColumnMap
from chemicals.register.services import RevisionInput, create_product
from tests.process.importing.reading import read, wrong
from tests.process.importing.sheets import lines, xlsx
from tests.process.shop import KG, L, Shop

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
