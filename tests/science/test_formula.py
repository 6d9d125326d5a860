"""Formulas: what is read, what is refused by name, and that the arithmetic is steady to the last digit."""

from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.science.formula import (
    MESSAGES,
    METALS,
    FormulaError,
    atomic_weight,
    element_name,
    mass_fractions,
    metal_fraction,
    molar_mass,
    parse_formula,
)


@pytest.mark.parametrize(
    ("typed", "atoms"),
    [
        ("Cu", {"Cu": 1}),
        ("CuSO4.5H2O", {"Cu": 1, "S": 1, "O": 9, "H": 10}),
        ("CuSO4·5H2O", {"Cu": 1, "S": 1, "O": 9, "H": 10}),
        ("CuSO4*5H2O", {"Cu": 1, "S": 1, "O": 9, "H": 10}),
        ("CuSO₄ · 5 H₂O", {"Cu": 1, "S": 1, "O": 9, "H": 10}),
        ("CuCO3.Cu(OH)2", {"Cu": 2, "C": 1, "O": 5, "H": 2}),
        ("KAu(CN)2", {"K": 1, "Au": 1, "C": 2, "N": 2}),
        ("K4[Fe(CN)6].3H2O", {"K": 4, "Fe": 1, "C": 6, "N": 6, "H": 6, "O": 3}),
        ("{[Ni(NH3)6]}Cl2", {"Ni": 1, "N": 6, "H": 18, "Cl": 2}),
        ("Fe2(SO4)3", {"Fe": 2, "S": 3, "O": 12}),
        ("CH3COOH", {"C": 2, "H": 4, "O": 2}),
    ],
)
def test_atoms_are_counted(typed: str, atoms: dict[str, int]) -> None:
    assert dict(parse_formula(typed).atoms) == atoms


@pytest.mark.parametrize(
    ("typed", "code", "named"),
    [
        ("", "empty", "CuSO4.5H2O"),
        ("H" * 201, "too_long", "200"),
        ("XxO", "unknown_element", '"Xx"'),
        ("CuQ4", "unknown_element", '"Q"'),
        ("D2O", "unknown_element", '"D"'),  # an isotope, no element
        ("Cu2+", "charge", '"Cu2+"'),
        ("SO4^2-", "charge", "neutral"),
        ("[Cu(CN)4]3-", "charge", "neutral"),
        ("Cu(", "brackets", '"Cu("'),
        ("Cu)", "brackets", '"Cu)"'),
        ("Cu(OH]2", "brackets", "brackets"),
        ("Cu()2", "brackets", "brackets"),
        ("Cu0O", "count", "0"),
        ("Cu99999", "count", "9999"),
        ("(H999)999", "count", "9999"),
        ("CaSO4.0.5H2O", "syntax", '"0"'),
        ("2NaOH", "syntax", '"2NaOH"'),
        ("cuso4", "syntax", '"cuso4"'),
        ("CuSO4.", "syntax", '"."'),
        (".5H2O", "syntax", '"."'),
        ("Cu SO4!", "syntax", '"!"'),
    ],
)
def test_what_is_no_formula_is_refused_by_name(typed: str, code: str, named: str) -> None:
    with pytest.raises(FormulaError) as refused:
        parse_formula(typed)
    assert refused.value.code == code
    assert named in refused.value.message
    assert MESSAGES[code] % refused.value.params == refused.value.message


def test_results_are_decimals_of_eight_digits() -> None:
    assert molar_mass("CuSO4.5H2O") == Decimal("249.67700")
    assert str(metal_fraction("CuSO4.5H2O", "Cu")) == "0.25451283"
    assert str(metal_fraction("KAu(CN)2", "Au")) == "0.68367225"
    assert metal_fraction("CuSO4", "Au") == 0


def test_an_unknown_symbol_is_refused_by_name() -> None:
    for call in (atomic_weight, element_name):
        with pytest.raises(FormulaError, match='"Xx" is no element'):
            call("Xx")
    with pytest.raises(FormulaError, match='"n" is no element'):  # the neutron of the library is none
        metal_fraction("Cu", "n")


def test_the_metals_have_names_and_weights() -> None:
    assert {"Cu", "Ni", "Au", "Ag", "Cr", "Zn", "Sn", "Pd", "Rh", "Pt", "Fe", "Pb", "Cd", "In", "Co"} <= set(METALS)
    assert element_name("Cu") == "copper"
    assert all(atomic_weight(metal) > 20 for metal in METALS)


symbols = st.sampled_from(["H", "C", "N", "O", "S", "K", "Cu", "Ni", "Au", "Ag", "Cr", "Cl"])
units_of_formula = st.lists(st.tuples(symbols, st.integers(1, 20)), min_size=1, max_size=5)


def written(atoms: list[tuple[str, int]]) -> str:
    return "".join(f"{symbol}{count}" for symbol, count in atoms)


@given(units_of_formula, st.integers(1, 20))
def test_a_bracket_multiplies(atoms: list[tuple[str, int]], times: int) -> None:
    text = written(atoms)
    single, many = molar_mass(text), molar_mass(f"({text}){times}")
    assert abs(many / single / times - 1) < Decimal("1e-7")
    assert all(
        abs(value - mass_fractions(text)[symbol]) <= Decimal("1e-8")
        for symbol, value in mass_fractions(f"({text}){times}").items()
    )


@given(units_of_formula, units_of_formula, st.integers(1, 20))
def test_a_hydrate_mark_adds(salt: list[tuple[str, int]], water: list[tuple[str, int]], times: int) -> None:
    whole = molar_mass(f"{written(salt)}.{times}{written(water)}")
    assert abs(whole - molar_mass(written(salt)) - times * molar_mass(written(water))) < whole / 10**6


@given(units_of_formula)
def test_mass_fractions_add_up_to_one(atoms: list[tuple[str, int]]) -> None:
    fractions = mass_fractions(written(atoms))
    assert abs(sum(fractions.values(), Decimal(0)) - 1) < Decimal("1e-7")
    assert all(0 < value <= 1 for value in fractions.values())


@given(st.text(alphabet="CuSO45H2.·*()[]{}KAN+-^ x", max_size=30))
def test_whatever_is_typed_is_understood_or_refused_by_name(typed: str) -> None:
    try:
        understood = parse_formula(typed).molar_mass > 0
    except FormulaError as refused:
        understood = refused.message == MESSAGES[refused.code] % refused.params
    assert understood
