"""Drop-offs: drafted, packed with a manifest, handed over; each step once."""

from datetime import date, timedelta
from pathlib import Path
from typing import Any

import pytest
from django_scopes import scope
from pytest_django import Settings

from chemicals.books.occurred import Occurred
from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_event
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotFoundError, NotPermittedError
from chemicals.workshop.models import Membership
from compliance.clearance.services import RefusedError
from compliance.documents.selectors import read_data
from compliance.dropoffs import services as dropoffs
from compliance.dropoffs.models import DropOff, Receiver, State
from compliance.dropoffs.selectors import (
    get_drop_off_for,
    get_receiver_for,
    list_drop_offs_for,
    list_ready_containers_for,
    list_receivers_for,
)
from compliance.waste import services as waste
from compliance.waste.models import WasteContainer
from tests.process.shop import KG, Shop


@pytest.fixture
def shop(worker: Membership, now: Any, tmp_path: Path, settings: Settings) -> Shop:
    """Return a workshop with 10 L of rinse water that holds 5 g of copper."""
    settings.ATTACHMENTS = tmp_path
    shop = Shop(worker, now)
    shop.product("Salt", {"CuSO4.5H2O": "99 %"}, reactivity=("acid",))
    shop.tank("Rinse", "10 L")
    held = [{"metal": "Cu", "amount": "5 g"}]
    shop.record("opening", days_ago=5, vessel="Rinse", volume="10 L", held=held, product="Salt", complete=True)
    return shop


@pytest.fixture
def receiver(shop: Shop) -> Receiver:
    return dropoffs.create_receiver(actor=shop.member, name="The yard", address="9 Lane\nTown")


def filled(shop: Shop, name: str, litres: int = 2, **said: Any) -> WasteContainer:
    """Return a closed container with some of the rinse in it."""
    drum = shop.drum(name, **said)
    if litres:
        shop.record("drum-off", days_ago=2, source="Rinse", target=name, volume=f"{litres} L")
    return waste.close_container(actor=shop.member, now=shop.now, container=drum, gross=(litres + 1) * KG)


def draft(shop: Shop, receiver: Receiver, *containers: WasteContainer, mode: str = "brought") -> DropOff:
    return dropoffs.create_drop_off(
        actor=shop.member,
        now=shop.now,
        receiver=receiver,
        mode=mode,
        planned_for=date(2026, 3, 4),
        containers=list(containers),
    )


def pack(shop: Shop, drop_off: DropOff) -> DropOff:
    return dropoffs.pack_drop_off(actor=shop.member, now=shop.now, drop_off=drop_off)


def hand_over(shop: Shop, drop_off: DropOff, occurred: Occurred | None = None) -> DropOff:
    return dropoffs.hand_over(actor=shop.member, now=shop.now, drop_off=drop_off, occurred=occurred)


def test_the_three_states(shop: Shop, receiver: Receiver) -> None:
    one, two = filled(shop, "One"), filled(shop, "Two", 3)
    with scope(workshop=shop.member.workshop):
        assert list(list_ready_containers_for(shop.member)) == [one, two]
    drop_off = draft(shop, receiver, one, two)
    with scope(workshop=shop.member.workshop):
        assert list(list_ready_containers_for(shop.member)) == []
    assert (drop_off.state, drop_off.manifest) == (State.DRAFT, None)
    packed = pack(shop, drop_off)
    assert packed.state == State.PACKED
    handed = hand_over(shop, packed)
    assert handed.state == State.HANDED_OVER
    for container in (one, two):
        assert set(shop.holds(container.vessel).values()) == {0}
    with scope(workshop=shop.member.workshop):
        events = [read_event(entry) for entry in Entry.objects.filter(kind="hand-over").order_by("sequence")]
    assert [(e.container, e.receiver, e.gross.base) for e in events] == [  # type: ignore[attr-defined]
        (str(one.vessel.uuid), "The yard", 3 * KG),
        (str(two.vessel.uuid), "The yard", 4 * KG),
    ]
    assert shop.is_proved()


def test_the_manifest_says_what_the_books_say(shop: Shop, receiver: Receiver) -> None:
    packed = pack(shop, draft(shop, receiver, filled(shop, "One"), filled(shop, "Two", 3)))
    assert packed.manifest is not None
    said = read_data(packed.manifest)
    assert said["receiver"]["name"] == "The yard"
    assert said["drop_off"] == {"code": str(packed.uuid)[:8].upper(), "date": "2026-03-04", "mode": "brought"}
    rows = [
        (row["volume"], row["gross_kg"], row["contents"][0]["component"], row["contents"][0]["amount"])
        for row in said["containers"]
    ]
    assert rows == [("2 L", "3.000", "copper (Cu)", "1 g"), ("3 L", "4.000", "copper (Cu)", "1.5 g")]
    assert said["containers"][0]["must_not_meet"]


def test_packing_twice_gives_the_same_manifest(shop: Shop, receiver: Receiver) -> None:
    drop_off = draft(shop, receiver, filled(shop, "One"))
    first = pack(shop, drop_off)
    again = pack(shop, get_drop_off_for(shop.member, drop_off.uuid))
    assert first.manifest == again.manifest
    assert again.state == State.PACKED
    hand_over(shop, again)
    assert pack(shop, get_drop_off_for(shop.member, drop_off.uuid)).state == State.HANDED_OVER


