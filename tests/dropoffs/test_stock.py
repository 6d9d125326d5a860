"""Stock containers on a drop-off: empties that stay a waste, and stock that nobody uses any more."""

from collections.abc import Sequence
from datetime import date, timedelta
from pathlib import Path
from typing import Any

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scope
from pytest_django import Settings

from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.models import Vessel
from chemicals.register.models import Product
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from compliance.clearance.services import RefusedError
from compliance.documents.render import render_html
from compliance.documents.selectors import read_data
from compliance.dropoffs import services as dropoffs
from compliance.dropoffs.load import list_ready_stock_for
from compliance.dropoffs.models import DropOff, Receiver, State
from compliance.dropoffs.selectors import get_drop_off_for
from compliance.waste import services as waste
from tests.process.shop import KG, Shop

CYANIDE: dict[str, Any] = {
    "reactivity": ("cyanide",),
    "signal_word": "Danger",
    "pictograms": ("GHS06",),
    "statements": ("H300 Fatal if swallowed.",),
    "un_number": "1680",
}


@pytest.fixture
def shop(worker: Membership, now: Any, tmp_path: Path, settings: Settings) -> Shop:
    """Return a workshop with an emptied jar of cyanide, a jar of salt, and a bottle of acid."""
    settings.ATTACHMENTS = tmp_path
    shop = Shop(worker, now)
    cyanide = shop.product("Potassium cyanide", {"KCN": "98 %"}, **CYANIDE)
    salt = shop.product("Salt", {"NiSO4.6H2O": "99 %"}, reactivity=("nothing",), signal_word="Danger")
    acid = shop.product("Acid", {}, form="liquid", density="1.2 g/mL", reactivity=("acid",), signal_word="Danger")
    for name, product in (("Jar 1", cyanide), ("Jar 2", salt), ("Bottle", acid)):
        shop.holder(name, product)
    shop.record("receipt", days_ago=9, vessel="Jar 1", amount="100 g")
    shop.record("receipt", days_ago=9, vessel="Jar 2", amount="1 kg")
    shop.record("receipt", days_ago=9, vessel="Bottle", amount="1 L")
    shop.record("count", days_ago=2, vessel="Jar 1", amount="0 g")
    return shop


@pytest.fixture
def receiver(shop: Shop) -> Receiver:
    return dropoffs.create_receiver(actor=shop.member, name="The yard")


def jar(shop: Shop, name: str) -> Vessel:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.get(name=name)


def draft(shop: Shop, receiver: Receiver, *names: str, waste_containers: Sequence[Any] = ()) -> DropOff:
    return dropoffs.create_drop_off(
        actor=shop.member,
        now=shop.now,
        receiver=receiver,
        mode="brought",
        planned_for=date(2026, 3, 4),
        containers=list(waste_containers),
        stock=[jar(shop, name) for name in names],
    )


def pack(shop: Shop, drop_off: DropOff) -> DropOff:
    return dropoffs.pack_drop_off(actor=shop.member, now=shop.now, drop_off=drop_off)


def hand_over(shop: Shop, drop_off: DropOff) -> DropOff:
    return dropoffs.hand_over(actor=shop.member, now=shop.now, drop_off=drop_off)


def ready(shop: Shop, *named: str) -> list[str]:
    found = list_ready_stock_for(shop.member, shop.now.date(), [jar(shop, name).uuid for name in named])
    return [vessel.name for vessel, _why in found]


def test_empties_that_stay_a_waste_and_what_kept_long_enough_are_offered(shop: Shop) -> None:
    assert ready(shop) == ["Jar 1"]
    day = shop.now.date() - timedelta(days=1)
    change_vessels(actor=shop.member, now=shop.now, vessels=[jar(shop, "Jar 2")], care=CareInput(expires_on=day))
    assert ready(shop) == ["Jar 1", "Jar 2"]
    assert ready(shop, "Bottle") == ["Bottle", "Jar 1", "Jar 2"]


def test_the_manifest_says_what_an_empty_held_and_what_stock_holds(shop: Shop, receiver: Receiver) -> None:
    packed = pack(shop, draft(shop, receiver, "Jar 1", "Jar 2"))
    assert packed.manifest is not None
    empty, full = read_data(packed.manifest)["containers"]
    assert (empty["stream"], empty["note"]) == (
        "Potassium cyanide",
        "empty, not cleaned, last held: Potassium cyanide",
    )
    assert (empty["contents"], empty["codes"]) == ([], ["UN 1680"])
    assert empty["hazards"]["statements"] == ["H300 Fatal if swallowed."]
    assert empty["must_not_meet"][0].startswith("acid (hydrogen cyanide")
    assert (full["stream"], full["note"], full["codes"]) == ("Salt", "stock as bought", [])
    assert {line["component"]: line["amount"] for line in full["contents"]}["nickel (Ni)"] is not None
    twin = render_html("manifest", read_data(packed.manifest))
    assert "empty, not cleaned, last held: Potassium cyanide" in twin
    assert "Contents unknown" not in twin


