"""Tanks, rack types, routes, holders: what makes no sense is refused by field, all at once."""

from typing import Any

import pytest
from django_scopes import scope

from chemicals.ledger.models import Vessel
from chemicals.process import setup
from chemicals.process.models import RackType, Route, Tank
from chemicals.process.selectors import (
    get_rack_type_for,
    get_route_for,
    get_tank_of,
    list_rack_types_for,
    list_routes_for,
    list_routes_through,
    list_tanks_for,
)
from chemicals.workshop.errors import InvalidInputError, NotFoundError, NotPermittedError
from chemicals.workshop.models import Membership
from tests.process.shop import ML, L, Shop


def fields_of(error: InvalidInputError) -> list[str]:
    return [each.field for each in error.errors]


BATH: dict[str, Any] = {"kind": "bath", "name": "Nickel", "metal": "Ni", "valence": 2}


@pytest.mark.parametrize(
    ("said", "fields"),
    [
        ({"kind": "bucket"}, ["kind"]),
        ({"name": ""}, ["name"]),
        ({"name": "Copper"}, ["name"]),
        ({"metal": "Xx"}, ["metal"]),
        ({"metal": "O"}, ["metal"]),
        ({"kind": "rinse"}, ["metal"]),
        ({"valence": None}, ["valence"]),
        ({"metal": "", "valence": 2}, ["valence"]),
        ({"valence": 9}, ["valence"]),
        ({"mark": 0}, ["mark"]),
        ({"mark": 2 * L, "capacity": L}, ["mark"]),
        ({"capacity": -1}, ["capacity"]),
        ({"efficiency": 0}, ["efficiency"]),
        ({"efficiency": 1_200_000}, ["efficiency"]),
        ({"anode_kind": "soluble"}, ["anode"]),
        ({"anode_kind": "magic"}, ["anode_kind"]),
        ({"side_reaction": "acid"}, ["side_reaction"]),
        ({"side_reaction": "magic", "anode_kind": "inert"}, ["side_reaction"]),
        ({"side_reaction": "chromium(VI)", "anode_kind": "inert"}, ["side_reaction"]),
        ({"side_reaction": "acid", "anode_kind": "inert", "metal": "", "valence": None}, ["side_reaction"]),
        ({"rack_share": 30_000}, ["racks"]),
        ({"rack_share": 1_000_000}, ["racks", "rack_share"]),
        ({"bath_type": "x" * 81}, ["bath_type"]),
        ({"name": "", "metal": "Xx", "efficiency": 0}, ["name", "metal", "efficiency"]),
    ],
)
def test_a_tank_is_refused_by_field(empty_shop: Shop, said: dict[str, Any], fields: list[str]) -> None:
    with pytest.raises(InvalidInputError) as caught:
        setup.create_tank(actor=empty_shop.member, now=empty_shop.now, tank=setup.TankInput(**(BATH | said)))
    assert fields_of(caught.value) == fields
    with scope(workshop=empty_shop.member.workshop):
        assert not Vessel.objects.filter(name="Nickel").exists()
        assert Tank.objects.count() == 3


def test_rack_build_up_is_of_its_kind_and_of_a_bath_that_plates(empty_shop: Shop) -> None:
    racks, anodes = empty_shop.holder("Build-up", kind="racks"), empty_shop.holder("Old anodes", kind="anode")
    with pytest.raises(InvalidInputError, match="This is no rack build-up"):
        empty_shop.tank("Nickel", kind="bath", metal="Ni", valence=2, racks=anodes)
    with pytest.raises(InvalidInputError, match="Nothing grows on racks where nothing is plated"):
        empty_shop.tank("Pickle", kind="bath", racks=racks)


def test_an_anode_set_is_no_rinse(empty_shop: Shop) -> None:
    with scope(workshop=empty_shop.member.workshop):
        rinse = Vessel.objects.get(name="First rinse")
    with pytest.raises(InvalidInputError, match="This is no anode set"):
        empty_shop.tank("Nickel", kind="bath", metal="Ni", valence=2, anode_kind="soluble", anode=rinse)


def test_a_tank_remembers_its_figures(empty_shop: Shop) -> None:
    vessel = empty_shop.tank("Nickel", "40 L", kind="bath", metal="Ni", valence=2, efficiency=960_000)
    tank = get_tank_of(vessel)
    assert tank is not None
    assert (tank.mark, tank.metal, tank.valence, tank.efficiency) == (40 * L, "Ni", 2, 960_000)
    assert tank in list(list_tanks_for(empty_shop.member))


