"""Drag-out from the rise of a static rinse: the inverse of the static rinse."""

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from chemicals.science.calculations import CalculationErrors, calculate

volumes = st.floats(1, 1000)
baths = st.floats(1, 500)
dips = st.integers(1, 1000)


@given(volumes, dips, baths, st.floats(1e-6, 0.05))
def test_it_finds_the_drag_out_that_the_static_rinse_was_given(
    volume: float, dips: int, bath: float, share: float
) -> None:
    dragged = volume * share  # litres
    rinsed = calculate(
        "static-rinse", {"volume": volume, "drag_out_per_dip": dragged * 1000, "bath": bath, "dips": dips}
    )
    rise = rinsed["concentration_g_per_L"]
    assume(rise < bath * (1 - 1e-4))  # nearer to the bath a float hardly tells one dip from the next
    found = calculate(
        "drag-out", {"rinse_volume": volume, "dips": dips, "rise": rise, "bath": bath, "area_per_dip": 50}
    )
    assert found["drag_out_mL_per_dip"] == pytest.approx(dragged * 1000, rel=1e-6)
    assert found["drag_out_mL_per_m2"] == pytest.approx(found["drag_out_mL_per_dip"] * 2)
    assert found["simple_mL_per_dip"] <= found["drag_out_mL_per_dip"] * (1 + 1e-9)


def test_without_an_area_there_is_none_per_area() -> None:
    asked = {"rinse_volume": "400 L", "dips": 40, "rise": "0.31 g/L", "bath": "60 g/L"}
    assert calculate("drag-out", asked)["drag_out_mL_per_m2"] is None


def test_units_change_nothing() -> None:
    asked = {"rinse_volume": "400 L", "dips": 40, "rise": "0.31 g/L", "bath": "60 g/L", "area_per_dip": "0.5 m2"}
    other = {"rinse_volume": "0.4 m3", "dips": "40", "rise": "310 mg/L", "bath": 60, "area_per_dip": 50}
    assert calculate("drag-out", other) == pytest.approx(calculate("drag-out", asked), rel=1e-12)


def test_a_rise_that_no_drag_out_explains_is_refused() -> None:
    asked = {"rinse_volume": "400 L", "dips": 40, "rise": "60 g/L", "bath": "60 g/L"}
    with pytest.raises(CalculationErrors, match="rise: No drag-out explains this"):
        calculate("drag-out", asked)
