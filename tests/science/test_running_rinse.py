"""Running rinses against the balance of every stage, and what must hold whatever is asked."""

import math

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from scipy.optimize import brentq

from chemicals.science.calculations import calculate
from chemicals.science.rinse import (
    approximate_water_per_stage,
    stage_concentrations,
    water_per_stage,
)

stage_counts = st.integers(1, 20)
targets = st.floats(1e-6, 100)
excesses = st.floats(-14, 12).map(lambda power: 10**power)  # dilutions from 1 + 1e-14 to 1e12
flows = st.floats(0.001, 1000)


@pytest.mark.parametrize("counterflow", [True, False])
@given(stages=stage_counts, target=targets, excess=excesses)
def test_what_comes_into_a_stage_goes_out_of_it(
    *, counterflow: bool, stages: int, target: float, excess: float
) -> None:
    """Drag-in and, in counterflow, the water of the next stage; drag-out and water at the stage's concentration."""
    bath = target + target * excess
    assume(bath > target)
    ratio = water_per_stage(bath, target, stages, counterflow=counterflow)
    found = stage_concentrations(ratio, target, stages, counterflow=counterflow)
    assert len(found) == stages
    assert found[-1] == target
    along = [bath, *found, 0.0]  # beyond the last stage there is clean water
    for number in range(1, stages + 1):
        comes = along[number - 1] + (ratio * along[number + 1] if counterflow else 0)
        assert comes == pytest.approx(along[number] * (1 + ratio), rel=1e-9)


@given(stage_counts, excesses)
def test_the_root_is_that_of_another_method(stages: int, excess: float) -> None:
    excess = (1 + excess) - 1  # as a float tells it
    assume(excess > 0)
    ratio = water_per_stage(1 + excess, 1, stages, counterflow=True)
    other = brentq(
        lambda r: math.fsum(r**power for power in range(1, stages + 1)) / excess - 1, 0, 2 * excess, xtol=1e-300,
        rtol=1e-14, maxiter=2000,
    )  # fmt: skip
    assert ratio == pytest.approx(other, rel=1e-11)


@given(stage_counts, targets, excesses, flows)
def test_counterflow_never_needs_more_than_a_series_nor_more_stages_more_water(
    stages: int, target: float, excess: float, flow: float
) -> None:
    asked = {"bath": target + target * excess, "target": target, "drag_out": flow}
    assume(asked["bath"] > target)
    slack = 1 + 1e-9
    series = calculate("rinse", asked | {"arrangement": "series", "stages": stages})
    counterflow = calculate("rinse", asked | {"arrangement": "counterflow", "stages": stages})
    assert counterflow["water_L_per_h"] <= series["water_L_per_h"] * slack
    for found in (series, counterflow):
        assert found["water_L_per_h"] <= found["approximate_water_L_per_h"] * slack
        assert found["water_L_per_h"] == pytest.approx(found["water_per_drag_out"] * flow)
        assert found["dilution_ratio"] * found["stage_concentrations_g_per_L"][-1] == pytest.approx(asked["bath"])
    if stages > 1:
        for arrangement, found in (("series", series), ("counterflow", counterflow)):
            fewer = calculate("rinse", asked | {"arrangement": arrangement, "stages": stages - 1})
            assert found["water_L_per_h"] <= fewer["water_L_per_h"] * slack


@given(targets, excesses)
def test_one_stage_is_one_stage(target: float, excess: float) -> None:
    bath = target + target * excess
    assume(bath > target)
    asked = {"bath": bath, "target": target, "drag_out": 1}
    waters = {
        calculate("rinse", asked | {"arrangement": arrangement, "stages": 1})["water_L_per_h"]
        for arrangement in ("single", "series", "counterflow")
    }
    assert max(waters) == pytest.approx(min(waters), rel=1e-12)
    assert calculate("rinse", asked | {"arrangement": "single"})["water_L_per_h"] in waters


@pytest.mark.parametrize("stages", [1, 2, 20])
def test_the_usual_form_tends_to_the_strict_one_where_much_is_diluted(stages: int) -> None:
    strict = water_per_stage(1e60, 1, stages, counterflow=True)
    assert strict == pytest.approx(approximate_water_per_stage(1e60, 1, stages), rel=2e-3 / stages)


def test_units_change_nothing() -> None:
    metric = {"arrangement": "series", "stages": 3, "bath": "60 g/L", "target": "30 mg/L", "drag_out": "3 L/h"}
    other = metric | {"bath": "0.06 kg/L", "target": "30000 ug/L", "drag_out": "50 mL/min"}
    bare = metric | {"bath": 60, "target": 0.03, "drag_out": 3}
    assert calculate("rinse", other) == calculate("rinse", metric) == calculate("rinse", bare)
    gallons = calculate("rinse", metric | {"drag_out": "1 gal/h"})
    assert gallons["water_L_per_h"] == pytest.approx(gallons["water_per_drag_out"] * 3.785411784)
