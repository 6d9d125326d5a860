"""The book balance of a metal: it closes to the microgram, over any period, and says what it could not have seen."""

from datetime import timedelta
from itertools import pairwise

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext

from chemicals.balance.selectors import BookBalance, find_main_metal_for, get_book_balance, list_metals_for
from chemicals.ledger.models import Vessel
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership
from tests.process.shop import G, Shop


def balance(shop: Shop, since: float = 20, until: float = -1, metal: str = "Cu") -> BookBalance:
    """Return the balance from some days ago until some days ago."""
    start, end = shop.now - timedelta(days=since), shop.now - timedelta(days=until)
    return get_book_balance(shop.member, metal, start, end)


def run_a_month(shop: Shop) -> None:
    shop.record("run", days_ago=9, route="Plate", charge="10 Ah")
    shop.record("level-reading", days_ago=8, vessel="Copper", volume="19 L", sd="0.1 L", spilled=True)
    shop.record("analysis", days_ago=7, label="first", vessel="Copper", metal="Cu", result="48 g/L", sd="0.5 g/L")
    shop.record("acceptance", analysis="first")
    shop.record("run", days_ago=6, route="Plate", weight_before="10 g", weight_after="14 g", weight_sd="0.01 g")
    shop.drum("Drum")
    shop.record("drum-off", days_ago=5, source="Rinse", target="Drum", volume="4 L")
    shop.record("hand-over", days_ago=4, container="Drum", receiver="The yard")


def test_it_closes_to_the_microgram(shop: Shop) -> None:
    run_a_month(shop)
    found = balance(shop)
    assert found.opening.value == 0
    assert found.closing.value is not None
    assert sum(amount.value or 0 for amount in found.boundaries.values()) == found.closing.value
    assert set(found.boundaries) == {"opening", "parts", "receiver", "spill", "unaccounted"}
    for row in found.vessels:
        assert (row.opening.value or 0) + row.received - row.given == row.closing.value


@pytest.mark.parametrize("cut", [9.5, 8.5, 7.5, 6.5, 5.5, 4.5, 3])
def test_one_period_is_the_sum_of_its_two_halves(shop: Shop, cut: float) -> None:
    run_a_month(shop)
    whole, first, second = balance(shop), balance(shop, until=cut), balance(shop, since=cut)
    assert first.closing == second.opening
    assert (first.opening, second.closing) == (whole.opening, whole.closing)
    names = set(first.boundaries) | set(second.boundaries)
    assert names == set(whole.boundaries)
    for name in names:
        parts = [half.boundaries[name].value or 0 for half in (first, second) if name in half.boundaries]
        assert sum(parts) == whole.boundaries[name].value


def test_the_figures_are_those_of_a_sum_by_hand(shop: Shop) -> None:
    """10 Ah plate 11.855 g (1.1855 g/Ah); an inert anode gives nothing back."""
    shop.record("run", days_ago=9, route="Plate", charge="10 Ah")
    found = balance(shop)
    assert abs((found.boundaries["parts"].value or 0) + 11_855_000) < 1000
    assert found.boundaries["opening"].value == 1000 * G
    rinse = next(row for row in found.vessels if row.vessel.name == "Rinse")
    assert abs((rinse.closing.value or 0) - 500_000) < 10_000  # 10 mL of 49.4 g/L, less its own drag-out


def test_unaccounted_is_what_the_analysis_did_not_find(shop: Shop) -> None:
    shop.record("analysis", days_ago=7, label="first", vessel="Copper", metal="Cu", result="49 g/L", sd="0.5 g/L")
    shop.record("acceptance", analysis="first")
    found = balance(shop)
    assert found.unaccounted.value == -20 * G
    assert found.unaccounted.sd == 10 * G  # 0.5 g/L in 20 L
    assert found.smallest_visible is not None
    assert found.smallest_visible >= 20 * G
    assert balance(shop, until=8).unaccounted.value == 0


def test_a_period_without_movements_is_still(shop: Shop) -> None:
    run_a_month(shop)
    quiet = balance(shop, since=3, until=2)
    assert quiet.opening == quiet.closing
    assert quiet.boundaries == {}
    assert quiet.flows == ()
    assert {row.received for row in quiet.vessels} == {0}


