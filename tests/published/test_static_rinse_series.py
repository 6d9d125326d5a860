"""Static rinse series against a published formula, against a printed case and against what the trade uses."""

from math import comb

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.science.calculations import calculate
from chemicals.science.rinse import static_concentration


def batch_rinse(volume: float, drag_out: float, racks: int, tanks: int, bath: float) -> float:
    """J. Met. Finish. Soc. Japan 28(7), 1977, abstract (read): the last of `tanks` batch rinses after so many racks."""
    stays = volume / (volume + drag_out)
    series = sum(comb(p + tanks - 2, tanks - 1) * stays ** (p - 1) for p in range(1, racks + 1))
    return series * (drag_out / (volume + drag_out)) ** tanks * bath


@given(st.floats(1, 500), st.floats(0.001, 0.9), st.integers(1, 300), st.floats(0.1, 500))
def test_one_tank_of_the_published_series(volume: float, drag_out: float, racks: int, bath: float) -> None:
    """For one tank the published sum over racks is our closed form."""
    assert static_concentration(volume, drag_out, racks, bath) == pytest.approx(
        batch_rinse(volume, drag_out, racks, 1, bath), rel=1e-9
    )


def test_a_printed_figure() -> None:
    """200 L, 0.5 L a dip, 50 dips: 0.11736543 of the bath; the exponential approximation gives 0.1175031 (computed)."""
    found = calculate("static-rinse", {"volume": "200 L", "drag_out_per_dip": "0.5 L", "bath": "1 g/L", "dips": 50})
    assert found["concentration_g_per_L"] == pytest.approx(0.11736543, abs=1e-8)
    assert found["concentration_g_per_L"] != pytest.approx(0.1175031, abs=1e-6)


def test_the_rule_of_thumb_holds_for_few_dips_only() -> None:
    """Common practice: C = C0 N D / V. One dip in 20 L agrees to D/V; after N D = V the rule claims the bath itself."""
    one = static_concentration(20, 0.01, 1, 60)
    assert one == pytest.approx(60 * 0.01 / 20, rel=1e-3)
    many = static_concentration(20, 0.01, 2000, 60)
    assert many / 60 == pytest.approx(1 - 1 / 2.718281828, rel=1e-3)
