"""Reading CSV and XLSX files: encodings, separators, odd cells, files that are none, and files that do harm."""

from datetime import date, datetime, time, timedelta
from typing import Any

import pytest

from chemicals.process.importing import table as module
from chemicals.process.importing.table import CSV_TYPE, XLSX_TYPE, Broken, Plain, Row, media_type_of, open_table
from chemicals.workshop.errors import InvalidInputError
from tests.process.importing.sheets import lines, with_part, xlsx

SHEET = "xl/worksheets/sheet1.xml"


HALF_PAST = datetime(2026, 1, 5, 14, 30)  # noqa: DTZ001  (what a cell holds has no zone)


def rows(data: bytes) -> list[Row]:
    return list(open_table(data).rows())


def cells(data: bytes) -> tuple[Any, ...]:
    """Return the cells of the only row."""
    (row,) = rows(data)
    assert row.problem == ""
    return row.cells


def refusal(data: bytes) -> str:
    """Return why a file is refused."""
    with pytest.raises(InvalidInputError) as refused:
        open_table(data)
    assert {error.field for error in refused.value.errors} == {"file"}
    return " ".join(error.message for error in refused.value.errors)


# --- CSV ---


@pytest.mark.parametrize("separator", [",", ";", "\t"])
def test_the_separator_is_the_one_that_parts_the_headings(separator: str) -> None:
    found = open_table(lines(separator.join(["Date", "Tank", "Amount"]), separator.join(["2026-01-05", "Bath", "1 L"])))
    assert found.headings == ("Date", "Tank", "Amount")
    assert [row.cells for row in found.rows()] == [("2026-01-05", "Bath", "1 L")]


def test_decimal_commas_do_not_part_a_row_whose_headings_are_parted_by_semicolons() -> None:
    assert cells(lines("Date;Amount", "2026-01-05;1,5 L")) == ("2026-01-05", "1,5 L")


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "utf-16-le", "utf-16-be"])
def test_unicode_is_read_with_its_mark_and_without(encoding: str) -> None:
    mark = {"utf-16-le": b"\xff\xfe", "utf-16-be": b"\xfe\xff"}.get(encoding, b"")
    found = open_table(mark + "Gefäß,µ\nKühler,5 µL\n".encode(encoding))
    assert found.headings == ("Gefäß", "µ")
    assert [row.cells for row in found.rows()] == [("Kühler", "5 µL")]


def test_another_encoding_is_refused_with_its_line_and_the_remedy() -> None:
    message = refusal("Tank\nBath\nKühler\n".encode("cp1252"))
    assert message.startswith("Line 3 holds a character that is not in UTF-8.")
    assert "CSV in UTF-8" in message


def test_rows_count_as_a_spreadsheet_counts_them_and_empty_ones_are_passed_over() -> None:
    found = rows(lines("Date,Note", "", '2026-01-05,"two', 'lines"', " , ", "2026-01-06,x"))
    assert [(row.number, row.cells) for row in found] == [
        (3, ("2026-01-05", "two\r\nlines")),
        (5, ("2026-01-06", "x")),
    ]


def test_short_rows_are_filled_up_and_long_ones_refused() -> None:
    short, long, blank = rows(lines("A,B,C", "1", "1,2,3,4", "1,2,3,,"))
    assert short.cells == ("1", "", "")
    assert long.problem.startswith("This row has more cells than there are headings.")
    assert blank.cells == ("1", "2", "3")


def test_broken_quotation_marks_are_said_by_row() -> None:
    good, bad = rows(lines("A,B", "1,2", '3,"open'))
    assert good.problem == ""
    assert (bad.number, bad.cells) == (3, ())
    assert "quotation marks" in bad.problem


def test_too_many_rows_are_said_in_their_place(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "MOST_ROWS", 2)
    found = rows(lines("A", "1", "2", "3", "4"))
    assert [row.problem for row in found] == ["", "", "There are more than 2 rows. Split the file."]


