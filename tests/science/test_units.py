"""The table of units: no spelling means two units, and every factor agrees with its definition, worked out by hand."""

from decimal import Decimal
from fractions import Fraction

import pytest

from chemicals.science import units

INCH = Fraction("25.4")  # mm
FOOT = 12 * INCH
POUND = Fraction(453_592_370)  # ug
GRAIN = POUND / 7000
GALLON = 231 * INCH**3 * 1000  # nL: 231 cubic inches, 1 mm3 = 1000 nL

# Definitions: NIST Handbook 44 appendix C (pound, grain, inch, US gallon of 231 cubic inches); UK Weights and Measures
# Act 1985 (imperial gallon of 4.54609 L). From memory; the arithmetic is exact.
DEFINITIONS = {
    ("mass", "lb"): POUND,
    ("mass", "oz"): POUND / 16,
    ("mass", "grain"): GRAIN,
    ("mass", "ozt"): 480 * GRAIN,
    ("mass", "dwt"): 24 * GRAIN,
    ("mass", "ct"): Fraction(200_000),
    ("mass", "short ton"): 2000 * POUND,
    ("mass", "long ton"): 2240 * POUND,
    ("mass", "t"): Fraction(10**12),
    ("volume", "gal"): GALLON,
    ("volume", "qt"): GALLON / 4,
    ("volume", "pt"): GALLON / 8,
    ("volume", "fl oz"): GALLON / 128,
    ("volume", "imperial_gallon"): Fraction(4_546_090_000),
    ("volume", "ft3"): FOOT**3 * 1000,
    ("volume", "m3"): Fraction(10**12),
    ("charge", "Ah"): Fraction(3_600_000_000),
    ("charge", "A min"): Fraction(60_000_000),
    ("time", "d"): Fraction(86_400_000),
    ("concentration", "oz/gal"): POUND / 16 / GALLON * 10**9,
    ("concentration", "ozt/gal"): 480 * GRAIN / GALLON * 10**9,
    ("air_concentration", "mg/m3"): Fraction(10**6),
    ("air_concentration", "g/m3"): Fraction(10**9),
    ("area", "in2"): INCH**2,
    ("area", "ft2"): FOOT**2,
    ("current_density", "A/ft2"): 10**6 * 10**4 / FOOT**2,
    ("current_density", "A/in2"): 10**6 * 10**4 / INCH**2,
    ("current_density", "mA/cm2"): Fraction(100_000),
    ("density", "kg/m3"): Fraction(1000),
    ("flow", "gal/min"): GALLON * 60,
    ("flow", "gal/d"): GALLON / 24,
    ("flow", "mL/min"): Fraction(60_000_000),
    ("flow", "m3/d"): Fraction(10**12) / 24,
    ("length", "thou"): INCH * 1000,
    ("length", "uin"): INCH,
    ("conductivity", "mS/m"): Fraction(10_000),
}


def unit_of(dimension: str, name: str) -> units.Unit:
    return next(unit for unit in units.DIMENSIONS[dimension].units if unit.name == name)


@pytest.mark.parametrize(("dimension", "name"), DEFINITIONS)
def test_factors_agree_with_their_definitions(dimension: str, name: str) -> None:
    factor = Fraction(units.to_base(Decimal(1), unit_of(dimension, name), dimension))
    assert abs(factor / DEFINITIONS[dimension, name] - 1) < Fraction(1, 10**22)


def test_us_gallon_is_exact_in_nanolitres() -> None:
    assert units.to_base(Decimal(1), unit_of("volume", "gal"), "volume") == 3_785_411_784


@pytest.mark.parametrize("dimension", sorted(units.DIMENSIONS))
def test_no_spelling_means_two_units(dimension: str) -> None:
    words = [
        units.key(word).casefold()
        for unit in units.DIMENSIONS[dimension].units
        for word in {units.key(spelling) for spelling in (unit.name, *unit.spellings)}
    ]
    assert sorted(words) == sorted(set(words))


@pytest.mark.parametrize("dimension", sorted(units.DIMENSIONS))
def test_a_dimension_is_complete(dimension: str) -> None:
    known = units.DIMENSIONS[dimension]
    names = [unit.name for unit in known.units]
    assert {name for name, _ in known.shown} <= set(names)
    assert [least for _, least in known.shown] == sorted((least for _, least in known.shown), reverse=True)
    assert known.shown[-1][1] == 0
    assert units.find(known.example.split(" ", 1)[1], dimension) is not None
    assert all(units.find(name, dimension) is not None for name in names)


def test_a_capital_m_is_mega_and_never_taken_for_milli() -> None:
    assert units.find("ML", "volume") is None
    assert units.find("Mg", "mass") is None
    assert units.find("KG", "mass") == unit_of("mass", "kg")


def test_what_is_ambiguous_is_a_unit_of_no_dimension_that_would_guess() -> None:
    for word in ("ton", "gr"):
        assert units.find_elsewhere(word) is None
