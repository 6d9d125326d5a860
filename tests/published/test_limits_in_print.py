"""Decisions against a limit: figures in print, and scipy as the second opinion."""

import pytest
from scipy import stats

from chemicals.science.calculations import calculate
from chemicals.science.decision import decide


def test_a_diode_below_its_upper_limit() -> None:
    """JCGM 106:2012, 7.3 example 1 (memory): -5.47 V with u = 0.05 V, upper limit -5.40 V: conforms with about 92 %."""
    over = decide(-5.47, 0.05, -5.40).probability_over
    assert 1 - over == pytest.approx(0.92, abs=0.005)
    assert decide(-5.47, 0.05, -5.40).verdict == "undecided"  # 8 % is over the usual risk of 5 %
    assert decide(-5.47, 0.05, -5.40, risk=0.1).verdict == "within"


@pytest.mark.parametrize(("risk", "factor"), [(0.05, 1.64), (0.01, 2.33)])
def test_the_guard_band_in_standard_uncertainties(risk: float, factor: float) -> None:
    """Eurachem/CITAC guide on uncertainty and limits, 2007 (read on pihin.eu, which quotes it): 1.64 u and 2.33 u."""
    found = calculate("limit", {"value": 80, "sd": 2, "limit": 100, "risk": risk})
    assert found["guard_band"] / 2 == pytest.approx(factor, abs=0.006)
    assert found["guard_band"] / 2 == pytest.approx(stats.norm.ppf(1 - risk), rel=1e-9)


def test_a_guard_band_of_the_expanded_uncertainty() -> None:
    """ILAC-G8:09/2019 (read; the figure from memory): with w = U = 2 u a wrong acceptance is at most 2.5 % likely."""
    u, limit = 0.5, 10.0
    assert decide(limit - 2 * u, u, limit).probability_over < 0.025
    assert decide(limit, u, limit, risk=0.025).guard_band < 2 * u


def test_on_the_limit_it_is_a_toss() -> None:
    """JCGM 106:2012 (memory): with a negligible guard band a value on the limit is wrong in one of two cases."""
    found = calculate("limit", {"value": 2.07, "sd": 0.1, "limit": 2.07})
    assert (found["probability_over"], found["verdict"]) == (0.5, "undecided")
