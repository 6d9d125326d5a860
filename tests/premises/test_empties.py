"""Empty containers: what held something very toxic stays a waste until it is handed over; what is harmless goes."""

from datetime import datetime
from typing import Any

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scope

from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import list_changes_of
from chemicals.register.services import RevisionInput, revise_product
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from compliance.premises.emergency import build_sheet
from compliance.premises.empties import Empty, find_empty, list_empties_for
from compliance.premises.selectors import list_standing_for
from compliance.premises.services import bring_back, put_away
from tests.premises.conftest import product_of
from tests.process.shop import Shop


def vessel(shop: Shop, name: str) -> Vessel:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.get(name=name)


def emptied(shop: Shop, name: str, product: str) -> Vessel:
    """Return a container of a product that was filled and used up."""
    if not any(row.vessel.name == name for row in list_standing_for(shop.member)):
        shop.holder(name, product_of(shop, product))
    shop.record("receipt", days_ago=5, vessel=name, amount="100 g")
    shop.record("count", days_ago=1, vessel=name, amount="0 g")
    return vessel(shop, name)


def empties(shop: Shop) -> dict[str, Empty]:
    return {each.vessel.name: each for each in list_empties_for(shop.member)}


def away(shop: Shop, *vessels: Vessel, **said: Any) -> list[Vessel]:
    return put_away(actor=shop.member, now=shop.now, vessels=vessels, **said)


def test_what_held_something_very_toxic_stays_a_waste(shop: Shop) -> None:
    emptied(shop, "Jar 3", "Potassium cyanide")
    emptied(shop, "Salt jar", "Copper salt")
    found = empties(shop)
    assert list(found) == ["Jar 3", "Salt jar"]
    assert (found["Jar 3"].stays_waste, found["Salt jar"].stays_waste) == (True, False)
    assert found["Jar 3"].why == (
        "It held Potassium cyanide, very toxic (Acute Tox. 1 oral, H300): it stays a waste until handed over."
    )
    assert "nothing that is entered of it says very toxic" in found["Salt jar"].why


def test_only_what_was_filled_and_is_known_empty_is_an_empty(shop: Shop) -> None:
    assert empties(shop) == {}
    shop.record("receipt", days_ago=5, vessel="Jar 3", amount="100 g")
    assert empties(shop) == {}
    shop.record(
        "move", days_ago=4, source="Jar 3", target=shop.holder("Jar 4", product_of(shop, "Potassium cyanide")).name
    )
    assert list(empties(shop)) == ["Jar 3"]
    shop.record("opening", days_ago=3, vessel="Jar 3", mass="1 g", held=[], complete=False)
    assert empties(shop) == {}


def test_any_revision_that_says_very_toxic_counts(shop: Shop) -> None:
    emptied(shop, "Salt jar", "Copper salt")
    harmless = RevisionInput(form="solid", signal_word="Warning")
    toxic = RevisionInput(form="solid", statements=("H330 Fatal if inhaled.",))
    for revision in (toxic, harmless):
        revise_product(actor=shop.member, now=shop.now, product=product_of(shop, "Copper salt"), revision=revision)
    assert empties(shop)["Salt jar"].very_toxic == ["H330"]


def test_what_another_product_left_behind_counts_as_well(shop: Shop) -> None:
    emptied(shop, "Salt jar", "Copper salt")
    shop.record("receipt", days_ago=5, vessel="Jar 3", amount="100 g")
    shop.record("move", days_ago=0.9, source="Jar 3", target="Salt jar", mass="10 g", happened=True)
    shop.record("count", days_ago=0.5, vessel="Salt jar", amount="0 g")
    assert empties(shop)["Salt jar"].names == ["Copper salt", "Potassium cyanide"]
    assert empties(shop)["Salt jar"].stays_waste


def test_of_what_nothing_is_entered_it_is_asked(shop: Shop) -> None:
    shop.product("Mystery", {})
    jar = emptied(shop, "Jar 9", "Mystery")
    found = empties(shop)["Jar 9"]
    assert (found.stays_waste, found.must_ask, found.not_entered) == (False, True, ["Mystery"])
    with pytest.raises(InvalidInputError, match="Nothing is entered of the hazards of Mystery") as caught:
        away(shop, jar)
    assert [error.field for error in caught.value.errors] == ["confirmed"]
    (jar,) = away(shop, jar, confirmed=True, note="Read the old label: table salt.")
    assert jar.gone_at == shop.now


