"""Amounts as typed: what is understood, what is refused with which remedy, and what is shown back."""

from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.science import units
from chemicals.science.quantity import LIMIT, MESSAGES, QuantityError, echo, measure, parse, read_number, show


@pytest.mark.parametrize(
    ("typed", "dimension", "base", "shown"),
    [
        ("2.5 gal", "volume", 9_463_529_460, "2.5 gal = 9.464 L"),
        ("1 gal", "volume", 3_785_411_784, "1 gal = 3.785 L"),
        ("1 imp gal", "volume", 4_546_090_000, "1 imp gal = 4.546 L"),
        ("1 imperial_gallon", "volume", 4_546_090_000, "1 imp gal = 4.546 L"),
        ("2 fl oz", "volume", 59_147_059, "2 fl oz = 59.15 mL"),
        ("3 l", "volume", 3_000_000_000, "3 L"),
        ("250 ml", "volume", 250_000_000, "250 mL"),
        ("5 µL", "volume", 5_000, "5 µL"),
        ("5 μL", "volume", 5_000, "5 µL"),  # the Greek letter instead of the micro sign
        ("0.44 A", "current", 440_000, "0.44 A"),
        ("1 A/dm2", "current_density", 1_000_000, "1 A/dm²"),
        ("1 A/dm²", "current_density", 1_000_000, "1 A/dm²"),
        ("1 A/dm^2", "current_density", 1_000_000, "1 A/dm²"),
        ("15 A/ft^2", "current_density", 1_614_587, "15 A/ft² = 1.615 A/dm²"),
        ("15 ASF", "current_density", 1_614_587, "15 A/ft² = 1.615 A/dm²"),
        ("10 mA/cm2", "current_density", 1_000_000, "10 mA/cm² = 1 A/dm²"),
        ("270 g/L", "concentration", 270_000_000, "270 g/L"),
        ("270 g/l", "concentration", 270_000_000, "270 g/L"),
        ("0.2 mol/L", "molar_concentration", 200_000_000, "0.2 mol/L = 200 mmol/L"),
        ("36 oz/gal", "concentration", 269_609_461, "36 oz/gal = 269.6 g/L"),
        ("1 oz", "mass", 28_349_523, "1 oz = 28.35 g"),
        ("1 troy oz", "mass", 31_103_477, "1 ozt = 31.1 g"),
        ("2 dwt", "mass", 3_110_348, "2 dwt = 3.11 g"),
        ("1 t", "mass", 10**12, "1 t = 1000 kg"),
        ("1e3 g", "mass", 10**9, "1000 g = 1 kg"),
        ("5 lb 3 oz", "mass", 2_353_010_419, "83 oz = 2.353 kg"),
        ("1.5 h", "time", 5_400_000, "1.5 h"),
        ("4 h 30 min", "time", 16_200_000, "270 min = 4.5 h"),
        ("4h20min", "time", 15_600_000, "260 min = 4.333 h"),
        ("1.5 A h", "charge", 5_400_000_000, "1.5 Ah"),
        ("2 C", "charge", 2_000_000, "2 C"),
        ("0.05 mg/m3", "air_concentration", 50_000, "0.05 mg/m³"),
        ("6 µg/m³", "air_concentration", 6000, "6 µg/m³"),
        ("0.5 ft2", "area", 46_452, "0.5 ft² = 4.645 dm²"),
        ("8.96 g/cm3", "density", 8_960_000, "8.96 g/cm³"),
        ("20 °C", "temperature", 293_150, "20 °C"),
        ("68 F", "temperature", 293_150, "68 °F = 20 °C"),
        ("-5 degC", "temperature", 268_150, "-5 °C"),
        ("25 %", "fraction", 250_000, "25 %"),
        ("50 ppm", "fraction", 50, "50 ppm"),
        ("250 µS/cm", "conductivity", 250_000, "250 µS/cm"),
        ("pH 4.55", "ph", 4_550, "pH 4.55"),
        ("4.55", "ph", 4_550, "pH 4.55"),
        ("3.5 V", "voltage", 3_500_000, "3.5 V"),
        ("10 µm", "length", 10_000, "10 µm"),
        ("0.5 mol", "amount_of_substance", 500_000_000, "0.5 mol = 500 mmol"),
        ("5\N{NO-BREAK SPACE}g", "mass", 5_000_000, "5 g"),
        ("５ g", "mass", 5_000_000, "5 g"),
        (".5 g", "mass", 500_000, "0.5 g = 500 mg"),
        ("5. g", "mass", 5_000_000, "5 g"),
        ("0 g", "mass", 0, "0 g"),
        ("0e-999 g", "mass", 0, "0 g"),
        ("5 GRAMS", "mass", 5_000_000, "5 g"),
    ],
)
def test_what_is_typed_is_understood_and_echoed(typed: str, dimension: str, base: int, shown: str) -> None:
    quantity = parse(typed, dimension)
    assert (quantity.base, echo(quantity)) == (base, shown)
    assert quantity.typed == typed
    assert quantity.base_unit == units.DIMENSIONS[dimension].base_unit


