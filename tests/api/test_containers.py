"""Containers by the API: they come in, are cared for, one or many; what changed of them is a list."""

from typing import Any
from uuid import uuid4

from chemicals.journal.models import Entry
from chemicals.ledger.models import Vessel
from tests.api.conftest import Caller, Shop, errors_of


def test_containers_come_in_with_a_new_product(api: Caller, shop: Shop) -> None:
    new = {"name": "Brightener", "supplier": "Invented Supply", "form": "liquid"}
    said = {
        "new_product": new,
        "count": 2,
        "amount": "500 mL",
        "lot": "A 7",
        "place": str(shop.place.uuid),
        "received_on": "2026-02-20",
        "opened_on": "2026-02-21",
        "expires_on": "2027-01-01",
        "capacity": "1 L",
    }
    key = uuid4()
    response = api.post("containers/receive", said, key=key)
    assert response.status_code == 201, response.json()
    first, second = response.json()["vessels"]
    assert (first["name"], second["name"]) == ("Brightener 1", "Brightener 2")
    assert (first["opened_on"], first["expires_on"], first["capacity"]["text"]) == ("2026-02-21", "2027-01-01", "1 L")
    detail = api.get(f"vessels/{second['uuid']}/").json()
    assert detail["contents"]["volume"]["amount"]["text"] == "500 mL"
    assert detail["product"]["name"] == "Brightener"
    again = api.post("containers/receive", said, key=key)
    assert (again.status_code, again.json()) == (200, response.json())
    assert api.post("containers/receive", {**said, "lot": "B"}, key=key).status_code == 409
    assert Entry._base_manager.count() == 2


def test_what_is_wrong_with_what_comes_in_is_named_at_once(api: Caller, shop: Shop) -> None:
    said: dict[str, Any] = {"new_product": {"name": "", "form": "jelly", "colour": "red"}, "count": 21, "amount": 5}
    wrong = errors_of(api.post("containers/receive", said, key=uuid4()), 400)
    assert set(wrong) == {"new_product.name", "new_product.form", "new_product.colour", "count", "amount"}
    said = {"product": str(uuid4()), "place": str(uuid4())}
    assert set(errors_of(api.post("containers/receive", said, key=uuid4()), 400)) == {"product", "place"}
    said = {
        "new_product": {"name": "Blue salt", "supplier": "Invented Supply", "form": "solid"},
        "name": "Blue salt, jar 1",
        "opened_on": "2026-03-03",
        "received_on": "2026-03-03",
        "amount": "1 kg",
    }
    wrong = errors_of(api.post("containers/receive", said, key=uuid4()), 400)
    assert set(wrong) == {"new_product.name", "name", "opened_on", "received_on"}
    assert "product" in errors_of(api.post("containers/receive", {}, key=uuid4()), 400)
    assert "Idempotency-Key" in errors_of(api.post("containers/receive", {"product": str(shop.product.uuid)}), 400)


def test_care_changes_what_is_said_and_null_takes_it_away(api: Caller, shop: Shop) -> None:
    address = f"vessels/{shop.stock.uuid}/care"
    said = {"name": "Jar of blue salt", "place": str(shop.place.uuid), "opened_on": "2026-03-01"}
    found = api.post(address, said).json()
    assert (found["name"], found["place"]["name"], found["opened_on"], found["expires_on"]) == (
        "Jar of blue salt", "Plating bench", "2026-03-01", None,
    )  # fmt: skip
    found = api.post(address, {"place": None, "expires_on": "2027-01-01"}).json()
    assert (found["place"], found["opened_on"], found["expires_on"]) == (None, "2026-03-01", "2027-01-01")
    changes = api.get(f"vessels/{shop.stock.uuid}/changes/").json()["results"]
    assert [(row["fact"], row["before"], row["after"]) for row in changes[:2]] in (
        [("expires", "", "2027-01-01"), ("place", "Plating bench", "")],
        [("place", "Plating bench", ""), ("expires", "", "2027-01-01")],
    )
    assert len(changes) == 5
    assert (changes[0]["changed_by"]["name"], changes[0]["note"]) == ("Olga", "")
    assert api.post(address, {}).json() == found


def test_care_that_cannot_be_is_refused_by_field(api: Caller, shop: Shop) -> None:
    address = f"vessels/{shop.stock.uuid}/care"
    wrong = errors_of(api.post(address, {"name": None, "place": "here", "opened_on": "soon", "gone": True}), 400)
    assert set(wrong) == {"name", "place", "opened_on", "gone"}
    wrong = errors_of(api.post(address, {"name": "Copper bath", "opened_on": "2026-03-03"}), 400)
    assert set(wrong) == {"name", "opened_on"}
    bath = errors_of(api.post(f"vessels/{shop.bath.uuid}/care", {"expires_on": "2027-01-01"}), 400)
    assert "holds nothing as bought" in bath["vessels"]
    assert api.post(f"vessels/{shop.bath.uuid}/care", {"name": "Old bath", "expires_on": None}).status_code == 200


def test_many_change_alike_or_none_of_them(api: Caller, shop: Shop) -> None:
    codes = [shop.stock.code, shop.acid_stock.code.lower()]
    found = api.post("containers/change", {"codes": codes, "place": str(shop.place.uuid), "expires_on": "2027-01-01"})
    assert found.status_code == 200, found.json()
    assert {(row["place"]["name"], row["expires_on"]) for row in found.json()["vessels"]} == {
        ("Plating bench", "2027-01-01")
    }
    found = api.post("containers/change", {"codes": codes, "place": None})
    assert {(row["place"], row["expires_on"]) for row in found.json()["vessels"]} == {(None, "2027-01-01")}
    wrong = errors_of(
        api.post("containers/change", {"codes": [*codes, shop.bath.code], "expires_on": "2028-01-01"}), 400
    )
    assert wrong["codes"].startswith("Copper bath holds nothing as bought.")
    assert not Vessel._base_manager.filter(expires_on="2028-01-01").exists()
    assert "NOSUCH" in errors_of(api.post("containers/change", {"codes": ["NOSUCH"], "place": None}), 400)["codes"]
    assert "codes" in errors_of(api.post("containers/change", {"codes": [], "place": None}), 400)
