"""The difference between two moments: explained to the unit by what crossed the boundaries, unknown where it is so."""

from datetime import timedelta
from typing import Any

import pytest

from chemicals.balance.difference import Difference, get_differences_for
from chemicals.balance.selectors import get_book_balance
from chemicals.ledger.selectors import list_components_for
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership
from tests.balance.test_selectors import run_a_month
from tests.process.shop import G, L, Shop


def differences(
    shop: Shop, since: float = 20, until: float = -1, component: str | None = None
) -> dict[str, Difference]:
    """Return the differences between some days ago and some days ago, by component."""
    start, end = shop.now - timedelta(days=since), shop.now - timedelta(days=until)
    return {found.component: found for found in get_differences_for(shop.member, start, end, component)}


def check_sums(found: Difference) -> None:
    """Fail unless vessels and boundaries both sum to the difference."""
    assert sum(row.booked for row in found.vessels) == found.booked
    for row in found.vessels:
        assert row.value in (None, row.booked)
    assert found.value in (None, found.booked)


def by_boundary(found: Difference) -> dict[tuple[str, str], int | None]:
    return {(row.boundary, row.kind): row.amount.value for row in found.explained}


@pytest.mark.parametrize(("since", "until"), [(20, -1), (9.5, 3), (8.5, 6.5), (5.5, 4.5), (3, 2)])
def test_every_component_is_explained_to_the_unit(shop: Shop, since: float, until: float) -> None:
    run_a_month(shop)
    found = differences(shop, since, until)
    assert list(found) == ["Cu", "volume", "gross mass"]
    for difference in found.values():
        check_sums(difference)
        assert difference.value is not None


def test_it_says_by_which_boundary_and_by_which_kind_of_entry(shop: Shop) -> None:
    """A litre of bath evaporates, 20 mL are dragged out of the rinse, and 10 Ah plate 11.855 g."""
    shop.record("run", days_ago=9, route="Plate", charge="10 Ah")
    shop.record("level-reading", days_ago=8, vessel="Copper", volume="18.99 L", sd="0.1 L")
    found = differences(shop, since=9.5)
    assert by_boundary(found["volume"]) == {("air", "level reading"): -L, ("parts", "run"): -L // 100}
    assert set(by_boundary(found["Cu"])) == {("parts", "run")}
    assert found["Cu"].value == pytest.approx(-11.855 * G, rel=1e-3)
    assert 0 < found["Cu"].explained[0].amount.sd < G
    assert by_boundary(differences(shop)["Cu"])["opening", "opening"] == 1000 * G


def test_a_vessel_says_what_came_and_went(shop: Shop) -> None:
    shop.record("move", days_ago=6, source="Copper", target="Rinse", volume="1 L")
    (cu,) = differences(shop, since=7, component="Cu").values()
    assert cu.explained == ()
    assert (cu.value, cu.before.value, cu.after.value) == (0, 1000 * G, 1000 * G)
    rows = {row.vessel.name: (row.value, row.came, row.went) for row in cu.vessels}
    assert rows == {"Copper": (-50 * G, 0, 50 * G), "Rinse": (50 * G, 50 * G, 0)}


def test_it_agrees_with_the_balance(shop: Shop) -> None:
    run_a_month(shop)
    start, end = shop.now - timedelta(days=8.5), shop.now - timedelta(days=4.5)
    balance, (cu,) = get_book_balance(shop.member, "Cu", start, end), get_differences_for(shop.member, start, end, "Cu")
    assert (cu.before, cu.after) == (balance.opening, balance.closing)
    sums: dict[str, int] = {}
    for row in cu.explained:
        sums[row.boundary] = sums.get(row.boundary, 0) + row.booked
    assert sums == {name: amount.value for name, amount in balance.boundaries.items()}
    assert {row.vessel.name: (row.came, row.went) for row in cu.vessels} == {
        row.vessel.name: (row.received, row.given) for row in balance.vessels
    }


def test_two_differences_meet(shop: Shop) -> None:
    run_a_month(shop)
    for cut in (8.5, 7, 5.5):
        first, second, whole = differences(shop, until=cut), differences(shop, since=cut), differences(shop)
        for code, difference in whole.items():
            assert first[code].after == second[code].before
            assert first[code].booked + second[code].booked == difference.booked


def test_an_unknown_content_leaves_an_unknown_difference_and_what_was_recorded(shop: Shop) -> None:
    """Nobody knows what copper is in the old rinse, nor what of it went to the yard."""
    shop.tank("Old rinse", "10 L")
    shop.record("opening", days_ago=6, vessel="Old rinse", volume="5 L")
    shop.drum("Drum", reactivity=("unknown",))
    shop.record("move", days_ago=5, source="Copper", target="Old rinse", volume="1 L", happened=True)
    shop.record("drum-off", days_ago=4, source="Old rinse", target="Drum", volume="1 L", happened=True)
    shop.record("hand-over", days_ago=3, container="Drum", receiver="The yard")
    cu = differences(shop, since=7)["Cu"]
    check_sums(cu)
    assert (cu.value, cu.before.value, cu.after.value) == (None, 1000 * G, None)
    assert {row.vessel.name: row.value for row in cu.vessels}["Copper"] == -50 * G
    assert {row.vessel.name: row.value for row in cu.vessels}["Old rinse"] is None
    assert {row.boundary: row.amount.value for row in cu.explained}["receiver"] is None
    assert differences(shop, since=20, until=6.5)["Cu"].value == 1000 * G


def test_what_an_incomplete_list_does_not_name_went_unknown(shop: Shop) -> None:
    """All of the old rinse goes to the yard: copper may have been in it, and nobody knows."""
    shop.drum("Drum", reactivity=("unknown",))
    shop.record("opening", days_ago=6, vessel="Drum", volume="5 L")
    shop.record("hand-over", days_ago=3, container="Drum", receiver="The yard")
    found = differences(shop, since=5)
    assert by_boundary(found["Cu"]) == {("receiver", "hand-over"): None}
    assert by_boundary(found["volume"]) == {("receiver", "hand-over"): -5 * L}


def test_a_day_without_entries_makes_no_difference(shop: Shop) -> None:
    run_a_month(shop)
    for difference in differences(shop, since=3, until=2).values():
        assert (difference.value, difference.explained) == (0, ())


def test_of_what_is_in_no_book_there_is_no_difference(shop: Shop, stranger: Membership) -> None:
    assert list_components_for(shop.member) == ["Cu", "volume", "gross mass"]
    assert list_components_for(stranger) == []
    with pytest.raises(NotFoundError):
        differences(shop, component="Au")
    assert get_differences_for(stranger, shop.now - timedelta(days=9), shop.now) == ()


def test_it_asks_as_often_for_one_entry_as_for_many(shop: Shop, django_assert_num_queries: Any) -> None:
    for _ in range(3):
        with django_assert_num_queries(9):
            assert differences(shop)
        shop.record("run", days_ago=6, route="Plate", charge="1 Ah")
        shop.tank(f"Rinse {_}", "10 L")
