"""Running rinses against figures in print: data/running_rinses.csv, each row with its source.

`form` says which balance gives the printed figure to its last digit: the strict one, the usual form that leaves out the
drag-out, or either, where the print is too coarse to tell. Rows marked computed were worked out with another program.
"""

import csv
from decimal import Decimal
from pathlib import Path

import pytest

from chemicals.science.calculations import calculate
from chemicals.science.quantity import measure

ROWS = list(csv.DictReader((Path(__file__).parent / "data" / "running_rinses.csv").read_text("utf-8").splitlines()))
FORMS = {"strict": (True, False), "approximate": (False, True), "either": (True, True)}


def litres_per_hour(flow: str) -> float:
    return float(measure(flow, "flow").exact) / 1e9


def run(row: dict[str, str]) -> dict[str, float]:
    asked = {name: row[name] for name in ("arrangement", "stages", "bath", "target", "drag_out")}
    return calculate("rinse", asked)


@pytest.mark.parametrize("row", ROWS, ids=lambda row: f"{row['case']} {row['printed']} {row['unit']}")
def test_the_printed_figure_is_that_of_its_form_and_of_no_other(row: dict[str, str]) -> None:
    found = run(row)
    per_unit = litres_per_hour(f"1 {row['unit']}") if row["unit"] else litres_per_hour(row["drag_out"])
    digits = -int(Decimal(row["printed"]).as_tuple().exponent)
    fits = tuple(
        f"{found[name] / per_unit:.{digits}f}" == row["printed"]
        for name in ("water_L_per_h", "approximate_water_L_per_h")
    )
    assert fits == FORMS[row["form"]]


def test_what_evaporation_brings_back() -> None:
    """Computed with another program: with ten times the drag-out, 90.909, 99.099 and 99.910 % return to the bath."""
    returned = [row for row in ROWS if row["case"].startswith("returned")]
    shares = [100 * (1 - 1 / run(row)["dilution_ratio"]) for row in returned]
    assert shares == pytest.approx([90.909, 99.099, 99.910], abs=5e-4)


def test_a_nickel_bath_of_milligrams_is_a_slip() -> None:
    """The Shiny Metal problem (read) prints 85 mg/L for its bath; its answer, 150 L/min, is that of 85 g/L."""
    asked = {"arrangement": "single", "target": "28.32 mg/L", "drag_out": "0.05 L/min"}
    as_printed = calculate("rinse", asked | {"bath": "85 mg/L"})["water_L_per_h"] / 60
    assert as_printed == pytest.approx(0.1, abs=1e-3)
    assert calculate("rinse", asked | {"bath": "85 g/L"})["water_L_per_h"] / 60 == pytest.approx(150, abs=0.1)


def test_a_rounded_concentration_is_another_dilution() -> None:
    """Yates (read): 2001 to 1 from 10 oz/gal is printed as 0.005 oz/gal, which is 2000 to 1 and a litre less water."""
    found = calculate(
        "rinse", {"arrangement": "single", "bath": "10 oz/gal", "target": "0.005 oz/gal", "drag_out": "1 L/h"}
    )
    assert found["dilution_ratio"] == pytest.approx(2000)
    assert found["water_L_per_h"] == pytest.approx(1999)
    assert round(found["water_L_per_h"]) != 2000


@pytest.mark.parametrize("stages", [2, 3, 4])
def test_a_correction_with_the_wrong_sign(stages: int) -> None:
    """Remco's note (read) prints Q = [(Cp/Cn)^(1/n) + 1/n] K for a counterflow, here at its 100 mg/L.

    The strict root begins with (Cp/Cn)^(1/n) - 1/n, since r^n (1 + 1/r) is nearly Cp/Cn: the 1/n is to be taken away,
    and the printed form is farther from the balance than the form without it.
    """
    found = calculate(
        "rinse", {"arrangement": "counterflow", "stages": stages, "bath": 250, "target": 0.1, "drag_out": 1}
    )
    usual, strict = found["approximate_water_L_per_h"], found["water_L_per_h"]
    assert strict == pytest.approx(usual - 1 / stages, abs=0.05)
    assert strict != pytest.approx(usual + 1 / stages, abs=0.4)
    assert abs(usual + 1 / stages - strict) > abs(usual - strict)
