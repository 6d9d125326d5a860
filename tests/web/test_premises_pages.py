"""Labels, the emergency sheet and the list of chemicals on pages: asked for, issued, fetched again."""

import re
from typing import Any
from uuid import uuid4

import pytest
from django_scopes import scope

from chemicals.ledger.models import Vessel
from chemicals.workshop.models import Membership
from chemicals.workshop.selectors import list_emergency_numbers_for
from compliance.documents.models import Paper
from compliance.documents.selectors import read_data, read_pdf
from compliance.premises.selectors import find_chosen_rule
from tests.web.conftest import Line, Visitor, text_of


def papers(visit: Visitor) -> list[Paper]:
    with scope(workshop=visit.member.workshop):
        return list(Paper.objects.order_by("pk"))


def ask_for_labels(visit: Visitor, *vessels: Vessel, **said: object) -> Any:
    codes = " ".join(vessel.code for vessel in vessels)
    form = {"key": uuid4(), "codes": codes, "stock": "8 per A4", "start": 1, "copies": 1, **said}
    return visit.post("labels", **form)


def test_a_vessels_page_leads_to_its_label_and_lists_it(visit: Visitor, filled: Line) -> None:
    page = text_of(visit.get("vessel", filled.bath.uuid))
    assert f"/labels/?code={filled.bath.code}" in page
    assert "No label was issued yet." in page
    form = text_of(visit.get("labels", query=f"?code={filled.bath.code}"))
    assert f"> {filled.bath.code}</textarea>" in form
    answer = ask_for_labels(visit, filled.bath)
    (paper,) = papers(visit)
    assert answer.headers["Location"] == visit.address("paper", paper.uuid)
    assert "Labels of vessels 1" in text_of(visit.get("vessel", filled.bath.uuid))


def test_several_labels_are_asked_for_by_their_codes_as_people_type_them(visit: Visitor, filled: Line) -> None:
    typed = f"{filled.bath.code.lower()},\n {filled.tub.code[:3]}-{filled.tub.code[3:]}"
    ask_for_labels(visit, codes=typed, copies=2, start=3)
    data = read_data(papers(visit)[0])
    assert [label["name"] for label in data["labels"]] == ["Copper bath"] * 2 + ["Salt tub"] * 2
    assert data["start"] == 3


def test_the_form_offers_where_the_last_sheet_goes_on(visit: Visitor, filled: Line) -> None:
    ask_for_labels(visit, filled.bath, filled.tub, stock="4 per A4", start=2)
    form = visit.get("labels").content.decode()
    assert re.search(r'<option value="4 per A4" selected>', form)
    assert re.search(r'name="start"[^>]*value="4"', form)
    ask_for_labels(visit, filled.bath, stock="4 per A4", start=4)
    assert re.search(r'name="start"[^>]*value="1"', visit.get("labels").content.decode())


def test_everything_wrong_with_labels_is_told_and_what_was_typed_stays(visit: Visitor, filled: Line) -> None:
    answer = ask_for_labels(visit, codes="QQQQQQ 22", stock="", copies="many")
    page = text_of(answer)
    assert answer.status_code == 400
    assert "Choose one from the list." in page
    assert "Write a whole number from 1 to 200." in page
    assert "QQQQQQ 22" in page
    unknown = text_of(ask_for_labels(visit, codes="QQQQQQ 22"))
    assert "Nothing here has the code QQQQQQ, 22. Read it again." in unknown
    small = text_of(ask_for_labels(visit, filled.bath, stock="40 per A4"))
    assert "Copper bath does not fit on 40 per A4" in small
    waste = text_of(ask_for_labels(visit, filled.drum.vessel))
    assert "Drum 7 is a waste container. Issue its label on its own page." in waste
    assert papers(visit) == []


def test_a_second_press_gives_the_same_labels(visit: Visitor, filled: Line) -> None:
    key = uuid4()
    first, second = (ask_for_labels(visit, filled.bath, key=key) for _ in range(2))
    assert first.headers["Location"] == second.headers["Location"]
    assert len(papers(visit)) == 1


def test_a_label_is_fetched_as_it_was_issued(visit: Visitor, filled: Line) -> None:
    ask_for_labels(visit, filled.bath)
    (paper,) = papers(visit)
    pdf = visit.get("paper-pdf", paper.uuid)
    assert pdf.headers["Content-Disposition"] == 'inline; filename="labels-1.pdf"'
    assert pdf.content == read_pdf(paper)
    twin = text_of(visit.get("paper", paper.uuid))
    assert "H318 Causes serious eye damage" in twin
    assert visit.address("paper-pdf", paper.uuid) in twin


def test_what_is_decanted_gets_a_label(visit: Visitor, filled: Line) -> None:
    page = text_of(visit.get("decant", filled.tub.uuid))
    assert "Decanted from Salt tub" in page
    said = {"key": uuid4(), "note": "5 g in water", "stock": "8 per A4", "start": 1, "copies": 1}
    answer = visit.post("decant", filled.tub.uuid, **said)
    (paper,) = papers(visit)
    assert answer.headers["Location"] == visit.address("paper", paper.uuid)
    label = read_data(paper)["labels"][0]
    assert (label["name"], label["facts"][0]["value"]) == ("Blue salt", "5 g in water")


