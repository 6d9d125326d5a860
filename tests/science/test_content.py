"""How much of a substance is in a product: figures, ranges and their ends, as sheets print them."""

from decimal import Decimal
from math import sqrt

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.science.content import ALL, ContentError, read_content
from chemicals.science.errors import TextError

PERCENT = 10**7  # micrograms in a kilogram
G_PER_L = 10**6  # micrograms in a litre


@pytest.mark.parametrize(
    ("typed", "per", "low", "high"),
    [
        ("98 %", "kg", 98 * PERCENT, 98 * PERCENT),
        ("250 g/L", "L", 250 * G_PER_L, 250 * G_PER_L),
        ("20-30 %", "kg", 20 * PERCENT, 30 * PERCENT),
        ("20 – 30 %", "kg", 20 * PERCENT, 30 * PERCENT),
        ("20 % - 30 %", "kg", 20 * PERCENT, 30 * PERCENT),
        ("20 to 30 %", "kg", 20 * PERCENT, 30 * PERCENT),
        ("20…30 %", "kg", 20 * PERCENT, 30 * PERCENT),
        (">= 20 - < 30 %", "kg", 20 * PERCENT, 30 * PERCENT),
        ("≥20 <30 %", "kg", 20 * PERCENT, 30 * PERCENT),
        (">= 20 %, < 30 %", "kg", 20 * PERCENT, 30 * PERCENT),
        ("< 1 %", "kg", 0, PERCENT),
        ("≤ 0.1 %", "kg", 0, PERCENT // 10),
        (">= 95 %", "kg", 95 * PERCENT, ALL),
        ("> 99.9 %", "kg", 999 * PERCENT // 10, ALL),
        ("200-220 g/L", "L", 200 * G_PER_L, 220 * G_PER_L),
        ("15 - 20 mg/mL", "L", 15 * G_PER_L, 20 * G_PER_L),
        ("< 5 g/L", "L", 0, 5 * G_PER_L),
        ("1e-3 %", "kg", PERCENT // 1000, PERCENT // 1000),
        ("10-50 ppm", "kg", 10_000, 50_000),
        ("12", "kg", 12 * PERCENT, 12 * PERCENT),
    ],
)
def test_what_sheets_print_is_read(typed: str, per: str, low: int, high: int) -> None:
    found = read_content(typed)
    assert (found.typed, found.per, found.low, found.high) == (typed, per, low, high)


def test_a_range_becomes_its_middle_with_a_rectangular_uncertainty() -> None:
    """JCGM 100:2008, 4.3.7: (a+ - a-)/2 over the root of 3; of 20 to 30 % 2.887 %."""
    found = read_content("20-30 %")
    assert found.amount == 25 * PERCENT
    assert found.sd == round(Decimal(5 * PERCENT) / Decimal(3).sqrt())
    assert read_content("98 %").sd == 0


def test_the_gum_s_own_example_of_a_rectangular_distribution() -> None:
    """JCGM 100:2008, 4.3.7 example (memory): 16.52, wrong by 0.40 at most (millionths per degree): u = 0.23."""
    found = read_content("16.12-16.92 %")
    assert found.amount == pytest.approx(16.52 * PERCENT)
    assert found.sd == pytest.approx(0.23 * PERCENT, abs=0.005 * PERCENT)


@given(low=st.integers(0, 100_000), width=st.integers(0, 100_000))
def test_the_uncertainty_is_the_width_over_the_root_of_twelve(low: int, width: int) -> None:
    found = read_content(f"{low}-{low + width} mg/L")
    assert found.low <= found.amount <= found.high
    assert found.sd == pytest.approx(width * 1000 / sqrt(12), abs=0.51)


@pytest.mark.parametrize(
    ("typed", "code"),
    [
        ("30-20 %", "falls"),
        ("> 5 g/L", "no_upper_end"),
        ("< 5 - 10 %", "turned"),
        ("5 - > 10 %", "turned"),
        ("> 101 %", "over"),
        ("", "empty"),
        ("<", "empty"),
        ("abc", "not_a_number"),
        ("-5 %", "negative"),
        ("20,5-30 %", "ambiguous"),
        ("20-30,5 %", "ambiguous"),
        ("10 g/L - 20 %", "wrong_dimension"),
        ("5 °C", "wrong_dimension"),
        ("1-2-3 %", "unknown_unit"),
        ("20-30 g", "wrong_dimension"),
    ],
)
def test_what_cannot_be_meant_is_refused(typed: str, code: str) -> None:
    with pytest.raises(TextError) as caught:
        read_content(typed)
    assert caught.value.code == code
    assert "%%" not in caught.value.message


@given(st.text(max_size=30))
def test_any_text_is_read_or_refused(typed: str) -> None:
    try:
        found = read_content(typed)
    except TextError:
        return
    assert 0 <= found.low <= found.high


def test_an_error_names_a_remedy() -> None:
    with pytest.raises(ContentError, match="write the lower figure first, for example 20-30 %"):
        read_content("30-20 %")
