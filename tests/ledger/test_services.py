"""Vessels, and the projection: incremental and refolded alike, exact, rebuilt from the journal at any time."""

from datetime import timedelta
from typing import Any

import pytest
from django.db.models import Sum
from django_scopes import scope

from chemicals.ledger.codes import ALPHABET, make_code, tidy_code
from chemicals.ledger.models import Content, Holding, Memory, Posting, Vessel, VesselKind
from chemicals.ledger.selectors import (
    find_workshop_of_code,
    get_balances_before,
    get_vessel_by_code_for,
    get_vessel_for,
    list_held,
    list_vessels_for,
    read_memory,
)
from chemicals.ledger.services import create_vessel, refold
from chemicals.ledger.verify import verify_projection
from chemicals.workshop.errors import InvalidInputError, NotFoundError, NotPermittedError
from chemicals.workshop.models import Membership
from tests.process.shop import ML, G, L, Shop


def vessel(shop: Shop, name: str) -> Vessel:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.get(name=name)


def run_a_week(shop: Shop) -> None:
    shop.record("run", days_ago=6, route="Plate", charge="10 Ah")
    shop.record("level-reading", days_ago=5, vessel="Copper", volume="19 L", sd="0.1 L")
    shop.record("top-up", days_ago=4, tank="Copper")
    shop.record("run", days_ago=3, route="Plate", charge="10 Ah")


def test_a_vessel_gets_a_code_that_gloves_can_type(shop: Shop) -> None:
    code = vessel(shop, "Copper").code
    assert len(code) == 6
    assert set(code) <= set(ALPHABET)
    assert not set("01ILO") & set(ALPHABET)
    assert len({make_code() for _ in range(100)}) == 100


@pytest.mark.parametrize("typed", ["{0}", "{1}", " {0} ", "{2}-{3}", "{2} {3}"])
def test_a_code_is_found_however_it_is_typed(shop: Shop, stranger: Membership, typed: str) -> None:
    bath = vessel(shop, "Copper")
    text = typed.format(bath.code, bath.code.lower(), bath.code[:3], bath.code[3:])
    assert tidy_code(text) == bath.code
    assert get_vessel_by_code_for(shop.member, text) == bath
    assert find_workshop_of_code(text) == shop.member.workshop
    with pytest.raises(NotFoundError):
        get_vessel_by_code_for(stranger, text)


@pytest.mark.parametrize(
    ("said", "fields"),
    [
        ({"name": ""}, ["name"]),
        ({"name": "Copper"}, ["name"]),
        ({"name": "x" * 81}, ["name"]),
        ({"name": "a\x07"}, ["name"]),
        ({"capacity": 0}, ["capacity"]),
        ({"capacity": 10**30}, ["capacity"]),
    ],
)
def test_a_vessel_is_refused_by_field(shop: Shop, said: dict[str, Any], fields: list[str]) -> None:
    known = {"kind": VesselKind.STOCK, "name": "Jar"} | said
    with pytest.raises(InvalidInputError) as caught:
        create_vessel(actor=shop.member, now=shop.now, **known)
    assert [error.field for error in caught.value.errors] == fields


def test_observers_put_up_nothing_and_strangers_see_nothing(
    shop: Shop, observer: Membership, stranger: Membership
) -> None:
    bath = vessel(shop, "Copper")
    with pytest.raises(NotPermittedError):
        create_vessel(actor=observer, now=shop.now, kind=VesselKind.STOCK, name="Jar")
    assert get_vessel_for(observer, bath.uuid) == bath
    with pytest.raises(NotFoundError):
        get_vessel_for(stranger, bath.uuid)
    assert list(list_vessels_for(stranger)) == []
    assert [row.name for row in list_vessels_for(observer, VesselKind.RINSE)] == ["Rinse"]


def test_folding_again_changes_nothing(shop: Shop) -> None:
    run_a_week(shop)
    before = shop.ledger()
    with scope(workshop=shop.member.workshop):
        kept = set(Posting.objects.values_list("pk", flat=True))
    refold(shop.member.workshop)
    assert shop.ledger() == before
    with scope(workshop=shop.member.workshop):
        assert set(Posting.objects.values_list("pk", flat=True)) == kept


