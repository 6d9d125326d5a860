"""What was read at a vessel, and how a tank is set up from some day on."""

from dataclasses import replace
from typing import Any

import pytest
from django_scopes import scope

from chemicals.ledger.models import Vessel
from chemicals.process.readings import find_last_of_each, list_readings_of
from chemicals.process.selectors import get_tank_of, list_tank_changes_of
from chemicals.process.setup import TankInput, change_tank
from chemicals.workshop.errors import InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from tests.process.shop import L, Shop


def copper(shop: Shop) -> Vessel:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.get(name="Copper")


def test_what_was_read_is_told_latest_first_without_what_was_cancelled(
    shop: Shop, django_assert_num_queries: Any
) -> None:
    shop.record("reading", days_ago=3, vessel="Copper", quantity="pH", result="1.2")
    wrong = shop.record("reading", days_ago=1, vessel="Copper", quantity="pH", result="12")
    shop.entries["wrong"] = wrong
    shop.record("cancellation", entry="wrong", reason="a slip")
    shop.record("reading", days_ago=2, vessel="Copper", quantity="test strip", shows="Chlorine", result="<1 mg/L")
    shop.record("reading", days_ago=4, vessel="Copper", quantity="pH", result="1.4")
    shop.record("level-reading", days_ago=1, vessel="Copper", volume="19 L", sd="0.1 L")
    shop.record("density-reading", days_ago=0.5, vessel="Copper", density="20 °Bé")
    shop.record("analysis", days_ago=0.2, vessel="Copper", metal="Cu", result="0.8 mol/L")
    shop.record("reading", vessel="First rinse", quantity="pH", result="6")
    vessel = copper(shop)
    with django_assert_num_queries(2):
        found = list_readings_of(shop.member, vessel)
    assert [(row.quantity, row.shows, row.typed) for row in found] == [
        ("analysis", "Cu", "0.8 mol/L"),
        ("density", "", "20 °Bé"),
        ("level", "", "19 L"),
        ("test strip", "Chlorine", "<1 mg/L"),
        ("pH", "", "1.2"),
        ("pH", "", "1.4"),
    ]
    assert [(row.dimension, row.least, row.most, row.sd) for row in found[2:4]] == [
        ("volume", 19 * L, 19 * L, L // 10),
        ("concentration", None, 1000, None),
    ]
    assert found[0].dimension == "molar_concentration"
    assert [row.typed for row in find_last_of_each(found)] == ["0.8 mol/L", "20 °Bé", "19 L", "<1 mg/L", "1.2"]


def set_up(shop: Shop) -> TankInput:
    tank = get_tank_of(copper(shop))
    assert tank is not None
    return TankInput(
        kind="bath", name="", mark=tank.mark, bath_type=tank.bath_type, metal=tank.metal, valence=tank.valence,
        efficiency=tank.efficiency, efficiency_sd=tank.efficiency_sd, anode_kind=tank.anode_kind, anode=tank.anode,
        side_reaction=tank.side_reaction, racks=tank.racks, rack_share=tank.rack_share,
    )  # fmt: skip


def change(shop: Shop, note: str = "", **said: Any) -> None:
    tank = get_tank_of(copper(shop))
    assert tank is not None
    change_tank(actor=shop.member, now=shop.now, row=tank, tank=replace(set_up(shop), **said), note=note)


def test_a_changed_efficiency_counts_from_then_on(shop: Shop) -> None:
    before = shop.record("run", days_ago=1, route="Plate", charge="1 Ah")
    was = shop.went(before, "Cu")["parts"]
    change(shop, note="measured on a test panel", efficiency=500_000, bath_type="bright")
    told = [(row.fact, row.before, row.after, row.note) for row in list_tank_changes_of(copper(shop))]
    assert ("bath_type", "", "bright", "measured on a test panel") in told
    assert next(row[2] for row in told if row[0] == "efficiency") == "50 %"
    assert {row.changed_by for row in list_tank_changes_of(copper(shop))} == {shop.member}
    after = shop.record("run", route="Plate", charge="1 Ah")
    assert shop.went(before, "Cu")["parts"] == was
    assert shop.went(after, "Cu")["parts"] < was * 0.6


def test_what_stays_is_no_change(shop: Shop) -> None:
    change(shop)
    assert list(list_tank_changes_of(copper(shop))) == []


def test_a_change_that_cannot_be_leaves_everything(shop: Shop) -> None:
    with pytest.raises(InvalidInputError) as caught:
        change(shop, valence=None, efficiency=0, note="x" * 201)
    assert {error.field for error in caught.value.errors} == {"valence", "efficiency", "note"}
    tank = get_tank_of(copper(shop))
    assert tank is not None
    assert tank.valence == 2
    assert list(list_tank_changes_of(copper(shop))) == []


def test_a_stranger_changes_no_tank(shop: Shop, stranger: Membership) -> None:
    tank = get_tank_of(copper(shop))
    assert tank is not None
    with pytest.raises(NotPermittedError, match="another workshop"):
        change_tank(actor=stranger, now=shop.now, row=tank, tank=set_up(shop))
