"""What is poured into a container of another product makes its label wrong: that is asked, unless it is a danger."""

import pytest
from django_scopes import scope

from chemicals.register.models import Product
from compliance.clearance.selectors import preview
from compliance.clearance.services import RefusedError
from tests.process.shop import L, Shop


def into(shop: Shop, source: str, target: str) -> tuple[tuple[str, ...], tuple[str, ...]]:
    """Return the dangers and the questions of pouring from one container into another."""
    answer = preview(shop.member, shop.now, shop.read("move", source=source, target=target), None).answer
    return answer.dangers, answer.questions


def test_another_product_is_a_question(shop: Shop) -> None:
    other = shop.holder("Lye 2", shop.product("Lye of another maker", {}, form="liquid", reactivity=("nothing",)))
    dangers, (question,) = into(shop, "Lye", "Lye 2")
    assert dangers == ()
    assert "Lye is a container of Lye as bought, Lye 2 one of Lye of another maker" in question
    with pytest.raises(RefusedError):
        shop.record("move", source="Lye", target="Lye 2", volume="1 L")
    entry = shop.record("move", source="Lye", target="Lye 2", volume="1 L", happened=True)
    assert entry.verdict == "overridden"
    assert shop.holds(other)["volume"] == L


def test_the_same_product_is_poured_without_a_question(shop: Shop) -> None:
    with scope(workshop=shop.member.workshop):
        shop.holder("Lye 2", Product.objects.get(name="Lye as bought"))
    assert into(shop, "Lye", "Lye 2") == ((), ())
    assert shop.record("move", source="Lye", target="Lye 2", volume="1 L").verdict == "allowed"


def test_what_must_never_meet_stays_a_danger(shop: Shop) -> None:
    (danger,), questions = into(shop, "Acid", "Bleach")
    assert "must never" in danger
    assert len(questions) == 1
    assert shop.record("move", source="Acid", target="Bleach", volume="1 L", happened=True).verdict == "incident"
