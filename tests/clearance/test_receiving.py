"""Jars come in: products that are not in the register yet, containers alike, what was received into each."""

from collections.abc import Callable
from dataclasses import replace
from datetime import date, timedelta
from typing import Any
from uuid import UUID, uuid4

import pytest
from django_scopes import scope

from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_event
from chemicals.ledger.models import Vessel
from chemicals.ledger.periods import close_period
from chemicals.ledger.selectors import read_contents
from chemicals.ledger.verify import verify_projection
from chemicals.register.models import Product
from chemicals.register.selectors import get_current_revision
from chemicals.science.quantity import parse
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from chemicals.workshop.services import create_place
from compliance.clearance.receiving import JarInput, NewProductInput, Received, receive_containers
from tests.process.shop import KG, Shop

Receive = Callable[..., Received]


@pytest.fixture
def salt(shop: Shop) -> Product:
    return shop.product("Salt", {"CuSO4.5H2O": "99 %"})


@pytest.fixture
def receive(shop: Shop) -> Receive:
    """Return a function that lets containers come in."""

    def act(key: UUID | None = None, **said: Any) -> Received:
        amount = said.pop("amount", None)
        jar = JarInput(amount=None if amount is None else parse(amount, said.pop("of", "mass")), **said)
        return receive_containers(actor=shop.member, now=shop.now, key=key or uuid4(), jar=jar)

    return act


def refused(receive: Receive, **said: Any) -> dict[str, str]:
    with pytest.raises(InvalidInputError) as caught:
        receive(**said)
    return {error.field: error.message for error in caught.value.errors}


def count_rows(shop: Shop) -> tuple[int, int, int]:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.count(), Product.objects.count(), Entry.objects.count()


def test_a_jar_of_a_known_product_is_set_up_and_received(shop: Shop, receive: Receive, salt: Product) -> None:
    shelf = create_place(actor=shop.member, name="Shelf")
    keeps = date(2027, 1, 1)
    found = receive(product=salt, amount="1 kg", lot="A 7", place=shelf, expires_on=keeps)
    (jar,) = found.vessels
    assert (jar.name, jar.kind, jar.product, jar.place, jar.expires_on) == ("Salt 1", "stock", salt, shelf, keeps)
    held = read_contents(jar).mass
    assert held is not None
    assert held.amount == KG
    with scope(workshop=shop.member.workshop):
        entry = Entry.objects.latest("pk")
        assert entry.kind == "receipt"
        assert read_event(entry).lot == "A 7"  # type: ignore[attr-defined]  # a receipt has a lot
        assert verify_projection(shop.member.workshop) == []


def test_a_new_product_comes_with_its_jar_and_nothing_is_claimed_of_it(shop: Shop, receive: Receive) -> None:
    new = NewProductInput(name="Brightener", supplier="Invented Supply", form="liquid")
    (jar,) = receive(new_product=new, amount="500 mL", of="volume").vessels
    assert jar.name == "Brightener 1"
    assert jar.product is not None
    revision = get_current_revision(jar.product)
    assert (revision.number, revision.form, revision.complete) == (1, "liquid", False)
    assert revision.reactivity == []
    assert read_contents(jar).incomplete, "nobody said what is in it, so anything may be"


def test_alike_containers_are_numbered_and_each_has_its_entry(shop: Shop, receive: Receive, salt: Product) -> None:
    shop.holder("Tub 4", salt)
    before = count_rows(shop)[2]
    found = receive(product=salt, name="Tub 3", count=3, amount="1 kg")
    assert [jar.name for jar in found.vessels] == ["Tub 3", "Tub 5", "Tub 6"]
    assert len({jar.code for jar in found.vessels}) == 3
    assert count_rows(shop)[2] == before + 3
    assert [jar.name for jar in receive(product=salt, name="Can", count=2).vessels] == ["Can 1", "Can 2"]


@pytest.mark.parametrize(
    ("product", "taken", "name"),
    [("Salt 20", [], "Salt 20 1"), ("Salt", ["Salt 1", "Salt 2"], "Salt 3"), ("S" * 100, [], "S" * 78 + " 1")],
)
def test_without_a_name_it_has_the_next_free_one_of_its_product(
    shop: Shop, receive: Receive, product: str, taken: list[str], name: str
) -> None:
    made = shop.product(product, {})
    for each in taken:
        shop.holder(each, made)
    assert receive(product=made).vessels[0].name == name


def test_an_empty_container_needs_no_entry(shop: Shop, receive: Receive, salt: Product) -> None:
    before = count_rows(shop)[2]
    (jar,) = receive(product=salt, name="Empty jar", capacity=10**9).vessels
    assert jar.capacity == 10**9
    assert count_rows(shop)[2] == before


def test_it_may_have_come_on_an_earlier_day(shop: Shop, receive: Receive, salt: Product) -> None:
    day = shop.now.date() - timedelta(days=4)
    receive(product=salt, amount="1 kg", received_on=day, opened_on=day)
    with scope(workshop=shop.member.workshop):
        entry = Entry.objects.latest("pk")
    assert (entry.occurred_at.date(), entry.precision) == (day, "day")
    receive(product=salt, amount="1 kg", received_on=shop.now.date())
    with scope(workshop=shop.member.workshop):
        assert Entry.objects.latest("pk").occurred_at == shop.now


