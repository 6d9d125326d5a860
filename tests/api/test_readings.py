"""Instruments, level tables, what was read at a vessel and how a tank is set up, over the API."""

from typing import Any
from uuid import uuid4

from tests.api.conftest import Caller, Shop, errors_of


def enter(api: Caller, **said: Any) -> dict[str, Any]:
    response = api.post("instruments/", {"name": "Dip rod", "measures": "level", **said})
    assert response.status_code == 201, response.json()
    found: dict[str, Any] = response.json()
    return found


def test_an_instrument_is_entered_read_and_changed(api: Caller, shop: Shop) -> None:
    made = enter(api, sd="0.1 L", relative_sd="1 %", calibrated_on="2026-01-05")
    assert (made["sd"], made["sd_base"], made["relative_sd_base"], made["picture"]) == ("0.1 L", 10**8, 10_000, None)
    address = f"instruments/{made['uuid']}"
    changed = api.post(f"{address}/change", {"name": "Old rod", "sd": "0.2 L", "retired": True})
    assert changed.status_code == 200, changed.json()
    found = api.get(f"{address}/").json()
    assert (found["name"], found["relative_sd"], found["calibrated_on"], found["retired"]) == (
        "Old rod",
        "",
        None,
        True,
    )
    assert [row["name"] for row in api.get("instruments/").json()["results"]] == ["Old rod"]


def test_everything_wrong_with_an_instrument_is_told(api: Caller, shop: Shop) -> None:
    wrong = {"name": "Rod", "measures": "level", "sd": "1 g", "picture": "ab"}
    assert set(errors_of(api.post("instruments/", {**wrong, "measures": "luck"}), 400)) == {"measures"}
    assert set(errors_of(api.post("instruments/", wrong), 400)) == {"picture"}
    del wrong["picture"]
    assert set(errors_of(api.post("instruments/", wrong), 400)) == {"sd"}


def test_a_mark_is_taken_for_its_volume_and_the_rod_for_its_doubt(api: Caller, shop: Shop) -> None:
    rod = enter(api, sd="0.3 L", valid_until="2020-01-01")
    tank = f"tanks/{shop.bath.uuid}/level-table/"
    rows = [{"mark": "10 cm", "volume": "5 L"}, {"mark": "40 cm", "volume": "20 L", "hot": False}]
    table = api.post(tank, {"marks": rows})
    assert table.status_code == 200, table.json()
    assert [row["volume"]["text"] for row in api.get(tank).json()["marks"]] == ["5 L", "20 L"]
    said = {"vessel": str(shop.bath.uuid), "mark": "32 cm", "instrument": rod["uuid"]}
    seen = api.post("preview/level-reading", said).json()
    assert "was valid until 2020-01-01" in seen["cautions"][0]
    observed, used = (seen["payload"][part] for part in ("observed", "used"))
    assert (observed["volume"]["typed"], observed["volume"]["base"]) == ("32 cm", 16 * 10**9)
    assert observed["volume"]["sd"] == 390_512_484  # the root of 0.25^2 + 0.3^2 L, rounded up
    assert used["gauge"] == {"name": "Dip rod", "sd": 3 * 10**8, "relative_sd": 0, "calibrated_on": ""}
    assert [mark["mark"] for mark in used["marks"]] == ["10 cm", "40 cm"]
    entry = api.record("level-reading", **said).json()
    assert entry["verdict"] == "allowed"
    wrong = errors_of(api.post(tank, {"marks": [*rows, {"mark": "50 cm", "volume": "20 L"}]}), 400)
    assert "more than the one below it" in wrong["marks.2.volume"]


def test_what_was_read_is_listed(api: Caller, shop: Shop) -> None:
    bath = str(shop.bath.uuid)
    api.record("reading", vessel=bath, quantity="temperature", result="75 °F", sd="0.9 °F")
    api.record("reading", vessel=bath, quantity="test strip", shows="chlorine", result="below 1 mg/L")
    found = api.get(f"vessels/{bath}/readings/").json()["readings"]
    assert [(row["quantity"], row["shows"], row["least"], row["most"], row["sd"], row["unit"]) for row in found] == [
        ("test strip", "chlorine", None, 1_000, None, "ug/L"),
        ("temperature", "", 297_039, 297_039, 500, "mK"),
    ]
    assert errors_of(api.get(f"vessels/{uuid4()}/readings/"), 404)


def test_a_tank_is_set_up_otherwise_from_now_on(api: Caller, shop: Shop) -> None:
    address = f"tanks/{shop.bath.uuid}/changes/"
    said = {"metal": "Cu", "valence": 2, "efficiency": "96.5 %", "note": "test panel"}
    changed = api.post(address, said)
    assert changed.status_code == 200, changed.json()
    rows = {row["fact"]: row for row in api.get(address).json()["changes"]}
    assert (rows["efficiency"]["after"], rows["efficiency"]["note"]) == ("96.5 %", "test panel")
    assert api.get(f"tanks/{shop.bath.uuid}/").json()["efficiency"]["base"] == 965_000
    assert "valence" in errors_of(api.post(address, {"metal": "Cu"}), 400)
    assert set(errors_of(api.post(address, {"name": "Other"}), 400)) == {"name"}
    assert errors_of(api.get(f"tanks/{shop.stock.uuid}/changes/"), 404)
