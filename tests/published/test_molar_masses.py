"""Molar masses and metal fractions against a second library, against sums by hand, and against figures in print.

The project's figures come from periodictable. molmass has its own parser and its own table of weights. The sums by hand
use IUPAC weights of 1995 and 2013 (data/atomic_weights.csv), which differ from today's by a few parts in a hundred
thousand; so does the tolerance.
"""

import csv
from pathlib import Path

import periodictable
import pytest
from molmass import Formula

from chemicals.science.formula import METALS, atomic_weight, mass_fractions, metal_fraction, molar_mass, parse_formula

DATA = Path(__file__).parent / "data"
SALTS = list(csv.DictReader((DATA / "salts.csv").read_text(encoding="utf-8").splitlines()))
WEIGHTS = {
    row["symbol"]: float(row["weight"])
    for row in csv.DictReader((DATA / "atomic_weights.csv").read_text(encoding="utf-8").splitlines())
}

TWO_LIBRARIES = 1e-4  # sulfur, the worst: 32.06 abridged against 32.0648
BY_HAND = 2e-4

by_formula = pytest.mark.parametrize("row", SALTS, ids=lambda row: str(row["formula"]))


def hydrate(formula: str) -> str:
    """The formula as periodictable's own parser takes it: round brackets, a plus sign before crystal water."""
    return formula.translate(str.maketrans(".[]", "+()"))


@by_formula
def test_molar_mass_against_molmass(row: dict[str, str]) -> None:
    assert float(molar_mass(row["formula"])) == pytest.approx(Formula(row["formula"]).mass, rel=TWO_LIBRARIES)


@by_formula
def test_molar_mass_against_the_parser_of_periodictable(row: dict[str, str]) -> None:
    """The same weights, but their own reading of the formula: eight digits."""
    assert float(molar_mass(row["formula"])) == pytest.approx(
        periodictable.formula(hydrate(row["formula"])).mass, rel=1e-7
    )


@by_formula
def test_mass_fractions_against_molmass(row: dict[str, str]) -> None:
    second = {item.symbol: item.fraction for item in Formula(row["formula"]).composition().values()}
    ours = {symbol: float(value) for symbol, value in mass_fractions(row["formula"]).items()}
    assert ours == pytest.approx(second, rel=2 * TWO_LIBRARIES)
    assert ours[row["element"]] == float(metal_fraction(row["formula"], row["element"]))


@pytest.mark.parametrize("metal", METALS)
def test_atomic_weights_of_the_balanced_metals_against_molmass(metal: str) -> None:
    assert float(atomic_weight(metal)) == pytest.approx(Formula(metal).mass, rel=2e-5)


@pytest.mark.parametrize(
    ("formula", "counts", "metal"),
    [
        ("CuSO4.5H2O", {"Cu": 1, "S": 1, "O": 9, "H": 10}, "Cu"),
        ("NiSO4.6H2O", {"Ni": 1, "S": 1, "O": 10, "H": 12}, "Ni"),
        ("KAu(CN)2", {"K": 1, "Au": 1, "C": 2, "N": 2}, "Au"),
        ("Ni(NH2SO3)2", {"Ni": 1, "N": 2, "H": 4, "S": 2, "O": 6}, "Ni"),
        ("CrO3", {"Cr": 1, "O": 3}, "Cr"),
    ],
)
def test_against_sums_by_hand(formula: str, counts: dict[str, int], metal: str) -> None:
    by_hand = sum(WEIGHTS[symbol] * count for symbol, count in counts.items())
    assert dict(parse_formula(formula).atoms) == counts
    assert float(molar_mass(formula)) == pytest.approx(by_hand, rel=BY_HAND)
    assert float(metal_fraction(formula, metal)) == pytest.approx(WEIGHTS[metal] * counts[metal] / by_hand, rel=BY_HAND)


@pytest.mark.parametrize(
    ("formula", "printed", "half_digit"),
    [
        ("KAu(CN)2", 288.101, 0.0005),  # Wikipedia, Potassium dicyanoaurate (read)
        ("CuSO4.5H2O", 249.685, 0.011),  # Wikipedia, Copper(II) sulfate (memory): with sulfur 32.066 of before 2009
        ("NiSO4.6H2O", 262.85, 0.011),  # Wikipedia, Nickel(II) sulfate (memory)
        ("KAg(CN)2", 199.0, 0.05),  # CRC Handbook of Chemistry and Physics (memory)
    ],
)
def test_molar_masses_in_print(formula: str, printed: float, half_digit: float) -> None:
    assert float(molar_mass(formula)) == pytest.approx(printed, abs=half_digit)


def test_gold_in_potassium_gold_cyanide_in_print() -> None:
    """Around 68.2 % in German-language Wikipedia (read); 68.3 % on the tins of the trade (common practice)."""
    gold = 100 * float(metal_fraction("KAu(CN)2", "Au"))
    assert 68.2 < gold < 68.4
