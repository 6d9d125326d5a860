"""The emergency sheet: what is where, how much and how sure, what must never meet, whom to call."""

from typing import Any
from uuid import uuid4

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scope

from chemicals.ledger.models import Vessel
from chemicals.workshop.errors import NotPermittedError
from chemicals.workshop.models import Membership
from chemicals.workshop.services import NumberInput, set_emergency_numbers
from compliance.documents.models import Paper
from compliance.documents.render import render_pdf
from compliance.documents.selectors import read_data, read_html, read_pdf
from compliance.premises.emergency import build_sheet
from compliance.premises.services import issue_emergency_sheet
from tests.documents.test_codes import codes_on
from tests.documents.test_pdf import squeezed, text_of
from tests.premises.conftest import product_of
from tests.process.shop import Shop


def issue(shop: Shop, **said: Any) -> Paper:
    return issue_emergency_sheet(actor=shop.member, now=shop.now, **{"key": uuid4(), **said})


def sheet(shop: Shop) -> dict[str, Any]:
    return read_data(issue(shop))


def place(said: dict[str, Any], name: str | None) -> dict[str, Any]:
    found: dict[str, Any] = next(each for each in said["places"] if each["name"] == name)
    return found


def thing(said: dict[str, Any], name: str) -> dict[str, Any]:
    things = [each for place in said["places"] for each in place["things"]]
    found: dict[str, Any] = next(each for each in things if each["name"] == name)
    return found


def total(said: dict[str, Any], hazard: str) -> dict[str, Any]:
    found: dict[str, Any] = next(each for each in said["totals"] if each["hazard"].startswith(hazard))
    return found


def test_it_says_by_place_what_stands_there_and_how_much(filled: Shop) -> None:
    said = sheet(filled)
    assert [each["name"] for each in said["places"]] == ["Bench", "Shelf"]
    bench, shelf = place(said, "Bench"), place(said, "Shelf")
    assert (bench["bund"], bench["exhaust_duct"]) == ("tray", "hood")
    assert [each["name"] for each in bench["things"]] == ["Acid bottle", "Copper bath"]
    assert [each["name"] for each in shelf["things"]] == ["Jar 3", "Salt jar"]
    assert thing(said, "Acid bottle")["amount"] == "1.5 L"
    assert thing(said, "Jar 3")["amount"] == "250 g"
    assert thing(said, "Copper bath")["contents"] == "acid copper"


def test_how_sure_an_amount_is_stands_beside_it(filled: Shop) -> None:
    filled.record("level-reading", vessel="Copper bath", volume="19 L", sd="0.2 L")
    bath = thing(sheet(filled), "Copper bath")
    assert (bath["amount"], bath["doubt"]) == ("19 L", "200 mL")
    text = squeezed(text_of(read_pdf(issue(filled))))
    assert squeezed("19 L, give or take 200 mL") in text
    assert squeezed("250 g, how sure is not stated") in text


def test_unknown_is_a_word_and_never_nothing(filled: Shop) -> None:
    filled.record("level-reading", vessel="Rinse", volume="5 L")
    filled.record("move", source="Rinse", target="Copper bath", volume="1 L", happened=True)
    with scope(workshop=filled.member.workshop):
        filled.member.workshop.holdings.filter(vessel__name="Rinse").update(amount=None)
    said = sheet(filled)
    assert thing(said, "Rinse")["amount"] is None
    assert "amount unknown" in text_of(read_pdf(issue(filled)))


def test_a_jar_of_which_nothing_was_recorded_is_listed_as_unknown(shop: Shop) -> None:
    said = sheet(shop)
    assert thing(said, "Jar 3")["amount"] is None
    assert said["left_out"] == 2
    assert {each["name"] for place in said["places"] for each in place["things"]} == {
        "Acid bottle",
        "Salt jar",
        "Jar 3",
    }


def test_what_was_emptied_is_left_out_and_counted(filled: Shop) -> None:
    filled.record("count", vessel="Jar 3", amount="0 g")
    said = sheet(filled)
    assert "Jar 3" not in str(said["places"])
    assert said["left_out"] == 2
    assert "2 vessels that hold nothing by the books are left out." in text_of(read_pdf(issue(filled)))


def test_acid_beside_cyanide_over_one_bund_is_pointed_out(filled: Shop) -> None:
    said = sheet(filled)
    (bund,) = said["shared"]
    assert (bund["sort"], bund["name"], bund["places"]) == ("bund", "tray", ["Bench", "Shelf"])
    danger = "hydrogen cyanide, a gas that kills within minutes"
    assert bund["together"] == [f"acid (Acid bottle, Copper bath, Salt jar) and cyanide (Jar 3): {danger}"]
    assert place(said, "Bench")["together"] == []
    assert place(said, "Shelf")["together"] == [
        "acid (Salt jar) and cyanide (Jar 3): hydrogen cyanide, a gas that kills within minutes"
    ]
    text = squeezed(text_of(read_pdf(issue(filled))))
    assert squeezed("bund tray (Bench, Shelf)") in text
    assert squeezed("hydrogen cyanide, a gas that kills within minutes") in text


def test_numbers_water_and_acid_are_told_of_what_is_as_bought(filled: Shop) -> None:
    said = sheet(filled)
    jar, bottle, bath = (thing(said, name) for name in ("Jar 3", "Acid bottle", "Copper bath"))
    assert (jar["un_numbers"], bottle["un_numbers"]) == (["1680"], ["1830"])
    assert bath["un_numbers"] == []
    assert jar["with_acid"] == [
        "hydrogen cyanide, a gas that kills within minutes",
        "EUH032 Contact with acids liberates very toxic gas.",
    ]
    assert bottle["with_water"] == ["EUH014 Reacts violently with water."]
    assert bath["with_water"] == []
    text = squeezed(text_of(read_pdf(issue(filled))))
    assert squeezed("UN 1680") in text
    assert squeezed("With water: EUH014 Reacts violently with water.") in text


