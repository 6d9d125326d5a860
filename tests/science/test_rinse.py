"""The static rinse against a dip-by-dip simulation, and its inverse."""

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from chemicals.science.rinse import dips_to_reach, static_concentration


def simulate(volume: float, drag_out: float, dips: int, bath: float, start: float) -> float:
    """Each dip brings solution of the bath, mixes, and takes as much of the mixture away."""
    metal = start * volume
    for _ in range(dips):
        metal += bath * drag_out
        metal -= metal / (volume + drag_out) * drag_out
    return metal / volume


volumes = st.floats(0.1, 1000)
drag_outs = st.floats(0.0001, 1)
concentrations = st.floats(0, 500)


@given(volumes, drag_outs, st.integers(0, 200), concentrations, concentrations)
def test_the_series_is_the_simulation(volume: float, drag_out: float, dips: int, bath: float, start: float) -> None:
    found = static_concentration(volume, drag_out, dips, bath, start)
    assert found == pytest.approx(simulate(volume, drag_out, dips, bath, start), rel=1e-9, abs=1e-9)


@given(volumes, drag_outs, st.integers(0, 10_000), concentrations, concentrations)
def test_it_stays_between_start_and_bath(volume: float, drag_out: float, dips: int, bath: float, start: float) -> None:
    found = static_concentration(volume, drag_out, dips, bath, start)
    assert min(start, bath) - 1e-9 <= found <= max(start, bath) + 1e-9


@given(volumes, drag_outs, st.floats(1, 500), st.floats(0, 1), st.floats(0.01, 0.99))
def test_the_dip_that_reaches_the_target_is_the_first(
    volume: float, drag_out: float, bath: float, start: float, share: float
) -> None:
    target = start + (bath - start) * share
    assume(target > start)
    dips = dips_to_reach(volume, drag_out, target, bath, start)
    assert dips is not None
    assert static_concentration(volume, drag_out, dips, bath, start) >= target * (1 - 1e-9)
    assert static_concentration(volume, drag_out, dips - 1, bath, start) < target


@given(volumes, drag_outs, st.integers(1, 2000), st.floats(1, 500))
def test_the_concentration_after_n_dips_is_reached_by_dip_n(
    volume: float, drag_out: float, dips: int, bath: float
) -> None:
    target = static_concentration(volume, drag_out, dips, bath)
    assume(target < bath * (1 - 1e-4))  # nearer to the bath a dip changes less than a float can tell
    assert dips_to_reach(volume, drag_out, target, bath) == dips


def test_what_is_reached_already_takes_no_dip() -> None:
    assert dips_to_reach(20, 0.01, 2.0, 60, 2.0) == 0
    assert dips_to_reach(20, 0.01, 1.0, 60, 2.0) == 0
    assert dips_to_reach(20, 0.01, 3.0, 1.0, 2.0) == 0  # a weaker bath dilutes: 3 is passed before the first dip


def test_what_lies_beyond_the_bath_is_never_reached() -> None:
    assert dips_to_reach(20, 0.01, 60.0, 60) is None
    assert dips_to_reach(20, 0.01, 61.0, 60) is None
    assert dips_to_reach(20, 0.01, 0.5, 1.0, 2.0) is None
    assert dips_to_reach(20, 0.01, 2.0, 1.0, 1.0) is None


def test_a_weaker_bath_dilutes_the_rinse() -> None:
    assert dips_to_reach(1, 1, 1.0, 0.0, 8.0) == 3  # half stays each time: 4, 2, 1
