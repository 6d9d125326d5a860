"""The table of calculations: the contract of each, and every refusal by the name of its field, all at once."""

import json
from decimal import Decimal
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.science.calculation import InputField
from chemicals.science.calculations import CALCULATIONS, CalculationErrors, calculate
from chemicals.science.units import DIMENSIONS, find

FIELDS = [
    (name, spec)
    for name, calculation in CALCULATIONS.items()
    for field in calculation.inputs
    for spec in (field, *field.parts)
]
COPPER = {"element": "Cu", "valence": 2}
RINSE = {"volume": "20 L", "drag_out_per_dip": "10 mL", "bath": "60 g/L"}
LIMIT = {"value": 1.9, "sd": 0.1, "limit": 2.07}


def refused(name: str, data: Any) -> dict[str, str]:
    """The refused fields with their messages."""
    with pytest.raises(CalculationErrors) as caught:
        calculate(name, data)
    return {error["field"]: error["message"] for error in caught.value.errors}


# What each calculation takes and gives


def test_the_contract_of_names() -> None:
    schemas = {
        name: ([spec.name for spec in calculation.inputs], [spec.name for spec in calculation.outputs])
        for name, calculation in CALCULATIONS.items()
    }
    assert schemas == {
        "composition": (["formula"], ["molar_mass_g_mol", "mass_fractions", "basis"]),
        "faraday": (
            ["element", "valence", "current", "time", "mass", "efficiency", "area", "density"],
            [
                "charge_Ah",
                "current_A",
                "time_s",
                "mass_g",
                "thickness_um",
                "current_density_A_dm2",
                "rate_um_per_h",
                "basis",
            ],
        ),
        "rinse": (
            ["arrangement", "stages", "bath", "target", "drag_out"],
            [
                "dilution_ratio",
                "water_L_per_h",
                "water_per_drag_out",
                "stage_concentrations_g_per_L",
                "approximate_water_L_per_h",
                "basis",
            ],
        ),
        "static-rinse": (
            ["volume", "drag_out_per_dip", "bath", "start", "dips", "target"],
            ["concentration_g_per_L", "dips", "metal_g", "basis"],
        ),
        "drag-out": (
            ["rinse_volume", "dips", "rise", "bath", "area_per_dip"],
            ["drag_out_mL_per_dip", "drag_out_mL_per_m2", "simple_mL_per_dip", "basis"],
        ),
        "titration": (
            ["analyte", "titrant", "titre", "volume", "blank", "sample", "mole_ratio", "sd"],
            ["concentration_g_per_L", "sd_g_per_L", "budget", "basis"],
        ),
        "limit": (
            ["value", "sd", "limit", "direction", "risk", "distribution"],
            ["probability_over", "verdict", "guard_band", "basis"],
        ),
    }


def test_composition() -> None:
    found = calculate("composition", {"formula": "CuSO4.5H2O"})
    assert found["molar_mass_g_mol"] == pytest.approx(249.677)
    assert found["mass_fractions"]["Cu"] == pytest.approx(0.2545, abs=5e-5)
    assert "IUPAC" in found["basis"]


@pytest.mark.parametrize("left_out", ["current", "time", "mass"])
def test_faraday_finds_any_one_of_current_time_and_mass(left_out: str) -> None:
    whole = calculate("faraday", COPPER | {"current": "0.44 A", "time": "4 h", "area": "0.44 dm2"})
    sent = {"current": whole["current_A"], "time": whole["time_s"], "mass": whole["mass_g"]}
    del sent[left_out]
    again = calculate("faraday", COPPER | sent | {"area": "0.44 dm2"})
    assert {name: value for name, value in again.items() if name != "basis"} == pytest.approx(
        {name: value for name, value in whole.items() if name != "basis"}
    )
    assert whole["charge_Ah"] == pytest.approx(1.76)
    assert whole["current_density_A_dm2"] == pytest.approx(1.0)
    assert whole["rate_um_per_h"] * 4 == pytest.approx(whole["thickness_um"], rel=1e-12)


def test_faraday_counts_the_efficiency_and_the_density() -> None:
    full = calculate("faraday", COPPER | {"current": "1 A", "time": "1 h", "area": "1 dm2"})
    half = calculate("faraday", COPPER | {"current": "1 A", "time": "1 h", "area": "1 dm2", "efficiency": "50 %"})
    thin = calculate("faraday", COPPER | {"current": 1, "time": 3600, "area": 1, "density": "17.92 g/cm3"})
    assert half["mass_g"] == pytest.approx(full["mass_g"] / 2)
    assert thin["thickness_um"] == pytest.approx(full["thickness_um"] / 2)
    assert "8.96 g/cm3 (CRC" in full["basis"]
    assert "17.92 g/cm3 as given" in thin["basis"]


def test_faraday_without_area_has_no_thickness() -> None:
    found = calculate("faraday", COPPER | {"current": "1 A", "time": "1 h", "area": None, "density": ""})
    assert [found[name] for name in ("thickness_um", "current_density_A_dm2", "rate_um_per_h")] == [None, None, None]
    assert found["mass_g"] == pytest.approx(1.1855, abs=1e-4)


