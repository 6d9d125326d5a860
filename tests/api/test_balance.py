"""The book balance of a metal over whole days of the workshop."""

import pytest

from tests.api.conftest import Caller, Shop, errors_of


def plate(api: Caller, shop: Shop) -> None:
    """Open bath and rinse in January, plate in February."""
    held = [{"metal": "Cu", "amount": "50 g/L"}]
    early = {"occurred_at": "2026-01-10", "complete": True}
    api.record("opening", vessel=str(shop.bath.uuid), volume="20 L", held=held, **early)
    api.record("opening", vessel=str(shop.rinse.uuid), volume="20 L", **early)
    said = {"weight_before": "5.6 g", "weight_after": "7.7 g", "charge": "1.8 Ah", "occurred_at": "2026-02-01"}
    assert api.record("run", route=str(shop.route.uuid), **said).status_code == 201


def test_where_every_gram_went(api: Caller, shop: Shop) -> None:
    plate(api, shop)
    assert api.get("balances/").json() == {"metals": ["Cu"]}
    said = api.get("balances/Cu/", {"start": "2026-01-01", "end": "2026-02-28"}).json()
    assert (said["start"], said["end"]) == ("2025-12-31T23:00:00Z", "2026-02-28T23:00:00Z")
    boundaries = {row["name"]: row["net"]["base"] for row in said["boundaries"]}
    assert boundaries["parts"] == pytest.approx(-2_100_000, rel=1e-3)  # the deposit, and what the load dragged along
    assert said["opening"]["base"] == 0
    assert said["closing"]["base"] == sum(boundaries.values())
    rows = {row["vessel"]["name"]: row for row in said["vessels"]}
    rinse = {name: figure["base"] for name, figure in rows["Drag-out rinse"].items() if name != "vessel"}
    assert rinse["received"] - rinse["given"] == rinse["closing"] > 0
    assert {(row["source"], row["target"], row["between_vessels"]) for row in said["flows"]} >= {
        ("opening", "Copper bath", False), ("Copper bath", "parts", False), ("Copper bath", "Drag-out rinse", True),
    }  # fmt: skip
    assert said["unaccounted"]["base"] == 0


def test_both_ends_of_the_period_belong_to_it(api: Caller, shop: Shop) -> None:
    plate(api, shop)

    def plated(**query: str) -> int:
        rows = api.get("balances/Cu/", query).json()["boundaries"]
        return sum(row["net"]["base"] for row in rows if row["name"] == "parts")

    plated_in_all = plated()
    assert plated_in_all < 0
    assert plated(start="2026-02-01", end="2026-02-01") == plated_in_all
    assert plated(start="2026-02-02", end="2026-02-28") == 0
    assert plated(start="2026-01-01", end="2026-01-31") == 0


def test_a_period_or_metal_that_cannot_be_is_named(api: Caller, shop: Shop) -> None:
    plate(api, shop)
    assert set(errors_of(api.get("balances/Cu/", {"start": "2026-02-30", "end": "soon"}), 400)) == {"start", "end"}
    assert set(errors_of(api.get("balances/Cu/", {"start": "2026-02-02", "end": "2026-02-01"}), 400)) == {"end"}
    assert errors_of(api.get("balances/Au/"), 404)