def test_totals_add_volumes_and_masses_by_class(filled: Shop) -> None:
    filled.record("level-reading", vessel="Copper bath", volume="19 L", sd="0.3 L")
    said = sheet(filled)
    acid = total(said, "Skin Corr. 1A")
    assert acid["hazard"] == "Skin Corr. 1A: Skin corrosion/irritation"
    assert (acid["volume"], acid["volume_doubt"], acid["mass"], acid["vessels"], acid["unknown"]) == (
        "20.5 L",
        "300 mL",
        None,
        2,
        0,
    )
    cyanide = total(said, "Acute Tox. 1 oral")
    assert (cyanide["mass"], cyanide["volume"], cyanide["vessels"]) == ("250 g", None, 1)
    salt = total(said, "H411")
    assert (salt["mass"], salt["volume"], salt["vessels"]) == ("1 kg", "19 L", 2)


def test_an_unknown_amount_is_counted_beside_the_sum(shop: Shop) -> None:
    shop.record("receipt", vessel="Acid bottle", amount="1 L")
    shop.holder("Second bottle", product_of(shop, "Sulfuric acid"))
    acid = total(sheet(shop), "Skin Corr. 1A")
    assert (acid["volume"], acid["vessels"], acid["unknown"]) == ("1 L", 2, 1)
    assert squeezed("at least 1 L") in squeezed(text_of(read_pdf(issue(shop))))


def test_a_waste_container_is_told_by_its_stream_or_else_by_what_went_in(filled: Shop) -> None:
    filled.drum("Canister", capacity=25 * 10**9)
    filled.record("drum-off", source="Copper bath", target="Canister", volume="5 L")
    canister = thing(sheet(filled), "Canister")
    assert canister["contents"] == "Stream of Canister"
    assert canister["hazards"]["signal_word"] == "Danger"
    assert canister["not_entered"] == ["Stream of Canister"]
    assert place(sheet(filled), None)["things"] == [canister]


def test_it_carries_the_numbers_to_call_in_their_order(filled: Shop) -> None:
    numbers = [NumberInput("Fire brigade", "112"), NumberInput("Giftnotruf äöü", "+49 000 19240")]
    set_emergency_numbers(actor=filled.member, now=filled.now, numbers=numbers)
    paper = issue(filled)
    assert read_data(paper)["calls"] == [
        {"label": "Fire brigade", "call": "112"},
        {"label": "Giftnotruf äöü", "call": "+49 000 19240"},
    ]
    text = text_of(read_pdf(paper))
    assert text.index("112") < text.index("+49 000 19240")
    assert "Giftnotruf äöü" in read_html(paper)


def test_without_numbers_it_says_that_there_are_none(filled: Shop) -> None:
    assert "No emergency number has been entered" in text_of(read_pdf(issue(filled)))


def test_every_page_says_who_decides_and_what_the_chain_was(filled: Shop) -> None:
    for number in range(12):
        filled.holder(f"Jar {number + 10}", product_of(filled, "Potassium cyanide"))
    paper = issue(filled)
    data, pdf = read_data(paper), read_pdf(paper)
    assert data["chain_sequence"] == 4
    text = text_of(pdf)
    pages = text.count("Follow local rules and the fire brigade's instructions")
    assert pages > 1
    assert text.count(f"page {pages} of {pages}") == 1
    assert codes_on(pdf) == [f"http://bench.local:8000/w/{filled.member.workshop.uuid}/emergency/"]


def test_it_is_numbered_and_its_bytes_stay(filled: Shop) -> None:
    key = uuid4()
    first = issue(filled, key=key)
    before = read_pdf(first)
    filled.record("receipt", vessel="Jar 3", amount="1 kg")
    assert issue(filled, key=key) == first
    assert read_pdf(first) == before == render_pdf("emergency", read_data(first), paper_size="A4")
    letter = issue(filled, paper_size="Letter")
    assert letter.number == 2
    assert thing(read_data(letter), "Jar 3")["amount"] == "1.25 kg"


def test_observers_read_and_do_not_issue(filled: Shop, observer: Membership) -> None:
    with pytest.raises(NotPermittedError):
        issue_emergency_sheet(actor=observer, now=filled.now, key=uuid4())
    assert build_sheet(observer)["places"] == build_sheet(filled.member)["places"]


def test_only_the_own_workshop_stands_on_it(filled: Shop, stranger: Membership) -> None:
    assert build_sheet(stranger)["places"] == []
    assert build_sheet(stranger)["totals"] == []


def test_place_not_stated_comes_last(filled: Shop) -> None:
    with scope(workshop=filled.member.workshop):
        Vessel.objects.filter(name="Acid bottle").update(place=None)
    said = sheet(filled)
    assert [each["name"] for each in said["places"]] == ["Bench", "Shelf", None]
    assert "Place not stated" in text_of(read_pdf(issue(filled)))


@pytest.mark.parametrize("count", [1, 3])
def test_a_sheet_takes_the_same_queries_however_much_is_here(filled: Shop, count: int) -> None:
    for number in range(count):
        filled.tank(f"Tank {number}")
        filled.drum(f"Drum {number}")
        filled.record("move", source="Copper bath", target=f"Tank {number}", volume="1 mL")
    with CaptureQueriesContext(connection) as queries:
        build_sheet(filled.member)
    assert len(queries) == 10
