"""Labels, the emergency sheet, the numbers to call and the list of chemicals through the API."""

import hashlib
from collections.abc import Callable
from typing import Any
from uuid import uuid4

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext

from chemicals.workshop.models import Membership
from tests.api.conftest import Caller, Shop, errors_of


def ask(api: Caller, *vessels: Any, **said: object) -> Any:
    body = {"vessels": [str(vessel.uuid) for vessel in vessels], "stock": "8 per A4", **said}
    return api.post("labels", body, key=uuid4())


def test_labels_are_issued_and_fetched_as_they_were(api: Caller, shop: Shop) -> None:
    paper = ask(api, shop.bath, shop.stock, copies=2, start=3).json()
    assert (paper["kind"], paper["number"]) == ("labels", 1)
    content = api.get(f"papers/{paper['uuid']}/").json()["content"]
    assert [label["name"] for label in content["labels"]] == ["Copper bath"] * 2 + ["Blue salt, jar 1"] * 2
    assert (content["start"], content["stock"]) == (3, "8 per A4")
    first, second = (api.get(f"papers/{paper['uuid']}.pdf").content for _ in range(2))
    assert first == second
    assert hashlib.sha256(first).hexdigest() == paper["pdf_sha256"]


def test_the_same_key_returns_the_same_labels(api: Caller, shop: Shop) -> None:
    key, body = uuid4(), {"vessels": [str(shop.bath.uuid)], "stock": "8 per A4"}
    first, second = (api.post("labels", body, key=key) for _ in range(2))
    assert first.json() == second.json()
    assert "Idempotency-Key" in errors_of(api.post("labels", body), 400)


def test_everything_wrong_with_labels_is_told(api: Caller, shop: Shop) -> None:
    body = {"vessels": [str(uuid4())], "stock": "9 per A4", "start": 0, "copies": 201, "colour": "red"}
    assert set(errors_of(api.post("labels", body, key=uuid4()), 400)) == {"stock", "start", "copies", "colour"}
    assert errors_of(api.post("labels", {"vessels": [str(uuid4())], "stock": "8 per A4"}, key=uuid4()), 400) == {
        "vessels.0": "There is no such vessel in this workshop."
    }
    assert "Issue its label on its own page" in errors_of(ask(api, shop.drum.vessel), 400)["vessels"]
    assert "has positions 1 to 8, not 9" in errors_of(ask(api, shop.bath, start=9), 400)["start"]
    shop.bath.name = "Galvanikhauptbetriebswerkbauunterbeamtenbad"
    shop.bath.save()
    assert "does not fit on 40 per A4" in errors_of(ask(api, shop.bath, stock="40 per A4"), 400)["labels[0]"]


def test_what_is_decanted_gets_a_label(api: Caller, shop: Shop) -> None:
    said = {"stock": "8 per A4", "note": "1:5 in water"}
    paper = api.post(f"vessels/{shop.acid_stock.uuid}/decanted-label", said, key=uuid4()).json()
    (label,) = api.get(f"papers/{paper['uuid']}/").json()["content"]["labels"]
    assert (label["sort"], label["name"]) == ("secondary container", "Battery acid")
    assert label["facts"][0] == {"what": "note", "value": "1:5 in water"}
    nowhere = api.post(f"vessels/{uuid4()}/decanted-label", said, key=uuid4())
    assert nowhere.status_code == 404


def test_the_emergency_sheet_is_read_and_issued(api: Caller, shop: Shop) -> None:
    numbers = {"numbers": [{"label": "Fire brigade", "number": "112"}]}
    assert api.post("emergency-numbers/", numbers).json()["numbers"][0]["number"] == "112"
    api.record("receipt", vessel=str(shop.stock.uuid), amount="2 kg")
    now = api.get("emergency-sheet/").json()["content"]
    assert now["calls"] == [{"label": "Fire brigade", "call": "112"}]
    amounts = {thing["name"]: thing["amount"] for place in now["places"] for thing in place["things"]}
    assert amounts == {"Blue salt, jar 1": "2 kg", "Battery acid, can 1": None}
    paper = api.post("emergency-sheet/issue", {"paper_size": "Letter"}, key=uuid4())
    assert (paper.status_code, paper.json()["kind"]) == (201, "emergency")
    content = api.get(f"papers/{paper.json()['uuid']}/").json()["content"]
    assert {name: content[name] for name in now} == now
    assert content["paper_size"] == "Letter"