def test_an_entry_counts_in_the_period_in_which_it_happened(shop: Shop) -> None:
    at = shop.record("run", days_ago=6, route="Plate", charge="10 Ah").occurred_at
    before = get_book_balance(shop.member, "Cu", at - timedelta(days=1), at)
    after = get_book_balance(shop.member, "Cu", at, at + timedelta(days=1))
    assert "parts" not in before.boundaries
    assert "parts" in after.boundaries
    assert before.closing == after.opening


def test_a_mistake_that_was_cancelled_is_nowhere(shop: Shop) -> None:
    before = balance(shop)
    shop.record("run", days_ago=6, label="mistake", route="Plate", charge="10 Ah")
    assert balance(shop) != before
    shop.record("cancellation", entry="mistake", reason="Never happened.")
    assert balance(shop) == before


def test_an_unknown_content_makes_the_sums_unknown_not_zero(shop: Shop) -> None:
    shop.tank("Old rinse", "10 L")
    shop.record("opening", days_ago=5, vessel="Old rinse", volume="5 L")
    found = balance(shop)
    assert (found.closing.value, found.unaccounted.value, found.smallest_visible) == (None, None, None)
    assert balance(shop, until=6).closing.value == 1000 * G


def test_an_unknown_flow_is_named(shop: Shop) -> None:
    """Into the drum went nobody knows how much copper: the flow stands there without a figure."""
    shop.tank("Old rinse", "10 L")
    shop.record("opening", days_ago=5, vessel="Old rinse", volume="5 L")
    shop.drum("Drum", reactivity=("unknown",))
    shop.record("drum-off", days_ago=4, source="Old rinse", target="Drum", volume="1 L", happened=True)
    shop.record("hand-over", days_ago=3, container="Drum", receiver="The yard")
    found = balance(shop)
    assert found.boundaries["receiver"].value is None
    flows = {(str(flow.source), str(flow.target)): flow.amount.value for flow in found.flows}
    assert flows["Old rinse", "Drum"] is None
    assert flows["Drum", "receiver"] is None


def test_a_vessel_called_like_a_boundary_is_a_vessel(shop: Shop) -> None:
    """Somebody calls a tank "parts": what is poured into it stays in the workshop."""
    shop.tank("parts", "10 L")
    shop.record("move", days_ago=5, source="Copper", target="parts", volume="1 L")
    (poured,) = (flow for flow in balance(shop, until=4).flows if flow.between_vessels)
    assert isinstance(poured.target, Vessel)
    assert poured.target.name == "parts"
    assert "parts" not in balance(shop, until=4).boundaries


def test_flows_pair_both_ends(shop: Shop) -> None:
    run_a_month(shop)
    found = balance(shop)
    flows = {(str(flow.source), str(flow.target)): flow for flow in found.flows}
    assert {("Copper", "parts"), ("Copper", "Rinse"), ("Rinse", "Drum"), ("Drum", "receiver")} <= set(flows)
    assert flows["Rinse", "Drum"].between_vessels
    assert not flows["Copper", "parts"].between_vessels
    assert all((one.amount.value or 0) >= (other.amount.value or 0) for one, other in pairwise(found.flows))


def test_of_a_metal_that_nobody_has_there_is_no_balance(shop: Shop, stranger: Membership) -> None:
    assert list_metals_for(shop.member) == ["Cu"]
    assert list_metals_for(stranger) == []
    with pytest.raises(NotFoundError):
        balance(shop, metal="Au")
    with pytest.raises(NotFoundError):
        get_book_balance(stranger, "Cu", shop.now - timedelta(days=9), shop.now)


def test_the_main_metal_is_the_one_of_which_most_is_held(shop: Shop, stranger: Membership) -> None:
    """Ag comes before Cu by its name; there is more of it than the kilogram of copper only at last."""
    shop.holder("Flask", shop.product("Silver grain", {"Ag": "100 %"}))
    shop.record("receipt", days_ago=5, vessel="Flask", amount="0.9 kg")
    assert (list_metals_for(shop.member), find_main_metal_for(shop.member)) == (["Ag", "Cu"], "Cu")
    shop.record("receipt", days_ago=4, vessel="Flask", amount="0.2 kg")
    assert find_main_metal_for(shop.member) == "Ag"
    assert find_main_metal_for(stranger) is None


def test_it_asks_as_often_for_one_entry_as_for_many(shop: Shop) -> None:
    counts: list[int] = []
    for _ in range(3):
        with CaptureQueriesContext(connection) as queries:
            balance(shop)
        counts.append(len(queries))
        run = shop.record("run", days_ago=6, route="Plate", charge="1 Ah")
        assert run.sequence > 0
    assert counts == [8, 8, 8]
