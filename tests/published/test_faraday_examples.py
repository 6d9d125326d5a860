"""Worked examples of Faraday's law from the web and from school books, each with its source.

The printed answers are rounded, and some use F = 96 500 C/mol or rounded atomic weights: hence the tolerances.
"""

import pytest

from chemicals.science.calculations import calculate


def test_one_mole_of_copper_at_25_amperes() -> None:
    """S. Mann, scienceaq.com article on electroplating, 2022 (read): 192 970 C, 7718 s, 2.14 h."""
    found = calculate("faraday", {"element": "Cu", "valence": 2, "current": "25 A", "mass": "63.546 g"})
    assert found["charge_Ah"] * 3600 == pytest.approx(192_970, rel=1e-4)
    assert found["time_s"] == pytest.approx(7718, abs=1.0)
    assert found["time_s"] / 3600 == pytest.approx(2.14, abs=0.005)


def test_nickel_on_both_sides_of_a_sheet() -> None:
    """Byju's worked solution (read): 15 A for 1 h at 60 %, 8 cm2, 8.9 g/cm3 give about 9.85 g and 0.138 cm."""
    found = calculate(
        "faraday",
        {"element": "Ni", "valence": 2, "current": "15 A", "time": "1 h", "efficiency": "60 %", "area": "8 cm2",
         "density": "8.9 g/cm3"},
    )  # fmt: skip
    assert found["mass_g"] == pytest.approx(9.854, rel=5e-4)
    assert found["thickness_um"] / 10_000 == pytest.approx(0.1384, rel=5e-4)
    assert round(found["thickness_um"] / 10_000, 2) == 0.14


def test_ten_micrometres_of_copper_on_one_square_centimetre() -> None:
    """tracnghiem.vn worked answer (read): with weight 64 and 8900 kg/m3, 0.010 A takes 2.68e3 s."""
    found = calculate(
        "faraday", {"element": "Cu", "valence": 2, "current": "0.010 A", "mass": "0.0089 g", "area": "1 cm2",
                    "density": "8900 kg/m3"},
    )  # fmt: skip
    assert found["thickness_um"] == pytest.approx(10.0)
    assert found["time_s"] == pytest.approx(2680 * 64 / 63.546, rel=2e-3)
