"""Drag-out against constructed cases and against tables in print: data/drag_outs.csv and data/drag_out_rates.csv.

Rows marked computed were worked out with another program; a published case with all its figures was not found.
"""

import csv
from pathlib import Path

import pytest

from chemicals.science.calculations import calculate

DATA = Path(__file__).parent / "data"


def rows(name: str) -> list[dict[str, str]]:
    return list(csv.DictReader((DATA / name).read_text("utf-8").splitlines()))


@pytest.mark.parametrize("row", rows("drag_outs.csv"), ids=lambda row: str(row["case"]))
def test_strict_and_simple_are_told_apart(row: dict[str, str]) -> None:
    found = calculate("drag-out", {name: row[name] for name in ("rinse_volume", "dips", "rise", "bath")})
    assert f"{found['drag_out_mL_per_dip']:.3f}" == row["strict_mL"]
    assert f"{found['simple_mL_per_dip']:.3f}" == row["simple_mL"]


@pytest.mark.parametrize("end", ["low", "high"])
@pytest.mark.parametrize("row", rows("drag_out_rates.csv"), ids=lambda row: str(row["work"]))
def test_rates_of_the_trade_come_back_from_a_rinse(row: dict[str, str], end: str) -> None:
    """A rate in print is dragged into a static rinse; from the rise and the area it is found again, in mL/m2."""
    rinsed = calculate(
        "static-rinse",
        {"volume": "5000 gal", "drag_out_per_dip": f"{row[end]} {row['unit']}", "bath": "60 g/L", "dips": 20},
    )
    found = calculate(
        "drag-out",
        {
            "rinse_volume": "5000 gal",
            "dips": 20,
            "rise": rinsed["concentration_g_per_L"],
            "bath": "60 g/L",
            "area_per_dip": row["area"],
        },
    )
    assert found["drag_out_mL_per_m2"] == pytest.approx(float(row[f"{end}_mL_per_m2"]), abs=0.06)


def test_the_drag_out_of_printed_circuit_panels() -> None:
    """Remco, application note 2 (read): 100 panels of 6 ft2 an hour at 20 mL/ft2 and 250 g/L are 50 g/min."""
    litres = 100 * 6 * 20 / 1000
    water = calculate("rinse", {"arrangement": "single", "bath": 250, "target": 0.05, "drag_out": litres})
    brought = litres * 250
    assert brought / 60 == pytest.approx(50)
    left = 0.05 * (water["water_L_per_h"] + litres)
    assert left == pytest.approx(brought)  # what the water carries off and what the panels carry on


def test_250_grams_of_copper_in_a_litre_is_a_slip() -> None:
    """The same note calls its 250 g/L copper. As the usual salt it is 64 g/L of copper, an ordinary bath.

    As copper it would take 982 g of the pentahydrate, three times what a litre of water dissolves at room temperature
    (some 320 g, from memory).
    """
    share = calculate("composition", {"formula": "CuSO4.5H2O"})["mass_fractions"]["Cu"]
    assert 250 * share == pytest.approx(63.6, abs=0.05)
    assert 250 / share == pytest.approx(982, abs=0.5)
    assert 250 / share > 3 * 320
