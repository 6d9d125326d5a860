"""Titrations against results in print: data/titrations.csv, each row with its source; and an uncertainty budget."""

import csv
from decimal import Decimal
from math import hypot
from pathlib import Path
from statistics import fmean, stdev
from typing import Any

import pytest

from chemicals.science.calculations import calculate

ROWS = list(csv.DictReader((Path(__file__).parent / "data" / "titrations.csv").read_text("utf-8").splitlines()))
WITH_A_TITRE = [row for row in ROWS if row["titre"] != "1"]
TRUNCATED = 2e-4  # the laboratory reckoned with 6.354 mg/mL; 63.546 g/mol is 6.3546


def run(row: dict[str, str], **other: object) -> dict[str, Any]:
    names = ("analyte", "titrant", "titre", "volume", "blank", "sample", "mole_ratio")
    return calculate("titration", {**{name: row[name] for name in names}, **other})


@pytest.mark.parametrize("row", [row for row in ROWS if row["titre"] == "1"], ids=lambda row: str(row["case"]))
def test_a_result_in_print(row: dict[str, str]) -> None:
    digits = -int(Decimal(row["printed_g_per_L"]).as_tuple().exponent)
    assert f"{run(row)['concentration_g_per_L']:.{digits}f}" == row["printed_g_per_L"]


@pytest.mark.parametrize("row", WITH_A_TITRE, ids=lambda row: str(row["case"]))
def test_what_only_a_titre_explains(row: dict[str, str]) -> None:
    """Five repeats (read) come out half a percent too high with the titrant as labelled; 0.995 explains them all."""
    printed = float(row["printed_g_per_L"])
    assert run(row)["concentration_g_per_L"] == pytest.approx(printed, rel=TRUNCATED)
    assert run(row, titre=1)["concentration_g_per_L"] != pytest.approx(printed, rel=4e-3)


def test_the_scatter_of_five_repeats() -> None:
    """Printed (read): 9.62 g/L with a standard deviation of 0.02; the scatter of the volumes explains it."""
    volumes = [float(row["volume"].split()[0]) for row in WITH_A_TITRE]
    found = run(WITH_A_TITRE[0], volume=fmean(volumes), sd={"volume": stdev(volumes)})
    assert f"{found['concentration_g_per_L']:.2f}" == "9.62"
    assert f"{found['sd_g_per_L']:.2f}" == "0.02"
    printed = [float(row["printed_g_per_L"]) for row in WITH_A_TITRE]
    assert found["sd_g_per_L"] == pytest.approx(stdev(printed), rel=0.02)


# Eurachem/CITAC guide "Quantifying Uncertainty in Analytical Measurement", example A3: hydrochloric acid by sodium
# hydroxide. Table A3.1 as read at measurementuncertainty.org (second edition): value and standard uncertainty.
PHTHALATE, PURITY, MOLAR_MASS = (0.3888, 0.00013), (1.0, 0.00029), (204.2212, 0.0038)  # g; share; g/mol
FIRST, SECOND, ALIQUOT = (18.64, 0.016), (14.89, 0.015), (15.0, 0.011)  # mL
REPEATABILITY = 0.001


def acid(*, repeatability: float) -> tuple[float, float, dict[str, float]]:
    """Concentration and standard uncertainty in mol/L, and the shares."""
    alkali = 1000 * PHTHALATE[0] * PURITY[0] / (MOLAR_MASS[0] * FIRST[0])
    doubt = alkali * hypot(*(sd / value for value, sd in (PHTHALATE, PURITY, MOLAR_MASS, FIRST)))
    sd = {"titrant": doubt, "titre": repeatability, "volume": SECOND[1], "sample": ALIQUOT[1]}
    found = calculate(
        "titration", {"analyte": "HCl", "titrant": alkali, "volume": SECOND[0], "sample": ALIQUOT[0], "sd": sd}
    )
    molar = calculate("composition", {"formula": "HCl"})["molar_mass_g_mol"]
    shares = {row["quantity"]: row["share"] for row in found["budget"]}
    return found["concentration_g_per_L"] / molar, found["sd_g_per_L"] / molar, shares


def test_an_acid_standardised_by_an_alkali() -> None:
    concentration, _, shares = acid(repeatability=REPEATABILITY)
    assert concentration == pytest.approx(0.10139, abs=5e-6)
    in_print = {"titre": 0.001, "volume": 0.0010, "sample": 0.00073}  # the column of relative uncertainties
    whole = hypot(0.00033, 0.00029, 0.00086, 0.000019, *in_print.values())
    assert {name: shares[name] for name in in_print} == pytest.approx(
        {name: (part / whole) ** 2 for name, part in in_print.items()}, rel=0.03
    )


def test_a_combined_uncertainty_without_one_of_its_rows_is_a_slip() -> None:
    """The table prints 0.00016 mol/L (0.0016 relative); its own column gives 0.00019. The repeatability is left out."""
    concentration, strict, _ = acid(repeatability=REPEATABILITY)
    _, without, _ = acid(repeatability=0)
    assert f"{strict:.5f}" == "0.00019"
    assert f"{strict:.5f}" != "0.00016"
    assert (f"{without:.5f}", f"{without / concentration:.4f}") == ("0.00016", "0.0016")
