"""Places, limits, what is kept apart and what was assessed through the API."""

from typing import Any
from uuid import uuid4

import pytest
from django.utils import timezone
from django_scopes import scope

from chemicals.ledger.models import Vessel
from tests.api.conftest import Caller, Shop, errors_of

APART = {
    "first": "everything",
    "second": "reacts as: acid",
    "reach": "place",
    "citation": "house rule",
    "checked_on": "2026-03-01",
}


@pytest.fixture
def place(api: Caller, shop: Shop) -> Any:
    """Return a place on which everything of the shop stands."""
    found = api.post("places/", {"name": "High shelf", "bund": "tray"}).json()
    with scope(workshop=shop.bath.workshop):
        rows = Vessel.objects.all()
        rows.update(place=shop.bath.workshop.places.get(uuid=found["uuid"]))
    return found


def test_a_place_is_changed(api: Caller, place: Any) -> None:
    answer = api.post(f"places/{place['uuid']}/change", {"name": "Low shelf"})
    assert answer.json() == {"uuid": place["uuid"], "name": "Low shelf", "bund": "", "exhaust_duct": ""}
    assert api.get(f"places/{place['uuid']}/").json()["name"] == "Low shelf"
    assert errors_of(api.post(f"places/{place['uuid']}/change", {"name": ""}), 400).keys() == {"name"}


def test_a_limit_is_set_changed_and_removed(api: Caller, place: Any) -> None:
    said = {"sort": "everything", "amount": "2 L", "citation": "house rule", "checked_on": "2026-03-01"}
    row = api.post("limits/", {**said, "place": place["uuid"]}).json()
    assert (row["measure"], row["amount"]["base"], row["typed"]) == ("volume", 2 * 10**9, "2 L")
    assert [each["uuid"] for each in api.get("limits/").json()["results"]] == [row["uuid"]]
    (found,) = [each for each in api.get("violations/").json()["violations"] if each["line"] == row["uuid"]]
    assert found["weighed"]["verdict"] in ("outside", "undecided")
    assert found["speaks"] == "Your line: house rule, compared on 2026-03-01."
    changed = api.post(f"limits/{row['uuid']}/change", {**said, "amount": "3 kg"}).json()
    assert (changed["measure"], changed["amount"]["base"]) == ("mass", 3 * 10**9)
    assert api.post(f"limits/{row['uuid']}/remove", {}).json()["uuid"] == row["uuid"]
    assert api.get("limits/").json()["results"] == []


def test_what_is_kept_apart_is_told_and_assessed(api: Caller, place: Any) -> None:
    row = api.post("keep-apart/", APART).json()
    (found,) = [each for each in api.get("violations/").json()["violations"] if each["line"] == row["uuid"]]
    assert (found["code"], found["is_assessed"], [each["name"] for each in found["places"]]) == (
        "keep-apart",
        False,
        ["High shelf"],
    )
    said = {
        **{name: APART[name] for name in ("first", "second", "reach")},
        "place": place["uuid"],
        "assessed_by": "Olga",
        "until": "2999-01-01",
        "reason": "Two cupboards.",
    }
    assert errors_of(api.post("assessments/", said), 400).keys() == {"until"}
    made = api.post("assessments/", {**said, "until": found_day()}).json()
    (found,) = [each for each in api.get("violations/").json()["violations"] if each["line"] == row["uuid"]]
    assert (found["is_assessed"], found["assessment"]["uuid"]) == (True, made["uuid"])
    assert api.post(f"assessments/{made['uuid']}/remove", {}).status_code == 200
    assert api.post(f"keep-apart/{row['uuid']}/change", {**APART, "reach": "duct"}).json()["reach"] == "duct"
    assert api.post(f"keep-apart/{row['uuid']}/remove", {}).status_code == 200
    assert api.get("keep-apart/").json()["results"] == []


def found_day() -> str:
    """Return a day on which an assessment made now still holds."""
    return str(timezone.localdate())


def test_what_is_wrong_is_told_at_once(api: Caller, place: Any) -> None:
    bad = {"sort": "gremlins", "amount": 5, "citation": "", "checked_on": "soon", "place": "x"}
    assert errors_of(api.post("limits/", bad), 400).keys() == bad.keys()
    assert errors_of(api.post("keep-apart/", {**APART, "second": "everything"}), 400).keys() == {"second"}
    assert api.post(f"limits/{uuid4()}/remove", {}).status_code == 404