def test_faraday_asks_for_a_density_that_no_table_has() -> None:
    sodium = {"element": "Na", "valence": 1, "current": "1 A", "time": "1 h", "area": "1 dm2"}
    assert refused("faraday", sodium) == {
        "density": "The density of Na is not in the table: write it, for example 10 g/cm3."
    }
    assert calculate("faraday", sodium | {"density": "0.97 g/cm3"})["thickness_um"] > 0


def test_static_rinse_by_dips_and_by_target() -> None:
    found = calculate("static-rinse", RINSE | {"dips": 50})
    assert found["concentration_g_per_L"] == pytest.approx(60 * (1 - (20 / 20.01) ** 50))
    assert found["metal_g"] == pytest.approx(20 * found["concentration_g_per_L"])
    assert calculate("static-rinse", RINSE | {"target": found["concentration_g_per_L"]})["dips"] == 50
    used = calculate("static-rinse", RINSE | {"dips": 0, "start": "2 g/L"})
    assert (used["concentration_g_per_L"], used["dips"], used["metal_g"]) == (2.0, 0, 40.0)


def test_static_rinse_refuses_a_target_beyond_the_bath() -> None:
    assert set(refused("static-rinse", RINSE | {"target": "60 g/L"})) == {"target"}


def test_limit() -> None:
    found = calculate("limit", LIMIT)
    assert found["verdict"] == "within"
    assert found["probability_over"] == pytest.approx(0.0446, abs=1e-4)
    assert found["guard_band"] == pytest.approx(0.1645, abs=1e-4)
    assert calculate("limit", LIMIT | {"risk": "1 %"})["verdict"] == "undecided"
    assert calculate("limit", LIMIT | {"direction": "above"})["verdict"] == "outside"
    assert calculate("limit", LIMIT | {"direction": "above", "value": 2.3})["verdict"] == "within"
    assert "lognormal" in calculate("limit", LIMIT | {"distribution": "lognormal"})["basis"]


# What is refused


@pytest.mark.parametrize(
    ("name", "data", "fields"),
    [
        ("composition", {}, {"formula"}),
        ("composition", {"formula": "XxO"}, {"formula"}),
        ("composition", {"formula": True}, {"formula"}),
        ("composition", {"formula": ["Cu"]}, {"formula"}),
        ("composition", {"formula": 10**6000}, {"formula"}),
        ("composition", {"formula": "Cu", "colour": "blue"}, {"colour"}),
        ("composition", ["Cu"], {"input"}),
        ("composition", None, {"input"}),
        ("unheard-of", {}, {"name"}),
        ("faraday", {}, {"element", "valence", "current", "time", "mass"}),
        ("faraday", COPPER | {"current": "1 A"}, {"time", "mass"}),
        ("faraday", COPPER | {"current": "1 A", "time": "1 h", "mass": "1 g"}, {"mass"}),
        ("faraday", COPPER | {"current": "1,500 A", "time": "1 h"}, {"current"}),
        ("faraday", COPPER | {"current": "1 A", "time": "1 kg"}, {"time"}),
        ("faraday", COPPER | {"current": "1 A", "mass": "-1 g"}, {"mass"}),
        ("faraday", COPPER | {"current": float("nan"), "time": float("inf")}, {"current", "time"}),
        ("faraday", COPPER | {"current": "0 A", "time": "1 h"}, {"current"}),
        ("faraday", COPPER | {"current": "1 A", "time": "1 h", "efficiency": "101 %"}, {"efficiency"}),
        ("faraday", COPPER | {"current": "1 A", "time": "1 h", "efficiency": 0}, {"efficiency"}),
        ("faraday", COPPER | {"current": "1 A", "time": "1 h", "density": "8.96"}, set()),
        ("faraday", {"element": "Xx", "valence": 2.5, "current": "1 A", "time": "1 h"}, {"element", "valence"}),
        ("faraday", {"element": "Cu", "valence": 0, "current": "1 A", "time": "1 h"}, {"valence"}),
        ("faraday", {"element": "Cu", "valence": 9, "current": "1 A", "time": "1 h"}, {"valence"}),
        ("static-rinse", RINSE, {"dips", "target"}),
        ("static-rinse", RINSE | {"dips": 5, "target": "1 g/L"}, {"target"}),
        ("static-rinse", RINSE | {"dips": -1}, {"dips"}),
        ("static-rinse", RINSE | {"dips": 2.5}, {"dips"}),
        ("static-rinse", RINSE | {"dips": 5, "volume": "0 L", "start": "-1 g/L"}, {"volume", "start"}),
        ("static-rinse", RINSE | {"dips": 5, "drag_out_per_dip": "10 g"}, {"drag_out_per_dip"}),
        ("limit", LIMIT | {"sd": -0.1}, {"sd"}),
        ("limit", LIMIT | {"value": "1,500"}, {"value"}),
        ("limit", LIMIT | {"value": "2 g"}, {"value"}),
        ("limit", LIMIT | {"limit": float("-inf")}, {"limit"}),
        ("limit", LIMIT | {"risk": 0.6}, {"risk"}),
        ("limit", LIMIT | {"direction": "sideways", "distribution": "triangular"}, {"direction", "distribution"}),
        ("limit", {"value": -1, "sd": 1, "limit": 0, "distribution": "lognormal"}, {"value", "limit"}),
        ("limit", {"value": -1, "sd": -1, "limit": 0, "distribution": "lognormal"}, {"value", "sd", "limit"}),
    ],
)
def test_bad_input_is_refused_by_field_all_at_once(name: str, data: Any, fields: set[str]) -> None:
    if fields:
        assert set(refused(name, data)) == fields
    else:
        assert calculate(name, data)


