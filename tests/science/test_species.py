"""Which formulas bring free cyanide, chromium(VI), acid, alkali, ammonia, sulfite, and how much."""

from decimal import Decimal

import pytest

from chemicals.books.events import SPECIES
from chemicals.science.formula import FormulaError, molar_mass, split_water
from chemicals.science.species import moles_of, nanomoles_per_microgram
from chemicals.science.tables import read_table


def test_the_table_speaks_of_the_species_of_the_books_and_of_all_of_them() -> None:
    assert {row["species"] for row in read_table("species")} == set(SPECIES)


@pytest.mark.parametrize(
    ("formula", "moles"),
    [
        ("NaCN", {"free cyanide": 1}),
        ("Ca(CN)2", {"free cyanide": 2}),
        ("KAu(CN)2", {}),
        ("CuCN", {}),
        ("CrO3", {"chromium(VI)": 1}),
        ("K2Cr2O7", {"chromium(VI)": 2}),
        ("Cr2(SO4)3", {}),
        ("H2SO4", {"acid": 2}),
        ("HCl", {"acid": 1}),
        ("H3BO3", {}),
        ("KOH", {"alkali": 1}),
        ("Ca(OH)2", {"alkali": 2}),
        ("(NH4)2SO4", {"ammonia": 2}),
        ("(NH4)2SO3.H2O", {"ammonia": 2, "sulfite": 1}),
        ("Na2S2O5", {"sulfite": 2}),
        ("Na2SO3.7H2O", {"sulfite": 1}),
        ("CuSO4.5H2O", {}),
        ("H2O", {}),
    ],
)
def test_a_formula_brings_so_many_moles(formula: str, moles: dict[str, int]) -> None:
    assert moles_of(formula) == moles


def test_the_order_of_the_symbols_does_not_matter() -> None:
    assert moles_of("SO4H2") == {"acid": 2}


def test_crystal_water_dilutes() -> None:
    """Sodium sulfite heptahydrate, 252.15 g/mol against 126.04 g/mol: half as much in a gram."""
    wet, dry = (nanomoles_per_microgram(formula)["sulfite"] for formula in ("Na2SO3.7H2O", "Na2SO3"))
    assert dry / wet == pytest.approx(Decimal("2.0005"), abs=Decimal("0.001"))
    assert wet == pytest.approx(1000 / molar_mass("Na2SO3.7H2O"), abs=Decimal("1e-9"))


def test_battery_acid_in_moles() -> None:
    """A litre of 1 mol/L sulfuric acid holds 98.08 g and two moles of hydrogen."""
    assert int(98_080_000 * nanomoles_per_microgram("H2SO4")["acid"]) == pytest.approx(2 * 10**9, rel=1e-3)


@pytest.mark.parametrize(
    ("typed", "dry", "water"),
    [("CuSO4.5H2O", "CuSO4", 5), ("CuSO4·H2O", "CuSO4", 1), ("CuSO4", "CuSO4", 0), ("H2O", "H2O", 0),
     ("KAl(SO4)2.12H2O", "KAl(SO4)2", 12), ("2CuCO3.Cu(OH)2", "", 0)],
)  # fmt: skip
def test_water_is_split_off(typed: str, dry: str, water: int) -> None:
    if not dry:
        with pytest.raises(FormulaError):
            split_water(typed)
    else:
        found, count = split_water(typed)
        assert (found.typed, count) == (dry, water)


def test_a_double_salt_stays_whole() -> None:
    assert split_water("CuCO3.Cu(OH)2")[0].atoms == (("Cu", 2), ("C", 1), ("O", 5), ("H", 2))
