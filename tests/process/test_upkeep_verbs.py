"""Filters, carbon, resin, sludge, clean-outs, batch treatment, corrections: a tank and one number are enough."""

from datetime import UTC, datetime
from typing import Any
from uuid import uuid4

import pytest
from django_scopes import scope

from chemicals.ledger.models import Vessel
from chemicals.ledger.periods import close_period
from chemicals.workshop.models import Membership
from tests.process.shop import KG, ML, G, L, Shop

MOL = 10**9


def holds(shop: Shop, name: str) -> dict[str, int | None]:
    with scope(workshop=shop.member.workshop):
        return shop.holds(Vessel.objects.get(name=name))


@pytest.fixture
def kept(shop: Shop) -> Shop:
    """Return the shop with something to keep solids in."""
    for kind in ("filter", "carbon", "resin", "sludge"):
        shop.holder(kind.title(), kind=kind)
    return shop


class TestUptake:
    """What a medium keeps: solution, and metal if anybody knows."""

    def test_a_drained_cartridge_is_assumed_to_hold_a_quarter_of_a_litre(self, kept: Shop) -> None:
        done = kept.record("filter", tank="Copper", target="Filter")
        assert kept.went(done, "volume") == {"Copper": -L // 4, "Filter": L // 4}
        assert kept.went(done, "Cu")["Filter"] == pytest.approx(0.25 * 50.4 * G, rel=0.01)
        solution = kept.event("filter", tank="Copper", target="Filter").solution
        assert solution.sd == solution.base // 2
        assert "assumed" in solution.source

    def test_carbon_holds_two_litres_for_each_kilogram(self, kept: Shop) -> None:
        event = kept.event("carbon", tank="Copper", target="Carbon", medium="60 g")
        assert (event.solution.base, event.solution.sd) == (120 * ML, 60 * ML)
        assert event.medium.base == 60 * G
        assert event.uptake.base == 0
        told = kept.event("carbon", tank="Copper", target="Drum", solution="50 mL", uptake="5 %", passed="20 L")
        assert (told.solution.base, told.uptake.base, told.passed.base) == (50 * ML, 50_000, 20 * L)
        assert told.solution.source == "as told: 50 mL"

    def test_a_fresh_resin_keeps_nine_tenths(self, kept: Shop) -> None:
        kept.record("move", days_ago=1, source="Copper", target="First rinse", volume="0.5 L")
        before = holds(kept, "First rinse")["Cu"]
        assert before
        kept.record("resin", tank="First rinse", target="Resin", passed="5 L")
        volume = 10.5
        assert holds(kept, "Resin")["Cu"] == pytest.approx(0.9 * before * 5 / volume, rel=1e-3)
        assert "volume" not in holds(kept, "Resin")  # nobody weighed the bed: it is taken to be elsewhere, drained

    def test_what_was_found_in_it_counts(self, kept: Shop) -> None:
        taken = [{"metal": "Cu", "amount": "12 %"}]
        done = kept.record("filter", tank="Copper", target="Filter", medium="50 g", taken=taken)
        assert kept.went(done, "Cu") == {"Copper": -6 * G, "Filter": 6 * G}

    def test_everything_that_is_wrong_is_said_at_once(self, kept: Shop) -> None:
        taken = [{"metal": "Cu", "amount": "12 %"}, {"metal": "Ni", "amount": "1 g/L"}]
        told = kept.wrong("filter", tank="Copper", target="Filter", uptake="120 %", taken=taken)
        assert set(told) == {"uptake", "taken.0.amount", "taken.1.amount"}
        assert set(kept.wrong("resin", tank="Copper", target="Resin")) == {"passed"}


class TestSludge:
    """Settled solids."""

    def test_goes_by_weight_and_metal_as_analysed(self, kept: Shop) -> None:
        held = [{"metal": "Cu", "amount": "2 %"}, {"metal": "Fe", "amount": "5 g"}]
        done = kept.record("sludge", source="Copper", target="Sludge", mass="1.5 kg", held=held)
        assert kept.went(done, "Cu") == {"Copper": -30 * G, "Sludge": 30 * G}
        assert kept.went(done, "Fe")["Sludge"] == 5 * G
        assert kept.went(done, "gross mass")["Sludge"] == 1500 * G

    def test_one_number_is_enough(self, kept: Shop) -> None:
        done = kept.record("sludge", source="Copper", target="Drum", mass="1 kg")
        share = KG / 22.6 / KG  # of about 22.6 kg of bath
        assert kept.went(done, "Cu")["Drum"] == pytest.approx(share * 1008 * G, rel=0.02)

    def test_wrong_rows_are_named(self, kept: Shop) -> None:
        held = [{"metal": "Cu", "amount": "1 g"}, {"metal": "Cu", "amount": "2 g"}]
        assert set(kept.wrong("sludge", source="Drum", target="Drum", mass="1 kg", held=held)) == {"held", "target"}


class TestCleanOut:
    """A tank is emptied and washed."""

    def test_takes_everything_and_the_wash_water(self, kept: Shop) -> None:
        done = kept.record("clean-out", tank="First rinse", target="Drum", water="2 L")
        assert kept.went(done, "volume") == {"First rinse": -10 * L, "water supply": -2 * L, "Drum": 12 * L}
        assert set(holds(kept, "First rinse").values()) == {0}

    def test_not_into_itself(self, kept: Shop) -> None:
        assert set(kept.wrong("clean-out", tank="First rinse", target="First rinse")) == {"target"}


class TestTreatment:
    """A batch of spent rinse is neutralised; copper settles as hydroxide."""

    @pytest.fixture
    def spent(self, kept: Shop) -> Shop:
        lye = kept.product("Lye", {"NaOH": "99 %"}, reactivity=("nothing",))
        kept.holder("Tub of lye", lye)
        kept.record("receipt", days_ago=3, vessel="Tub of lye", amount="2 kg")
        kept.record("move", days_ago=2, source="Copper", target="First rinse", volume="0.2 L")
        return kept

    def test_splits_the_metal_between_filtrate_and_sludge(self, spent: Shop) -> None:
        held = holds(spent, "First rinse")["Cu"]
        assert held
        done = spent.record(
            "treatment",
            vessel="First rinse",
            reagents=[{"stock": "Tub of lye", "amount": "50 g"}],
            filtrate="Second rinse",
            filtrate_volume="9 L",
            sludge="Sludge",
            sludge_mass="400 g",
            dissolved=[{"metal": "Cu", "result": "1.8 mg/L"}],
            consumed=[{"species": "acid"}],
        )
        assert spent.went(done, "Cu")["Second rinse"] == 9 * 1800
        assert spent.went(done, "Cu")["Sludge"] == held - 9 * 1800
        assert spent.went(done, "gross mass")["Sludge"] == 400 * G
        assert set(holds(spent, "First rinse").values()) == {0}

    def test_the_filtrate_may_stay_where_it_is(self, spent: Shop) -> None:
        event = spent.event("treatment", vessel="First rinse", consumed=[{"species": "acid"}])
        assert (event.filtrate, event.sludge, event.consumed) == (event.vessel, None, ("acid",))

    def test_a_result_may_be_expressed_as_a_salt_or_in_moles(self, spent: Shop) -> None:
        dissolved = [
            {"metal": "Cu", "result": "10 mg/L", "expressed_as": "CuSO4.5H2O"},
            {"metal": "alkali", "result": "1 mmol/L"},
        ]
        copper, alkali = spent.event("treatment", vessel="First rinse", dissolved=dissolved).dissolved
        assert copper.concentration.base == pytest.approx(2545, abs=1)
        assert (copper.concentration.typed, copper.concentration.unit) == ("10 mg/L CuSO4.5H2O", "ug/L")
        assert alkali.concentration.base == MOL // 1000

    def test_everything_that_is_wrong_is_said_at_once(self, spent: Shop) -> None:
        told = spent.wrong(
            "treatment",
            vessel="First rinse",
            sludge_mass="1 kg",
            dissolved=[{"metal": "Cu", "result": "1 mg/L"}, {"metal": "Cu", "result": "2 mg/L"}],
            consumed=[{"species": "acid"}, {"species": "acid"}],
        )
        assert set(told) == {"sludge", "dissolved", "consumed"}
        assert set(spent.wrong("treatment", vessel="Drum", sludge="Drum")) == {"sludge"}
        assert set(spent.wrong("treatment", vessel="Drum")) == {"reagents"}


class TestCorrection:
    """What a closed period got wrong is set right now."""

    def test_is_against_unaccounted_and_points_at_the_entry(self, shop: Shop, owner: Membership) -> None:
        wrong = shop.record("run", days_ago=2, label="wrong", route="Plate", charge="1 Ah")
        close_period(actor=owner, now=shop.now, key=uuid4(), until=datetime(2026, 3, 1, 23, tzinfo=UTC))
        done = shop.record(
            "correction",
            entry="wrong",
            vessel="Copper",
            reason="the meter was read wrongly",
            changes=[
                {"metal": "Cu", "change": "less", "amount": "12 g", "sd": "0.5 g"},
                {"metal": "volume", "change": "more", "amount": "0.3 L"},
                {"metal": "acid", "change": "more", "amount": "49.04 g", "expressed_as": "H2SO4"},
            ],
        )
        assert done.about == wrong
        assert shop.went(done, "Cu") == {"Copper": -12 * G, "unaccounted": 12 * G}
        assert shop.went(done, "volume") == {"Copper": 300 * ML, "unaccounted": -300 * ML}
        assert shop.went(done, "acid")["Copper"] == pytest.approx(MOL, rel=1e-4)
        assert shop.went(done, "acid")["reaction"] == -shop.went(done, "acid")["Copper"]

    @pytest.mark.parametrize(
        ("row", "field"),
        [
            ({"metal": "Cu", "change": "more", "amount": "1 L"}, "changes.0.amount"),
            ({"metal": "volume", "change": "more", "amount": "1 kg"}, "changes.0.amount"),
            ({"metal": "gross mass", "change": "more", "amount": "1 mol"}, "changes.0.amount"),
            ({"metal": "Cu", "change": "more", "amount": "1 g", "sd": "1 L"}, "changes.0.sd"),
            ({"metal": "water", "change": "more", "amount": "1 g"}, "changes.0.metal"),
        ],
    )
    def test_rows_are_refused_by_field(self, shop: Shop, row: dict[str, Any], field: str) -> None:
        shop.record("run", days_ago=2, label="wrong", route="Plate", charge="1 Ah")
        told = shop.wrong("correction", entry="wrong", vessel="Copper", reason=" ", changes=[row])
        assert set(told) == {field, "reason"}

    def test_nothing_to_correct(self, shop: Shop) -> None:
        shop.record("run", days_ago=2, label="wrong", route="Plate", charge="1 Ah")
        assert set(shop.wrong("correction", entry="wrong", vessel="Copper", reason="x", changes=[])) == {"changes"}
