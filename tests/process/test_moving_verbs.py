"""Moves by volume, by mass, of everything; drumming off, samples, spills, the sewer."""

from typing import Any

import pytest
from django_scopes import scope

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.inputs.moving import GOES_TO
from tests.process.shop import KG, ML, G, L, Shop


def vessel(shop: Shop, name: str) -> Vessel:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.get(name=name)


def test_expired_stock_goes_into_waste_by_weight_or_all_of_it(shop: Shop) -> None:
    """A kilogram of the salt is left in the jar: 99 % pentahydrate, of which 25.45 % is copper."""
    first = shop.record("drum-off", source="Jar", target="Drum", mass="400 g")
    assert shop.went(first, "gross mass") == {"Jar": -400 * G, "Drum": 400 * G}
    assert shop.went(first, "Cu")["Drum"] == pytest.approx(0.4 * 0.99 * 0.25451 * KG, rel=1e-4)
    rest = shop.record("drum-off", source="Jar", target="Drum")
    assert shop.went(rest, "gross mass") == {"Jar": -600 * G, "Drum": 600 * G}
    assert set(shop.holds(vessel(shop, "Jar")).values()) == {0}
    assert shop.findings() == []


def test_liquid_moves_by_weight_too(shop: Shop) -> None:
    held = shop.holds(vessel(shop, "Copper"))
    moved = shop.record("move", source="Copper", target="First rinse", mass="1 kg")
    volume, weight = held["volume"], held["gross mass"]
    assert volume
    assert weight
    assert shop.went(moved, "volume")["First rinse"] == pytest.approx(volume * KG // weight, abs=1)


def test_anodes_go_from_one_set_to_another_and_to_waste(shop: Shop) -> None:
    shop.holder("Old anodes", kind="anode")
    shop.record("move", source="Anodes", target="Old anodes", mass="500 g")
    shop.record("drum-off", source="Old anodes", target="Drum")
    assert shop.holds(vessel(shop, "Drum"))["gross mass"] == 500 * G


@pytest.mark.parametrize("kind", ["filter", "carbon", "resin", "recovery cell", "racks", "sludge"])
def test_every_solid_can_be_drummed_off(shop: Shop, kind: str) -> None:
    shop.holder("Solid", kind=kind)
    shop.record("opening", vessel="Solid", mass="2 kg", held=[{"metal": "Cu", "amount": "10 %"}], complete=True)
    gone = shop.record("drum-off", source="Solid", target="Drum", mass="500 g", happened=True)
    assert shop.went(gone, "Cu") == {"Solid": -50 * G, "Drum": 50 * G}


def test_a_move_leads_from_each_kind_to_its_own_and_waste_to_waste() -> None:
    assert set(GOES_TO) == set(VesselKind)
    for source, targets in GOES_TO.items():
        assert (VesselKind.WASTE in targets) == (source == VesselKind.WASTE)


def test_stock_into_a_bath_is_no_move(shop: Shop) -> None:
    told = shop.wrong("move", source="Jar", target="Copper", volume="1 L", mass="1 kg")
    assert "stock container" in told["target"]
    assert "not both" in told["mass"]
    assert set(told) == {"target", "mass"}


def test_a_sample_does_not_come_back(shop: Shop) -> None:
    taken = shop.record("sample", source="Copper", amount="20 mL")
    assert shop.went(taken, "volume") == {"Copper": -20 * ML, "sample": 20 * ML}
    assert shop.went(taken, "Cu")["sample"] == pytest.approx(0.02 * 50.4 * G, rel=0.01)
    weighed = shop.record("sample", source="Jar", amount="5 g")
    assert shop.went(weighed, "gross mass") == {"Jar": -5 * G, "sample": 5 * G}


def test_a_spill_is_guessed_and_so_uncertain(shop: Shop) -> None:
    spilled = shop.record("spill", source="First rinse", amount="0.5 L", sd="0.2 L")
    assert shop.went(spilled, "volume") == {"First rinse": -L // 2, "spill": L // 2}
    picked = shop.record("spill", source="Second rinse", amount="1 L", target="Drum")
    assert shop.went(picked, "volume") == {"Second rinse": -L, "Drum": L}
    everything = shop.record("spill", source="Second rinse")
    assert shop.went(everything, "volume") == {"Second rinse": -9 * L, "spill": 9 * L}


def test_a_discharge_goes_to_the_sewer_once_somebody_answers_for_it(shop: Shop) -> None:
    gone = shop.record("discharge", source="Second rinse", volume="3 L", happened=True)
    assert shop.went(gone, "volume") == {"Second rinse": -3 * L, "sewer": 3 * L}
    assert gone.verdict == "overridden"


Wrong = tuple[str, dict[str, Any], set[str]]
WRONG: list[Wrong] = [
    ("move", {"source": "Copper", "target": "Copper"}, {"target"}),
    ("drum-off", {"source": "Copper", "target": "Drum", "volume": "1 L", "mass": "1 kg"}, {"mass"}),
    ("spill", {"source": "Copper", "amount": "1 L", "sd": "1 g"}, {"sd"}),
    ("spill", {"source": "Copper", "sd": "1 L"}, {"sd"}),
    ("spill", {"source": "Drum", "target": "Drum"}, {"target"}),
]


@pytest.mark.parametrize(("verb", "said", "fields"), WRONG)
def test_what_makes_no_sense_is_refused_by_field(shop: Shop, verb: str, said: dict[str, Any], fields: set[str]) -> None:
    assert set(shop.wrong(verb, **said)) == fields