def test_the_books_are_rebuilt_from_the_journal_alone(shop: Shop) -> None:
    run_a_week(shop)
    before = shop.ledger()
    with scope(workshop=shop.member.workshop):
        for table in (Posting, Content, Holding, Memory):
            table.objects.all().delete()
    assert verify_projection(shop.member.workshop) != []
    refold(shop.member.workshop)
    assert shop.ledger() == before
    assert shop.is_proved()


def test_rows_that_should_not_be_there_go_with_the_next_fold(shop: Shop) -> None:
    run_a_week(shop)
    before = shop.ledger()
    with scope(workshop=shop.member.workshop):
        posting = Posting.objects.filter(boundary="air").first()
        assert posting is not None
        posting.pk, posting.transfer = None, 77
        posting.save(force_insert=True)
    assert shop.ledger() != before
    assert not shop.is_proved()
    refold(shop.member.workshop)
    assert shop.ledger() == before


def test_postings_of_an_entry_sum_to_zero_and_of_a_vessel_to_what_it_holds(shop: Shop) -> None:
    run_a_week(shop)
    with scope(workshop=shop.member.workshop):
        for row in Posting.objects.values("entry", "component").annotate(total=Sum("amount")).order_by():
            assert row["total"] == 0
        held = {(h.vessel_id, h.component_id): h.amount for h in Holding.objects.all()}
        sums = Posting.objects.exclude(vessel=None).values_list("vessel", "component").annotate(total=Sum("amount"))
        assert {(v, c): total for v, c, total in sums.order_by() if total} == {k: a for k, a in held.items() if a}


def test_what_was_held_at_a_moment(shop: Shop) -> None:
    run_a_week(shop)
    bath = str(vessel(shop, "Copper").uuid)
    at = {days: get_balances_before(shop.member.workshop, shop.now - timedelta(days=days)) for days in (11, 9, 4.5, 0)}
    assert at[11] == {}
    assert (at[9][bath, "volume"], at[9][bath, "Cu"]) == (20 * L, 1000 * G)
    assert at[4.5][bath, "volume"] == 19 * L
    assert at[0][bath, "volume"] == 20 * L - 10 * ML
    now = {row.component: row.amount for row in list_held(vessel(shop, "Copper"))}
    assert {component: at[0][bath, component] for component in now} == now


def test_an_unknown_is_no_zero_at_any_moment(shop: Shop) -> None:
    shop.tank("Old rinse", "10 L")
    shop.record("opening", days_ago=5, vessel="Old rinse", volume="5 L")
    shop.record("move", days_ago=4, source="Old rinse", target="Rinse", volume="1 L", happened=True)
    old, rinse = vessel(shop, "Old rinse"), vessel(shop, "Rinse")
    assert read_memory(old)[0]
    assert read_memory(rinse)[0]
    balances = get_balances_before(shop.member.workshop, shop.now)
    assert balances[str(old.uuid), ""] is None
    assert balances[str(rinse.uuid), ""] is None
    before = get_balances_before(shop.member.workshop, shop.now - timedelta(days=4.5))
    assert (str(rinse.uuid), "") not in before
    shop.record("analysis", days_ago=3, label="a", vessel="Rinse", metal="Cu", result="0.2 g/L")
    shop.record("acceptance", analysis="a")
    known = get_balances_before(shop.member.workshop, shop.now)
    assert known[str(rinse.uuid), "Cu"] == int(0.2 * 11 * G)
    assert known[str(old.uuid), ""] is None
    assert shop.is_proved()


def test_two_workshops_never_mix(shop: Shop, stranger: Membership) -> None:
    other = Shop(stranger, shop.now)
    other.tank("Copper", "20 L")
    other.record("opening", vessel="Copper", volume="1 L", held=[{"metal": "Cu", "amount": "1 g"}], complete=True)
    before = shop.ledger()
    other.record("level-reading", vessel="Copper", volume="0.9 L")
    assert shop.ledger() == before
    assert shop.is_proved()
    assert other.is_proved()
    with scope(workshop=stranger.workshop):
        codes = Holding.objects.values_list("component__code", flat=True)
        assert set(codes) == {"Cu", "volume", "gross mass"}