def test_what_goes_along_is_gone_when_it_is_handed_over(shop: Shop, receiver: Receiver) -> None:
    drum = waste.close_container(actor=shop.member, now=shop.now, container=shop.drum("Drum", ("nothing",)), gross=KG)
    drop_off = draft(shop, receiver, "Jar 1", "Jar 2", waste_containers=[drum])
    assert ready(shop) == []
    handed = hand_over(shop, pack(shop, drop_off))
    assert handed.state == State.HANDED_OVER
    assert {jar(shop, name).gone_at for name in ("Jar 1", "Jar 2", "Drum")} == {shop.now}
    assert set(shop.holds(jar(shop, "Jar 2")).values()) == {0}
    assert shop.is_proved()


def test_what_is_gone_by_itself_meanwhile_is_left_out(shop: Shop, receiver: Receiver) -> None:
    packed = pack(shop, draft(shop, receiver, "Jar 1", "Jar 2"))
    shop.record("hand-over", days_ago=1, container="Jar 1", receiver="Another yard")
    assert hand_over(shop, packed).state == State.HANDED_OVER
    assert jar(shop, "Jar 1").gone_at == shop.now - timedelta(days=1)


def test_an_emptied_jar_of_cyanide_does_not_go_with_acid(shop: Shop, receiver: Receiver) -> None:
    """What is left in it reacts as what it held, also after all that the books know of was poured out."""
    with scope(workshop=shop.member.workshop):
        shop.holder("Jar 3", Product.objects.get(name="Potassium cyanide"))
    shop.record("receipt", days_ago=3, vessel="Jar 3", amount="10 g")
    shop.record("move", days_ago=2, source="Jar 3", target="Jar 1")
    with pytest.raises(RefusedError, match="Bottle and Jar 3 must not go in one load: hydrogen cyanide"):
        pack(shop, draft(shop, receiver, "Jar 3", "Bottle"))


def test_two_emptied_jars_of_one_product_go_together(shop: Shop, receiver: Receiver) -> None:
    nobody_knows = shop.product("Mystery", {})
    for name in ("Jar 7", "Jar 8"):
        shop.holder(name, nobody_knows)
        shop.record("receipt", days_ago=3, vessel=name, amount="10 g")
        shop.record("count", days_ago=2, vessel=name, amount="0 g")
    assert pack(shop, draft(shop, receiver, "Jar 7", "Jar 8")).state == State.PACKED


def test_all_that_is_wrong_with_stock_is_said(shop: Shop, receiver: Receiver) -> None:
    shop.tank("Rinse", "10 L")
    shop.record("hand-over", days_ago=1, container="Bottle", receiver="The yard")
    with pytest.raises(InvalidInputError) as caught:
        draft(shop, receiver, "Jar 1", "Jar 1", "Rinse", "Bottle")
    assert {(error.field, error.message.split(".")[0]) for error in caught.value.errors} == {
        ("stock", "Jar 1 stands twice in the list"),
        ("stock", "Rinse is no stock container"),
        ("stock", "Bottle is gone already"),
    }
    draft(shop, receiver, "Jar 1")
    with pytest.raises(InvalidInputError, match="Jar 1 goes along on another drop-off already"):
        draft(shop, receiver, "Jar 1")


def test_a_load_of_which_all_is_gone_is_not_packed(shop: Shop, receiver: Receiver) -> None:
    drop_off = draft(shop, receiver, "Jar 1")
    shop.record("hand-over", days_ago=1, container="Jar 1", receiver="Another yard")
    with pytest.raises(ConflictError, match="gone"):
        pack(shop, drop_off)


def test_an_observer_drafts_nothing(shop: Shop, receiver: Receiver, observer: Membership) -> None:
    with pytest.raises(NotPermittedError):
        dropoffs.create_drop_off(
            actor=observer, now=shop.now, receiver=receiver, mode="brought", planned_for=shop.now.date(),
            containers=[], stock=[jar(shop, "Jar 1")],
        )  # fmt: skip
    with scope(workshop=shop.member.workshop):
        assert not DropOff.objects.exists()


def test_one_and_three_are_read_with_the_same_queries(shop: Shop, receiver: Receiver) -> None:
    with scope(workshop=shop.member.workshop):
        cyanide = Product.objects.get(name="Potassium cyanide")
    counts = []
    for names in (["Jar 7"], ["Jar 8", "Jar 9"]):
        for name in names:
            shop.holder(name, cyanide)
            shop.record("receipt", days_ago=3, vessel=name, amount="10 g")
            shop.record("count", days_ago=2, vessel=name, amount="0 g")
        with CaptureQueriesContext(connection) as queries:
            list_ready_stock_for(shop.member, shop.now.date())
        counts.append(len(queries))
    assert counts == [4, 4]
    assert len(get_drop_off_for(shop.member, draft(shop, receiver, "Jar 7", "Jar 8").uuid).containers.all()) == 2