@pytest.mark.parametrize(
    ("typed", "dimension", "code", "message"),
    [
        ("1,500 g", "mass", "ambiguous", '"1,500" is ambiguous: write 1500 or 1.5.'),
        ("1,5 g", "mass", "ambiguous", '"1,5" is ambiguous: write 1.5.'),
        ("12345,678 g", "mass", "ambiguous", '"12345,678" is ambiguous: write 12345.678.'),
        ("0,500 g", "mass", "ambiguous", '"0,500" is ambiguous: write 0.5.'),
        ("-1,500 g", "mass", "ambiguous", '"-1,500" is ambiguous: write -1500 or -1.5.'),
        ("1.500,5 g", "mass", "ambiguous", '"1.500,5" is ambiguous: write 1500.5.'),
        ("1,500.5 g", "mass", "ambiguous", '"1,500.5" is ambiguous: write 1500.5.'),
        ("1,500,000 g", "mass", "ambiguous", '"1,500,000" is ambiguous: write 1500000.'),
        ("1.500.000 g", "mass", "ambiguous", '"1.500.000" is ambiguous: write 1500000.'),
        ("1 500 g", "mass", "ambiguous", '"1 500" is ambiguous: write 1500 or 1.5.'),
        ("1'500 g", "mass", "ambiguous", '"1\'500" is ambiguous: write 1500 or 1.5.'),
        ("1 5 g", "mass", "ambiguous", '"1 5" is ambiguous: write 15 or 1.5.'),
        ("1_500 g", "mass", "ambiguous", '"1_500" is ambiguous: write 1500 or 1.5.'),
        ("5 ton", "mass", "ambiguous_unit", '"ton" is ambiguous: write t (1000 kg), short ton or long ton.'),
        ("5 gr", "mass", "ambiguous_unit", '"gr" is ambiguous: write g (gram) or grain.'),
        ("5 m", "time", "ambiguous_unit", '"m" is ambiguous: write min (minute) or m (metre).'),
        ("", "mass", "empty", "Nothing is typed: write a number and a unit, for example 2.5 g."),
        ("  ", "mass", "empty", "Nothing is typed: write a number and a unit, for example 2.5 g."),
        ("nan g", "mass", "not_finite", '"nan g" is not a finite number: write for example 2.5 g.'),
        ("-inf", "mass", "not_finite", '"-inf" is not a finite number: write for example 2.5 g.'),
        ("Infinity L", "volume", "not_finite", '"Infinity L" is not a finite number: write for example 2.5 L.'),
        ("much", "mass", "not_a_number", 'The number in "much" cannot be read: write for example 2.5 g.'),
        ("1..5 g", "mass", "not_a_number", 'The number in "1..5 g" cannot be read: write for example 2.5 g.'),
        ("10² g", "mass", "not_a_number", 'The number in "10² g" cannot be read: write for example 2.5 g.'),
        ("5", "mass", "missing_unit", '"5" has no unit: write for example 2.5 g.'),
        ("0.25", "fraction", "missing_unit", '"0.25" has no unit: write for example 25 %.'),
        ("2 L", "mass", "wrong_dimension", '"2 L" is a volume; a mass is needed, for example 2.5 g.'),
        ("2 oz", "volume", "wrong_dimension", '"2 oz" is a mass; a volume is needed, for example 2.5 L.'),
        ("2 h", "charge", "wrong_dimension", '"2 h" is a time; a charge is needed, for example 1.5 Ah.'),
        ("-3 g", "mass", "negative", '"-3 g" is negative: write zero or more.'),
        ("−3 g", "mass", "negative", '"-3 g" is negative: write zero or more.'),
        (
            "-300 degC",
            "temperature",
            "below_absolute_zero",
            '"-300 degC" is below absolute zero: write a warmer temperature.',
        ),
        ("0.9 ug", "mass", "too_small", '"0.9 ug" is less than can be recorded: write 0 or at least 1 µg.'),
        ("0.4 ug", "mass", "too_small", '"0.4 ug" is less than can be recorded: write 0 or at least 1 µg.'),
        ("1e-40 g", "mass", "too_small", '"1e-40 g" is less than can be recorded: write 0 or at least 1 µg.'),
        ("1e7 kg", "mass", "too_large", '"1e7 kg" is more than can be recorded: write at most 1000000 kg.'),
        (
            "1e999999999 g",
            "mass",
            "too_large",
            '"1e999999999 g" is more than can be recorded: write at most 1000000 kg.',
        ),
        ("5 MA", "current", "unknown_unit", '"MA" is not a unit known here: write one of µA, mA, A, kA.'),
        ("1/2 A", "current", "unknown_unit", '"/2 A" is not a unit known here: write one of µA, mA, A, kA.'),
        ("5 A!", "current", "unknown_unit", '"A!" is not a unit known here: write one of µA, mA, A, kA.'),
        (
            "1 min 2 h",
            "time",
            "unknown_unit",
            '"min 2 h" is not a unit known here: write one of ms, s, min, h, d, week.',
        ),
        (
            "1 h -5 min",
            "time",
            "unknown_unit",
            '"h -5 min" is not a unit known here: write one of ms, s, min, h, d, week.',
        ),
    ],
)
def test_what_is_refused_and_with_which_remedy(typed: str, dimension: str, code: str, message: str) -> None:
    with pytest.raises(QuantityError) as refused:
        parse(typed, dimension)
    assert (refused.value.code, refused.value.message) == (code, message)
    assert MESSAGES[code] % refused.value.params == message


