"""Lists: pages that stay where they are, filters, and query counts that do not grow with the rows."""

import re
from collections.abc import Callable
from datetime import datetime
from typing import Any
from uuid import uuid4

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from chemicals.workshop.models import Membership
from compliance.dropoffs.services import create_drop_off
from compliance.waste.services import close_container, issue_label
from tests.api.conftest import GRAM, Caller, Shop, errors_of

Asserts = Callable[[int], Any]


def read_levels(api: Caller, shop: Shop, *litres: int) -> list[str]:
    """Record level readings and return their uuids."""
    return [
        api.record("level-reading", vessel=str(shop.bath.uuid), volume=f"{volume} L").json()["uuid"]
        for volume in litres
    ]


def follow(api: Caller, address: str | None) -> dict[str, Any]:
    """Return the page behind a link of a page."""
    assert address is not None
    response = api.client.get(address)
    assert response.status_code == 200
    return dict(response.json())


def test_pages_of_entries_stay_while_entries_are_added(api: Caller, shop: Shop) -> None:
    written = read_levels(api, shop, *range(1, 8))
    first = api.get("entries/", {"page_size": "3"}).json()
    read_levels(api, shop, 20, 21)
    second = follow(api, first["next"])
    read_levels(api, shop, 22)
    third = follow(api, second["next"])
    seen = [row["uuid"] for page in (first, second, third) for row in page["results"]]
    assert seen == written[::-1]
    assert (first["previous"], third["next"]) == (None, None)
    assert [row["uuid"] for row in follow(api, third["previous"])["results"]] == [r["uuid"] for r in second["results"]]


def test_new_entries_are_found_before_the_first_page(api: Caller, shop: Shop) -> None:
    read_levels(api, shop, 1, 2, 3, 4)
    second = follow(api, api.get("entries/", {"page_size": "2"}).json()["next"])
    added = read_levels(api, shop, 5)
    first = follow(api, second["previous"])
    assert len(first["results"]) == 2
    assert [row["uuid"] for row in follow(api, first["previous"])["results"]] == added


def test_pages_of_other_lists_follow_creation(api: Caller) -> None:
    for name in "cabed":
        api.post("places/", {"name": name})
    first = api.get("places/", {"page_size": "2"}).json()
    api.post("places/", {"name": "aa"})
    second = follow(api, first["next"])
    third = follow(api, second["next"])
    assert [row["name"] for page in (first, second, third) for row in page["results"]] == [*"cabed", "aa"]


@pytest.mark.parametrize(
    "cursor", ["x", "cD1hYmM=", "cD0tMQ==", "bz01", "cD05OTk5OTk5OTk5OTk5OTk5OTk5OTk=", "é", "cj14", "cD3ZoQ=="]
)
def test_a_cursor_of_somebody_elses_making_is_refused(api: Caller, cursor: str) -> None:
    assert "Follow next or previous" in errors_of(api.get("entries/", {"cursor": cursor}), 400)["cursor"]


@pytest.mark.parametrize("size", ["0", "-1", "201", "many", ""])
def test_a_page_has_between_1_and_200_rows(api: Caller, size: str) -> None:
    assert "page_size" in errors_of(api.get("entries/", {"page_size": size}), 400)


def test_entries_are_found_by_kind_vessel_and_day(api: Caller, shop: Shop) -> None:
    api.record("opening", vessel=str(shop.bath.uuid), volume="20 L", occurred_at="2026-01-10")
    api.record("opening", vessel=str(shop.rinse.uuid), volume="20 L", occurred_at="2026-01-11")
    api.record("level-reading", vessel=str(shop.bath.uuid), volume="19 L", occurred_at="2026-01-11T23:30+01:00")
    api.record("level-reading", vessel=str(shop.bath.uuid), volume="18 L", occurred_at="2026-01-12T00:00+01:00")

    def found(**query: str) -> list[int]:
        return [row["sequence"] for row in api.get("entries/", query).json()["results"]]

    assert found(kind="level reading") == [4, 3]
    assert found(vessel=str(shop.rinse.uuid)) == [2]
    assert found(start="2026-01-11", end="2026-01-11") == [3, 2]
    assert found(start="2026-01-12") == [4]
    assert found(vessel=str(shop.bath.uuid), kind="opening", end="2026-01-10") == [1]
    assert found(vessel=str(uuid4())) == []