def test_a_harmless_empty_goes_with_a_note_and_comes_back(shop: Shop) -> None:
    jar = emptied(shop, "Salt jar", "Copper salt")
    (jar,) = away(shop, jar, note=" Rinsed, glass bin. ")
    assert jar.gone_at == shop.now
    assert empties(shop) == {}
    assert [note.note for note in list_changes_of(jar)] == ["Rinsed, glass bin."]
    (jar,) = bring_back(actor=shop.member, now=shop.now, vessels=[jar])
    assert jar.gone_at is None
    assert list(empties(shop)) == ["Salt jar"]
    assert shop.is_proved()


def test_a_very_toxic_empty_goes_by_a_hand_over_only(shop: Shop) -> None:
    jar, salt = emptied(shop, "Jar 3", "Potassium cyanide"), emptied(shop, "Salt jar", "Copper salt")
    with pytest.raises(InvalidInputError, match=r"Jar 3 stays here.*hand it over") as caught:
        away(shop, salt, jar, confirmed=True)
    assert [error.field for error in caught.value.errors] == ["vessels"]
    assert vessel(shop, "Salt jar").gone_at is None
    shop.record("hand-over", container="Jar 3", receiver="The yard")
    assert vessel(shop, "Jar 3").gone_at is not None
    assert list(empties(shop)) == ["Salt jar"]


def test_what_holds_something_does_not_go(shop: Shop) -> None:
    shop.record("receipt", days_ago=5, vessel="Salt jar", amount="1 kg")
    with pytest.raises(InvalidInputError, match="Salt jar is not known to be empty"):
        away(shop, vessel(shop, "Salt jar"))
    with pytest.raises(InvalidInputError, match="Rinse is no stock container"):
        away(shop, vessel(shop, "Rinse"))
    with pytest.raises(InvalidInputError, match="Nothing is named"):
        away(shop)


def test_nothing_goes_while_the_books_are_behind(shop: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    jar = emptied(shop, "Salt jar", "Copper salt")
    monkeypatch.setattr("chemicals.ledger.late.LATE_LIMIT", 0)
    shop.record("receipt", days_ago=9, vessel="Salt jar", amount="1 kg")
    with pytest.raises(ConflictError, match="recomputed"):
        away(shop, jar)


def test_what_is_gone_and_empty_stands_nowhere(shop: Shop) -> None:
    jar = emptied(shop, "Salt jar", "Copper salt")
    away(shop, jar)
    assert "Salt jar" not in {each.vessel.name for each in list_standing_for(shop.member)}
    assert [each.vessel.name for each in list_standing_for(shop.member, [jar.uuid])] == ["Salt jar"]
    before = build_sheet(shop.member)["left_out"]
    bring_back(actor=shop.member, now=shop.now, vessels=[jar])
    assert build_sheet(shop.member)["left_out"] == before + 1


def test_what_was_put_away_and_yet_holds_something_is_not_hidden(shop: Shop) -> None:
    """A receipt that is told late contradicts whoever put the jar away: what may be there is shown."""
    jar = emptied(shop, "Salt jar", "Copper salt")
    away(shop, jar)
    shop.record("receipt", days_ago=0.5, vessel="Salt jar", amount="1 kg")
    assert "Salt jar" in {each.vessel.name for each in list_standing_for(shop.member) if each.is_here}


def test_one_and_three_and_many_empties_take_the_same_queries(shop: Shop) -> None:
    counts = []
    for names in (["Jar 10"], ["Jar 11", "Jar 12"]):
        for name in names:
            emptied(shop, name, "Potassium cyanide")
        with CaptureQueriesContext(
            connection,
        ) as queries:
            list_empties_for(shop.member)
        counts.append(len(queries))
    assert counts == [3, 3]
    assert find_empty(shop.member, vessel(shop, "Rinse")) is None


def test_strangers_and_observers_put_nothing_away(
    shop: Shop, observer: Membership, stranger: Membership, now: datetime
) -> None:
    jar = emptied(shop, "Salt jar", "Copper salt")
    for member in (observer, stranger):
        for act in (put_away, bring_back):
            with pytest.raises(NotPermittedError):
                act(actor=member, now=now, vessels=[jar])
    assert list_empties_for(stranger) == []
    assert vessel(shop, "Salt jar").gone_at is None
