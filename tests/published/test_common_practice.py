"""Facts of the trade without a source (common practice), and what Faraday's law makes of them.

Bright acid copper on small parts runs at 1 A/dm2. A small part of 5.6 g weighs 7.7 g after 4 h at that density.
"""

import pytest

from chemicals.science import faraday
from chemicals.science.calculations import calculate

BEFORE, AFTER = 5.6, 7.7  # g
GAIN = AFTER - BEFORE


def plated() -> dict[str, float]:
    """The current that the gain needs, then the area at which this current is 1 A/dm2, then the whole deposit."""
    current = calculate("faraday", {"element": "Cu", "valence": 2, "mass": f"{GAIN:.1f} g", "time": "4 h"})["current_A"]
    area = current / 1.0
    return calculate(
        "faraday",
        {"element": "Cu", "valence": 2, "mass": f"{GAIN:.1f} g", "time": "4 h", "area": f"{area} dm2"},
    )


def test_the_small_part_has_a_consistent_area_and_thickness() -> None:
    """2.1 g in 4 h is 0.44 A: 44 cm2 at 1 A/dm2, and 53 micrometres of copper all over."""
    found = plated()
    assert found["current_A"] == pytest.approx(0.443, abs=0.001)
    assert found["current_density_A_dm2"] == pytest.approx(1.0)
    assert found["thickness_um"] == pytest.approx(52.9, abs=0.1)
    area_cm2 = found["current_A"] * 100
    assert area_cm2 == pytest.approx(44.3, abs=0.1)
    volume_cm3 = area_cm2 * found["thickness_um"] * 1e-4
    assert volume_cm3 * 8.96 == pytest.approx(GAIN, abs=0.001)


def test_the_area_fits_a_part_of_that_weight() -> None:
    """44 cm2 all round is a brass sheet (8.5 g/cm3) of about 22 cm2 and 0.3 mm: a pressed ornament, not a lump."""
    area_cm2 = plated()["current_A"] * 100
    sheet_mm = 10 * BEFORE / 8.5 / (area_cm2 / 2)
    assert 0.2 < sheet_mm < 0.5
    sphere_cm2 = 4.836 * (BEFORE / 8.5) ** (2 / 3)  # the least area that this volume can have
    assert area_cm2 > sphere_cm2


def test_half_a_millimetre_a_minute_is_impossible() -> None:
    """At 1 A/dm2 copper grows 0.22 micrometres a minute: 0.5 mm would take 38 h, and in a minute over 2000 A/dm2."""
    per_minute = faraday.rate_um_per_h("Cu", 2, 1.0, 8.96) / 60
    assert per_minute == pytest.approx(0.2205, abs=0.0005)
    assert 500 / per_minute > 2000  # how many times too fast, and how many A/dm2 it would need
    mass = 500 * faraday.CM3_PER_DM2_UM * 8.96  # g on 1 dm2
    found = calculate(
        "faraday", {"element": "Cu", "valence": 2, "mass": f"{mass} g", "current": "1 A", "area": "1 dm2"}
    )
    assert found["thickness_um"] == pytest.approx(500)
    assert found["time_s"] / 3600 == pytest.approx(37.8, abs=0.1)


def test_no_valence_or_density_rescues_it() -> None:
    """Even one electron an atom and a deposit half as dense fall short by a factor of hundreds."""
    fastest = faraday.rate_um_per_h("Cu", 1, 1.0, 4.48) / 60
    assert 500 / fastest > 500


def test_the_metal_of_a_typical_acid_copper_bath() -> None:
    """200 g/L of copper sulfate pentahydrate (195 to 248 g/L: 2011-2012 Surface Finishing Guidebook p. 206, read)."""
    copper = 200 * calculate("composition", {"formula": "CuSO4.5H2O"})["mass_fractions"]["Cu"]
    assert copper == pytest.approx(50.9, abs=0.05)
