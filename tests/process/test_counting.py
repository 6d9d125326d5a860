"""A count day: what may be scanned, what may be said, how far the count has come."""

from collections.abc import Iterator

import pytest
from django_scopes import scope
from pytest_django import DjangoAssertNumQueries

from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.models import Vessel
from chemicals.process.counting.selectors import (
    find_countable_for,
    list_count_days_for,
    list_open_counts_for,
    read_code,
    reckon_count,
)
from chemicals.process.counting.services import SeenInput, abandon_count, note_line, start_count
from chemicals.process.fields import AmountField, read_amount
from chemicals.process.models import CountDay, Seen
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from chemicals.workshop.services import create_place
from tests.process.shop import Shop

EITHER = AmountField("", dimensions=("mass", "volume"))
pytestmark = pytest.mark.django_db


@pytest.fixture
def day(shop: Shop) -> Iterator[CountDay]:
    with scope(workshop=shop.member.workshop):
        yield start_count(actor=shop.member, now=shop.now)


def see(shop: Shop, day: CountDay, name: str, typed: str = "", *, sd: str = "", said: Seen = Seen.AMOUNT) -> None:
    """Note what was seen of a container."""
    amount, doubt = (read_amount(EITHER, text) if text else None for text in (typed, sd))
    seen = SeenInput(said=said, amount=amount, sd=doubt)
    note_line(actor=shop.member, now=shop.now, day=day, vessel=Vessel.objects.get(name=name), seen=seen)


def refusal(shop: Shop, day: CountDay, name: str, typed: str = "", **more: str) -> dict[str, str]:
    """Return why something cannot be noted, by field."""
    with pytest.raises(InvalidInputError) as caught:
        see(shop, day, name, typed, **more)  # type: ignore[arg-type]  # texts only
    return {error.field: error.message for error in caught.value.errors}


@pytest.mark.parametrize(
    "text", ["ab2-c3d", " AB2C3D ", "https://shop.example/c/AB2C3D", "http://10.0.0.7:8000/c/ab2c3d/?from=label#x"]
)
def test_the_code_is_read_out_of_whatever_a_scanner_types(text: str) -> None:
    assert read_code(text) == "AB2C3D"


def test_a_code_that_is_no_container_of_here_is_answered_with_a_remedy(shop: Shop, twin: Shop, day: CountDay) -> None:
    with scope(workshop=twin.member.workshop):
        foreign = Vessel.objects.get(name="Jar").code
    tank, drum = Vessel.objects.get(name="Copper"), Vessel.objects.get(name="Drum")
    for code, told in {
        "": "Scan the code",
        "NOSUCH": "No container of this workshop has the code NOSUCH.",
        foreign: f"No container of this workshop has the code {foreign}.",
        tank.code: "Copper is a tank. Read its level on its own page.",
        drum.code: "Drum is a waste container: nothing in it is counted.",
    }.items():
        with pytest.raises(InvalidInputError) as caught:
            find_countable_for(shop.member, code)
        assert caught.value.errors[0].message.startswith(told)
    jar = Vessel.objects.get(name="Jar")
    assert find_countable_for(shop.member, f"https://shop.example/c/{jar.code}") == jar


def test_what_can_be_noted_is_checked_where_it_is_typed(shop: Shop, day: CountDay) -> None:
    assert refusal(shop, day, "Jar") == {"amount": "Write what is there, without the container: 1.2 kg, 0.8 L."}
    assert "by its weight" in refusal(shop, day, "Jar", "1 L")["amount"]
    assert "same kind" in refusal(shop, day, "Jar", "1 kg", sd="1 mL")["sd"]
    assert "is a tank" in refusal(shop, day, "Copper", "1 L")["code"]
    assert reckon_count(shop.member, day).rows == []


def test_one_count_is_open_at_a_place_and_others_elsewhere(shop: Shop, day: CountDay) -> None:
    shelf = create_place(actor=shop.member, name="Shelf")
    with pytest.raises(ConflictError):
        start_count(actor=shop.member, now=shop.now)
    start_count(actor=shop.member, now=shop.now, place=shelf)
    with pytest.raises(ConflictError):
        start_count(actor=shop.member, now=shop.now, place=shelf)


def test_progress_is_of_what_stands_there(shop: Shop, day: CountDay) -> None:
    shelf = create_place(actor=shop.member, name="Shelf")
    jar = Vessel.objects.get(name="Jar")
    change_vessels(actor=shop.member, now=shop.now, vessels=[jar], care=CareInput(place=shelf))
    here = start_count(actor=shop.member, now=shop.now, place=shelf)
    see(shop, here, "Bottle", said=Seen.AGREES)
    assert [(row.day, row.done, row.all) for row in list_open_counts_for(shop.member)] == [(day, 0, 3), (here, 0, 1)]
    see(shop, here, "Jar", said=Seen.MISSING)
    see(shop, day, "Jar", "1 kg")
    assert [(row.done, row.all) for row in list_open_counts_for(shop.member)] == [(1, 3), (1, 1)]
    reckoning = reckon_count(shop.member, here)
    assert [(row.line.vessel.name, row.elsewhere) for row in reckoning.rows] == [("Bottle", True), ("Jar", False)]
    assert (reckoning.done, reckoning.all, reckoning.unseen) == (1, 1, [])
    assert [vessel.name for vessel in reckon_count(shop.member, day).unseen] == ["Anodes", "Bottle"]


@pytest.mark.parametrize("names", [["Jar"], ["Jar", "Bottle", "Anodes"]])
def test_reads_take_as_many_queries_for_one_line_as_for_three(
    shop: Shop, day: CountDay, names: list[str], django_assert_num_queries: DjangoAssertNumQueries
) -> None:
    for name in names:
        see(shop, day, name, said=Seen.AGREES)
    with django_assert_num_queries(3):
        assert len(reckon_count(shop.member, day).rows) == len(names)
    with django_assert_num_queries(3):
        assert [row.done for row in list_open_counts_for(shop.member)] == [len(names)]
    with django_assert_num_queries(1):
        assert [row.seen for row in list_count_days_for(shop.member)] == [len(names)]  # type: ignore[attr-defined]  # annotated


def test_observers_and_strangers_note_nothing(
    shop: Shop, day: CountDay, observer: Membership, stranger: Membership
) -> None:
    jar, seen = Vessel.objects.get(name="Jar"), SeenInput(said=Seen.AGREES)
    for member in (observer, stranger):
        with pytest.raises(NotPermittedError):
            note_line(actor=member, now=shop.now, day=day, vessel=jar, seen=seen)
        with pytest.raises(NotPermittedError):
            abandon_count(actor=member, now=shop.now, day=day)
    with pytest.raises(NotPermittedError):
        start_count(actor=observer, now=shop.now)