def test_the_same_key_gives_the_same_containers(shop: Shop, receive: Receive) -> None:
    key, new = uuid4(), NewProductInput(name="Brightener", form="liquid")
    said: dict[str, Any] = {"new_product": new, "count": 2, "amount": "1 kg"}
    first = receive(key, **said)
    rows = count_rows(shop)
    again = receive(key, **said)
    assert first.is_new
    assert not again.is_new
    assert again.vessels == first.vessels
    assert count_rows(shop) == rows


CHANGED: list[dict[str, Any]] = [
    {"count": 3},
    {"amount": "2 kg"},
    {"amount": None},
    {"lot": "B"},
    {"new_product": NewProductInput(name="Another", form="solid")},
]


@pytest.mark.parametrize("changed", CHANGED)
def test_the_same_key_is_refused_for_others(receive: Receive, changed: dict[str, Any]) -> None:
    key, said = uuid4(), {"new_product": NewProductInput(name="Salz", form="solid"), "count": 2, "amount": "1 kg"}
    receive(key, **said)
    with pytest.raises(ConflictError):
        receive(key, **{**said, **changed})


def test_the_same_key_without_amounts_is_refused_with_one(receive: Receive, salt: Product) -> None:
    key = uuid4()
    receive(key, product=salt)
    with pytest.raises(ConflictError):
        receive(key, product=salt, amount="1 kg")


def test_a_key_of_one_workshop_says_nothing_in_another(receive: Receive, salt: Product, stranger: Membership) -> None:
    key, jar = uuid4(), JarInput(new_product=NewProductInput(name="Salt", form="solid"))
    (ours,) = receive(key, product=salt).vessels
    (theirs,) = receive_containers(actor=stranger, now=ours.created_at, key=key, jar=jar).vessels
    assert theirs.workshop == stranger.workshop
    assert theirs.uuid != ours.uuid


def test_all_that_is_wrong_comes_at_once_and_nothing_is_written(shop: Shop, receive: Receive, salt: Product) -> None:
    shop.holder("Taken", salt)
    before, tomorrow = count_rows(shop), shop.now.date() + timedelta(days=1)
    new = NewProductInput(name="", supplier="x\x00", form="jelly")
    errors = refused(
        receive,
        new_product=new,
        name="Taken",
        amount="0 kg",
        lot="a\nb",
        capacity=0,
        received_on=tomorrow,
        opened_on=tomorrow,
    )
    product = {"new_product.name", "new_product.supplier", "new_product.form"}
    assert set(errors) == {*product, "name", "amount", "lot", "capacity", "opened_on"} | {"received_on"}
    assert count_rows(shop) == before


def test_either_a_product_of_the_register_or_a_new_one(receive: Receive, salt: Product) -> None:
    assert set(refused(receive)) == {"product"}
    assert (
        "not both" in refused(receive, product=salt, new_product=NewProductInput(name="New", form="solid"))["product"]
    )
    errors = refused(receive, new_product=NewProductInput(name="Salt", supplier="Anyone", form="solid"))
    assert "in the register" in errors["new_product.name"]


@pytest.mark.parametrize("count", [0, 21, -1])
def test_at_least_one_and_at_most_twenty_are_alike(receive: Receive, salt: Product, count: int) -> None:
    assert set(refused(receive, product=salt, count=count)) == {"count"}


def test_names_that_cannot_be_are_refused_with_the_rest(receive: Receive, salt: Product) -> None:
    assert set(refused(receive, product=salt, name="a\nb", count=2)) == {"name"}
    assert set(refused(receive, product=salt, name="x" * 81, count=2)) == {"name"}
    assert set(refused(receive, product=salt, lot="x" * 61, amount="1 kg")) == {"lot"}
    assert set(refused(receive, product=salt, lot="A")) == {"amount"}


def test_a_day_of_a_closed_period_is_refused(shop: Shop, receive: Receive, salt: Product, owner: Membership) -> None:
    midnight = shop.now.astimezone(shop.member.workshop.zone).replace(hour=0, minute=0)
    with scope(workshop=shop.member.workshop):
        close_period(actor=owner, now=shop.now, key=uuid4(), until=midnight)
    before = count_rows(shop)
    errors = refused(
        receive, product=salt, amount="1 kg", received_on=shop.now.date() - timedelta(days=3), name="x" * 90
    )
    assert "closed" in errors["received_on"]
    assert "name" in errors
    assert count_rows(shop) == before


def test_only_who_may_write_in_the_same_workshop(
    shop: Shop, salt: Product, observer: Membership, stranger: Membership
) -> None:
    jar = JarInput(product=salt)
    for member in (observer, stranger):
        with pytest.raises(NotPermittedError):
            receive_containers(actor=member, now=shop.now, key=uuid4(), jar=jar)
    elsewhere = create_place(actor=stranger, name="Elsewhere")
    with pytest.raises(NotPermittedError):
        receive_containers(actor=shop.member, now=shop.now, key=uuid4(), jar=replace(jar, place=elsewhere))
