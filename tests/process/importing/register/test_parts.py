"""Compositions as people write them into one cell."""

import pytest

from chemicals.process.importing.columns import COMMA, POINT
from chemicals.process.importing.register.parts import Part, split_parts
from chemicals.process.importing.values import CellError

KNOWN = {"CuSO4.5H2O", "NaCl", "Alloy 20", "Alloy", "Copper sulfate"}


def parts(text: str, decimal: str = POINT) -> list[tuple[str, str]]:
    return [(part.name, part.content) for part in split_parts(text, decimal, KNOWN.__contains__)]


@pytest.mark.parametrize(
    ("text", "found"),
    [
        ("CuSO4.5H2O 98 %; NaCl < 2 %", [("CuSO4.5H2O", "98 %"), ("NaCl", "< 2 %")]),
        ("NaCl<2 %", [("NaCl", "<2 %")]),
        ("NaCl: 20 - 30 %", [("NaCl", "20 - 30 %")]),
        ("NaCl 20 - 30 %\nCopper sulfate 250 g/L", [("NaCl", "20 - 30 %"), ("Copper sulfate", "250 g/L")]),
        ("NaCl 20 to 30 %", [("NaCl", "20 to 30 %")]),
        ("something new 5 %", [("something new", "5 %")]),
        ("NaCl = 5 %", [("NaCl", "5 %")]),
        ("NaCl 5", [("NaCl", "5")]),
        ("Alloy 20 30 %", [("Alloy 20", "30 %")]),
        ("98 %", [("", "98 %")]),
        ("20-30 %", [("", "20-30 %")]),
        ("NaCl >= 95 %;", [("NaCl", ">= 95 %")]),
        ("7647-14-5 5 %", [("7647-14-5", "5 %")]),
    ],
)
def test_a_name_ends_where_a_content_begins(text: str, found: list[tuple[str, str]]) -> None:
    assert parts(text) == found


def test_a_colon_settles_what_could_be_read_in_two_ways() -> None:
    assert split_parts("Metal 9: 0.5 %", POINT, KNOWN.__contains__) == [Part("Metal 9", "0.5 %")]


@pytest.mark.parametrize(
    ("text", "found"),
    [
        ("NaCl 98,5 %", "98.5 %"),
        ("NaCl 20,5-30,5 %", "20.5-30.5 %"),
        ("NaCl 98 %", "98 %"),
    ],
)
def test_decimal_commas_where_they_were_chosen(text: str, found: str) -> None:
    assert parts(text, COMMA) == [("NaCl", found)]


@pytest.mark.parametrize(
    ("text", "decimal", "message"),
    [
        ("NaCl", POINT, 'How much of "NaCl" is in it?'),
        ("nothing at all", POINT, '"nothing at all" is no substance with its content'),
        ("NaCl 98,5 %", POINT, '"98,5" is ambiguous'),
        ("NaCl 1.098,5 %", COMMA, "A comma is the decimal sign here"),
        ("NaCl 30-20 %", POINT, "falls"),
        ("NaCl 98 %, KCl 2 %", POINT, "is no substance with its content"),
    ],
)
def test_what_cannot_be_read_is_refused_with_the_reason(text: str, decimal: str, message: str) -> None:
    with pytest.raises(CellError, match=message.replace("?", r"\?")):
        parts(text, decimal)
