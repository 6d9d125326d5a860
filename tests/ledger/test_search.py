"""Entries are found by what they say, who recorded them, and what followed; movements and balances likewise."""

from datetime import timedelta
from typing import Any
from uuid import uuid4

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext

from chemicals.books.fold.state import EVERY
from chemicals.ledger.dated import list_balances_before
from chemicals.ledger.models import Vessel
from chemicals.ledger.search import RECORDED, Search, find_entries, find_postings
from chemicals.ledger.selectors import get_balances_before, list_components_for
from chemicals.workshop.models import Membership
from tests.process.shop import G, L, Shop


@pytest.fixture
def told(shop: Shop) -> Shop:
    """A shop in which an analysis waits, a run has a name, a tub came with a lot, and a level was read by mistake."""
    product = shop.product("Blue", {"CuSO4.5H2O": "98 %"}, reactivity=("acid",))
    shop.holder("Tub", product)
    shop.record("receipt", days_ago=8, label="receipt", vessel="Tub", amount="5 kg", lot="Müller 7/30%")
    shop.record("run", days_ago=6, label="run", route="Plate", charge="10 Ah", parts='12 knobs, 8" and _under_')
    shop.record("analysis", days_ago=5, label="analysis", vessel="Rinse", metal="Ni", result="1 mg/L")
    shop.record("level-reading", days_ago=4, label="level", vessel="Copper", volume="19 L")
    shop.record("cancellation", label="cancellation", entry="level", reason="the wrong tank")
    return shop


def found(shop: Shop, **wanted: Any) -> list[str]:
    """Return the names of the entries that are found, in order of recording; unnamed ones by their kind."""
    names = {entry.pk: name for name, entry in shop.entries.items()}
    rows = find_entries(shop.member, Search(**wanted)).order_by("sequence")
    return [names.get(entry.pk) or entry.kind for entry in rows]


EVERYTHING = ["opening", "make-up", "receipt", "run", "analysis", "level", "cancellation"]


def test_nothing_said_finds_everything(told: Shop) -> None:
    assert found(told) == EVERYTHING


def test_by_kind_verdict_person_and_itself(told: Shop, owner: Membership) -> None:
    assert found(told, kind="run") == ["run"]
    assert found(told, verdict="allowed") == EVERYTHING
    assert found(told, verdict="incident") == []
    assert found(told, member=told.member.uuid) == EVERYTHING
    assert found(told, member=owner.uuid) == []
    assert found(told, entry=told.entries["run"].uuid) == ["run"]


def test_by_vessel_also_what_was_cancelled_and_what_posts_nothing(told: Shop) -> None:
    assert found(told, vessel=told.find("vessels", "Copper")) == ["opening", "run", "level"]
    assert found(told, vessel=told.find("vessels", "Rinse")) == ["make-up", "run", "analysis"]
    assert found(told, vessel=uuid4()) == []


def test_by_component_what_moved_it_and_what_analysed_it(told: Shop) -> None:
    assert found(told, component="Cu") == ["opening", "receipt", "run"]
    assert found(told, component="Ni") == ["analysis"]
    assert found(told, component="volume") == ["opening", "make-up", "run"]


def test_by_the_time_it_happened_or_the_time_it_was_recorded(told: Shop) -> None:
    since, until = told.now - timedelta(days=6), told.now - timedelta(days=4)
    assert found(told, start=since, end=until) == ["run", "analysis"]
    assert found(told, start=since, end=until, by=RECORDED) == []
    assert found(told, start=told.now, by=RECORDED) == EVERYTHING


@pytest.mark.parametrize(
    ("text", "names"),
    [
        ("knobs", ["run"]),
        ("KNOBS", ["run"]),
        ('8"', ["run"]),
        ("_under_", ["run"]),
        ("xunderx", []),
        ("müller", ["receipt"]),
        ("Mu\u0308ller", ["receipt"]),
        ("30%", ["receipt"]),
        ("3%7", []),
        ("wrong TANK", ["cancellation"]),
        ("payload", []),
        ("Rinse", []),
    ],
)
def test_by_words_that_people_wrote(told: Shop, text: str, names: list[str]) -> None:
    assert found(told, text=text) == names


