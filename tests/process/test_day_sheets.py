"""What a day sheet asks here, and which sheets are there already."""

from datetime import date, timedelta
from zoneinfo import ZoneInfo

import pytest

from chemicals.ledger.models import Vessel
from chemicals.process.day_sheets import find_latest_run, list_sheets_of_days, list_standing_sheets, read_day_grid
from tests.process.shop import Shop


def rows(shop: Shop) -> list[str]:
    """Return the rows of the grid as people read them."""
    return [str(row) for row in read_day_grid(shop.member).loads]


def local_day(shop: Shop, days_ago: float) -> date:
    """Return a day by the workshop's clock."""
    return (shop.now - timedelta(days=days_ago)).astimezone(shop.member.workshop.zone).date()


def test_each_route_has_a_row_with_its_own_rack_type_and_each_bath_that_plates_a_field(shop: Shop) -> None:
    grid = read_day_grid(shop.member)
    assert rows(shop) == ["Plate: Small part"]
    assert [str(bath) for bath in grid.baths] == ["Copper"]
    assert (grid.last, grid.last_loads, grid.last_charges) == (None, {}, {})


def test_a_rack_type_that_took_another_route_has_a_row_once_it_did(shop: Shop) -> None:
    shop.rack("Big part", "3 mL")
    assert rows(shop) == ["Plate: Small part"]
    shop.record("day-sheet", racks=[{"route": "Plate", "rack": "Big part", "loads": 2}])
    assert rows(shop) == ["Plate: Small part", "Plate: Big part"]


def test_the_last_sheet_is_the_one_of_the_latest_day_that_nobody_cancelled(shop: Shop) -> None:
    shop.record("day-sheet", days_ago=1, racks=[{"route": "Plate", "loads": 2}, {"route": "Plate", "loads": 3}])
    shop.record("day-sheet", days_ago=2, racks=[{"route": "Plate", "loads": 9}])
    shop.record("day-sheet", label="wrong", charges=[{"bath": "Copper", "charge": "310 Ah"}])
    assert list(read_day_grid(shop.member).last_charges.values()) == ["310 Ah"]
    shop.record("cancellation", entry="wrong", reason="another bath")
    grid = read_day_grid(shop.member)
    assert (list(grid.last_loads.values()), grid.last_charges) == ([5], {})


def test_what_is_gone_is_not_asked(shop: Shop) -> None:
    Vessel._base_manager.filter(name="Second rinse").update(gone_at=shop.now)
    assert rows(shop) == []
    Vessel._base_manager.filter(name="Copper").update(gone_at=shop.now)
    assert read_day_grid(shop.member).baths == []


@pytest.mark.parametrize("zone", ["Pacific/Kiritimati", "Pacific/Honolulu", "UTC"])
def test_a_sheet_belongs_to_its_day_by_the_clock_of_the_workshop(shop: Shop, zone: str) -> None:
    shop.member.workshop.time_zone = zone
    assert shop.member.workshop.zone == ZoneInfo(zone)
    for days_ago in (3, 1.1, 1):
        shop.record("day-sheet", days_ago=days_ago, racks=[{"route": "Plate", "loads": 1}])
    wanted: dict[date, int] = {}
    for days_ago in (1.1, 1):
        wanted[local_day(shop, days_ago)] = wanted.get(local_day(shop, days_ago), 0) + 1
    found = list_sheets_of_days(shop.member, min(wanted), max(wanted))
    assert {day: len(entries) for day, entries in found.items()} == wanted
    assert len(list_standing_sheets(shop.member)) == 3


def test_the_latest_run_is_the_one_recorded_last(shop: Shop) -> None:
    assert find_latest_run(shop.member) is None
    shop.record("run", days_ago=1, route="Plate", charge="2 Ah")
    late = shop.record("run", days_ago=3, route="Plate", charge="1 Ah", label="late")
    assert find_latest_run(shop.member) == late
    shop.record("cancellation", entry="late", reason="a mistake")
    again = find_latest_run(shop.member)
    assert again is not None
    assert again.occurred_at == shop.now - timedelta(days=1)
