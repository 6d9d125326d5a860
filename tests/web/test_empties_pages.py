"""Empty containers on the pages: what stays a waste, what is put away and comes back, what is gone."""

from collections.abc import Callable
from typing import Any

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.inputs import CountInput, HandOverInput, Input, ReceiptInput
from chemicals.process.setup import create_holder
from chemicals.register.models import Product
from chemicals.register.services import RevisionInput, create_product
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from tests.web.conftest import Line, Visitor, text_of

Say = Callable[[Input], Any]
Emptied = Callable[[str, Product], Vessel]
NOTHING: dict[str, Any] = {"form": "solid"}
FATAL: dict[str, Any] = {"form": "solid", "statements": ("H300 Fatal if swallowed.",)}


@pytest.fixture
def emptied(owner: Membership, now: Any, say: Say) -> Emptied:
    """Return what sets up a container, fills it and uses it up."""

    def make(name: str, product: Product) -> Vessel:
        jar = create_holder(actor=owner, now=now, kind=VesselKind.STOCK, name=name, product=product)
        say(ReceiptInput(vessel=jar.uuid, amount=parse("100 g", "mass")))
        say(CountInput(vessel=jar.uuid, amount=parse("0 g", "mass")))
        return jar

    return make


@pytest.fixture
def poison(owner: Membership, now: Any) -> Product:
    known = RevisionInput(**FATAL)
    return create_product(actor=owner, now=now, name="Poison", supplier="", revision=known).product


@pytest.fixture
def mystery(owner: Membership, now: Any) -> Product:
    known = RevisionInput(**NOTHING)
    return create_product(actor=owner, now=now, name="Mystery", supplier="", revision=known).product


def test_a_very_toxic_empty_stands_on_waste_and_today_until_it_is_handed_over(
    visit: Visitor, emptied: Emptied, poison: Product, say: Say
) -> None:
    jar = emptied("Jar 1", poison)
    page = text_of(visit.get("waste"))
    assert "It held Poison, very toxic (H300): it stays a waste until handed over." in page
    assert visit.address("record", "hand-over") + f"?vessel={jar.uuid}" in page
    assert "1 empty container stays a waste until it is handed over" in text_of(visit.get("today"))
    say(HandOverInput(container=jar.uuid, receiver="The yard"))
    assert "Jar 1" not in text_of(visit.get("waste"))
    assert "stays a waste until it is handed over" not in text_of(visit.get("today"))


def test_the_page_of_an_empty_says_what_may_become_of_it(
    visit: Visitor, line: Line, emptied: Emptied, poison: Product, mystery: Product
) -> None:
    for product, words, offered in (
        (poison, "stays a waste", ["hand-over"]),
        (mystery, "ask: nothing is entered", ["hand-over", "put-away"]),
        (line.salt, "may go", ["put-away"]),
    ):
        jar = emptied(f"Jar of {product}", product)
        page = text_of(visit.get("vessel", jar.uuid))
        assert words in page
        section = page[page.index("It is empty") : page.index("At the bench")]
        assert ("hand-over" in section, "put-away" in section) == ("hand-over" in offered, "put-away" in offered)


def test_what_is_harmless_is_put_away_and_comes_back(visit: Visitor, line: Line, emptied: Emptied) -> None:
    jar = emptied("Jar 1", line.salt)
    assert "What became of it" in text_of(visit.get("put-away", jar.uuid))
    answer = visit.post("put-away", jar.uuid, note="Rinsed, rubbish.")
    assert answer.headers["Location"] == visit.address("vessel", jar.uuid)
    page = text_of(visit.get("vessel", jar.uuid))
    assert "Gone since <time" in page
    assert "Rinsed, rubbish." in page
    assert "At the bench" not in page
    assert "Issue a label" not in page
    assert visit.post("here-again", jar.uuid).status_code == 302
    assert "At the bench" in text_of(visit.get("vessel", jar.uuid))


def test_whoever_puts_away_what_is_not_empty_is_told(visit: Visitor, line: Line, say: Say) -> None:
    say(ReceiptInput(vessel=line.tub.uuid, amount=parse("1 kg", "mass")))
    assert "The books do not know it as empty" in text_of(visit.get("put-away", line.tub.uuid))
    refused = visit.post("put-away", line.tub.uuid, note="Rubbish.")
    assert refused.status_code == 400
    assert "Rubbish." in text_of(refused) or b"Rubbish." in refused.content