def test_entries_are_found_by_everything_else_that_the_page_looks_for(api: Caller, shop: Shop) -> None:
    api.record("opening", vessel=str(shop.bath.uuid), volume="20 L", occurred_at="2026-01-10")
    api.record("receipt", vessel=str(shop.stock.uuid), amount="1 kg", lot="Lot 4711")
    mistake = api.record("level-reading", vessel=str(shop.bath.uuid), volume="19 L", occurred_at="2026-01-11").json()
    api.record("cancellation", entry=mistake["uuid"], reason="the wrong tank")

    def found(**query: str) -> list[int]:
        return [row["sequence"] for row in api.get("entries/", query).json()["results"]]

    assert found(component="Cu") == [2]
    assert found(text="4711") == [2]
    assert found(text="WRONG") == [4]
    assert found(verdict="allowed", cancelled="true") == [3]
    assert found(cancelled="false") == [4, 3, 2, 1]
    assert found(findings="true") == []
    assert found(end="2026-01-31", by="recorded") == []
    assert found(end="2026-01-31", by="occurred") == [3, 1]
    member = api.get("entries/").json()["results"][0]["recorded_by"]["uuid"]
    assert found(member=member) == [4, 3, 2, 1]
    assert found(member=str(uuid4())) == []


def test_vessels_are_found_by_kind_and_by_typed_code(api: Caller, shop: Shop) -> None:
    baths = api.get("vessels/", {"kind": "bath"}).json()["results"]
    assert [row["name"] for row in baths] == ["Copper bath"]
    code = shop.rinse.code
    typed = api.get("vessels/", {"code": f"{code[:3].lower()}-{code[3:].lower()}"}).json()["results"]
    assert [row["uuid"] for row in typed] == [str(shop.rinse.uuid)]


def add_place(api: Caller, shop: Shop, number: int) -> None:
    api.post("places/", {"name": f"Shelf {number}"})


def add_substance(api: Caller, shop: Shop, number: int) -> None:
    api.post("substances/", {"name": f"Salt {number}"})


def add_product(api: Caller, shop: Shop, number: int) -> None:
    lines = [{"substance": str(shop.sulfate.uuid), "content": "98 %"}]
    api.post("products/", {"name": f"Product {number}", "form": "solid", "lines": lines})


def add_revision(api: Caller, shop: Shop, number: int) -> None:
    lines = [{"substance": str(shop.sulfate.uuid), "content": f"9{number} %"}]
    api.post(f"products/{shop.product.uuid}/revisions/", {"form": "solid", "lines": lines})


def add_vessel(api: Caller, shop: Shop, number: int) -> None:
    said = {"kind": "stock", "name": f"Jar {number}", "product": str(shop.product.uuid), "place": str(shop.place.uuid)}
    api.post("vessels/", said)


def add_tank(api: Caller, shop: Shop, number: int) -> None:
    api.post("tanks/", {"kind": "rinse", "name": f"Rinse {number}", "place": str(shop.place.uuid)})


def add_rack_type(api: Caller, shop: Shop, number: int) -> None:
    api.post("rack-types/", {"name": f"Rack {number}", "drag_out": "10 mL"})


def add_route(api: Caller, shop: Shop, number: int) -> None:
    vessels = [str(shop.bath.uuid), str(shop.rinse.uuid)]
    api.post("routes/", {"name": f"Route {number}", "rack": str(shop.rack.uuid), "vessels": vessels})


def add_entry(api: Caller, shop: Shop, number: int) -> None:
    read_levels(api, shop, number + 1)


def add_stream(api: Caller, shop: Shop, number: int) -> None:
    api.post("waste-streams/", {"name": f"Stream {number}", "origin": "Copper line"})


def add_container(api: Caller, shop: Shop, number: int) -> None:
    api.post("waste-containers/", {"name": f"Can {number}", "stream": str(shop.stream.uuid), "capacity": "30 L"})


def add_receiver(api: Caller, shop: Shop, number: int) -> None:
    api.post("receivers/", {"name": f"Works {number}"})


def add_drop_off(api: Caller, shop: Shop, number: int) -> None:
    said = {"name": f"Can {number}", "stream": str(shop.stream.uuid), "tare": "1 kg"}
    can = api.post("waste-containers/", said).json()["vessel"]["uuid"]
    api.post(f"waste-containers/{can}/close", {"gross": "20 kg"})
    drop_off = {"receiver": str(shop.receiver.uuid), "planned_for": "2026-04-01", "containers": [can]}
    api.post("drop-offs/", drop_off)


def add_period(api: Caller, shop: Shop, number: int) -> None:
    api.post("periods/", {"until": f"2026-02-0{number + 1}"}, key=uuid4())


def add_import(api: Caller, shop: Shop, number: int) -> None:
    file = SimpleUploadedFile(f"book {number}.csv", f"Date,What,Vessel\n2026-01-0{number + 1},move,Bath".encode())
    api.client.post(api.path("imports/"), {"file": file}, format="multipart")


def add_paper(api: Caller, shop: Shop, number: int) -> None:
    api.post(f"waste-containers/{shop.drum.vessel.uuid}/label", key=uuid4())


def add_change(api: Caller, shop: Shop, number: int) -> None:
    api.post(f"vessels/{shop.stock.uuid}/care", {"expires_on": f"2027-01-0{number + 1}"})


