"""Decisions against a limit; scipy is the second opinion on every probability."""

import math
from typing import get_args

import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from chemicals.science.decision import DIRECTIONS, DISTRIBUTIONS, Direction, Distribution, Verdict, decide

values = st.floats(0.01, 100)
sds = st.floats(0.001, 50)
risks = st.floats(0.001, 0.5)


@given(st.floats(-100, 100), sds, st.floats(-100, 100))
def test_normal_probability_agrees_with_scipy(value: float, sd: float, limit: float) -> None:
    expected = stats.norm.sf(limit, loc=value, scale=sd)
    assert decide(value, sd, limit).probability_over == pytest.approx(expected, rel=1e-9, abs=1e-300)


@given(values, sds, values)
def test_lognormal_probability_agrees_with_scipy(value: float, sd: float, limit: float) -> None:
    """scipy takes the shape s and the median; they follow from mean and standard deviation."""
    s = math.sqrt(math.log1p((sd / value) ** 2))
    expected = stats.lognorm.sf(limit, s, scale=value / math.sqrt(1 + (sd / value) ** 2))
    assert decide(value, sd, limit, distribution="lognormal").probability_over == pytest.approx(expected, abs=1e-9)


@given(values, sds, values, risks)
def test_above_mirrors_below(value: float, sd: float, limit: float, risk: float) -> None:
    below, above = decide(-value, sd, -limit, risk=risk), decide(value, sd, limit, direction="above", risk=risk)
    assert (below.verdict, below.guard_band) == (above.verdict, above.guard_band)


@given(st.sampled_from(DIRECTIONS), st.sampled_from(DISTRIBUTIONS), st.floats(0.001, 0.3), values, risks)
def test_the_verdict_turns_at_the_guard_band(
    direction: Direction, distribution: Distribution, relative: float, limit: float, risk: float
) -> None:
    """A little on the good side of it is within, a little on the other side is not; u is relative for both sides."""
    sd = relative * limit
    guard = decide(limit, sd, limit, direction=direction, risk=risk, distribution=distribution).guard_band
    good = -1 if direction == "below" else 1
    edge = limit + good * guard
    for step, within in ((1, True), (-1, False)):
        value = edge + good * step * 1e-6 * limit
        u = sd if distribution == "normal" else relative * value
        found = decide(value, u, limit, direction=direction, risk=risk, distribution=distribution)
        assert (found.verdict == "within") is within


@given(values, sds, values, st.floats(0.001, 0.49), st.sampled_from(DIRECTIONS))
def test_one_verdict_always_and_never_both_sides(
    value: float, sd: float, limit: float, risk: float, direction: Direction
) -> None:
    verdict = decide(value, sd, limit, risk=risk, direction=direction).verdict
    other: Direction = "above" if direction == "below" else "below"
    mirrored = {"within": "outside", "outside": "within", "undecided": "undecided"}
    assert verdict in get_args(Verdict)
    assert decide(value, sd, limit, risk=risk, direction=other).verdict == mirrored[verdict]


@pytest.mark.parametrize("distribution", DISTRIBUTIONS)
@pytest.mark.parametrize(
    ("value", "direction", "over", "verdict"),
    [
        (1.0, "below", 0.0, "within"),
        (2.0, "below", 0.0, "within"),  # on the limit is not over it
        (2.1, "below", 1.0, "outside"),
        (2.0, "above", 0.0, "within"),  # nor below it
        (1.9, "above", 0.0, "outside"),
        (2.1, "above", 1.0, "within"),
    ],
)
def test_an_exact_value_is_never_undecided(
    value: float, direction: Direction, over: float, verdict: str, distribution: Distribution
) -> None:
    found = decide(value, 0.0, 2.0, direction=direction, distribution=distribution)
    assert (found.probability_over, found.verdict, found.guard_band) == (over, verdict, 0.0)


def test_a_risk_reached_exactly_is_still_accepted() -> None:
    assert decide(2.0, 0.1, 2.0, risk=0.5).verdict == "within"
    assert decide(2.0, 0.1, 2.0, risk=0.49).verdict == "undecided"


def test_a_smaller_risk_is_more_often_undecided() -> None:
    assert decide(1.9, 0.1, 2.07, risk=0.05).verdict == "within"
    assert decide(1.9, 0.1, 2.07, risk=0.01).verdict == "undecided"


def test_far_tails_are_not_rounded_to_zero() -> None:
    assert 0 < decide(0.0, 1.0, 30.0).probability_over < 1e-190
