"""Several records in one request: a morning, a week; all or none, and once."""

from typing import Any
from uuid import uuid4

import pytest
from django_scopes import scope
from pytest_django import DjangoAssertNumQueries as Num

from chemicals.journal.models import Entry
from tests.api.conftest import Caller, Shop, errors_of

pytestmark = pytest.mark.django_db


def morning(shop: Shop, *levels: str) -> dict[str, Any]:
    """Return level readings of bath and rinse, in turn."""
    vessels = [str(shop.bath.uuid), str(shop.rinse.uuid)]
    return {
        "records": [
            {"verb": "level-reading", "data": {"vessel": vessels[number % 2], "volume": level}}
            for number, level in enumerate(levels)
        ]
    }


def count(shop: Shop) -> int:
    with scope(workshop=shop.workshop):
        return Entry.objects.count()


def test_a_week_is_previewed_and_recorded_once(api: Caller, shop: Shop) -> None:
    sheet = {"racks": [{"route": str(shop.route.uuid), "loads": 3}]}
    days = ("2026-02-23", "2026-02-24")
    week = {"records": [{"verb": "day-sheet", "data": {**sheet, "occurred_at": day}} for day in days]}
    previews = api.post("records/preview", week).json()["previews"]
    assert [(each["allowed"], each["precision"]) for each in previews] == [(True, "day")] * 2
    assert count(shop) == 0
    key = uuid4()
    first = api.post("records", week, key=key)
    assert first.status_code == 201, first.json()
    assert [entry["kind"] for entry in first.json()["entries"]] == ["day sheet"] * 2
    assert [entry["occurred_at"][:10] for entry in first.json()["entries"]] == list(days)
    again = api.post("records", week, key=key)
    assert (again.status_code, again.json()) == (200, first.json())
    assert count(shop) == 2


def test_every_error_of_every_record_is_named_and_nothing_is_written(api: Caller, shop: Shop) -> None:
    said = morning(shop, "9", "8 L")
    said["records"] += [{"verb": "juggle", "data": {}}, {"verb": "spill"}, {"verb": "count", "data": {"colour": "red"}}]
    found = errors_of(api.post("records", said, key=uuid4()), 400)
    assert {"records.0.data.volume", "records.2.verb", "records.3.data", "records.4.data.colour"} <= set(found)
    late = morning(shop, "9 L", "8 L")
    late["records"][1]["data"]["volume"] = None
    assert list(errors_of(api.post("records", late, key=uuid4()), 400)) == ["records.1.volume"]
    assert count(shop) == 0


@pytest.mark.parametrize("said", [{}, {"records": []}, {"records": {}}, {"records": [1]}])
def test_a_body_without_records_is_refused(api: Caller, shop: Shop, said: dict[str, Any]) -> None:
    assert "records" in next(iter(errors_of(api.post("records", said, key=uuid4()), 400)))
    assert "records" in next(iter(errors_of(api.post("records/preview", said), 400)))


def test_a_record_needs_a_key(api: Caller, shop: Shop) -> None:
    assert list(errors_of(api.post("records", morning(shop, "9 L")), 400)) == ["Idempotency-Key"]


def test_a_preview_takes_the_same_queries_for_each_record(
    api: Caller, shop: Shop, django_assert_max_num_queries: Num
) -> None:
    with django_assert_max_num_queries(40):
        assert api.post("records/preview", morning(shop, "9 L", "8 L", "7 L")).status_code == 200
