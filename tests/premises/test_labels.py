"""Labels of vessels, issued from the books: what they say, that they are numbered and stay as they are."""

import hashlib
from datetime import date, timedelta
from typing import Any
from uuid import uuid4

import pytest
import zxingcpp
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scope

from chemicals.journal.models import Entry
from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.models import Vessel
from chemicals.process.models import Tank
from chemicals.register.models import ProductRevision
from chemicals.workshop.errors import InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from compliance.documents.errors import DoesNotFitError, MissingGlyphError, PaperDataError
from compliance.documents.models import Paper
from compliance.documents.render import render_pdf
from compliance.documents.selectors import list_papers_naming, read_data, read_html, read_pdf
from compliance.premises.selectors import list_standing_for
from compliance.premises.services import MOST_LABELS, issue_decanted_label, issue_labels
from tests.documents.test_pdf import squeezed, text_of
from tests.documents.test_vessel_labels import image_of
from tests.process.shop import Shop


def vessel(shop: Shop, name: str) -> Vessel:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.select_related("workshop", "place").get(name=name)


def issue(shop: Shop, *names: str, **said: Any) -> Paper:
    wanted = [vessel(shop, name) for name in names]
    options = {"key": uuid4(), "stock": "8 per A4", **said}
    return issue_labels(actor=shop.member, now=shop.now, vessels=wanted, **options)


def label(shop: Shop, name: str, **said: Any) -> dict[str, Any]:
    found: dict[str, Any] = read_data(issue(shop, name, **said))["labels"][0]
    return found


def facts(said: dict[str, Any]) -> dict[str, str | None]:
    return {fact["what"]: fact["value"] for fact in said["facts"]}


def wrong(shop: Shop, *names: str, **said: Any) -> dict[str, str]:
    with pytest.raises(InvalidInputError) as caught:
        issue(shop, *names, **said)
    with scope(workshop=shop.member.workshop):
        assert not Paper.objects.exists()
    return {error.field: error.message for error in caught.value.errors}


def test_a_tank_says_what_was_poured_in_merged(filled: Shop) -> None:
    said = label(filled, "Copper bath")
    assert (said["sort"], said["name"], said["contents"]) == ("tank", "Copper bath", "acid copper")
    assert facts(said) == {"mark": "20 L", "place": "Bench"}
    assert said["hazards"] == {
        "signal_word": "Danger",
        "pictograms": ["GHS05", "GHS07", "GHS09"],
        "statements": [
            "H302 Harmful if swallowed",
            "H314 Causes severe skin burns and eye damage.",
            "H411 Toxic to aquatic life with long lasting effects.",
            "EUH014 Reacts violently with water.",
        ],
    }
    assert said["precautions"] == ["P280", "Gloves: Butyl rubber, 0.7 mm"]
    assert {other["what"] for other in said["must_not_meet"]} >= {"cyanide", "hypochlorite"}
    assert said["not_entered"] == []


def test_a_bath_without_a_type_is_told_by_what_is_in_it(filled: Shop) -> None:
    with scope(workshop=filled.member.workshop):
        Tank.objects.update(bath_type="", mark=None)
    said = label(filled, "Copper bath")
    assert said["contents"] == "Copper salt, Sulfuric acid"
    assert facts(said)["mark"] is None
    assert label(filled, "Rinse")["contents"] is None


def test_a_rinse_that_was_dragged_into_carries_the_hazards_of_the_bath(filled: Shop) -> None:
    filled.record("move", source="Copper bath", target="Rinse", volume="1 L")
    assert label(filled, "Rinse")["hazards"] == label(filled, "Copper bath")["hazards"]


def test_a_bottle_says_its_product_and_its_revision(filled: Shop) -> None:
    said = label(filled, "Acid bottle")
    assert (said["sort"], said["contents"]) == ("bottle", "Sulfuric acid")
    assert facts(said) == {
        "revision": "1",
        "received": "2026-02-21",
        "supplier": "Anyone",
        "supplier's telephone": "+49 000 222",
        "place": "Bench",
    }
    assert said["url"] == f"http://bench.local:8000/c/{said['code']}"


def test_a_bottle_says_when_it_was_opened_and_until_when_it_keeps(filled: Shop) -> None:
    with scope(workshop=filled.member.workshop):
        jar = Vessel.objects.get(name="Jar 3")
    assert not {"opened", "keeps until"} & facts(label(filled, "Jar 3")).keys()
    care = CareInput(opened_on=date(2026, 2, 22), expires_on=date(2028, 1, 31))
    change_vessels(actor=filled.member, now=filled.now, vessels=[jar], care=care)
    said = facts(label(filled, "Jar 3"))
    assert (said["opened"], said["keeps until"]) == ("2026-02-22", "2028-01-31")


