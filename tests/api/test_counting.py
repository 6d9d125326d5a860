"""Count days by the API: start, note, compare, finish; every error by field."""

from typing import Any

import pytest
from django_scopes import scope

from chemicals.journal.models import Entry
from tests.api.conftest import Caller, Shop, errors_of


@pytest.fixture
def day(api: Caller, shop: Shop) -> str:
    """Start a count of everything; 5 kg of salt were received."""
    assert api.record("receipt", vessel=str(shop.stock.uuid), amount="5 kg").status_code == 201
    response = api.post("count-days/", {"note": "December"})
    assert response.status_code == 201, response.json()
    uuid: str = response.json()["uuid"]
    return uuid


def note(api: Caller, day: str, **said: Any) -> Any:
    return api.post(f"count-days/{day}/lines/", said)


def counts(shop: Shop) -> int:
    with scope(workshop=shop.workshop):
        return Entry.objects.filter(kind="count").count()


def test_a_count_from_start_to_finish(api: Caller, shop: Shop, day: str) -> None:
    code = shop.stock.code
    first = note(api, day, code=code, said="agrees")
    assert (first.status_code, first.json()["amount"]["base"]) == (201, None)
    line = note(api, day, code=f"https://shop.example/c/{code}", amount="4.8 kg", sd="10 g", remark="scoop").json()
    assert (line["said"], line["typed"], line["amount"]["sd"]) == ("amount", "4.8 kg", 10**7)
    said = api.get(f"count-days/{day}/lines/").json()["results"]
    assert [row["taken_back_at"] is None for row in said] == [True, False]
    found = api.get(f"count-days/{day}/preview/").json()
    (row,) = found["rows"]
    assert (row["verdict"], row["difference"]["base"], row["makes_entry"]) == ("differs", -2 * 10**8, True)
    assert found["done"] == 1
    done = api.post(f"count-days/{day}/finish")
    assert (done.status_code, done.json()["made"], done.json()["seen"]) == (200, 1, 1)
    assert api.post(f"count-days/{day}/finish").json() == done.json()
    assert counts(shop) == 1
    (after,) = api.get(f"count-days/{day}/preview/").json()["rows"]
    assert after["line"]["entry"] is not None
    assert api.get("count-days/").json()["results"] == [done.json()]


def test_a_line_is_taken_back_and_a_count_abandoned(api: Caller, shop: Shop, day: str) -> None:
    line = note(api, day, code=shop.stock.code, said="missing").json()
    taken = api.post(f"count-days/{day}/lines/{line['uuid']}/take-back").json()
    assert taken["taken_back_by"] is not None
    assert api.get(f"count-days/{day}/preview/").json()["rows"] == []
    assert api.post(f"count-days/{day}/abandon").json()["abandoned"] is True
    assert api.post(f"count-days/{day}/finish").status_code == 409
    assert counts(shop) == 0


@pytest.mark.parametrize(
    ("said", "field"),
    [
        ({}, "code"),
        ({"code": "NOSUCH", "said": "agrees"}, "code"),
        ({"code": "salt"}, "amount"),
        ({"code": "salt", "amount": "5"}, "amount"),
        ({"code": "salt", "amount": 5}, "amount"),
        ({"code": "salt", "amount": "5 kg", "sd": "5 mL"}, "sd"),
        ({"code": "salt", "said": "perhaps"}, "said"),
        ({"code": "salt", "said": "agrees", "colour": "blue"}, "colour"),
    ],
)
def test_what_is_wrong_is_named(api: Caller, shop: Shop, day: str, said: dict[str, Any], field: str) -> None:
    if said.get("code") == "salt":
        said = {**said, "code": shop.stock.code}
    assert field in errors_of(note(api, day, **said), 400)
    assert api.get(f"count-days/{day}/lines/").json()["results"] == []


def test_one_count_is_open_at_a_place(api: Caller, shop: Shop, day: str) -> None:
    assert "Go on with that count" in errors_of(api.post("count-days/"), 409)[""]
    assert "place" in errors_of(api.post("count-days/", {"place": str(shop.stock.uuid)}), 400)
