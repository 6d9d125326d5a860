"""Substances to begin a register with: formulas against two other readers, and against the baths of the handbooks.

data/bath_components.csv: every salt, acid and alkali of published bath compositions, as written there.
"""

import csv
from pathlib import Path

import periodictable
import pytest
from molmass import Formula

from chemicals.science.formula import mass_fractions, molar_mass, parse_formula
from chemicals.science.substances import list_starters

DATA = Path(__file__).parent / "data"
COMPONENTS = list(csv.DictReader((DATA / "bath_components.csv").read_text(encoding="utf-8").splitlines()))
FORMULAS = sorted({row.formula for row in list_starters()} | {row["formula"] for row in COMPONENTS})
TWO_LIBRARIES = 1e-4  # sulfur, the worst: 32.06 abridged against 32.0648


@pytest.mark.parametrize("formula", FORMULAS)
def test_molar_mass_against_molmass(formula: str) -> None:
    assert float(molar_mass(formula)) == pytest.approx(Formula(formula).mass, rel=TWO_LIBRARIES)


@pytest.mark.parametrize("formula", FORMULAS)
def test_molar_mass_against_the_parser_of_periodictable(formula: str) -> None:
    """It takes round brackets only, and a plus sign before crystal water."""
    theirs = periodictable.formula(formula.translate(str.maketrans(".[]", "+()"))).mass
    assert float(molar_mass(formula)) == pytest.approx(theirs, rel=1e-7)


@pytest.mark.parametrize("formula", FORMULAS)
def test_mass_fractions_against_molmass(formula: str) -> None:
    second = {item.symbol: item.fraction for item in Formula(formula).composition().values()}
    ours = {symbol: float(value) for symbol, value in mass_fractions(formula).items()}
    assert ours == pytest.approx(second, rel=2 * TWO_LIBRARIES)


@pytest.mark.parametrize("row", COMPONENTS, ids=lambda row: str(row["component"]))
def test_every_component_of_a_published_bath_is_offered(row: dict[str, str]) -> None:
    atoms = sorted(parse_formula(row["formula"]).atoms)
    offered = [starter for starter in list_starters() if sorted(parse_formula(starter.formula).atoms) == atoms]
    assert len(offered) == 1
    if row["component"][0].islower() and not row["component"].startswith("free"):
        assert row["component"] == offered[0].name.lower()