def test_each_refusal_names_the_remedy() -> None:
    messages = refused(
        "faraday", {"element": "Xx", "valence": 9, "current": "1,500 A", "time": "4 kg", "efficiency": 95, "gold": 1}
    )
    assert messages == {
        "element": '"Xx" is no element: write a symbol such as Cu or Au, with its capital.',
        "valence": '"9" is too much: write at most 8.',
        "current": '"1,500" is ambiguous: write 1500 or 1.5.',
        "time": '"4 kg" is a mass; a time is needed, for example 4 h.',
        "efficiency": '"95" is too much: write at most 1.',
        "gold": "There is no such field: leave it out. "
        "There are element, valence, current, time, mass, efficiency, area, density.",
    }
    assert refused("limit", LIMIT | {"value": True}) == {
        "value": "This is neither text nor a number: write for example 1.9."
    }
    assert refused("static-rinse", RINSE | {"dips": 1, "bath": "-1 g/L"}) == {
        "bath": '"-1 g/L" is too little: write at least 0 g/L.'
    }
    assert refused("faraday", COPPER | {"current": "1 A"})["time"] == (
        "Of current, time and mass, give exactly 2 and leave out the rest."
    )


# What the faces are made from


@pytest.mark.parametrize("name", CALCULATIONS)
def test_the_example_of_each_calculation_runs(name: str) -> None:
    calculation = CALCULATIONS[name]
    found = calculation.run(calculation.example)
    assert list(found) == [spec.name for spec in calculation.outputs]
    assert json.loads(json.dumps(found, allow_nan=False)) == found
    assert found["basis"]
    assert "\n" not in found["basis"]


@pytest.mark.parametrize(("name", "spec"), FIELDS, ids=lambda value: getattr(value, "name", value))
def test_each_input_is_described_and_its_example_is_read(name: str, spec: InputField) -> None:
    assert spec.kind in {"quantity", "number", "integer", "choice", "text", "deviation", "group"}
    assert all((name, spec.label, spec.help.endswith("."), spec.example))
    assert spec.read({} if spec.parts else spec.example, spec) is not None
    assert spec.default is None or not spec.required
    if spec.default is not None:
        assert spec.read(spec.default, spec) is not None
    if spec.dimension:
        assert DIMENSIONS[spec.dimension]
        assert find(spec.unit, spec.dimension)
        if spec.unit != "1":
            assert f" {spec.unit}" in f" {spec.help}"  # the help says in which unit a bare number is taken


@pytest.mark.parametrize("name", CALCULATIONS)
def test_each_output_is_described(name: str) -> None:
    for output in CALCULATIONS[name].outputs:
        for spec in (output, *output.columns):
            assert spec.label
            assert spec.help.endswith(".")


@given(st.floats(0.001, 1000), st.sampled_from([str, float, Decimal]))
def test_text_float_and_decimal_are_read_alike(value: float, kind: type) -> None:
    expected = calculate("faraday", COPPER | {"current": f"{value!r} A", "time": "1 h"})
    assert calculate("faraday", COPPER | {"current": kind(repr(value)), "time": 3600}) == expected


json_scalars = st.one_of(st.none(), st.booleans(), st.integers(), st.floats(), st.text(max_size=10), st.just("1 A"))
json_values = st.one_of(
    json_scalars, st.lists(json_scalars, max_size=1), st.dictionaries(st.sampled_from(["volume"]), json_scalars)
)


@given(st.sampled_from(sorted(CALCULATIONS)), st.data())
def test_whatever_is_sent_is_calculated_or_refused_by_field(name: str, data: st.DataObject) -> None:
    names = [spec.name for spec in CALCULATIONS[name].inputs]
    sent = data.draw(st.dictionaries(st.sampled_from([*names, "other"]), json_values))
    sent = {**CALCULATIONS[name].example, **sent} if data.draw(st.booleans()) else sent
    try:
        understood = bool(json.dumps(calculate(name, sent), allow_nan=False))
    except CalculationErrors as caught:
        known = {*names, "other", "sd.volume"}
        understood = all(error["field"] in known and error["message"] for error in caught.errors)
    assert understood
