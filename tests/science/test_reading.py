"""Results as people say them: numbers, ranges, below and above; temperatures are points, their doubts differences."""

import pytest
from pint import UnitRegistry

from chemicals.science.quantity import QuantityError, parse, show
from chemicals.science.reading import MEASURED, READ, ReadingError, parse_in, parse_span

STRIP = READ["test strip"].dimensions


@pytest.mark.parametrize(
    ("quantity", "typed", "least", "most"),
    [
        ("pH", "4.2", 4_200, 4_200),
        ("pH", "pH 6 to 7", 6_000, 7_000),
        ("pH", "4-5", 4_000, 5_000),
        ("temperature", "68 °F", 293_150, 293_150),
        ("temperature", "293.15 K", 293_150, 293_150),
        ("temperature", "-5 to 3 °C", 268_150, 276_150),
        ("temperature", "20 °C – 25 °C", 293_150, 298_150),
        ("conductivity", "1e-1 mS/cm", 100_000, 100_000),
        ("voltage", "3.5 V", 3_500_000, 3_500_000),
        ("air speed", "100 fpm", 508_000, 508_000),
        ("surface tension", "45 dyn/cm", 45_000, 45_000),
        ("test strip", "10 - 25 mg/L", 10_000, 25_000),
        ("test strip", "below 0.5 mg/L", None, 500),
        ("test strip", "<3 ppm", None, 3),
        ("test strip", "> 500 mg/L", 500_000, None),
    ],
)
def test_what_a_result_says(quantity: str, typed: str, least: int | None, most: int | None) -> None:
    found = parse_span(typed, READ[quantity].dimensions)
    assert (found.least, found.most) == (least, most)
    assert found.typed == typed
    assert found.value == (least if least == most else None)


@pytest.mark.parametrize(
    ("quantity", "typed", "told"),
    [
        ("temperature", "21", "has no unit"),
        ("temperature", "21 V", "is a voltage; a temperature is needed"),
        ("temperature", "-300 °C", "below absolute zero"),
        ("voltage", "about 3 V", "cannot be read"),
        ("test strip", "25 to 10 mg/L", "Write the lower end first"),
        ("test strip", "10 mg/L to 25 mmol/L", "Write both in the same unit"),
        ("test strip", "below", "cannot be read"),
        ("test strip", "3 furlongs", "mmol/L"),
        ("air speed", "1,5 m/s", "is ambiguous: write 1.5"),
    ],
)
def test_what_cannot_be_read_says_how_to_write_it(quantity: str, typed: str, told: str) -> None:
    with pytest.raises((QuantityError, ReadingError), match=told):
        parse_span(typed, READ[quantity].dimensions)


def test_a_doubt_about_a_temperature_is_a_difference_and_no_point() -> None:
    assert parse("0.5 °C", "temperature_difference").base == 500
    assert parse("0.9 °F", "temperature_difference").base == 500
    assert parse("0.5 K", "temperature_difference").base == 500
    assert parse("0.5 °C", "temperature").base == 273_650
    assert show(500, "temperature_difference") == "0.5 K"


@pytest.mark.parametrize(
    ("typed", "dimension", "theirs", "base"),
    [
        ("100 ft/min", "speed", "foot/minute", "micrometer/second"),
        ("1.8 km/h", "speed", "kilometer/hour", "micrometer/second"),
        ("72.8 dyn/cm", "surface_tension", "dyne/centimeter", "micronewton/meter"),
        ("0.072 N/m", "surface_tension", "newton/meter", "micronewton/meter"),
    ],
)
def test_new_units_agree_with_the_definitions_of_pint_in_floats(
    typed: str, dimension: str, theirs: str, base: str
) -> None:
    """Pint 0.24, its own registry and plain floats."""
    number = float(typed.split(" ", maxsplit=1)[0])
    assert parse(typed, dimension).base == pytest.approx(UnitRegistry().Quantity(number, theirs).to(base).magnitude)


def test_an_amount_of_several_kinds_is_refused_by_all_of_them() -> None:
    with pytest.raises(QuantityError, match="or a fraction is needed, for example 10 mg/L"):
        parse_in("3 V", STRIP, example="10 mg/L")


def test_everything_that_an_instrument_measures_has_an_example_that_can_be_read() -> None:
    for measurable in MEASURED.values():
        assert parse_span(measurable.example, measurable.dimensions).unit