def test_a_draft_cannot_be_handed_over_and_nothing_is_handed_over_twice(shop: Shop, receiver: Receiver) -> None:
    drop_off = draft(shop, receiver, filled(shop, "One"))
    with pytest.raises(ConflictError, match="Pack it first"):
        hand_over(shop, drop_off)
    hand_over(shop, pack(shop, drop_off))
    with pytest.raises(ConflictError):
        hand_over(shop, drop_off)
    with scope(workshop=shop.member.workshop):
        assert Entry.objects.filter(kind="hand-over").count() == 1


def test_a_hand_over_recorded_a_day_late(shop: Shop, receiver: Receiver) -> None:
    packed = pack(shop, draft(shop, receiver, filled(shop, "One")))
    hand_over(shop, packed, Occurred(shop.now - timedelta(days=1)))
    with scope(workshop=shop.member.workshop):
        entry = Entry.objects.get(kind="hand-over")
    assert entry.recorded_at - entry.occurred_at == timedelta(days=1)
    assert shop.went(entry, "Cu")["receiver"] == 1_000_000


def test_an_empty_container_goes_along_as_well(shop: Shop, receiver: Receiver) -> None:
    packed = pack(shop, draft(shop, receiver, filled(shop, "Empty", 0)))
    assert packed.manifest is not None
    assert read_data(packed.manifest)["containers"][0]["contents"] == []
    assert hand_over(shop, packed).state == State.HANDED_OVER


def test_only_closed_containers_that_go_along_nowhere_else(shop: Shop, receiver: Receiver) -> None:
    closed, still_open = filled(shop, "Closed"), shop.drum("Open")
    with pytest.raises(InvalidInputError, match=r"Open is not closed\. Weigh and close it first") as caught:
        draft(shop, receiver, closed, still_open)
    assert [error.field for error in caught.value.errors] == ["containers"]
    draft(shop, receiver, closed)
    with pytest.raises(InvalidInputError, match="Closed goes along on another drop-off already"):
        draft(shop, receiver, closed)


def test_all_that_is_wrong_with_a_draft_is_said_at_once(shop: Shop, receiver: Receiver) -> None:
    with pytest.raises(InvalidInputError) as caught:
        draft(shop, receiver, mode="thrown")
    assert [error.field for error in caught.value.errors] == ["mode", "containers"]
    with scope(workshop=shop.member.workshop):
        assert not DropOff.objects.exists()


def test_the_same_container_twice_goes_along_once(shop: Shop, receiver: Receiver) -> None:
    drum = filled(shop, "One")
    with pytest.raises(InvalidInputError, match="stands twice"):
        draft(shop, receiver, drum, drum)


def test_what_must_never_meet_is_not_packed_into_one_load(shop: Shop, receiver: Receiver) -> None:
    acid, cyanide = filled(shop, "Acid"), filled(shop, "Cyanide", 0, reactivity=("cyanide",))
    with pytest.raises(RefusedError, match="Acid and Cyanide must not go in one load: hydrogen cyanide"):
        pack(shop, draft(shop, receiver, acid, cyanide))
    with scope(workshop=shop.member.workshop):
        assert DropOff.objects.get().state == State.DRAFT


@pytest.mark.parametrize(
    ("said", "fields"),
    [
        ({"name": " "}, ["name"]),
        ({"name": "The yard"}, ["name"]),
        ({"name": "x" * 121}, ["name"]),
        ({"name": "New", "reference": "a\x07"}, ["reference"]),
        ({"name": "New", "address": "a\x07"}, ["address"]),
    ],
)
def test_a_receiver_is_refused_by_field(
    shop: Shop, receiver: Receiver, said: dict[str, str], fields: list[str]
) -> None:
    with pytest.raises(InvalidInputError) as caught:
        dropoffs.create_receiver(actor=shop.member, **said)
    assert [error.field for error in caught.value.errors] == fields
    assert list(list_receivers_for(shop.member)) == [receiver]


def test_observers_and_strangers(shop: Shop, receiver: Receiver, observer: Membership, stranger: Membership) -> None:
    drop_off = draft(shop, receiver, filled(shop, "One"))
    for member in (observer, stranger):
        outsider = Shop(member, shop.now)
        with pytest.raises(NotPermittedError):
            draft(outsider, receiver)
        with pytest.raises(NotPermittedError):
            pack(outsider, drop_off)
        with pytest.raises(NotPermittedError):
            hand_over(outsider, drop_off)
    assert get_drop_off_for(observer, drop_off.uuid) == drop_off
    for wrong in (lambda: get_drop_off_for(stranger, drop_off.uuid), lambda: get_receiver_for(stranger, receiver.uuid)):
        with pytest.raises(NotFoundError):
            wrong()
    with scope(workshop=stranger.workshop):
        assert list(list_drop_offs_for(stranger)) == []


def test_a_weight_is_kept_to_the_microgram(shop: Shop, receiver: Receiver) -> None:
    drum = shop.drum("One")
    closed = waste.close_container(actor=shop.member, now=shop.now, container=drum, gross=12_345_678_901)
    hand_over(shop, pack(shop, draft(shop, receiver, closed)))
    with scope(workshop=shop.member.workshop):
        event = read_event(Entry.objects.get(kind="hand-over"))
    assert event.gross.base == 12_345_678_901  # type: ignore[attr-defined]