@pytest.mark.parametrize(
    ("said", "fields"),
    [
        ({"name": "Small part"}, ["name"]),
        ({"name": "a\x07"}, ["name"]),
        ({"drag_out": -1}, ["drag_out"]),
        ({"drag_out_sd": 2_000_001}, ["drag_out_sd"]),
        ({"area": 0}, ["area"]),
    ],
)
def test_a_rack_type_is_refused_by_field(empty_shop: Shop, said: dict[str, Any], fields: list[str]) -> None:
    known: dict[str, Any] = {"name": "Rack", "drag_out": ML} | said
    with pytest.raises(InvalidInputError) as caught:
        setup.create_rack_type(actor=empty_shop.member, **known)
    assert fields_of(caught.value) == fields
    with scope(workshop=empty_shop.member.workshop):
        assert RackType.objects.count() == 1


@pytest.mark.parametrize(
    ("names", "fields"),
    [
        ([], ["vessels"]),
        (["Copper", "Copper"], ["vessels"]),
        (["Copper", "Drum"], ["vessels"]),
        (["Jar"], ["vessels"]),
    ],
)
def test_a_route_is_refused(empty_shop: Shop, names: list[str], fields: list[str]) -> None:
    with scope(workshop=empty_shop.member.workshop):
        vessels = [Vessel.objects.get(name=name) for name in names]
        rack = RackType.objects.get()
    with pytest.raises(InvalidInputError) as caught:
        empty_shop.route("Other", rack, *vessels)
    assert fields_of(caught.value) == fields
    with scope(workshop=empty_shop.member.workshop):
        assert Route.objects.count() == 1


def test_a_route_keeps_its_order(empty_shop: Shop) -> None:
    with scope(workshop=empty_shop.member.workshop):
        vessels = [Vessel.objects.get(name=name) for name in ("Second rinse", "Copper", "First rinse")]
        rack = RackType.objects.get()
    route = empty_shop.route("Backwards", rack, *vessels)
    with scope(workshop=empty_shop.member.workshop):
        found = list_routes_for(empty_shop.member).get(pk=route.pk)
        assert [step.vessel for step in found.steps.all()] == vessels
        assert [row.name for row in list_routes_through(empty_shop.member, vessels[1])] == ["Backwards", "Plate"]
    with pytest.raises(InvalidInputError, match="There is one of this name already"):
        empty_shop.route("Backwards", rack, *vessels)


@pytest.mark.parametrize(
    ("kind", "named", "fields"),
    [("tank", True, ["kind"]), ("stock", False, ["product"]), ("bath", False, ["kind"]), ("sludge", True, ["product"])],
)
def test_a_holder_is_stock_anodes_or_stands_for_solids(
    empty_shop: Shop, kind: str, *, named: bool, fields: list[str]
) -> None:
    product = empty_shop.product("Zinc", {"Zn": "99 %"}) if named else None
    with pytest.raises(InvalidInputError) as caught:
        setup.create_holder(actor=empty_shop.member, now=empty_shop.now, kind=kind, name="New", product=product)
    assert fields_of(caught.value) == fields


def test_observers_and_strangers(empty_shop: Shop, observer: Membership, stranger: Membership) -> None:
    with scope(workshop=empty_shop.member.workshop):
        rack, route = RackType.objects.get(), Route.objects.get()
        bath, anodes = Vessel.objects.get(name="Copper"), Vessel.objects.get(name="Anodes")
    tank = setup.TankInput(**BATH)
    for call in (
        lambda: setup.create_tank(actor=observer, now=empty_shop.now, tank=tank),
        lambda: setup.create_rack_type(actor=observer, name="Rack", drag_out=1),
        lambda: setup.create_route(actor=observer, name="Other", rack=rack, vessels=[bath]),
        lambda: setup.create_route(actor=stranger, name="Other", rack=rack, vessels=[bath]),
        lambda: setup.create_tank(
            actor=stranger, now=empty_shop.now, tank=setup.TankInput(**BATH, anode_kind="soluble", anode=anodes)
        ),
    ):
        with pytest.raises(NotPermittedError):
            call()
    assert get_route_for(observer, route.uuid) == route
    assert get_rack_type_for(observer, rack.uuid) == rack
    for wrong in (lambda: get_route_for(stranger, route.uuid), lambda: get_rack_type_for(stranger, rack.uuid)):
        with pytest.raises(NotFoundError):
            wrong()
    with scope(workshop=stranger.workshop):
        assert list(list_rack_types_for(stranger)) == []