def test_numbers_to_call_are_replaced_by_an_owner_alone(
    api: Caller, call: Callable[[Membership], Caller], worker: Membership
) -> None:
    api.post("emergency-numbers/", {"numbers": [{"label": "a", "number": "1"}, {"label": "b", "number": "2"}]})
    wrong = {"numbers": [{"label": "", "number": "1"}, {"label": "x", "number": "ask"}]}
    assert set(errors_of(api.post("emergency-numbers/", wrong), 400)) == {"numbers.0.label"}
    assert set(errors_of(api.post("emergency-numbers/", {"numbers": wrong["numbers"][1:]}), 400)) == {
        "numbers.0.number"
    }
    assert call(worker).post("emergency-numbers/", {"numbers": []}).status_code == 403
    rows = call(worker).get("emergency-numbers/").json()["numbers"]
    assert [(row["label"], row["entered_by"]["name"]) for row in rows] == [("a", "Olga"), ("b", "Olga")]
    assert api.post("emergency-numbers/", {"numbers": []}).json() == {"numbers": []}


def test_there_is_no_list_of_chemicals_until_a_rule_is_chosen(
    api: Caller, call: Callable[[Membership], Caller], worker: Membership, shop: Shop
) -> None:
    rules = api.get("chemical-list/rules/").json()
    assert rules["chosen"] is None
    assert {"de-gefstoffv-6-12", "us-hazcom-e-1"} == {rule["code"] for rule in rules["rules"]}
    assert "No rule is chosen" in errors_of(api.get("chemical-list/"), 409)[""]
    assert "No rule is chosen" in errors_of(api.post("chemical-list/issue", key=uuid4()), 409)[""]
    said = {"rule": "us-hazcom-e-1", "checked_on": "2026-02-01", "citation": "29 CFR 1910.1200"}
    assert call(worker).post("chemical-list/rules/", said).status_code == 403
    assert api.post("chemical-list/rules/", said).json()["chosen"]["citation"] == "29 CFR 1910.1200"
    assert "checked_on" in errors_of(api.post("chemical-list/rules/", {**said, "checked_on": "2027-01-01"}), 400)
    assert "rule" in errors_of(api.post("chemical-list/rules/", {**said, "rule": "the-moon"}), 400)


def test_the_list_of_chemicals_is_read_and_issued(api: Caller, shop: Shop) -> None:
    api.post("chemical-list/rules/", {"rule": "de-gefstoffv-6-12", "checked_on": "2026-02-01"})
    api.record("receipt", vessel=str(shop.stock.uuid), amount="2 kg")
    now = api.get("chemical-list/").json()
    assert now["columns"] == ["name", "classification", "quantities", "areas", "sheet"]
    assert [row["name"][0] for row in now["rows"]] == ["Battery acid", "Blue salt"]
    assert now["rows"][1]["quantities"] == ["here: 1 to 10 kg", "used in twelve months: none"]
    paper = api.post("chemical-list/issue", key=uuid4())
    assert (paper.status_code, paper.json()["kind"]) == (201, "register")
    assert api.get(f"papers/{paper.json()['uuid']}/").json()["content"]["rows"] == now["rows"]


@pytest.mark.parametrize(
    "address", ["labels", "emergency-sheet/issue", "chemical-list/issue", "emergency-numbers/", "chemical-list/rules/"]
)
def test_observers_issue_and_change_nothing(
    address: str, call: Callable[[Membership], Caller], observer: Membership, shop: Shop
) -> None:
    reader = call(observer)
    assert reader.post(address, {}, key=uuid4()).status_code == 403
    assert reader.get("emergency-sheet/").status_code == 200
    assert reader.get("emergency-numbers/").status_code == 200


@pytest.mark.parametrize(
    "address", ["emergency-sheet/", "emergency-numbers/", "chemical-list/", "chemical-list/rules/"]
)
def test_an_answer_asks_as_often_for_three_rows_as_for_one(api: Caller, shop: Shop, address: str) -> None:
    api.post("chemical-list/rules/", {"rule": "de-gefstoffv-6-12", "checked_on": "2026-02-01"})
    numbers = [{"label": f"n{number}", "number": str(number)} for number in range(3)]
    asked = []
    for count in (1, 3):
        api.post("emergency-numbers/", {"numbers": numbers[:count]})
        api.record("receipt", vessel=str(shop.stock.uuid if count == 1 else shop.acid_stock.uuid), amount="1 kg")
        with CaptureQueriesContext(connection) as queries:
            assert api.get(address).status_code == 200
        asked.append(len(queries))
    assert asked[0] == asked[1]