def test_headings_are_tidied_and_empty_ones_called_by_their_place() -> None:
    assert open_table(lines("  Amount \t [g] ,,Note,,")).headings == ("Amount [g]", "(column 2)", "Note")


@pytest.mark.parametrize("data", [b"", b"\xef\xbb\xbf", b"\r\n\r\n", b" , ,\n"])
def test_a_file_without_headings_is_refused(data: bytes) -> None:
    assert refusal(data).startswith("This file is empty.")


def test_headings_that_stand_twice_are_refused_all_at_once() -> None:
    message = refusal(lines("Date,date,Tank,TANK,Note"))
    assert 'Two columns are called "date"' in message
    assert 'Two columns are called "tank"' in message


def test_two_hundred_columns_are_read_and_one_more_is_refused() -> None:
    many = [f"C{number}" for number in range(200)]
    assert len(cells(lines(",".join(many), ",".join(["1"] * 200)))) == 200
    assert refusal(lines(",".join([*many, "one more"]))).startswith("There are more than 200 columns.")


def test_a_file_of_more_than_fifty_megabytes_is_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "LARGEST_FILE", 10)
    assert open_table(b"A\n123456\n").headings == ("A",)
    assert refusal(b"A\n123456789\n") == "This file is larger than 50 MB. Split it."
    assert module.__dict__["LARGEST_FILE"] == 10