def test_a_long_text_is_refused_before_it_is_read() -> None:
    with pytest.raises(QuantityError) as refused:
        parse("1" * 5000, "mass")
    assert refused.value.code == "too_long"


def test_a_fraction_in_one_character_is_never_read_as_digits() -> None:
    with pytest.raises(QuantityError, match="is not a unit known here"):
        parse("1½ L", "volume")


def test_a_bare_number_takes_the_default_unit() -> None:
    assert parse("0.44", "current", default_unit="A").base == 440_000
    assert parse("0.25", "fraction", default_unit="1").base == 250_000
    assert parse("440 mA", "current", default_unit="A").base == 440_000


def test_a_negative_amount_is_taken_where_it_is_allowed() -> None:
    assert parse("-1.5 g", "mass", allow_negative=True).base == -1_500_000
    assert echo(parse("-1.5 g", "mass", allow_negative=True)) == "-1.5 g"


def test_halves_of_a_base_unit_go_to_the_even_neighbour() -> None:
    assert [parse(text, "mass").base for text in ("1.5 ug", "2.5 ug", "3.5 ug")] == [2, 2, 4]


def test_the_limit_itself_is_taken() -> None:
    assert parse("1000000 kg", "mass").base == LIMIT
    with pytest.raises(QuantityError, match="more than can be recorded"):
        parse("1000000.000000001 kg", "mass")


