"""How much room a dissolved solid needs: from the table where it is known, else assumed and said so."""

import math

import pytest

from chemicals.science.solution import ASSUMED, apparent_volume, density, swelling_of, swelling_of_mixture
from chemicals.science.tables import read_table


@pytest.mark.parametrize("row", read_table("dissolved"), ids=lambda row: str(row["formula"]))
def test_every_salt_of_the_table_has_a_sensible_volume(row: dict[str, str]) -> None:
    """From the light acids down to salts that draw the water together: between -0.1 and 1.5 L for each kilogram."""
    formula, up_to = row["formula"], min(0.3, float(row["up_to"]))
    for fraction in (0.001, up_to / 2, up_to):
        volume, whole = apparent_volume(formula, fraction), density(formula, fraction)
        assert volume is not None
        assert whole is not None
        assert -0.15 < volume < 1.5
        assert 0.85 < whole < 1.5


def test_crystal_water_is_water() -> None:
    """Five molecules of water are 36.1 % of the mass of copper sulfate pentahydrate."""
    dry, wet = swelling_of("CuSO4"), swelling_of("CuSO4·5H2O")
    assert wet.litres == pytest.approx(0.6393 * dry.litres + 0.3607 / 0.99821, abs=1e-3)
    assert wet.sd == pytest.approx(0.6393 * dry.sd, rel=1e-3)


@pytest.mark.parametrize("formula", ["H3BO3", "CrO3", "", "nonsense", "C6H8O7"])
def test_of_any_other_solid_it_is_assumed(formula: str) -> None:
    found = swelling_of(formula)
    assert (found.litres, found.sd, found.source) == (0.4, 0.2, ASSUMED)
    assert apparent_volume("H3BO3") is None
    assert density("H3BO3", 0.1) is None


def test_a_mixture_is_the_sum_of_its_parts_and_an_unknown_rest() -> None:
    salt = swelling_of("NiSO4.6H2O")
    found = swelling_of_mixture([("NiSO4.6H2O", 0.7), ("", 0.1)])
    assert found.litres == pytest.approx(0.7 * salt.litres + 0.3 * 0.4)
    assert found.sd == pytest.approx(math.hypot(0.7 * salt.sd, 0.1 * 0.2, 0.2 * 0.2))
    assert found.source == f"{salt.source}; {ASSUMED}"
    assert swelling_of_mixture([]).litres == pytest.approx(0.4)
    assert swelling_of_mixture([("NiSO4.6H2O", 1.0)]) == salt
