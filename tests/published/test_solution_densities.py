"""Densities of plating solutions against tables in print: data/solution_density.csv, each row with its source.

Rows marked computed come from the same equation, worked out with another program: they prove the coefficients.
"""

import csv
from pathlib import Path

import pytest

from chemicals.science.solution import density, swelling_of

ROWS = list(csv.DictReader((Path(__file__).parent / "data" / "solution_density.csv").read_text("utf-8").splitlines()))
IN_PRINT = 2e-3  # the equation smooths measurements of many authors; the handbook prints four decimals
SAME_EQUATION = 1e-4


@pytest.mark.parametrize("row", ROWS, ids=lambda row: f"{row['formula']} {row['mass_percent']} % {row['read']}")
def test_a_density_is_what_the_table_says(row: dict[str, str]) -> None:
    found = density(row["formula"], float(row["mass_percent"]) / 100)
    tolerance = SAME_EQUATION if row["read"] == "computed" else IN_PRINT
    assert found == pytest.approx(float(row["density_g_cm3"]), rel=tolerance)


def test_an_acid_copper_bath_made_up_from_crystals() -> None:
    """200 g/L of the pentahydrate is 127.8 g/L of CuSO4, 11.4 % of the mass: 1.125 g/mL between two rows in print."""
    crystals = 0.2  # kg in a litre
    water = (1 - crystals * swelling_of("CuSO4.5H2O").litres) * 0.99821
    whole = crystals + water
    share = crystals * 0.63923 / whole
    low, high = (float(row["density_g_cm3"]) for row in ROWS if row["formula"] == "CuSO4" and row["mass_percent"] in
                 ("10", "12") and row["read"] in ("read", "computed"))  # fmt: skip
    assert whole == pytest.approx(low + (high - low) * (share - 0.10) / 0.02, rel=IN_PRINT)