@pytest.mark.parametrize(
    ("data", "remedy"),
    [
        (b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", "Save it as XLSX"),
        (b"PK\x03\x04 no archive", "Save it anew"),
        (b"%PDF-1.4\x00\x00", "neither a CSV nor an XLSX file"),
        (b"\x89PNG\r\n\x1a\n\x00", "neither a CSV nor an XLSX file"),
    ],
)
def test_other_kinds_of_files_are_refused_with_a_remedy(data: bytes, remedy: str) -> None:
    assert remedy in refusal(data)


# --- XLSX ---


def test_days_moments_and_clock_times_are_read_as_cells() -> None:
    row = [date(2026, 1, 5), HALF_PAST, time(14, 30), "2026-01-05"]
    data = xlsx([["Day", "Moment", "Clock", "Text"], row])
    assert cells(data) == (date(2026, 1, 5), HALF_PAST, time(14, 30), "2026-01-05")


def test_of_a_moment_that_is_shown_as_a_day_only_the_day_is_read() -> None:
    data = xlsx([["When"], [HALF_PAST]], formats={"A2": "dd.mm.yyyy"})
    assert cells(data) == (date(2026, 1, 5),)


def test_a_moment_is_read_to_the_second() -> None:
    """A spreadsheet keeps a moment as a fraction of a day: 14:30 may come out some microseconds early."""
    data = xlsx([["When"], [HALF_PAST - timedelta(microseconds=2)]], formats={"A2": "yyyy-mm-dd hh:mm"})
    assert cells(data) == (HALF_PAST,)


@pytest.mark.parametrize(
    ("value", "number_format", "text"),
    [
        (5, "General", "5"),
        (1.5, "0.00", "1.5"),
        (1e-7, "General", "0.0000001"),
        (1e21, "General", "1000000000000000000000"),
        (0.25, "0%", "25 %"),
        (0.0725, "0.00%", "7.25 %"),
        (-3, "General", "-3"),
        (timedelta(hours=30, minutes=15), "[h]:mm", "108900 s"),
    ],
)
def test_numbers_are_read_in_plain_digits(value: Any, number_format: str, text: str) -> None:
    (found,) = cells(xlsx([["N"], [value]], formats={"A2": number_format}))
    assert found == text
    assert isinstance(found, Plain)


def test_yes_and_no_are_read_as_words() -> None:
    assert cells(xlsx([["A", "B"], [True, False]])) == ("yes", "no")


def test_a_formula_is_no_value_but_a_text_that_looks_like_one_is() -> None:
    """What a formula gave when the file was saved may be old, or missing: it is not taken for a record."""
    formula, text = cells(xlsx([["A", "B"], ["=1+1", "1+1"]]))
    assert isinstance(formula, Broken)
    assert "paste its values" in formula.message
    assert text == "1+1"


def test_an_error_of_the_spreadsheet_is_said_by_its_name() -> None:
    data = with_part(
        xlsx([["A"], [5]]),
        SHEET,
        lambda body: body.replace(b'<c r="A2" t="n"><v>5</v>', b'<c r="A2" t="e"><v>#DIV/0!</v>'),
    )
    (found,) = cells(data)
    assert isinstance(found, Broken)
    assert "#DIV/0!" in found.message


def test_a_formula_in_the_headings_is_refused() -> None:
    assert "A formula stands here" in refusal(xlsx([["Date", "=B2"]]))


def test_the_first_sheet_that_can_be_seen_is_read_and_the_others_are_named() -> None:
    found = open_table(xlsx([["Date"], ["2026-01-05"]], others=("Notes", "Prices")))
    assert found.headings == ("Date",)
    assert found.unread == ("Notes", "Prices")


def test_a_hidden_sheet_is_not_read() -> None:
    data = xlsx([["Secret"]], others=("Notes",))
    hidden = with_part(
        data,
        "xl/workbook.xml",
        lambda body: body.replace(b'sheetId="1" state="visible"', b'sheetId="1" state="hidden"'),
    )
    assert refusal(hidden).startswith("This file is empty.")


def test_what_a_sheet_says_of_its_own_size_is_not_believed() -> None:
    data = xlsx([["A", "B"], ["1", "2"], ["3", "4"]])
    lying = with_part(data, SHEET, lambda body: body.replace(b'ref="A1:B3"', b'ref="A1:A1"'))
    assert lying != data
    assert [row.cells for row in open_table(lying).rows()] == [("1", "2"), ("3", "4")]


def test_a_row_far_below_does_not_take_for_ever() -> None:
    far = with_part(
        xlsx([["A"], ["1"]]),
        SHEET,
        lambda body: body.replace(b'<row r="2"', b'<row r="2000000000"').replace(b'r="A2"', b'r="A2000000000"'),
    )
    found = open_table(far)
    assert found.headings == ("A",)
    assert list(found.rows()) == []


def test_a_sheet_that_unpacks_to_more_than_it_may_is_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "LARGEST_UNPACKED", 10_000)
    assert "larger than 200 MB when it is unpacked" in refusal(xlsx([["A"], ["x" * 20_000]]))


def test_entities_in_a_sheet_are_refused() -> None:
    """An entity may stand for billions of characters: no sheet needs one."""
    bomb = b'<?xml version="1.0"?><!DOCTYPE w [<!ENTITY a "x"><!ENTITY b "&a;&a;">]>'
    data = with_part(xlsx([["A"], ["1"]]), SHEET, lambda body: bomb + body)
    with pytest.raises(InvalidInputError, match="cannot be read") as refused:
        open_table(data)
    assert "EntitiesForbidden" in causes(refused.value)


def causes(error: BaseException | None) -> list[str]:
    """Return the names of an error and of what led to it."""
    return [] if error is None else [type(error).__name__, *causes(error.__cause__ or error.__context__)]


def test_a_damaged_sheet_is_refused() -> None:
    data = with_part(xlsx([["A"], ["1"], ["2"]]), SHEET, lambda body: body[: body.index(b'<row r="3"')] + b"<row")
    assert "the sheet cannot be read (ParseError)" in refusal(data)


def test_the_kind_of_a_file_is_told_by_its_content() -> None:
    assert media_type_of(xlsx([["A"]])) == XLSX_TYPE
    assert media_type_of(b"A\n") == CSV_TYPE
