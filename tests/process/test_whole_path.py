"""The whole path in the trade's words: buy, make up, plate, analyse, drum off, hand over; and the balance."""

from datetime import timedelta
from fractions import Fraction
from typing import Any
from uuid import uuid4

import pytest
from django_scopes import scope

from chemicals.balance.selectors import get_book_balance
from chemicals.ledger.models import Vessel
from compliance.documents.selectors import read_data
from compliance.dropoffs import services as dropoffs
from compliance.waste import services as waste
from compliance.waste.models import WasteContainer
from tests.process.shop import KG, ML, G, L, Shop

COPPER, SULFUR, OXYGEN, HYDROGEN = (Fraction(text) for text in ("63.546", "32.06", "15.999", "1.008"))
"""Atomic weights: IUPAC abridged standard atomic weights 2021."""
COPPER_IN_SALT = COPPER / (COPPER + SULFUR + 9 * OXYGEN + 10 * HYDROGEN)
"""Mass fraction of Cu in CuSO4.5H2O."""
GRAMS_PER_AH = COPPER * 3600 / (2 * Fraction("96485.33212"))
"""Electrochemical equivalent of copper(II), 1.1855 g/Ah (Faraday constant: CODATA 2018)."""
SALT, ANODES = Fraction(99, 100) * COPPER_IN_SALT * KG, Fraction(999, 1000) * KG
"""Micrograms of copper in a kilogram of what is bought."""


def vessel(shop: Shop, name: str) -> Vessel:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.get(name=name)


def held(shop: Shop, name: str, component: str = "Cu") -> int:
    amount = shop.holds(vessel(shop, name))[component]
    assert amount is not None
    return amount


def close(value: Fraction | int, expected: Fraction | int, within: int = 10) -> bool:
    """Compare base units with a sum by hand; whole units are cut at each step."""
    return bool(abs(Fraction(value) - Fraction(expected)) <= within)


def test_the_whole_path(empty_shop: Shop) -> None:
    shop = empty_shop
    buy(shop)
    make_up(shop)
    plate(shop)
    keep_up(shop)
    missing = analyse(shop)
    spent = drum_off(shop)
    hand_over(shop)
    balance_of_the_month(shop, spent, missing)
    assert shop.findings() == []
    assert shop.is_proved()


def buy(shop: Shop) -> None:
    """Copper sulfate, sulfuric acid and anodes."""
    shop.record("receipt", days_ago=30.3, vessel="Jar", amount="5 kg", lot="A1")
    shop.record("receipt", days_ago=30.2, vessel="Bottle", amount="2.5 L")
    shop.record("receipt", days_ago=30.1, vessel="Anodes", amount="2 kg")
    assert close(held(shop, "Jar"), 5 * SALT)
    assert close(held(shop, "Anodes"), 2 * ANODES)
    assert close(held(shop, "Bottle", "gross mass"), Fraction("4.6") * KG)


def make_up(shop: Shop) -> None:
    """4 kg of salt and 0.6 L of acid, filled to 20 L: 50 g/L of copper; two rinses of water."""
    shop.record(
        "make-up",
        days_ago=30,
        tank="Copper",
        ingredients=[{"stock": "Jar", "amount": "4 kg"}, {"stock": "Bottle", "amount": "600 mL"}],
        level="20 L",
    )
    for number, rinse in enumerate(("First rinse", "Second rinse")):
        shop.record("make-up", days_ago=29.9 - number / 10, tank=rinse, level="10 L")
    assert close(held(shop, "Copper"), 4 * SALT)
    assert close(held(shop, "Jar"), SALT)
    assert held(shop, "Copper", "volume") == 20 * L
    assert 50 < Fraction(held(shop, "Copper"), 20 * G) < 51
    assert shop.holds(vessel(shop, "First rinse")) == {"volume": 10 * L, "gross mass": 9_982_000_000}


def plate(shop: Shop) -> None:
    """A small part of 5.6 g weighs 7.7 g after 4 h at 1 A/dm2 on 44 cm2."""
    run = shop.record(
        "run",
        days_ago=29,
        route="Plate",
        parts="a buckle",
        current_density="1 A/dm2",
        time="4 h",
        weight_before="5.6 g",
        weight_after="7.7 g",
    )
    by_faraday = GRAMS_PER_AH * Fraction("0.44") * 4 * G
    assert close(by_faraday, 2_086_465, within=50)  # 1.1855 g/Ah x 1.76 Ah
    copper, dragged = shop.went(run, "Cu"), 4 * SALT / 20_000  # 1 mL of 20 L
    assert close(copper["Anodes"], -by_faraday)
    assert close(copper["parts"], Fraction("2.1") * G)
    assert close(copper["Copper"], by_faraday - Fraction("2.1") * G - dragged)
    assert close(copper["First rinse"], dragged * (1 - Fraction(1, 10_001)))
    assert sum(copper.values()) == 0
    assert shop.went(run, "volume") == {"Copper": -ML, "parts": ML, "First rinse": 0, "Second rinse": 0}


def keep_up(shop: Shop) -> None:
    """A week of evaporation; some of the first rinse goes back into the bath, then water to the mark."""
    before, rinse = held(shop, "Copper"), held(shop, "First rinse")
    reading = shop.record("level-reading", days_ago=22, vessel="Copper", volume="19.2 L", sd="0.1 L")
    assert shop.went(reading, "volume") == {"Copper": -799 * ML, "air": 799 * ML}
    assert shop.went(reading, "Cu") == {}
    shop.record("top-up", days_ago=21.9, tank="Copper", source="First rinse", volume="0.5 L")
    shop.record("top-up", days_ago=21.8, tank="Copper")
    assert held(shop, "Copper", "volume") == 20 * L
    assert close(held(shop, "Copper"), before + Fraction(rinse, 20))