def test_what_is_where_is_read_by_everybody_and_issued_by_writers(
    visit: Visitor, observer: Membership, filled: Line
) -> None:
    reader = Visitor(observer)
    page = text_of(reader.get("emergency"))
    assert "Salt tub" in page
    assert "1 kg" in page
    assert "No emergency number has been entered" in page
    assert "Issue the sheet" not in page
    assert reader.post("emergency", key=uuid4(), paper_size="A4").status_code == 403
    answer = visit.post("emergency", key=uuid4(), paper_size="Letter")
    (paper,) = papers(visit)
    assert answer.headers["Location"] == visit.address("paper", paper.uuid)
    assert read_data(paper)["paper_size"] == "Letter"
    assert "Emergency sheet 1" in text_of(reader.get("emergency"))


def test_page_and_paper_say_the_same(visit: Visitor, filled: Line) -> None:
    visit.post("emergency", key=uuid4(), paper_size="A4")
    (paper,) = papers(visit)
    page = text_of(visit.get("emergency"))
    for place in read_data(paper)["places"]:
        for thing in place["things"]:
            assert thing["name"] in page
            assert (thing["amount"] or "amount unknown") in page


def test_a_long_page_is_cut_and_what_must_never_meet_is_not(
    visit: Visitor, filled: Line, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("compliance.web.views.premises.PER_PAGE", 2)
    first, second, third = (text_of(visit.get("emergency", query=f"?page={number}")) for number in (1, 2, 3))
    assert [page.count('class="line"') for page in (first, second, third)] == [2, 2, 1]
    names = ("Copper bath", "Acid bottle", "Drum 7", "Salt tub", "Rinse")
    assert all(any(f">{name}</a>" in page for page in (first, second, third)) for name in names)
    assert "Further" in first
    assert "Before" in third
    assert len(re.findall("<h2>How much of which hazard", first + second + third)) == 3


def test_a_wrong_paper_size_is_told_on_the_page(visit: Visitor, filled: Line) -> None:
    answer = visit.post("emergency", key=uuid4(), paper_size="A7")
    assert answer.status_code == 400
    assert "Choose one from the list." in text_of(answer)
    assert "Salt tub" in text_of(answer)


def test_an_owner_enters_the_numbers_to_call(visit: Visitor, worker: Membership) -> None:
    said = {
        "numbers-0-label": "Fire brigade",
        "numbers-0-number": "112",
        "numbers-1-label": "",
        "numbers-1-number": "",
        "numbers-2-label": "Poison centre",
        "numbers-2-number": "+49 000 19240",
    }
    assert visit.post("emergency-numbers", **said).status_code == 302
    assert [row.number for row in list_emergency_numbers_for(worker)] == ["112", "+49 000 19240"]
    page = text_of(Visitor(worker).get("workshop"))
    assert "Poison centre" in page
    assert "Change the numbers" not in page
    assert Visitor(worker).get("emergency-numbers").status_code == 403
    form = visit.get("emergency-numbers").content.decode()
    assert 'value="Fire brigade"' in form
    assert visit.post("emergency-numbers", **{"numbers-0-label": "x", "numbers-0-number": "ask"}).status_code == 400


def test_the_list_of_chemicals_is_off_until_an_owner_chooses_a_rule(visit: Visitor, worker: Membership) -> None:
    page = text_of(Visitor(worker).get("chemicals"))
    assert "No rule is chosen here, so there is no such list yet." in page
    assert "GefStoffV s. 6(12) (DE)" in page
    assert "Choose a rule" not in page
    assert Visitor(worker).get("list-rule").status_code == 403
    assert visit.post("chemicals", key=uuid4(), paper_size="A4").status_code == 409
    assert papers(visit) == []


def test_the_chosen_rule_gives_the_columns(visit: Visitor, filled: Line) -> None:
    said = {"rule": "us-hazcom-e-1", "checked_on": "2026-02-01", "citation": "29 CFR 1910.1200"}
    assert visit.post("list-rule", **said).headers["Location"] == visit.address("chemicals")
    page = text_of(visit.get("chemicals"))
    assert "Work areas" in page
    assert "Quantity ranges" not in page
    assert "Whether that is what a rule asks for, it does not say." in page
    visit.post("list-rule", rule="de-gefstoffv-6-12", checked_on="2026-02-01")
    page = text_of(visit.get("chemicals"))
    assert "here: 1 to 10 kg" in page
    assert "used in twelve months: 1 to 10 kg" in page
    answer = visit.post("chemicals", key=uuid4(), paper_size="A4")
    (paper,) = papers(visit)
    assert answer.headers["Location"] == visit.address("paper", paper.uuid)
    assert "List of chemicals 1" in text_of(visit.get("chemicals"))


def test_a_wrong_choice_of_rule_is_told(visit: Visitor) -> None:
    answer = visit.post("list-rule", rule="us-hazcom-e-1", checked_on="2099-01-01")
    assert answer.status_code == 400
    assert "This day is still to come." in text_of(answer)
    assert find_chosen_rule(visit.member) is None


@pytest.mark.parametrize("ending", ["csv", "xlsx", "jsonl"])
def test_what_is_where_and_the_list_are_files_too(visit: Visitor, filled: Line, ending: str) -> None:
    visit.post("list-rule", rule="de-gefstoffv-6-12", checked_on="2026-02-01")
    for name in ("emergency", "chemicals"):
        answer = visit.get(name, query=f"?as={ending}")
        assert answer.status_code == 200
        assert len(answer.getvalue()) > 100
        assert answer.headers["Content-Disposition"].startswith("attachment; ")


def test_an_entry_of_a_paper_calls_it_by_its_name(visit: Visitor, filled: Line) -> None:
    ask_for_labels(visit, filled.bath)
    assert "labels of vessels 1" in text_of(visit.get("entries"))
