"""Titration: the result, and its uncertainty against differences taken by hand and against draws."""

import random
from statistics import fmean, stdev
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.science.calculations import CalculationErrors, calculate

COPPER: dict[str, Any] = {
    "analyte": "Cu",
    "titrant": 0.1,
    "titre": 0.995,
    "volume": 7.6,
    "blank": 0.1,
    "sample": 5,
    "mole_ratio": 1,
}
INPUTS = [name for name in COPPER if name != "analyte"]
amounts = st.floats(0.001, 1000)
shares = st.floats(0, 0.1)


def shares_of(found: dict[str, Any]) -> dict[str, float]:
    return {row["quantity"]: row["share"] for row in found["budget"]}


def test_grams_per_litre() -> None:
    found = calculate("titration", COPPER)
    assert found["concentration_g_per_L"] == pytest.approx(0.1 * 0.995 * 7.5 * 63.546 / 5)
    bare = {"analyte": "Cu", "titrant": "0.1 mol/L", "volume": "7.5 mL", "sample": "5 mL"}
    assert calculate("titration", bare)["concentration_g_per_L"] == pytest.approx(0.1 * 7.5 * 63.546 / 5)


def test_without_a_stated_uncertainty_it_is_unknown_and_with_none_it_is_nothing() -> None:
    assert (calculate("titration", COPPER)["sd_g_per_L"], calculate("titration", COPPER)["budget"]) == (None, [])
    assert calculate("titration", COPPER | {"sd": {}})["sd_g_per_L"] is None
    exact = calculate("titration", COPPER | {"sd": {"volume": 0, "sample": "0 %"}})
    assert (exact["sd_g_per_L"], exact["budget"]) == (0, [])


@pytest.mark.parametrize("name", INPUTS)
def test_each_input_counts_as_much_as_the_result_moves_with_it(name: str) -> None:
    doubt = 1e-6
    moved = [
        calculate("titration", COPPER | {name: COPPER[name] + sign * doubt})["concentration_g_per_L"]
        for sign in (1, -1)
    ]
    found = calculate("titration", COPPER | {"sd": {name: doubt}})
    assert found["sd_g_per_L"] == pytest.approx(abs(moved[0] - moved[1]) / 2, rel=1e-6)
    assert found["budget"] == [{"quantity": name, "share": 1.0}]


@pytest.mark.parametrize("name", INPUTS)
def test_percent_is_of_the_value(name: str) -> None:
    relative = calculate("titration", COPPER | {"sd": {name: "0.2 %"}})
    absolute = calculate("titration", COPPER | {"sd": {name: COPPER[name] * 0.002}})
    assert relative["sd_g_per_L"] == pytest.approx(absolute["sd_g_per_L"], rel=1e-12)


def test_draws_of_the_inputs_scatter_as_much() -> None:
    """A thousand titrations, each with inputs drawn from their distributions (seeded)."""
    doubts = {"titrant": 0.0003, "titre": 0.002, "volume": 0.03, "blank": 0.01, "sample": 0.02, "mole_ratio": 0.001}
    draw = random.Random(7)  # noqa: S311  (no secret: the same draws each time)
    drawn = [
        calculate("titration", COPPER | {name: draw.gauss(COPPER[name], sd) for name, sd in doubts.items()})
        for _ in range(1000)
    ]
    results = [found["concentration_g_per_L"] for found in drawn]
    found = calculate("titration", COPPER | {"sd": doubts})
    assert fmean(results) == pytest.approx(found["concentration_g_per_L"], rel=1e-3)
    assert stdev(results) == pytest.approx(found["sd_g_per_L"], rel=0.07)


@given(st.fixed_dictionaries(dict.fromkeys(INPUTS, amounts)), st.dictionaries(st.sampled_from(INPUTS), shares))
def test_shares_add_up_to_one(values: dict[str, float], doubts: dict[str, float]) -> None:
    values["blank"] = min(values["blank"], values["volume"])
    sd = {name: f"{share * 100:f} %" for name, share in doubts.items()}
    found = calculate("titration", {"analyte": "Ni", **values, "sd": sd})
    assert all(0 <= share <= 1 for share in shares_of(found).values())
    assert sum(shares_of(found).values()) == pytest.approx(1.0 if found["sd_g_per_L"] else 0.0)


def test_units_change_nothing() -> None:
    asked = COPPER | {"sd": {"volume": "0.02 mL", "titrant": "0.2 mmol/L", "titre": "0.1 %"}}
    other = {
        "analyte": "Cu", "titrant": "100 mmol/L", "titre": "99.5 %", "volume": "0.0076 L", "blank": "100 uL",
        "sample": "0.5 cL", "sd": {"volume": "20 uL", "titrant": 0.0002, "titre": 0.000995},
    }  # fmt: skip
    found, expected = calculate("titration", other), calculate("titration", asked)
    assert found["concentration_g_per_L"] == pytest.approx(expected["concentration_g_per_L"], rel=1e-12)
    assert found["sd_g_per_L"] == pytest.approx(expected["sd_g_per_L"], rel=1e-12)
    assert shares_of(found) == pytest.approx(shares_of(expected), rel=1e-12)


def test_a_titration_of_the_blank_itself_gives_nothing_with_a_doubt() -> None:
    found = calculate("titration", COPPER | {"blank": 7.6, "sd": {"volume": "0.02 mL", "sample": "1 %"}})
    assert found["concentration_g_per_L"] == 0
    assert shares_of(found) == {"volume": 1.0, "sample": 0.0}


def test_what_is_wrong_in_the_group_is_named_by_group_and_part() -> None:
    with pytest.raises(CalculationErrors) as caught:
        calculate("titration", COPPER | {"blank": 8, "sd": {"volume": "5 g", "titre": "1,5 %", "weather": 1}})
    assert {error["field"]: error["message"] for error in caught.value.errors} == {
        "sd.titre": '"1,5" is ambiguous: write 1.5.',
        "sd.volume": '"5 g" is a mass; a volume is needed, for example 2.5 L.',
        "sd.weather": "There is no such field: leave it out. "
        "There are titrant, titre, volume, blank, sample, mole_ratio.",
        "blank": "The blank is more than the volume: write one that is not.",
    }
    with pytest.raises(CalculationErrors, match="sd: This is no JSON object"):
        calculate("titration", COPPER | {"sd": "0.1 mL"})
