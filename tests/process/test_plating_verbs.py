"""Rack build-up, side reactions at an inert anode, day sheets, dummy plating, recovery, stripping."""

from typing import Any

import pytest
from django_scopes import scope

from chemicals.ledger.models import Vessel
from tests.process.shop import ML, G, Shop

FARADAY = 96_485.332  # C/mol, CODATA 2018
GRAMS_PER_AH = 63.546 / (2 * FARADAY) * 3600
MOL = 10**9


def vessel(shop: Shop, name: str) -> Vessel:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.get(name=name)


def bath(shop: Shop, name: str, volume: str = "20 L", *, held: str = "50 g/L", **said: Any) -> Vessel:
    """Put up a bath that holds its metal and a rack type's route through it."""
    made = shop.tank(name, kind="bath", **said)
    shop.record(
        "opening", days_ago=9, vessel=name, volume=volume, held=[{"metal": said["metal"], "amount": held}],
        complete=True,
    )  # fmt: skip
    shop.route(f"Through {name}", shop.rack(f"Rack of {name}", "0 mL"), made)
    return made


class TestRackBuildUp:
    """A part of the deposit grows on the rack."""

    def test_takes_its_share_of_the_deposit(self, shop: Shop) -> None:
        racks = shop.holder("Build-up", kind="racks")
        bath(shop, "Nickel", metal="Ni", valence=2, anode_kind="inert", racks=racks, rack_share=40_000)
        run = shop.record("run", days_ago=1, route="Through Nickel", charge="10 Ah")
        plated = 58.693 / (2 * FARADAY) * 36_000 * G
        assert shop.went(run, "Ni")["Build-up"] == pytest.approx(0.04 * plated, rel=1e-4)
        assert shop.went(run, "Ni")["parts"] == pytest.approx(0.96 * plated, rel=1e-4)

    def test_is_assumed_where_nobody_knows_it_and_says_so(self, shop: Shop) -> None:
        racks = shop.holder("Build-up", kind="racks")
        bath(shop, "Nickel", metal="Ni", valence=2, racks=racks)
        share = shop.event("run", route="Through Nickel", charge="10 Ah").plating.rack_share
        assert (share.base, share.sd) == (30_000, 15_000)
        assert "assumed" in share.source


class TestSideReaction:
    """What the current does at an inert anode besides taking metal out, electron for electron."""

    @pytest.mark.parametrize(
        ("said", "species", "sign"),
        [
            ({"metal": "Cu", "valence": 2, "side_reaction": "acid"}, "acid", 1),
            ({"metal": "Cu", "valence": 1, "side_reaction": "alkali"}, "alkali", -1),
        ],
    )
    def test_follows_from_faradays_law(self, shop: Shop, said: dict[str, Any], species: str, sign: int) -> None:
        """26.8 Ah are a mole of electrons; at 50 % efficiency the cathode's gas takes half of it back."""
        bath(shop, "Bath", anode_kind="inert", efficiency=500_000, **said)
        run = shop.record("run", days_ago=1, route="Through Bath", charge="26.801 Ah")
        assert shop.went(run, species)["Bath"] == pytest.approx(sign * 0.5 * MOL, rel=1e-3)
        assert shop.went(run, species)["reaction"] == -shop.went(run, species)["Bath"]

    def test_a_chromium_bath_uses_its_chromium_vi_up(self, shop: Shop) -> None:
        """Six electrons for each atom, at 15 %: 100 Ah plate 0.093 mol."""
        said: dict[str, Any] = {"metal": "Cr", "valence": 6, "efficiency": 150_000}
        bath(shop, "Chromium", held="130 g/L", anode_kind="inert", side_reaction="chromium(VI)", **said)
        run = shop.record("run", days_ago=1, route="Through Chromium", charge="100 Ah")
        moles = 0.15 * 360_000 / (6 * FARADAY) * MOL
        assert shop.went(run, "chromium(VI)")["reaction"] == pytest.approx(moles, rel=1e-3)
        assert shop.went(run, "Cr")["parts"] == pytest.approx(moles / MOL * 51.996 * G, rel=1e-3)

    def test_its_doubt_is_that_of_the_efficiency(self, shop: Shop) -> None:
        said: dict[str, Any] = {"efficiency": 500_000, "efficiency_sd": 50_000}
        bath(shop, "Bath", metal="Cu", valence=2, anode_kind="inert", side_reaction="acid", **said)
        (conversion,) = shop.event("run", route="Through Bath", charge="1 Ah").plating.conversions
        assert conversion.per_kilocoulomb.sd == pytest.approx(conversion.per_kilocoulomb.base / 10, rel=1e-6)
        assert "Faraday" in conversion.per_kilocoulomb.source

    def test_a_soluble_anode_has_none(self, shop: Shop) -> None:
        assert shop.event("run", route="Plate", charge="1 Ah").plating.conversions == ()


