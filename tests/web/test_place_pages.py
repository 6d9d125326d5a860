"""Places on pages: what stands there, limits, what is kept apart, what was assessed; what Today says of it."""

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scope

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.services import create_vessel
from chemicals.workshop.models import Place
from chemicals.workshop.services import create_place
from compliance.premises.models import Assessment, KeepApart, QuantityLimit
from tests.web.conftest import Line, Visitor, text_of

LIMIT = {"sort": "everything", "amount": "1 L", "citation": "house rule", "checked_on": "2026-03-01"}
APART = {
    "first": "pictogram: GHS03",
    "second": "pictogram: GHS02",
    "reach": "bund",
    "citation": "house rule",
    "checked_on": "2026-03-01",
}


@pytest.fixture
def shelf(visit: Visitor, filled: Line) -> Place:
    """Return a shelf on which everything of the shop stands."""
    place = create_place(actor=visit.member, name="High shelf", bund="tray")
    with scope(workshop=visit.member.workshop):
        Vessel.objects.update(place=place)
    return place


def test_a_place_is_changed(visit: Visitor, shelf: Place) -> None:
    answer = visit.post("change-place", shelf.uuid, name="Low shelf", bund="", exhaust_duct="hood")
    assert answer.headers["Location"] == visit.address("place", shelf.uuid)
    page = text_of(visit.get("place", shelf.uuid))
    assert "<h1>Low shelf</h1>" in page
    assert "no bund named · exhaust duct hood" in page
    assert visit.post("change-place", shelf.uuid, name=" ").status_code == 400


def test_a_limit_is_set_passed_told_today_and_removed(visit: Visitor, shelf: Place) -> None:
    assert visit.post("add-limit", shelf.uuid, **LIMIT).status_code == 302
    with scope(workshop=visit.member.workshop):
        row = QuantityLimit.objects.get()
    assert (row.amount, row.measure, row.typed) == (10**9, "volume", "1 L")
    assert '<section class="alarm">' in text_of(visit.get("place", shelf.uuid))
    today = text_of(visit.get("today"))
    assert "What stands together and must not" in today
    assert "More than the limit: everything, at least" in today
    assert "Your line: house rule, compared on 2026-03-01." in today
    assert visit.post("limit", row.uuid, **{**LIMIT, "amount": "5000 L", "citation": "another"}).status_code == 302
    page = text_of(visit.get("place", shelf.uuid))
    assert "everything: at most 5000 L" in page
    assert visit.post("remove-line", "limits", row.uuid).status_code == 302
    page = text_of(visit.get("place", shelf.uuid))
    assert "No limit yet." in page
    assert "What is wrong or not known here" in page
    assert 'class="alarm"' not in page, "what is only not known is no alarm"


def test_what_is_wrong_with_a_limit_stands_under_its_fields(visit: Visitor, shelf: Place) -> None:
    answer = visit.post("add-limit", shelf.uuid, sort="", amount="1,500 L", citation="", checked_on="tomorrow")
    page = text_of(answer)
    assert answer.status_code == 400
    for message in ("Choose one from the list.", "ambiguous", "This is needed.", "Write the date like 2026-03-02."):
        assert message in page
    late = visit.post("add-limit", shelf.uuid, **{**LIMIT, "checked_on": "2030-01-01"})
    assert "This day is still to come." in text_of(late)


def test_what_stands_together_is_told_where_it_was_put(visit: Visitor, filled: Line, shelf: Place) -> None:
    before = text_of(visit.get("vessel", filled.bath.uuid))
    assert 'id="stands-here"' not in before
    line = {**APART, "first": "everything", "second": "reacts as: acid", "reach": "place"}
    assert visit.post("add-keep-apart", **line).status_code == 302
    page = text_of(visit.get("vessel", filled.bath.uuid))
    assert 'id="stands-here"' in page
    assert "your own line keeps them apart" in page
    told = text_of(visit.get("violations"))
    assert "It was assessed" in told
    query = f"?first=everything&second=reacts+as%3A+acid&reach=place&place={shelf.uuid}"
    assert "It was assessed" not in text_of(visit.get("assess", query=query))
    said = {"assessed_by": "Olga", "until": "2026-06-01", "reason": "Two cupboards."}
    assert visit.client.post(visit.address("assess") + query, said).status_code == 302
    told = text_of(visit.get("violations"))
    assert "Assessed by Olga until" in told
    assert "stand together</span>" not in told
    with scope(workshop=visit.member.workshop):
        row, line_row = Assessment.objects.get(), KeepApart.objects.get()
    assert visit.post("remove-line", "assessments", row.uuid).status_code == 302
    assert "Assessed by" not in text_of(visit.get("violations"))
    assert visit.post("keep-apart", line_row.uuid, **APART).status_code == 302
    assert visit.post("remove-line", "apart", line_row.uuid).status_code == 302
    assert "No line yet." in text_of(visit.get("places"))


def test_an_assessment_of_nothing_is_refused(visit: Visitor, shelf: Place) -> None:
    said = {"assessed_by": "Olga", "until": "2026-06-01", "reason": "x"}
    assert visit.post("assess", **said).status_code == 400
    assert visit.get("assess").headers["Location"] == visit.address("violations")
    assert "Nothing is named that was assessed." in text_of(visit.get("violations"))
    assert visit.client.get(visit.address("assess") + "?place=shelf").status_code == 404


@pytest.mark.parametrize("wanted", ["csv", "xlsx", "jsonl"])
def test_every_list_is_a_file(visit: Visitor, shelf: Place, wanted: str) -> None:
    visit.post("add-limit", shelf.uuid, **LIMIT)
    visit.post("add-keep-apart", **APART)
    asked = {"places": ("places", "keep_apart"), "violations": ("violations",)}
    for name, lists in asked.items():
        for each in lists:
            assert b"".join(visit.get(name, query=f"?list={each}&as={wanted}").streaming_content)
    for each in ("things", "limits"):
        data = b"".join(visit.get("place", shelf.uuid, query=f"?list={each}&as={wanted}").streaming_content)
        assert wanted != "csv" or (b"Copper bath" if each == "things" else b"house rule") in data


@pytest.mark.parametrize("name", ["places", "violations", "today"])
def test_the_pages_take_the_same_queries_however_many_places(visit: Visitor, shelf: Place, name: str) -> None:
    visit.post("add-limit", shelf.uuid, **LIMIT)
    visit.get(name)
    with CaptureQueriesContext(connection) as few:
        visit.get(name)
    for number in range(3):
        place = create_place(actor=visit.member, name=f"Room {number}", bund="tray")
        create_vessel(
            actor=visit.member, now=shelf.workshop.created_at, kind=VesselKind.FILTER, name=f"F {number}", place=place
        )
        visit.post("add-limit", place.uuid, **{**LIMIT, "amount": "0 L"})
    with CaptureQueriesContext(connection) as many:
        visit.get(name)
    assert len(few) == len(many)
