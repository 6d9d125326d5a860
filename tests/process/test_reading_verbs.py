"""Counts, weights, densities; analyses of metals, species and solutes, however the result is expressed."""

from typing import Any

import pytest
from django_scopes import scope

from chemicals.books.events import CHROMIUM_VI, FREE_CYANIDE, Reading
from chemicals.journal.selectors import read_event
from chemicals.ledger.models import Component, ComponentKind, Vessel
from tests.process.shop import KG, G, L, Shop

MOL = 10**9
"""Nanomoles in a mole."""


def holds(shop: Shop, name: str) -> dict[str, int | None]:
    with scope(workshop=shop.member.workshop):
        return shop.holds(Vessel.objects.get(name=name))


def test_a_count_says_what_is_missing(shop: Shop) -> None:
    """A kilogram should be left in the jar; 950 g are there."""
    counted = shop.record("count", vessel="Jar", amount="950 g", sd="5 g")
    assert shop.went(counted, "gross mass") == {"Jar": -50 * G, "unaccounted": 50 * G}
    assert holds(shop, "Jar")["gross mass"] == 950 * G
    assert shop.went(counted, "Cu")["unaccounted"] == pytest.approx(0.05 * 0.99 * 0.25451 * KG, rel=1e-3)


def test_a_liquid_in_stock_is_counted_by_its_volume(shop: Shop) -> None:
    counted = shop.record("count", vessel="Bottle", amount="1.8 L")
    assert shop.went(counted, "volume") == {"Bottle": -L // 10, "unaccounted": L // 10}


def test_the_scale_sets_the_weight_alone_and_the_container_is_taken_off(shop: Shop) -> None:
    shop.record("drum-off", source="First rinse", target="Drum", volume="2 L")
    before = holds(shop, "Drum")
    shop.record("weight-reading", vessel="Drum", mass="2.6 kg", tare="550 g", sd="10 g")
    after = holds(shop, "Drum")
    assert after["gross mass"] == 2050 * G
    assert {**after, "gross mass": 0} == {**before, "gross mass": 0}
    event = shop.event("weight-reading", vessel="Drum", mass="2.6 kg", tare="550 g")
    assert (event.mass.typed, event.mass.unit, event.mass.base) == ("2.6 kg - 550 g", "ug", 2050 * G)


def test_a_density_makes_the_weight(shop: Shop) -> None:
    shop.record("density-reading", vessel="Copper", density="1.13 g/mL", sd="0.005 g/mL")
    assert holds(shop, "Copper")["gross mass"] == pytest.approx(20 * 1.13 * KG)


@pytest.mark.parametrize(
    ("typed", "grams_per_litre"), [("32 °Bé", 1281.9), ("32 Be", 1281.9), ("32 °Bé rational", 1283.8)]
)
def test_degrees_baume_are_a_density_as_typed(shop: Shop, typed: str, grams_per_litre: float) -> None:
    """145/(145 - 32) x 0.999016 and 144.3/(144.3 - 32) x 0.9991."""
    event = shop.event("density-reading", vessel="Copper", density=typed, sd="0.01 g/mL")
    assert event.density.typed == typed
    assert event.density.base == pytest.approx(1000 * grams_per_litre, abs=60)
    shop.record("density-reading", vessel="Copper", density=typed)
    assert holds(shop, "Copper")["gross mass"] == pytest.approx(20 * event.density.base * 1000)


def test_half_a_degree_of_doubt_is_a_doubt_of_the_density(shop: Shop) -> None:
    """The slope at 32 degrees is 145/113^2 x 0.999016 g/mL a degree."""
    event = shop.event("density-reading", vessel="Copper", density="32 °Bé", sd="0.5 °Bé")
    assert event.density.sd == pytest.approx(0.5 * 145 / 113**2 * 999_016, abs=1)


def test_a_reading_is_kept_as_it_was_read_and_moves_nothing(shop: Shop) -> None:
    before = holds(shop, "Copper")
    entry = shop.record(
        "reading", vessel="Copper", quantity="temperature", result="75 °F", sd="0.9 °F", remark=" stirred "
    )
    event = read_event(entry)
    assert isinstance(event, Reading)
    assert (event.result.typed, event.result.unit, event.remark) == ("75 °F", "degF", "stirred")
    assert event.result.least == event.result.most == 297_039
    assert event.result.sd == 500
    assert (holds(shop, "Copper"), shop.findings()) == (before, [])


def test_a_strip_shows_a_range_or_less_than_something(shop: Shop) -> None:
    event = shop.event(
        "reading", vessel="First rinse", quantity="test strip", shows="copper", result="10 to 25 mg/L", sd="5 mg/L"
    )
    assert (event.shows, event.result.least, event.result.most, event.result.sd) == ("copper", 10_000, 25_000, 5_000)
    none = shop.event("reading", vessel="First rinse", quantity="test strip", shows="chlorine", result="<0.5 mg/L")
    assert (none.result.least, none.result.most, none.result.sd) == (None, 500, None)


Expressed = tuple[str, str, str, float]
EXPRESSED: list[Expressed] = [
    ("Cu", "50 g/L", "", 50 * G),
    ("Cu", "200 g/L", "CuSO4.5H2O", 200 * G * 0.25451),
    ("Cu", "0.8 mol/L", "", 0.8 * 63.546 * G),
    ("Cu", "0.4 mol/L", "Cu2O", 0.8 * 63.546 * G),
    (FREE_CYANIDE, "49 g/L", "NaCN", 49 / 49.007 * MOL),
    (FREE_CYANIDE, "26 g/L", "CN", 26 / 26.018 * MOL),
    (FREE_CYANIDE, "0.2 mol/L", "", 0.2 * MOL),
    (FREE_CYANIDE, "0.2 mol/L", "Ca(CN)2", 0.4 * MOL),
    ("acid", "98 g/L", "H2SO4", 2 * 98 / 98.08 * MOL),
    (CHROMIUM_VI, "250 g/L", "CrO3", 250 / 99.99 * MOL),
    ("Na2SO4", "30 g/L", "", 30 * G),
    ("Na2SO4", "0.1 mol/L", "Na2SO4", 14.204 * G),
]


@pytest.mark.parametrize(("component", "result", "expressed_as", "per_litre"), EXPRESSED)
def test_a_result_may_be_expressed_in_many_ways(
    shop: Shop, component: str, result: str, expressed_as: str, per_litre: float
) -> None:
    """Molar masses: CIAAW 2021. The result stays as reported; what is relied on is the component's own."""
    shop.product("Salt cake", {"Na2SO4": "99 %"}, inert=["Na2SO4"])
    event = shop.event("analysis", vessel="Copper", metal=component, result=result, expressed_as=expressed_as)
    assert event.result.typed == result
    assert event.component == component
    assert event.concentration.base == pytest.approx(per_litre, rel=1e-4)


def test_the_books_follow_an_accepted_species_out_of_reaction(shop: Shop) -> None:
    shop.record("analysis", days_ago=1, label="acid", vessel="Copper", metal="acid", result="1.2 mol/L")
    before = holds(shop, "Copper")["acid"]
    accepted = shop.record("acceptance", analysis="acid")
    assert before
    assert holds(shop, "Copper")["acid"] == 24 * MOL
    assert shop.went(accepted, "acid") == {"Copper": 24 * MOL - before, "reaction": before - 24 * MOL}


def test_what_a_bath_holds_in_the_beginning_may_be_said_in_many_ways(shop: Shop) -> None:
    shop.product("Salt cake", {"Na2SO4": "99 %"}, inert=["Na2SO4"])
    shop.tank("Silver", kind="bath", metal="Ag", valence=1)
    shop.record(
        "opening",
        vessel="Silver",
        volume="10 L",
        complete=True,
        held=[
            {"metal": "Ag", "amount": "30 g/L", "expressed_as": "AgCN"},
            {"metal": "free cyanide", "amount": "40 g/L", "expressed_as": "KCN"},
            {"metal": "alkali", "amount": "0.1 mol/L"},
            {"metal": "Na2SO4", "amount": "250 g"},
        ],
    )
    held = holds(shop, "Silver")
    assert held["Ag"] == pytest.approx(300 * G * 107.868 / 133.886, rel=1e-4)
    assert held["free cyanide"] == pytest.approx(400 / 65.116 * MOL, rel=1e-4)
    assert (held["alkali"], held["Na2SO4"]) == (MOL, 250 * G)
    with scope(workshop=shop.member.workshop):
        kinds = dict(Component.objects.values_list("code", "kind"))
    assert kinds["free cyanide"] == kinds["alkali"] == ComponentKind.SPECIES
    assert (kinds["Na2SO4"], kinds["Ag"]) == (ComponentKind.SOLUTE, ComponentKind.METAL)


def test_a_make_up_brings_acid_and_what_dissolves_swells_the_bath(shop: Shop) -> None:
    """0.6 L of acid, 1.84 kg/L and 96 %: 21.6 mol of hydrogen. 4 kg of crystals need about 1.5 L of the 20 L."""
    assert holds(shop, "Copper")["acid"] == pytest.approx(2 * 600 * 1.84 * 0.96 / 98.08 * MOL, rel=1e-3)
    event = shop.event(
        "make-up",
        tank="Copper",
        ingredients=[{"stock": "Jar", "amount": "1 kg"}, {"stock": "Bottle", "amount": "100 g"}],
    )
    crystals, acid = event.dissolved
    assert 0.36 < crystals.base / L < 0.40
    assert "CuSO4" in crystals.source
    assert (acid.base, acid.sd) == (0, 0)
    other = shop.product("Brightener", {"C6H8O7": "100 %"})
    shop.holder("Tin", other)
    (unknown,) = shop.event("make-up", tank="Copper", ingredients=[{"stock": "Tin", "amount": "10 g"}]).dissolved
    assert (unknown.base, unknown.sd) == (4 * L // 10, 2 * L // 10)
    assert "assumed" in unknown.source


Wrong = tuple[str, dict[str, Any], dict[str, str]]
WRONG: list[Wrong] = [
    ("count", {"vessel": "Jar", "amount": "1 kg", "sd": "1 mL"}, {"sd": "same kind"}),
    ("weight-reading", {"vessel": "Drum", "mass": "1 kg", "tare": "2 kg"}, {"mass": "less than the empty"}),
    ("density-reading", {"vessel": "Copper", "density": "0 g/mL"}, {"density": "more than zero"}),
    ("density-reading", {"vessel": "Copper", "density": "90 °Bé"}, {"density": "ends at 80 degrees"}),
    ("density-reading", {"vessel": "Copper", "density": "1.1 g/mL", "sd": "1 °Bé"}, {"sd": "same kind"}),
    ("reading", {"vessel": "Copper", "quantity": "pH", "result": "4 V"}, {"result": "a pH is needed"}),
    ("reading", {"vessel": "Copper", "quantity": "luck", "result": "4"}, {"quantity": "from the list"}),
    (
        "reading",
        {"vessel": "Copper", "quantity": "voltage", "result": "3", "sd": "1 K", "shows": "copper"},
        {"result": "has no unit", "shows": "Only a test strip"},
    ),
    (
        "reading",
        {"vessel": "Copper", "quantity": "voltage", "result": "3 V", "sd": "1 K"},
        {"sd": "a voltage is needed"},
    ),
    (
        "reading",
        {"vessel": "Copper", "quantity": "test strip", "result": "5 to 1 mg/L"},
        {"shows": "what the strip shows", "result": "lower end first"},
    ),
    (
        "analysis",
        {"vessel": "Copper", "metal": "free cyanide", "result": "5 g/L"},
        {"expressed_as": "Write moles, or the formula"},
    ),
    (
        "analysis",
        {"vessel": "Copper", "metal": "Cu", "result": "5 g/L", "sd": "1 mmol/L", "expressed_as": "NaCN"},
        {"sd": "same kind", "expressed_as": "holds no Cu"},
    ),
    ("analysis", {"vessel": "Copper", "metal": "Na2SO4", "result": "5 g/L"}, {"metal": "declare the substance inert"}),
    (
        "opening",
        {
            "vessel": "Jar",
            "mass": "1 kg",
            "held": [
                {"metal": "Cu", "amount": "1 mol/L"},
                {"metal": "acid", "amount": "1 g", "expressed_as": "Xx"},
                {"metal": "H2O", "amount": "5 %"},
            ],
        },
        {"held.0.amount": "needs the volume", "held.1.expressed_as": "no element", "held.2.metal": "not balanced"},
    ),
    (
        "opening",
        {"vessel": "Copper", "volume": "1 L", "held": [{"metal": "Cu", "amount": "5 %"}]},
        {"held.0.amount": "A share needs the mass"},
    ),
]


@pytest.mark.parametrize(("verb", "said", "told"), WRONG)
def test_everything_that_is_wrong_is_said_at_once(
    shop: Shop, verb: str, said: dict[str, Any], told: dict[str, str]
) -> None:
    found = shop.wrong(verb, **said)
    assert set(found) == set(told)
    assert {field: words for field, words in told.items() if words not in found[field]} == {}
