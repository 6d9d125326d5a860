"""Check digits against numbers in print: every one that a public list prints fits, and misprints do not.

data/cas_numbers.csv: numbers of 29 CFR 1910.1000 and 40 CFR 261.24. data/classified_substances.csv: CAS and EC numbers
beside the classification of the usual chemicals of plating.
"""

import csv
from pathlib import Path

import pytest

from chemicals.science.identity import IdentityError, read_cas_number, read_ec_number
from chemicals.science.substances import list_starters

DATA = Path(__file__).parent / "data"


def rows(name: str) -> list[dict[str, str]]:
    return list(csv.DictReader((DATA / name).read_text(encoding="utf-8").splitlines()))


CLASSIFIED = rows("classified_substances.csv")
PRINTED = [row["cas_number"] for row in [*rows("cas_numbers.csv"), *CLASSIFIED]]


@pytest.mark.parametrize("number", sorted(set(PRINTED)))
def test_the_check_digit_of_a_printed_cas_number_fits(number: str) -> None:
    assert read_cas_number(number) == number


@pytest.mark.parametrize("row", CLASSIFIED, ids=lambda row: str(row["name"]))
def test_the_check_digit_of_a_printed_ec_number_fits(row: dict[str, str]) -> None:
    assert read_ec_number(row["ec_number"]) == row["ec_number"]


@pytest.mark.parametrize("number", ["200-001-8", "200-003-9", "400-010-9", "500-001-0"])
def test_ec_numbers_by_which_encyclopedias_explain_the_digit(number: str) -> None:
    """Wikipedia, European Community number (read): the firsts of EINECS, ELINCS and polymers, and dexamethasone."""
    assert read_ec_number(number) == number


def test_numbers_of_elincs_with_a_remainder_of_ten_end_in_one() -> None:
    """Wikipedia (read): 181 such numbers were given, all beginning with 4; in other lists they were skipped.

    4 x 1 + 6 x 1 = 10 for 400-001; 2 x 1 + 1 x 3 + 5 x 1 = 10 for 201-010.
    """
    assert read_ec_number("400-001-1") == "400-001-1"
    with pytest.raises(IdentityError, match="check digit"):
        read_ec_number("201-010-1")


@pytest.mark.parametrize("number", ["64-17-6", "64-177-6", "4-17-5", "64-17-55"])
def test_numbers_printed_as_examples_of_wrong_ones(number: str) -> None:
    """Manual of the R package webchem 0.4.0, `is.cas` (read): ethanol is 64-17-5, these are none."""
    assert read_cas_number("64-17-5") == "64-17-5"
    with pytest.raises(IdentityError):
        read_cas_number(number)


def test_a_pattern_is_no_number() -> None:
    """Wikipedia of 2006 (read) shows the form by 123-456-0; the digit would be 91 modulo 11, 3."""
    assert read_ec_number("123-456-3") == "123-456-3"
    with pytest.raises(IdentityError, match="check digit"):
        read_ec_number("123-456-0")


def test_substances_to_begin_with_have_the_numbers_in_print() -> None:
    numbers = [row.cas_number for row in list_starters() if row.cas_number]
    assert [read_cas_number(number) for number in numbers] == numbers
    assert len(set(numbers) & set(PRINTED)) >= 15
