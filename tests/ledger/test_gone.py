"""What was handed over is gone from then on, in whatever order it is recorded; the proof compares it with entries."""

from collections.abc import Iterator
from datetime import timedelta
from typing import Any
from uuid import uuid4

import pytest
from django_scopes import scope

from chemicals.jobs.services import run_next
from chemicals.ledger import late
from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import list_changes_of
from chemicals.ledger.services import refold
from chemicals.ledger.verify import verify_projection
from chemicals.register.models import Product
from chemicals.workshop.errors import InvalidInputError
from tests.process.shop import KG, Shop

YARD: dict[str, Any] = {"receiver": "The yard"}


@pytest.fixture(autouse=True)
def _inside(shop: Shop) -> Iterator[None]:
    with scope(workshop=shop.member.workshop):
        yield


@pytest.fixture
def jar(shop: Shop) -> Vessel:
    """Return a jar with a kilogram of salt, received nine days ago."""
    jar = shop.holder("Jar 1", Product.objects.get(name="Salt"))
    shop.record("receipt", days_ago=9, vessel="Jar 1", amount="1 kg")
    return jar


def is_gone(jar: Vessel) -> bool:
    jar.refresh_from_db()
    return jar.gone_at is not None


def test_what_was_handed_over_is_gone_since_then_and_holds_nothing(shop: Shop, jar: Vessel) -> None:
    entry = shop.record("hand-over", days_ago=2, container="Jar 1", **YARD)
    jar.refresh_from_db()
    assert jar.gone_at == entry.occurred_at
    assert set(shop.holds(jar).values()) == {0}
    assert shop.went(entry, "Cu")["receiver"] > 0
    assert shop.is_proved()


def test_an_empty_jar_is_handed_over_without_anything_being_posted(shop: Shop) -> None:
    jar = shop.holder("Jar 2", Product.objects.get(name="Salt"))
    entry = shop.record("hand-over", days_ago=2, container="Jar 2", **YARD)
    assert is_gone(jar)
    assert entry.postings.count() == 0
    assert shop.is_proved()


def test_a_cancelled_hand_over_brings_it_back(shop: Shop, jar: Vessel) -> None:
    shop.record("hand-over", days_ago=2, label="mistake", container="Jar 1", **YARD)
    shop.record("cancellation", entry="mistake", reason="It stands there.")
    assert not is_gone(jar)
    assert shop.holds(jar)["gross mass"] == KG
    assert shop.is_proved()


def test_of_two_hand_overs_the_last_one_that_stands_counts(shop: Shop, jar: Vessel) -> None:
    first = shop.record("hand-over", days_ago=2, label="first", container="Jar 1", **YARD)
    shop.record("hand-over", days_ago=4, container="Jar 1", **YARD)
    jar.refresh_from_db()
    assert jar.gone_at == first.occurred_at
    shop.record("cancellation", entry="first", reason="It went earlier.")
    jar.refresh_from_db()
    assert jar.gone_at == first.occurred_at - timedelta(days=2)
    assert shop.is_proved()


def test_what_was_filled_after_a_hand_over_that_is_told_late_is_here(shop: Shop, jar: Vessel) -> None:
    shop.record("receipt", days_ago=3, label="refill", vessel="Jar 1", amount="2 kg")
    entry = shop.record("hand-over", days_ago=5, container="Jar 1", **YARD)
    assert not is_gone(jar)
    assert shop.holds(jar)["gross mass"] == 2 * KG
    shop.record("cancellation", entry="refill", reason="That was another jar.")
    jar.refresh_from_db()
    assert jar.gone_at == entry.occurred_at
    assert shop.is_proved()


def test_nothing_goes_into_what_is_gone_but_what_went_in_before(shop: Shop, jar: Vessel) -> None:
    shop.record("hand-over", days_ago=2, container="Jar 1", **YARD)
    for verb, said in (
        ("receipt", {"vessel": "Jar 1", "amount": "1 kg"}),
        ("count", {"vessel": "Jar 1", "amount": "1 kg"}),
        ("hand-over", {"container": "Jar 1", **YARD}),
    ):
        wrong = shop.wrong(verb, **said)
        assert list(wrong) == ["container" if verb == "hand-over" else "vessel"]
        assert "Jar 1 is gone since" in next(iter(wrong.values()))
    shop.record("receipt", days_ago=3, vessel="Jar 1", amount="1 kg")
    assert is_gone(jar)
    assert shop.is_proved()


def test_the_same_press_twice_is_one_hand_over(shop: Shop, jar: Vessel) -> None:
    key = uuid4()
    first = shop.record("hand-over", key=key, container="Jar 1", **YARD)
    assert shop.record("hand-over", key=key, container="Jar 1", **YARD) == first


def test_what_a_person_put_away_is_no_matter_for_the_proof(shop: Shop) -> None:
    jar = shop.holder("Jar 2", Product.objects.get(name="Salt"))
    care = CareInput(gone=True, note="Rinsed, glass bin.")
    change_vessels(actor=shop.member, now=shop.now, vessels=[jar], care=care)
    refold(shop.member.workshop)
    assert is_gone(jar)
    assert [note.note for note in list_changes_of(jar)] == ["Rinsed, glass bin."]
    assert shop.is_proved()


def test_what_was_handed_over_comes_back_by_cancelling_only(shop: Shop, jar: Vessel) -> None:
    shop.record("hand-over", days_ago=2, container="Jar 1", **YARD)
    with pytest.raises(InvalidInputError, match="Jar 1 was handed over"):
        change_vessels(actor=shop.member, now=shop.now, vessels=[jar], care=CareInput(gone=False))
    assert is_gone(jar)


@pytest.mark.parametrize("note", ["x" * 201, "a\x07"])
def test_a_note_is_a_line_of_text(shop: Shop, note: str) -> None:
    jar = shop.holder("Jar 2", Product.objects.get(name="Salt"))
    with pytest.raises(InvalidInputError) as caught:
        change_vessels(actor=shop.member, now=shop.now, vessels=[jar], care=CareInput(gone=True, note=note))
    assert [error.field for error in caught.value.errors] == ["note"]
    assert not is_gone(jar)


def test_the_proof_sees_what_is_said_to_be_here_and_is_not(shop: Shop, jar: Vessel) -> None:
    shop.record("hand-over", days_ago=2, label="gone", container="Jar 1", **YARD)
    Vessel.objects.filter(pk=jar.pk).update(gone_at=None)
    (problem,) = verify_projection(shop.member.workshop)
    assert (problem.sequence, str(jar.uuid) in problem.message) == (shop.entries["gone"].sequence, True)
    refold(shop.member.workshop)
    assert is_gone(jar)
    assert shop.is_proved()


def test_a_hand_over_is_settled_once_the_job_has_folded_it(
    shop: Shop, jar: Vessel, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(late, "LATE_LIMIT", 0)
    shop.record("level-reading", days_ago=1, vessel="Copper", volume="20 L")
    shop.record("hand-over", days_ago=4, container="Jar 1", **YARD)
    assert not is_gone(jar)
    while run_next(now=shop.now + timedelta(days=1), worker="w1"):
        pass
    assert is_gone(jar)
    assert shop.is_proved()