def test_a_bottle_says_the_lots_and_the_days_since_it_was_last_empty(filled: Shop) -> None:
    filled.record("count", days_ago=7, vessel="Jar 3", amount="0 g")
    filled.record("receipt", days_ago=6, vessel="Jar 3", amount="100 g", lot="B-1")
    mistake = filled.record("receipt", days_ago=5, label="mistake", vessel="Jar 3", amount="100 g", lot="B-2")
    filled.record("receipt", days_ago=4, vessel="Jar 3", amount="100 g", lot="B-3 µ")
    said = facts(label(filled, "Jar 3"))
    assert (said["lot"], said["received"]) == ("B-1, B-2, B-3 µ", "2026-02-24, 2026-02-25, 2026-02-26")
    filled.record("cancellation", entry="mistake", reason="never came")
    said = facts(label(filled, "Jar 3"))
    assert (said["lot"], said["received"]) == ("B-1, B-3 µ", "2026-02-24, 2026-02-26")
    assert mistake.kind == "receipt"


def test_a_jar_that_nothing_was_received_into_says_what_it_is_for(shop: Shop) -> None:
    said = label(shop, "Jar 3")
    assert said["contents"] == "Potassium cyanide"
    assert said["hazards"]["pictograms"] == ["GHS06", "GHS09"]


def test_what_nobody_entered_and_what_nobody_can_name_is_said(filled: Shop) -> None:
    filled.holder("Brightener bottle", filled.product("Brightener", {}, form="liquid", complete=False))
    filled.record("receipt", vessel="Brightener bottle", amount="1 L")
    filled.record("top-up", tank="Copper bath", source="Brightener bottle", volume="10 mL", happened=True)
    filled.record("level-reading", vessel="Rinse", volume="5 L")
    said = label(filled, "Copper bath")
    assert said["not_entered"] == ["Brightener"]
    assert said["must_not_meet"][-1]["what"] == "anything else"
    assert label(filled, "Rinse")["not_entered"] == ["a liquid that nobody can name"]
    assert label(filled, "Rinse")["must_not_meet"] == [
        {"what": "anything", "gives": "nobody declared what all of it reacts as"}
    ]


def test_several_labels_lie_on_one_sheet_in_the_order_asked_for(filled: Shop) -> None:
    paper = issue(filled, "Salt jar", "Copper bath", copies=2, start=3)
    data = read_data(paper)
    assert [each["name"] for each in data["labels"]] == ["Salt jar"] * 2 + ["Copper bath"] * 2
    assert (data["stock"], data["start"], data["paper_size"]) == ("8 per A4", 3, "A4")
    codes = [code.text for code in zxingcpp.read_barcodes(image_of(read_pdf(paper)).convert("L"))]
    assert sorted(codes) == sorted(each["url"] for each in data["labels"])


def test_letter_stock_is_printed_on_letter(filled: Shop) -> None:
    assert read_data(issue(filled, "Salt jar", stock="10 per Letter"))["paper_size"] == "Letter"


def test_a_label_is_frozen_whatever_happens_to_the_bath(filled: Shop) -> None:
    key = uuid4()
    paper = issue(filled, "Copper bath", key=key)
    before = read_pdf(paper)
    filled.record("move", source="Copper bath", target="Rinse", volume="1 L")
    again = issue(filled, "Copper bath", key=key)
    assert again == paper
    assert read_pdf(again) == before
    assert hashlib.sha256(before).hexdigest() == paper.pdf_sha256
    assert render_pdf("labels", read_data(paper), paper_size="A4") == before
    newer = issue(filled, "Rinse")
    assert newer.number == 2
    assert "H314" in str(read_data(newer))


def test_the_journal_proves_the_labels_and_the_vessel_lists_them(filled: Shop) -> None:
    paper = issue(filled, "Copper bath", "Salt jar")
    with scope(workshop=filled.member.workshop):
        assert Entry.objects.latest("sequence") == paper.entry
    code = vessel(filled, "Salt jar").code
    assert list(list_papers_naming(filled.member, code)) == [paper]
    assert f"Label {paper.number}.2, issued" in text_of(read_pdf(paper))
    assert f"{paper.number}.2" in read_html(paper)


def test_a_decanted_container_says_what_when_by_whom(filled: Shop) -> None:
    bottle = vessel(filled, "Acid bottle")
    paper = issue_decanted_label(
        actor=filled.member,
        now=filled.now,
        key=uuid4(),
        vessel=bottle,
        stock="12 per A4",
        note=" 1:10 in water ",
        copies=2,
    )
    said, _copy = read_data(paper)["labels"]
    assert (said["sort"], said["name"], said["contents"]) == (
        "secondary container",
        "Sulfuric acid",
        "H2SO4 of Sulfuric acid 96 %",
    )
    assert facts(said) == {"note": "1:10 in water", "decanted": "2026-03-02", "decanted by": "Olga"}
    assert said["hazards"]["signal_word"] == "Danger"
    assert said["code"] == bottle.code
    assert squeezed("Decanted, for use at once") in squeezed(text_of(read_pdf(paper)))