def analyse(shop: Shop) -> int:
    """Sampled two weeks ago, reported later and as salt, accepted then: the books follow from the sampling on."""
    shop.record(
        "analysis",
        days_ago=14,
        label="analysis",
        vessel="Copper",
        metal="Cu",
        result="195 g/L",
        sd="2 g/L",
        expressed_as="CuSO4.5H2O",
    )
    booked = held(shop, "Copper")
    accepted = shop.record("acceptance", analysis="analysis")
    assert accepted.occurred_at == shop.now - timedelta(days=14)
    assert close(held(shop, "Copper"), 195 * COPPER_IN_SALT * 20 * G, within=100)
    missing = booked - held(shop, "Copper")
    assert shop.went(accepted, "Cu") == {"Copper": -missing, "unaccounted": missing}
    assert G < missing < 20 * G
    return missing


def drum_off(shop: Shop) -> int:
    """The spent first rinse, all of it."""
    spent = held(shop, "First rinse")
    shop.record("drum-off", days_ago=3, source="First rinse", target="Drum")
    assert shop.holds(vessel(shop, "First rinse")) == {"volume": 0, "gross mass": 0, "Cu": 0, "acid": 0}
    assert (held(shop, "Drum"), held(shop, "Drum", "volume")) == (spent, 9_500 * ML)
    return spent


def hand_over(shop: Shop) -> None:
    """Closed, weighed, labelled, packed with its manifest, handed over."""
    member, now = shop.member, shop.now
    with scope(workshop=member.workshop):
        container = WasteContainer.objects.select_related("vessel", "stream").get()
    container = waste.close_container(actor=member, now=now, container=container, gross=10 * KG)
    label = waste.issue_label(actor=member, now=now, key=uuid4(), container=container)
    copper, acid = read_data(label)["contents"]
    assert (copper["name"], acid["name"]) == ("copper (Cu)", "acid")
    assert copper["amount"].endswith("g")
    assert acid["amount"].endswith("mol")
    drop_off = dropoffs.create_drop_off(
        actor=member,
        now=now,
        receiver=dropoffs.create_receiver(actor=member, name="The yard"),
        mode="brought",
        planned_for=now.date(),
        containers=[container],
    )
    packed = dropoffs.pack_drop_off(actor=member, now=now, drop_off=drop_off)
    assert packed.manifest is not None
    (on_paper,) = read_data(packed.manifest)["containers"]
    assert (on_paper["volume"], on_paper["gross_kg"]) == ("9.5 L", "10.000")
    dropoffs.hand_over(actor=member, now=now, drop_off=packed)
    assert set(shop.holds(container.vessel).values()) == {0}


def balance_of_the_month(shop: Shop, spent: int, missing: int) -> None:
    """To the microgram."""
    start, end = shop.now - timedelta(days=40), shop.now + timedelta(days=1)
    balance = get_book_balance(shop.member, "Cu", start, end)
    at_ends = {name: amount.value or 0 for name, amount in balance.boundaries.items()}
    assert balance.opening.value == 0
    assert sum(at_ends.values()) == balance.closing.value
    assert close(at_ends["supplier"], 5 * SALT + 2 * ANODES)
    assert at_ends["receiver"] == -spent
    assert at_ends["unaccounted"] == balance.unaccounted.value == -missing
    names = ("Jar", "Anodes", "Copper", "First rinse", "Second rinse", "Drum")
    assert sum(held(shop, name) for name in names) == balance.closing.value
    assert balance.smallest_visible is not None
    assert missing < balance.smallest_visible


@pytest.mark.parametrize(
    ("said", "plated"),
    [
        ({"charge": "1.8 Ah"}, GRAMS_PER_AH * Fraction("1.8")),
        ({"current": "0.45 A", "time": "4 h"}, GRAMS_PER_AH * Fraction("1.8")),
        ({"current_density": "1 A/dm2", "time": "240 min"}, GRAMS_PER_AH * Fraction("1.76")),
        ({"weight_before": "5.6 g", "weight_after": "7.7 g"}, Fraction("2.1")),
    ],
)
def test_four_ways_to_say_how_much_was_plated(shop: Shop, said: dict[str, Any], plated: Fraction) -> None:
    run = shop.record("run", days_ago=5, route="Plate", **said)
    out = shop.went(run, "Cu")
    assert close(-out["Anodes"], plated * G, within=2)
    assert close(out["parts"], plated * G, within=20)


def test_a_bath_with_an_inert_anode_gets_poorer(shop: Shop) -> None:
    gold = shop.tank("Gold", kind="bath", metal="Au", valence=1, efficiency=950_000, anode_kind="inert")
    shop.route("Gild", shop.rack("Wire", "0 mL"), gold)
    shop.record(
        "opening", days_ago=6, vessel="Gold", volume="2 L", held=[{"metal": "Au", "amount": "6 g/L"}], complete=True
    )
    shop.record("run", days_ago=5, route="Gild", current="0.18 A", time="8 min")
    # 196.967 g/mol, one electron (CIAAW 2021): 7.3490 g/Ah; at 95 % of 0.024 Ah: 0.1676 g
    assert close(held(shop, "Gold", "Au"), 12 * G - Fraction("0.16756") * G, within=20)
