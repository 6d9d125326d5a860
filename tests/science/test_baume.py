"""Degrees Baumé against printed figures."""

import pytest

from chemicals.science.baume import BaumeError, density, density_sd

WATER_60F = 999_016


@pytest.mark.parametrize(
    ("degrees", "relative"),
    [(0, 1.0), (10, 1.0741), (20, 1.1600), (30, 1.2609), (40, 1.3810), (50, 1.5263), (66, 1.8354)],
)
def test_the_american_scale(degrees: int, relative: float) -> None:
    """Relative densities at 60/60 °F as printed in handbooks; 66 °Bé is oil of vitriol (from memory)."""
    assert density(degrees * 1000, "baume") / WATER_60F == pytest.approx(relative, abs=5e-5)


def test_the_older_scale_is_told_apart() -> None:
    """144.3 / (144.3 - 30) = 1.26247; of water at 15 °C (CRC Handbook, from memory) 0.9991."""
    assert density(30_000, "rational_baume") == pytest.approx(1_262_470 * 0.9991, abs=5)
    assert density(30_000, "rational_baume") - density(30_000, "baume") == pytest.approx(1_700, abs=100)


def test_a_doubt_of_half_a_degree_is_the_difference_to_half_a_degree_more() -> None:
    steep = (density(30_500, "baume") - density(29_500, "baume")) // 2
    assert density_sd(30_000, 500, "baume") == pytest.approx(steep, rel=1e-3)


def test_nothing_has_more_than_eighty_degrees() -> None:
    with pytest.raises(BaumeError, match="ends at 80 degrees"):
        density(80_001, "baume")
