"""Electrochemical equivalents and thickness rates against two handbook tables and a gold plater's data sheet.

data/electrochemical_equivalents.csv holds the printed figures, each row with its source. Where a printed figure cannot
be right, the row says which one: there the test is that we do not agree with it, but do with what it should have been.
"""

import csv
from pathlib import Path

import pytest

from chemicals.science import faraday
from chemicals.science.calculations import calculate

TABLE = Path(__file__).parent / "data" / "electrochemical_equivalents.csv"
ROWS = list(csv.DictReader(TABLE.read_text(encoding="utf-8").splitlines()))
DM2_PER_FT2 = 9.290304
UM_PER_MIL = 25.4


def labelled(rows: list[dict[str, str]]) -> list[object]:
    return [pytest.param(row, id=f"{row['metal']}{row['valence']}-{row['source'].split()[0]}") for row in rows]


def ah_per_ft2_mil(metal: str, valence: int, density: float) -> float:
    """Ampere-hours for one mil on one square foot, at 100 % efficiency."""
    mass = DM2_PER_FT2 * UM_PER_MIL * faraday.CM3_PER_DM2_UM * density
    return faraday.charge_needed_ah(metal, valence, mass)


def test_two_tables_and_a_data_sheet_are_compared() -> None:
    assert len({row["source"] for row in ROWS}) == 3
    assert len(ROWS) > 40
    assert {row["read"] for row in ROWS} == {"read"}


@pytest.mark.parametrize("row", labelled(ROWS))
def test_grams_per_ampere_hour(row: dict[str, str]) -> None:
    """0.13 %: the tables round to three or four digits and use older weights."""
    ours = faraday.equivalent_g_per_ah(row["metal"], int(row["valence"]))
    assert ours == pytest.approx(float(row["g_per_ah"]), rel=1.3e-3)


@pytest.mark.parametrize("row", labelled([row for row in ROWS if row["um_per_min_at_1_a_dm2"]]))
def test_micrometres_per_minute_at_one_ampere_per_square_decimetre(row: dict[str, str]) -> None:
    """Three decimals are printed: half a digit, and a little for older weights."""
    density, valence = float(row["density_g_cm3"]), int(row["valence"])
    ours = faraday.rate_um_per_h(row["metal"], valence, 1.0, density) / 60
    assert ours == pytest.approx(float(row["um_per_min_at_1_a_dm2"]), abs=0.0006)
    page = calculate(
        "faraday",
        {"element": row["metal"], "valence": valence, "current": "1 A", "time": "1 min", "area": "1 dm2",
         "density": row["density_g_cm3"]},
    )  # fmt: skip
    assert page["thickness_um"] == pytest.approx(ours)


@pytest.mark.parametrize("row", labelled([row for row in ROWS if row["ah_per_ft2_mil"] and not row["wrong"]]))
def test_ampere_hours_per_square_foot_and_mil(row: dict[str, str]) -> None:
    """Two or three digits are printed: 1 %."""
    ours = ah_per_ft2_mil(row["metal"], int(row["valence"]), float(row["density_g_cm3"]))
    assert ours == pytest.approx(float(row["ah_per_ft2_mil"]), rel=0.01)


@pytest.mark.parametrize("row", labelled([row for row in ROWS if row["wrong"] == "density"]))
def test_a_misprinted_density_does_not_give_the_printed_charge(row: dict[str, str]) -> None:
    valence, printed = int(row["valence"]), float(row["ah_per_ft2_mil"])
    assert ah_per_ft2_mil(row["metal"], valence, float(row["density_g_cm3"])) != pytest.approx(printed, rel=0.013)
    assert ah_per_ft2_mil(row["metal"], valence, float(row["right"])) == pytest.approx(printed, rel=0.01)


@pytest.mark.parametrize("row", labelled([row for row in ROWS if row["wrong"] == "ah_per_ft2_mil"]))
def test_a_misprinted_charge_is_not_reproduced(row: dict[str, str]) -> None:
    ours = ah_per_ft2_mil(row["metal"], int(row["valence"]), float(row["density_g_cm3"]))
    assert ours != pytest.approx(float(row["ah_per_ft2_mil"]), rel=0.03)


def test_gold_per_ampere_minute_and_microinch() -> None:
    """122.5 mg per A min, and 0.372 A min per square foot and microinch at 100 % (Epner tech data 699, read)."""
    assert faraday.deposited_mass_g("Au", 1, 1 / 60) * 1000 == pytest.approx(122.5, abs=0.1)
    per_uin = ah_per_ft2_mil("Au", 1, 19.3) * 60 / 1000
    assert per_uin == pytest.approx(0.372, abs=0.0006)
    page = calculate(
        "faraday", {"element": "Au", "valence": 1, "current": "1 A", "time": "0.372 min", "area": "1 ft2",
                    "density": "19.3 g/cm3"},
    )  # fmt: skip
    assert page["thickness_um"] == pytest.approx(0.0254, rel=0.002)