def add_count_day(api: Caller, shop: Shop, number: int) -> None:
    day = api.post("count-days/", {"place": str(shop.place.uuid)}).json()["uuid"]
    api.post(f"count-days/{day}/lines/", {"code": shop.stock.code, "said": "missing"})
    api.post(f"count-days/{day}/abandon")


def add_line(api: Caller, shop: Shop, number: int) -> None:
    days = api.get("count-days/").json()["results"] or [api.post("count-days/", {}).json()]
    api.post(f"count-days/{days[0]['uuid']}/lines/", {"code": shop.stock.code, "said": "missing"})


def add_limit(api: Caller, shop: Shop, number: int) -> None:
    said = {"place": str(shop.place.uuid), "sort": "everything", "amount": f"{number + 1} L"}
    api.post("limits/", {**said, "citation": "house rule", "checked_on": "2026-03-01"})


PAIRS = [("acid", "cyanide"), ("acid", "hypochlorite"), ("acid", "sulfide")]


def add_apart(api: Caller, shop: Shop, number: int) -> None:
    first, second = (f"reacts as: {kind}" for kind in PAIRS[number])
    said = {"first": first, "second": second, "reach": "place"}
    api.post("keep-apart/", {**said, "citation": "house rule", "checked_on": "2026-03-01"})


def add_assessment(api: Caller, shop: Shop, number: int) -> None:
    first, second = (f"reacts as: {kind}" for kind in PAIRS[number])
    said = {"first": first, "second": second, "reach": "place", "place": str(shop.place.uuid)}
    api.post("assessments/", {**said, "assessed_by": "Olga", "until": "2026-12-31", "reason": "Two cupboards."})


def add_instrument(api: Caller, shop: Shop, number: int) -> None:
    api.post("instruments/", {"name": f"Rod {number}", "measures": "level", "sd": "0.1 L"})


LISTS = {
    "places/": (add_place, 1), "substances/": (add_substance, 1), "products/": (add_product, 3),
    "products/{product}/revisions/": (add_revision, 5), "vessels/": (add_vessel, 1), "tanks/": (add_tank, 1),
    "rack-types/": (add_rack_type, 1), "routes/": (add_route, 2), "entries/": (add_entry, 3),
    "waste-streams/": (add_stream, 1), "waste-containers/": (add_container, 2), "receivers/": (add_receiver, 1),
    "drop-offs/": (add_drop_off, 2), "periods/": (add_period, 1), "papers/": (add_paper, 1),
    "containers/": (add_vessel, 10), "imports/": (add_import, 1), "vessels/{stock}/changes/": (add_change, 3),
    "count-days/": (add_count_day, 1), "count-days/{day}/lines/": (add_line, 2), "limits/": (add_limit, 1),
    "keep-apart/": (add_apart, 1), "assessments/": (add_assessment, 1), "instruments/": (add_instrument, 1),
}  # fmt: skip
"""How to add one row to each list, and how many queries its page takes besides the one that reads the token."""


@pytest.mark.parametrize("address", LISTS)
def test_a_page_takes_as_many_queries_for_one_row_as_for_three(
    address: str, api: Caller, shop: Shop, django_assert_num_queries: Asserts
) -> None:
    add, count = LISTS[address]
    add(api, shop, 0)
    (day,) = [row["uuid"] for row in api.get("count-days/").json()["results"]] or [None]
    path = address.format(product=shop.product.uuid, stock=shop.stock.uuid, day=day)
    before = len(api.get(path).json()["results"])
    with django_assert_num_queries(count + 1):
        api.get(path)
    add(api, shop, 1)
    add(api, shop, 2)
    with django_assert_num_queries(count + 1):
        rows = api.get(path).json()["results"]
    assert len(rows) == before + 2


def test_every_list_is_counted() -> None:
    from compliance.api.urls import WORKSHOP
    from compliance.api.views.base import ListView

    lists = {
        str(each.pattern) for each in WORKSHOP if issubclass(getattr(each.callback, "view_class", object), ListView)
    }
    assert lists == {re.sub(r"\{\w+\}", "<uuid:uuid>", address) for address in LISTS}


def test_a_drop_off_and_a_label_made_below_the_api_are_listed(
    api: Caller, shop: Shop, owner: Membership, now: datetime
) -> None:
    issue_label(actor=owner, now=now, key=uuid4(), container=shop.drum)
    close_container(actor=owner, now=now, container=shop.drum, gross=20_000 * GRAM)
    shop.drum.refresh_from_db()
    planned = now.date()
    create_drop_off(
        actor=owner, now=now, receiver=shop.receiver, mode="brought", planned_for=planned, containers=[shop.drum]
    )
    assert api.get("papers/").json()["results"][0]["kind"] == "waste-label"
    drop_off = api.get("drop-offs/").json()["results"][0]
    assert (drop_off["state"], drop_off["containers"][0]["gross"]["text"]) == ("draft", "20 kg")
