"""Faraday's law: forms that must agree with each other."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.science import faraday
from chemicals.science.formula import METALS, FormulaError

metals = st.sampled_from(METALS)
valences = st.integers(1, faraday.MOST_ELECTRONS)
amounts = st.floats(1e-6, 1e6)
shares = st.floats(0.01, 1.0)


def test_the_constant_is_that_of_the_si() -> None:
    """Elementary charge times Avogadro's constant, both exact since 2019 (SI Brochure, 9th edition)."""
    assert abs(faraday.F / (1.602176634e-19 * 6.02214076e23) - 1) < 1e-10


@given(metals, valences, amounts, shares)
def test_charge_and_mass_are_inverse(metal: str, valence: int, charge: float, efficiency: float) -> None:
    mass = faraday.deposited_mass_g(metal, valence, charge, efficiency)
    assert faraday.charge_needed_ah(metal, valence, mass, efficiency) == pytest.approx(charge)


@given(metals, valences, amounts)
def test_twice_the_electrons_deposit_half(metal: str, valence: int, charge: float) -> None:
    once = faraday.deposited_mass_g(metal, valence, charge)
    assert faraday.deposited_mass_g(metal, 2 * valence, charge) == pytest.approx(once / 2)


@given(metals, valences, amounts, st.floats(0.1, 25), shares)
def test_rate_times_time_is_thickness(metal: str, valence: int, area: float, density: float, share: float) -> None:
    """Two hours at 3 A/dm2 on any area."""
    mass = faraday.deposited_mass_g(metal, valence, 3 * area * 2, share)
    rate = faraday.rate_um_per_h(metal, valence, 3, density, share)
    assert faraday.thickness_um(mass, area, density) == pytest.approx(2 * rate)


def test_one_gram_on_one_square_decimetre_at_density_one_is_100_micrometres() -> None:
    assert faraday.thickness_um(1.0, 1.0, 1.0) == pytest.approx(100.0)


def test_the_handbook_knows_every_balanced_metal() -> None:
    for metal in METALS:
        density = faraday.handbook_density(metal)
        assert density is not None
        assert 2.5 < density < 23
        assert all(1 <= valence <= faraday.MOST_ELECTRONS for valence in faraday.usual_valences(metal))
        assert faraday.usual_valences(metal)
    assert faraday.handbook_density("Na") is None
    assert faraday.usual_valences("Na") == ()


def test_an_unknown_metal_is_refused_by_name() -> None:
    with pytest.raises(FormulaError, match='"Xx" is no element'):
        faraday.deposited_mass_g("Xx", 2, 1.0)