def test_a_list_says_what_is_empty(visit: Visitor, line: Line, emptied: Emptied) -> None:
    emptied("Jar 1", line.salt)
    for name in ("register", "containers"):
        assert text_of(visit.get(name)).count('<span class="mark note">empty</span>') == 1


def test_where_nothing_is_entered_somebody_must_say_that_they_looked(
    visit: Visitor, emptied: Emptied, mystery: Product
) -> None:
    jar = emptied("Jar 1", mystery)
    refused = visit.post("put-away", jar.uuid, note="Rubbish.")
    assert refused.status_code == 400
    assert "Nothing is entered of the hazards of Mystery" in text_of(refused)
    assert visit.post("put-away", jar.uuid, note="Rubbish.", confirmed="on").status_code == 302


def test_what_stays_a_waste_is_not_put_away_by_its_address(visit: Visitor, emptied: Emptied, poison: Product) -> None:
    refused = visit.post("put-away", emptied("Jar 1", poison).uuid, confirmed="on")
    assert refused.status_code == 400
    assert "hand it over" in text_of(refused)


def test_what_was_handed_over_is_found_by_its_code_and_not_taken_back(
    visit: Visitor, emptied: Emptied, poison: Product, say: Say
) -> None:
    jar = emptied("Jar 1", poison)
    say(HandOverInput(container=jar.uuid, receiver="The yard"))
    page = text_of(visit.client.get(f"/c/{jar.code}", follow=True))
    assert "Gone since" in page
    assert "It is here again" not in page
    refused = visit.post("here-again", jar.uuid)
    assert refused.status_code == 400
    assert "Jar 1 was handed over" in text_of(refused)


def test_forms_offer_only_what_is_here_unless_it_is_named(visit: Visitor, line: Line, emptied: Emptied) -> None:
    jar = emptied("Jar 1", line.salt)
    visit.post("put-away", jar.uuid, note="")
    assert "Jar 1" not in text_of(visit.get("record", "receipt"))
    assert "Jar 1" in text_of(visit.get("record", "receipt", query=f"?vessel={jar.uuid}"))
    form = {"key": "6f1c0f0e-58a5-4a5e-9d43-6d0d0e5f7a11", "vessel": jar.uuid, "amount": "1 kg", "step": "save"}
    refused = visit.post("record", "receipt", **form)
    assert refused.status_code == 400
    assert "Jar 1 is gone since 2026-03-02. If it stands here again, say so on its page" in text_of(refused)


def test_a_full_container_is_handed_over_from_its_page(visit: Visitor, filled: Line) -> None:
    assert "Hand over" in text_of(visit.get("vessel", filled.tub.uuid))
    form = {"key": "6f1c0f0e-58a5-4a5e-9d43-6d0d0e5f7a12", "container": filled.tub.uuid, "receiver": "The yard"}
    preview = text_of(visit.post("record", "hand-over", **form))
    assert "goes from Salt tub to receiver" in preview
    assert visit.post("record", "hand-over", **form, step="save").status_code == 302
    assert "Gone since" in text_of(visit.get("vessel", filled.tub.uuid))


def test_empties_are_a_file(visit: Visitor, emptied: Emptied, poison: Product) -> None:
    emptied("Jar 1", poison)
    answer = visit.get("waste", query="?list=empties&as=csv")
    rows = b"".join(answer.streaming_content).decode().splitlines()
    assert rows[0].endswith("container,code,place,held,stays a waste,why")
    assert rows[1].startswith("Jar 1,")
    assert ",Poison,yes," in rows[1]


@pytest.mark.parametrize("name", ["waste", "today"])
def test_one_and_three_empties_take_the_same_queries(
    name: str, visit: Visitor, emptied: Emptied, poison: Product
) -> None:
    counts = []
    for jars in (["Jar 1"], ["Jar 2", "Jar 3"]):
        for jar in jars:
            emptied(jar, poison)
        with CaptureQueriesContext(connection) as queries:
            visit.get(name)
        counts.append(len(queries))
    assert counts[0] == counts[1]