class TestDaySheet:
    """A day's racks by type and ampere-hours by bath, in one grid."""

    def test_says_what_single_runs_would(self, shop: Shop) -> None:
        shop.rack("Big rack", "20 mL")
        sheet = shop.record(
            "day-sheet",
            racks=[{"route": "Plate", "loads": 4}, {"route": "Plate", "rack": "Big rack", "loads": 2}],
            charges=[{"bath": "Copper", "charge": "30 Ah"}],
        )
        plated = 30 * GRAMS_PER_AH * G
        assert shop.went(sheet, "Cu")["parts"] == pytest.approx(plated, rel=1e-3)
        assert shop.went(sheet, "Cu")["Anodes"] == pytest.approx(-plated, rel=1e-3)
        assert shop.went(sheet, "volume")["Copper"] == -44 * ML
        assert [row.rack for row in shop.event("day-sheet", racks=[{"route": "Plate", "loads": 1}]).racks] == [
            "Small part"
        ]

    def test_one_number_is_enough(self, shop: Shop) -> None:
        sheet = shop.record("day-sheet", charges=[{"bath": "Copper", "charge": "310 Ah"}])
        assert shop.went(sheet, "Cu")["parts"] == pytest.approx(310 * GRAMS_PER_AH * G, rel=1e-3)

    def test_everything_that_is_wrong_is_said_at_once(self, shop: Shop) -> None:
        shop.tank("Pickle", kind="bath")
        told = shop.wrong(
            "day-sheet",
            racks=[{"route": "Plate", "loads": 0}, {"route": "Plate", "loads": 1001}],
            charges=[{"bath": name, "charge": "1 Ah"} for name in ("Pickle", "Copper", "Copper")],
        )
        assert set(told) == {"racks.0.loads", "racks.1.loads", "charges.0.bath", "charges"}
        assert set(shop.wrong("day-sheet")) == {"racks"}


class TestDummy:
    """Metal goes out of a liquid onto a sheet, build-up or a recovery cell."""

    def test_a_scrap_sheet_counts_as_parts_and_the_anodes_dissolve(self, shop: Shop) -> None:
        done = shop.record("dummy", tank="Copper", current="0.5 A", time="4 h")
        assert shop.went(done, "Cu")["parts"] == pytest.approx(2 * GRAMS_PER_AH * G, rel=1e-3)
        assert shop.went(done, "Cu")["Anodes"] == -shop.went(done, "Cu")["parts"]

    def test_a_recovery_cell_on_a_rinse_takes_what_the_bath_before_it_plates(self, shop: Shop) -> None:
        shop.holder("Cell", kind="recovery cell")
        shop.record("top-up", days_ago=2, tank="First rinse", source="Jar", volume="0 L", happened=True)
        shop.record("move", days_ago=1, source="Copper", target="First rinse", volume="1 L")
        done = shop.record("dummy", tank="First rinse", target="Cell", weight_before="85.0 g", weight_after="97.5 g")
        assert shop.went(done, "Cu") == {"First rinse": -12_500_000, "Cell": 12_500_000}
        plating = shop.event("dummy", tank="First rinse", target="Cell", charge="10 Ah").plating
        assert (plating.deposit.metal, plating.deposit.valence, plating.anode) == ("Cu", 2, None)
        assert "assumed" in plating.deposit.efficiency.source

    def test_an_impurity_is_named(self, shop: Shop) -> None:
        plating = shop.event("dummy", tank="Copper", metal="Zn", charge="2 Ah").plating
        assert (plating.deposit.metal, plating.anode, plating.conversions) == ("Zn", None, ())

    def test_everything_that_is_wrong_is_said_at_once(self, shop: Shop) -> None:
        shop.tank("Lone rinse")
        assert set(shop.wrong("dummy", tank="Lone rinse", charge="1 Ah")) == {"metal"}
        assert set(shop.wrong("dummy", tank="Copper")) == {"charge"}
        told = shop.wrong("dummy", tank="Copper", charge="1 Ah", current="1 A", weight_after="3 g")
        assert set(told) == {"charge", "weight_before"}
        assert set(shop.wrong("dummy", tank="Copper", current="1 A")) == {"time"}


class TestStrip:
    """Metal comes back off racks or parts."""

    def test_all_of_the_build_up_where_nobody_weighs(self, shop: Shop) -> None:
        shop.holder("Build-up", kind="racks")
        held = [{"metal": "Cu", "amount": "40 g"}]
        shop.record("opening", days_ago=1, vessel="Build-up", mass="40 g", held=held, complete=True)
        done = shop.record("strip", tank="Second rinse", source="Build-up", happened=True)
        assert shop.went(done, "Cu") == {"Build-up": -40 * G, "Second rinse": 40 * G}

    def test_parts_are_weighed(self, shop: Shop) -> None:
        done = shop.record(
            "strip", tank="Copper", metal="Cu", weight_before="12.0 g", weight_after="9.5 g", weight_sd="0.05 g"
        )
        assert shop.went(done, "Cu") == {"parts": -2_500_000, "Copper": 2_500_000}

    def test_everything_that_is_wrong_is_said_at_once(self, shop: Shop) -> None:
        shop.holder("Build-up", kind="racks")
        assert set(shop.wrong("strip", tank="Copper")) == {"weight_before", "metal"}
        assert set(shop.wrong("strip", tank="Copper", source="Build-up", weight_before="1 g")) == {
            "weight_after",
            "metal",
        }
        assert set(shop.wrong("strip", tank="Copper", source="Build-up", metal="O")) == {"metal"}