def test_a_measure_keeps_what_the_books_could_not() -> None:
    assert measure("0.4 ug", "mass").exact == Decimal("0.4")
    assert measure("0.5 mm2", "area").exact == Decimal("0.5")


@pytest.mark.parametrize("typed", ["1,500", "nan", "5 g", "1e31", "1e-31", "", "x", "10²"])
def test_a_bare_number_is_read_as_strictly(typed: str) -> None:
    with pytest.raises(QuantityError):
        read_number(typed)


def test_a_bare_number_is_exact() -> None:
    assert read_number(" -1.50e2 ") == Decimal("-150")
    assert read_number("0e99") == 0


@pytest.mark.parametrize(
    ("base", "dimension", "text"),
    [
        (1_234_567, "mass", "1.235 g"),
        (20_000_000_000, "volume", "20 L"),
        (999_999, "mass", "1 g"),  # never "1000 mg"
        (12_345_678_000_000, "mass", "12346 kg"),  # no grouping, no rounding of whole units
        (-1_500, "mass", "-1.5 mg"),
        (1, "mass", "1 µg"),
        (0, "volume", "0 L"),
        (0, "temperature", "-273.2 °C"),
        (4_550, "ph", "pH 4.55"),
        (3_600_000, "charge", "1 mAh"),
        (105, "fraction", "105 ppm"),
    ],
)
def test_base_units_are_shown_in_readable_units(base: int, dimension: str, text: str) -> None:
    assert show(base, dimension) == text


def test_more_digits_on_request() -> None:
    assert show(1_234_567_891, "mass", digits=7) == "1.234568 kg"


any_dimension = st.sampled_from(sorted(units.DIMENSIONS))


@given(any_dimension, st.integers(-LIMIT // 2, LIMIT // 2))
def test_what_is_shown_can_be_typed_again(dimension: str, base: int) -> None:
    """To the four digits shown; and pH and temperature are on scales of their own."""
    base = max(base, 1000) if dimension == "temperature" else base  # -273.2 °C would round to below absolute zero
    again = parse(show(base, dimension), dimension, allow_negative=True).base
    scale = abs(base - 273_150) if dimension == "temperature" else abs(base)
    assert abs(again - base) <= max(1, scale / 1000)
    assert not again or (again > 0) == (base > 0)


@given(any_dimension, st.data())
def test_every_unit_of_the_table_converts_and_back_within_its_dimension(dimension: str, data: st.DataObject) -> None:
    unit = data.draw(st.sampled_from(units.DIMENSIONS[dimension].units))
    typed = f"7 {'' if unit.name == '1' else unit.name}"
    quantity = parse(typed, dimension, default_unit=unit.name)
    assert quantity.unit == unit.name
    assert quantity.base == round(units.to_base(Decimal(7), unit, dimension))


@given(st.text(max_size=100), any_dimension)
def test_whatever_is_typed_is_understood_or_refused_by_name(typed: str, dimension: str) -> None:
    try:
        understood = abs(parse(typed, dimension).base) <= LIMIT
    except QuantityError as refused:
        understood = refused.message == MESSAGES[refused.code] % refused.params
    assert understood


@given(st.integers(0, 10**6), st.sampled_from([",", "'", " ", "_"]), st.integers(0, 999), any_dimension)
def test_a_grouped_or_decimal_comma_number_is_never_guessed(whole: int, mark: str, rest: int, dimension: str) -> None:
    unit = units.DIMENSIONS[dimension].units[0].name
    with pytest.raises(QuantityError) as refused:
        parse(f"{whole}{mark}{rest:03d} {unit}", dimension)
    assert refused.value.code == "ambiguous"


@given(st.decimals(min_value=0, max_value=10**6, places=3), st.sampled_from(["g", "kg", "oz", "lb", "ozt"]))
def test_masses_add_up_to_the_rounding_of_a_microgram(value: Decimal, unit: str) -> None:
    if value == 0:
        return
    once = measure(f"{value} {unit}", "mass").exact
    twice = measure(f"{value * 2} {unit}", "mass").exact
    assert twice == once * 2
