"""What changes of a vessel without anything being poured: its place, when it was opened, until when it keeps."""

from collections.abc import Iterator
from datetime import date, timedelta
from typing import Any

import pytest
from django_scopes import scope

from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.models import Vessel, VesselChange, VesselKind
from chemicals.ledger.selectors import list_changes_of
from chemicals.ledger.services import create_vessel
from chemicals.register.models import Product
from chemicals.workshop.errors import InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from chemicals.workshop.services import create_place
from tests.process.shop import Shop


@pytest.fixture(autouse=True)
def _inside(shop: Shop) -> Iterator[None]:
    with scope(workshop=shop.member.workshop):
        yield


@pytest.fixture
def jars(shop: Shop) -> list[Vessel]:
    """Return two jars of salt: one is full, one was never filled."""
    salt = Product.objects.get(name="Salt")
    jars = [shop.holder(name, salt) for name in ("Jar 1", "Jar 2")]
    shop.record("receipt", days_ago=3, vessel="Jar 1", amount="1 kg")
    return jars


def test_all_jars_change_alike_and_each_change_is_noted(shop: Shop, jars: list[Vessel]) -> None:
    shelf = create_place(actor=shop.member, name="Shelf")
    day = shop.now.date()
    care = CareInput(place=shelf, opened_on=day, expires_on=day + timedelta(days=100))
    found = change_vessels(actor=shop.member, now=shop.now, vessels=jars, care=care)
    assert {(jar.name, jar.place, jar.opened_on) for jar in found} == {("Jar 1", shelf, day), ("Jar 2", shelf, day)}
    told = [(note.fact, note.before, note.after, note.changed_by) for note in list_changes_of(jars[0])]
    assert ("place", "", "Shelf", shop.member) in told
    assert ("opened", "", day.isoformat(), shop.member) in told
    assert len(told) == 3


def test_only_what_holds_something_as_bought_begins_with_days(shop: Shop) -> None:
    made: Any = {"actor": shop.member, "now": shop.now, "name": "Sludge tub", "kind": VesselKind.SLUDGE}
    with pytest.raises(InvalidInputError) as caught:
        create_vessel(**made, expires_on=date(2027, 1, 1))
    assert [error.field for error in caught.value.errors] == ["vessels"]
    with pytest.raises(InvalidInputError) as caught:
        create_vessel(**{**made, "kind": VesselKind.STOCK}, opened_on=shop.now.date() + timedelta(days=1))
    assert [error.field for error in caught.value.errors] == ["opened_on"]


def test_what_stays_as_it_is_is_not_noted(shop: Shop, jars: list[Vessel]) -> None:
    day = date(2027, 1, 1)
    change_vessels(actor=shop.member, now=shop.now, vessels=jars[:1], care=CareInput(expires_on=day))
    change_vessels(actor=shop.member, now=shop.now, vessels=jars, care=CareInput(expires_on=day))
    assert [list_changes_of(jar).count() for jar in jars] == [1, 1]


def test_a_day_is_taken_back(shop: Shop, jars: list[Vessel]) -> None:
    change_vessels(actor=shop.member, now=shop.now, vessels=jars, care=CareInput(opened_on=shop.now.date()))
    (jar, _) = change_vessels(actor=shop.member, now=shop.now, vessels=jars, care=CareInput(opened_on=None))
    assert jar.opened_on is None
    assert list_changes_of(jar).first() is not None


def test_nothing_changes_if_one_of_them_may_not(shop: Shop, jars: list[Vessel]) -> None:
    with pytest.raises(InvalidInputError, match="Jar 1 is not known to be empty"):
        change_vessels(actor=shop.member, now=shop.now, vessels=jars, care=CareInput(gone=True))
    assert not VesselChange.objects.filter(vessel__in=jars).exists()
    assert Vessel.objects.get(pk=jars[1].pk).gone_at is None


def test_an_empty_jar_is_gone_and_may_come_back(shop: Shop, jars: list[Vessel]) -> None:
    (jar,) = change_vessels(actor=shop.member, now=shop.now, vessels=jars[1:], care=CareInput(gone=True))
    assert jar.gone_at == shop.now
    (jar,) = change_vessels(actor=shop.member, now=shop.now, vessels=[jar], care=CareInput(gone=False))
    assert jar.gone_at is None
    assert [(note.fact, note.after) for note in list_changes_of(jar)] == [
        ("gone", ""),
        ("gone", shop.now.date().isoformat()),
    ]


def test_all_that_is_wrong_is_said_at_once(shop: Shop, jars: list[Vessel]) -> None:
    care = CareInput(opened_on=shop.now.date() + timedelta(days=2), gone=True)
    with pytest.raises(InvalidInputError) as refused:
        change_vessels(actor=shop.member, now=shop.now, vessels=[*jars, Vessel.objects.get(name="Rinse")], care=care)
    said = [(error.field, error.message.split(".")[0]) for error in refused.value.errors]
    assert ("opened_on", "This day is still to come") in said
    assert ("vessels", "Rinse holds nothing as bought") in said
    assert ("vessels", "Jar 1 is not known to be empty") in said


def test_a_name_that_is_taken_is_refused(shop: Shop, jars: list[Vessel]) -> None:
    with pytest.raises(InvalidInputError) as refused:
        change_vessels(actor=shop.member, now=shop.now, vessels=jars[:1], care=CareInput(name="Jar 2"))
    assert [error.field for error in refused.value.errors] == ["name"]


def test_strangers_and_observers_change_nothing(
    shop: Shop, jars: list[Vessel], stranger: Membership, observer: Membership
) -> None:
    for member in (stranger, observer):
        with pytest.raises(NotPermittedError):
            change_vessels(actor=member, now=shop.now, vessels=jars, care=CareInput(opened_on=shop.now.date()))
    assert not VesselChange.objects.filter(vessel__in=jars).exists()


def test_what_is_found_by_its_name_is_found_by_the_new_one(shop: Shop, jars: list[Vessel]) -> None:
    change_vessels(actor=shop.member, now=shop.now, vessels=jars[:1], care=CareInput(name="Ätznatron, Glas"))
    assert Vessel.objects.filter(searched__contains="atznatron").count() == 1