def test_the_day_of_decanting_is_the_workshops_own(filled: Shop) -> None:
    """Berlin, where the workshop lies, is an hour ahead of UTC in winter: late in the evening it is tomorrow there."""
    late = filled.now.replace(hour=23, minute=30)
    bottle = vessel(filled, "Acid bottle")
    paper = issue_decanted_label(actor=filled.member, now=late, key=uuid4(), vessel=bottle, stock="8 per A4")
    said = read_data(paper)["labels"][0]
    assert facts(said)["decanted"] == (late + timedelta(days=1)).date().isoformat()
    assert "note" not in facts(said)


def test_a_sample_of_a_bath_is_told_by_the_bath(filled: Shop) -> None:
    bath = vessel(filled, "Copper bath")
    paper = issue_decanted_label(actor=filled.member, now=filled.now, key=uuid4(), vessel=bath, stock="8 per A4")
    said = read_data(paper)["labels"][0]
    assert (said["name"], said["contents"]) == ("Copper bath", "acid copper")


def test_everything_that_is_wrong_is_told_and_nothing_is_issued(filled: Shop) -> None:
    filled.drum("Canister")
    assert wrong(filled, "Canister", stock="9 per A4", copies=0) == {
        "stock": "There is no such label stock. Choose one of: 4 per A4, 2 per A4, 1 per A4, 8 per A4, 4 per Letter, "
        "2 per Letter, 1 per Letter, 6 per Letter, 12 per A4, 24 per A4, 40 per A4, 10 per Letter, 30 per Letter.",
        "copies": "Write how many of each, at least 1.",
        "vessels": "Canister is a waste container. Issue its label on its own page.",
    }
    assert wrong(filled) == {"vessels": "Nothing is named. Write the codes of what shall have a label."}
    assert "Print them in parts" in wrong(filled, "Rinse", copies=MOST_LABELS + 1)["copies"]
    with pytest.raises(PaperDataError, match="has positions 1 to 8, not 9"):
        issue(filled, "Rinse", start=9)
    bottle = vessel(filled, "Acid bottle")
    with pytest.raises(InvalidInputError) as caught:
        issue_decanted_label(
            actor=filled.member, now=filled.now, key=uuid4(), vessel=bottle, stock="8 per A4", note="x\n" * 50
        )
    assert [error.field for error in caught.value.errors] == ["note", "note"]


def test_what_cannot_be_drawn_is_refused_and_leaves_nothing(filled: Shop) -> None:
    with pytest.raises(DoesNotFitError, match="Copper bath does not fit on 40 per A4"):
        issue(filled, "Copper bath", stock="40 per A4")
    with scope(workshop=filled.member.workshop):
        Vessel.objects.filter(name="Rinse").update(name="Rinse 漂")
    with pytest.raises(MissingGlyphError, match=r"labels\[0\].name: the paper's font cannot draw '漂'"):
        issue(filled, "Rinse 漂")
    with scope(workshop=filled.member.workshop):
        assert not Paper.objects.exists()


def test_greek_umlauts_and_subscripts_reach_the_paper(filled: Shop) -> None:
    with scope(workshop=filled.member.workshop):
        Tank.objects.filter(vessel__name="Copper bath").update(bath_type="saures Bad β, CuSO₄·5H₂O")
    assert squeezed("saures Bad β, CuSO₄·5H₂O") in squeezed(text_of(read_pdf(issue(filled, "Copper bath"))))


def test_observers_and_strangers_issue_nothing(filled: Shop, observer: Membership, stranger: Membership) -> None:
    bath = vessel(filled, "Copper bath")
    for member in (observer, stranger):
        with pytest.raises(NotPermittedError):
            issue_labels(actor=member, now=filled.now, key=uuid4(), vessels=[bath], stock="8 per A4")
        with pytest.raises(NotPermittedError):
            issue_decanted_label(actor=member, now=filled.now, key=uuid4(), vessel=bath, stock="8 per A4")


def test_a_stock_container_holds_the_revision_that_was_received(filled: Shop) -> None:
    """A later revision of the sheet does not relabel what stands on the shelf: what was received keeps its own."""
    with scope(workshop=filled.member.workshop):
        old = ProductRevision.objects.get(product__name="Sulfuric acid")
        old.pk, old.number, old.signal_word, old.statements = None, 2, "", []
        old.save()
    assert facts(label(filled, "Acid bottle"))["revision"] == "1"
    filled.record("receipt", vessel="Acid bottle", amount="1 L")
    said = label(filled, "Acid bottle")
    assert [fact["value"] for fact in said["facts"] if fact["what"] == "revision"] == ["1", "2"]
    assert said["hazards"]["signal_word"] == "Danger"


@pytest.mark.parametrize("count", [1, 3])
def test_what_stands_here_takes_eight_queries(filled: Shop, count: int) -> None:
    for number in range(count):
        filled.tank(f"Tank {number}")
        filled.drum(f"Drum {number}")
        filled.record("move", source="Copper bath", target=f"Tank {number}", volume="1 mL")
    with CaptureQueriesContext(
        connection,
    ) as queries:
        standing = list_standing_for(filled.member)
        assert [each.hazards for each in standing if each.vessel.name.startswith("Tank")] == [
            standing[1].hazards
        ] * count
        assert all(each.kinds is not None and each.names is not None for each in standing)
    assert len(queries) == 8
