"""Numbers of substances and cargoes: what a mistyped digit breaks, and what looks different but is the same."""

from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.science.identity import IdentityError, read_cas_number, read_divisions, read_ec_number, read_un_number

COPPER_SULFATE, COPPER_SULFATE_EC = "7758-99-8", "231-847-6"


@pytest.mark.parametrize("typed", ["7758–99–8", " 7758-99-8 ", "７７５８-99-8", "7758‑99‑8"])
def test_a_cas_number_comes_in_one_spelling(typed: str) -> None:
    assert read_cas_number(typed) == COPPER_SULFATE


@pytest.mark.parametrize(
    ("read", "typed", "code"),
    [
        (read_cas_number, "7758-99-7", "cas_digit"),
        (read_cas_number, "7758998", "cas_form"),
        (read_cas_number, "7-99-8", "cas_form"),
        (read_cas_number, "12345678-99-8", "cas_form"),
        (read_cas_number, "copper", "cas_form"),
        (read_ec_number, "231-847-5", "ec_digit"),
        (read_ec_number, "2318476", "ec_form"),
        (read_ec_number, "231-847-X", "ec_form"),
        (read_un_number, "183", "un_form"),
        (read_un_number, "UN 18300", "un_form"),
        (read_un_number, "UN", "un_form"),
        (read_divisions, "10", "class_form"),
        (read_divisions, "6.3", "class_form"),
        (read_divisions, "8 (6.1, acid)", "class_form"),
        (read_divisions, " ", "class_form"),
    ],
)
def test_what_is_no_such_number_is_refused(read: Any, typed: str, code: str) -> None:
    with pytest.raises(IdentityError) as caught:
        read(typed)
    assert caught.value.code == code
    assert caught.value.message


@given(place=st.integers(0, 5), digit=st.integers(0, 9))
def test_one_wrong_digit_of_a_cas_number_is_mostly_found(place: int, digit: int) -> None:
    """Not always: ten is no prime, so a digit weighted 5 may change by 2, one weighted 2, 4 or 6 by 5."""
    digits = list("775899")
    weight = 6 - place
    changed = digit - int(digits[place])
    digits[place] = str(digit)
    typed = f"{''.join(digits[:4])}-{''.join(digits[4:])}-8"
    if weight * changed % 10 == 0:
        assert read_cas_number(typed) == typed
    else:
        with pytest.raises(IdentityError, match="check digit"):
            read_cas_number(typed)


@given(place=st.integers(0, 5), digit=st.integers(0, 9))
def test_one_wrong_digit_of_an_ec_number_is_always_found(place: int, digit: int) -> None:
    """Eleven is prime, and no weight nor difference of digits is a multiple of it."""
    digits = list("231847")
    same = digits[place] == str(digit)
    digits[place] = str(digit)
    typed = f"{''.join(digits[:3])}-{''.join(digits[3:])}-6"
    if same:
        assert read_ec_number(typed) == COPPER_SULFATE_EC
    else:
        with pytest.raises(IdentityError, match="check digit"):
            read_ec_number(typed)


@pytest.mark.parametrize("typed", ["1830", "UN 1830", "un1830", "ID 1830"])
def test_a_un_number_is_four_digits(typed: str) -> None:
    assert read_un_number(typed) == "1830"


@pytest.mark.parametrize(
    ("typed", "parts"),
    [("8", ("8",)), ("6.1", ("6.1",)), ("8 (6.1)", ("8", "6.1")), ("5.1 (6.1, 8)", ("5.1", "6.1", "8")),
     ("8+3", ("8", "3")), ("1.4S", ("1.4S",)), ("2.2", ("2.2",)), ("9", ("9",))],
)  # fmt: skip
def test_a_class_of_dangerous_goods_with_its_subsidiary_ones(typed: str, parts: tuple[str, ...]) -> None:
    assert read_divisions(typed) == parts