def test_by_findings_and_by_cancellation(told: Shop) -> None:
    assert found(told, cancelled=True) == ["level"]
    assert found(told, findings=True) == []
    told.record("drum-off", label="odd", happened=True, source="Rinse", target=told.drum("Drum").vessel.name)
    told.record("drum-off", label="again", happened=True, source="Rinse", target="Drum", volume="1 L")
    assert found(told, findings=True) == ["again"]


def test_conditions_hold_together(told: Shop) -> None:
    assert found(told, kind="run", component="Cu", text="knobs", start=told.now - timedelta(days=7)) == ["run"]
    assert found(told, kind="run", component="Ni") == []


def test_nobody_finds_the_entries_of_others(told: Shop, stranger: Membership) -> None:
    for wanted in (
        Search(),
        Search(component="Cu"),
        Search(text="knobs"),
        Search(vessel=told.find("vessels", "Rinse")),
    ):
        assert not find_entries(stranger, wanted).exists()
        assert not find_postings(stranger, wanted).exists()
    assert list_balances_before(stranger, told.now) == []
    assert list_components_for(stranger) == []


def test_every_search_is_one_query(told: Shop) -> None:
    everything = Search(
        kind="run", vessel=told.find("vessels", "Rinse"), component="Cu", member=told.member.uuid, verdict="allowed",
        start=told.now - timedelta(days=9), end=told.now, text="knobs",
    )  # fmt: skip
    with CaptureQueriesContext(
        connection,
    ) as asked:
        assert [entry.kind for entry in find_entries(told.member, everything)] == ["run"]
        assert find_postings(told.member, everything).count() > 0
    assert len(asked) == 2


def test_the_postings_of_what_is_found_sum_to_zero(told: Shop) -> None:
    rows = list(find_postings(told.member, Search(kind="run")).values_list("entry_id", "transfer", "amount"))
    assert len(rows) >= 10
    assert sum(amount for _entry, _transfer, amount in rows) == 0
    assert len({(entry, transfer) for entry, transfer, _amount in rows}) == len(rows) // 2


def test_of_a_vessel_and_a_component_only_its_own_postings_are_found(told: Shop) -> None:
    wanted = Search(vessel=told.find("vessels", "Copper"), component="Cu")
    amounts = list(find_postings(told.member, wanted).values_list("amount", flat=True))
    assert amounts[0] == 1000 * G
    assert all(amount < 0 for amount in amounts[1:])
    assert sum(amounts) == told.holds(Vessel._base_manager.get(name="Copper"))["Cu"]


def test_what_vessels_held_on_a_date(told: Shop) -> None:
    before = told.now - timedelta(days=7)
    rows = {(row.vessel.name, row.component): row for row in list_balances_before(told.member, before)}
    assert (rows["Copper", "Cu"].amount, rows["Copper", "volume"].amount) == (1000 * G, 20 * L)
    assert rows["Rinse", "volume"].amount == 10 * L
    assert rows["Tub", "Cu"].amount is not None
    assert list_balances_before(told.member, told.now - timedelta(days=11)) == []
    summed = get_balances_before(told.member.workshop, before)
    assert {(str(row.vessel.uuid), row.component): row.amount for row in rows.values()} == summed


def test_what_is_unknown_on_a_date_has_no_amount(told: Shop) -> None:
    told.tank("Old bath", kind="bath", metal="Cu", valence=2)
    told.record("opening", vessel="Old bath", volume="20 L", days_ago=1)
    rows = list_balances_before(told.member, told.now, vessel=told.find("vessels", "Old bath"))
    assert [(row.component, row.amount) for row in rows] == [
        ("volume", 20 * L), ("gross mass", rows[1].amount), (EVERY, None),
    ]  # fmt: skip
    assert [row.vessel.name for row in list_balances_before(told.member, told.now, component="Cu")] == [
        "Copper", "Rinse", "Tub",
    ]  # fmt: skip


def test_components_are_listed_metals_first(told: Shop) -> None:
    assert list_components_for(told.member) == ["Cu", "volume", "gross mass"]
