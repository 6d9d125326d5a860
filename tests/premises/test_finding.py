"""Finding by words, codes and filters: what fits all of it, and nothing else."""

from collections.abc import Callable
from datetime import date, timedelta
from typing import Any

import pytest
from django.test import Client
from django.urls import reverse

from chemicals.ledger.care import CareInput, change_vessels
from chemicals.register.selectors import get_current_revision
from chemicals.register.services import (
    LineInput,
    RevisionInput,
    change_substance,
    create_substance,
    revise_product,
)
from chemicals.register.sheets import first_fine_day, is_old
from compliance.premises.filters import Wanted
from compliance.premises.finding import find_containers, find_products, list_keys, tell_products
from tests.premises.conftest import product_of
from tests.process.shop import Shop

Found = Callable[..., tuple[list[str], list[str]]]


@pytest.fixture
def found(filled: Shop) -> Found:
    """Return a way to look for things: the names of the products and of the containers that are found, in order."""

    def find(text: str = "", **said: Any) -> tuple[list[str], list[str]]:
        wanted, today = Wanted(text=text, **said), filled.now.date()
        products = find_products(filled.member, wanted, today)
        return [row.name for row in products], [row.name for row in find_containers(filled.member, wanted, today)]

    return find


def test_every_word_stands_somewhere_in_the_product_or_its_containers(found: Found) -> None:
    assert found("ACÍD") == (["Sulfuric acid"], ["Acid bottle"])
    assert found("salt shelf") == (["Copper salt"], ["Salt jar"])
    assert found("kcn jar") == (["Potassium cyanide"], ["Jar 3"])
    assert found("salt bench") == ([], [])


def test_signs_of_a_pattern_are_signs(found: Found) -> None:
    assert found("%") == found("_") == found("\\") == ([], [])


def test_a_code_comes_first_and_alone(found: Found, filled: Shop) -> None:
    code = next(row.code for row in find_containers(filled.member, Wanted(text="salt"), filled.now.date()))
    for typed in (code.lower(), f"{code[:3]}-{code[3:]}", f"http://bench.local:8000/c/{code}"):
        assert found(typed) == (["Copper salt"], ["Salt jar"]), typed


def test_a_substance_of_an_earlier_revision_is_not_found(found: Found, filled: Shop) -> None:
    assert found("h2so4")[0] == ["Sulfuric acid"]
    other = create_substance(actor=filled.member, name="Another acid", cas_number="7647-01-0", synonyms=["Säure"])
    known = RevisionInput(form="liquid", lines=(LineInput(other, "30 %"),))
    product = product_of(filled, "Sulfuric acid")
    revise_product(actor=filled.member, now=filled.now, product=product, revision=known)
    assert found("h2so4") == ([], [])
    assert found("saure") == found("7647-01-0") == (["Sulfuric acid"], ["Acid bottle"])


def test_a_product_is_found_by_what_its_substance_is_called_now(found: Found, filled: Shop) -> None:
    line = get_current_revision(product_of(filled, "Sulfuric acid")).lines.get()
    said: dict[str, Any] = {"formula": line.substance.formula, "synonyms": ["Schwefelsäure"]}
    change_substance(actor=filled.member, substance=line.substance, name="Oil of vitriol", **said)
    assert found("schwefel") == found("vitriol") == (["Sulfuric acid"], ["Acid bottle"])


def test_filters_take_all_that_fits(found: Found, filled: Shop) -> None:
    assert found(pictogram="GHS09")[1] == ["Jar 3", "Salt jar"]
    assert found(signal_word="Warning", reacts_as="acid")[0] == ["Copper salt"]
    assert found(hazard_class="Skin Corr. 1A", form="liquid")[0] == ["Sulfuric acid"]
    assert found(hazards="missing") == ([], [])
    assert len(found(sheet="none")[0]) == 3
    assert found(sheet="fine") == ([], [])
    assert found(state="empty") == ([], [])
    assert len(found(state="stock")[1]) == 3


def test_what_is_gone_is_only_found_if_asked_for(found: Found, filled: Shop) -> None:
    spare = filled.holder("Spare jar", product_of(filled, "Potassium cyanide"))
    assert found("cyanide")[1] == ["Jar 3", "Spare jar"]
    change_vessels(actor=filled.member, now=filled.now, vessels=[spare], care=CareInput(gone=True))
    assert found("cyanide") == (["Potassium cyanide"], ["Jar 3"])
    assert found(state="gone") == (["Potassium cyanide"], ["Spare jar"])
    keys = list_keys(find_products(filled.member, Wanted(), filled.now.date()))
    told = tell_products(filled.member, keys, Wanted(), filled.now.date())
    assert [[vessel.name for vessel, _ in row.containers] for row in told] == [["Salt jar"], ["Jar 3"], ["Acid bottle"]]


@pytest.mark.parametrize("name", ["register", "containers"])
@pytest.mark.parametrize("query", ["state=nowhere", "place=7", "pictogram=GHS99", "supplier=Nobody", "q=" + "x" * 201])
def test_a_filter_that_is_none_is_told(filled: Shop, name: str, query: str) -> None:
    client = Client()
    client.force_login(filled.member.user, backend="django.contrib.auth.backends.ModelBackend")
    page = client.get(reverse(name, args=[filled.member.workshop.uuid]) + f"?{query}")
    assert page.status_code == 400
    assert "One thing is wrong" in page.content.decode()


def test_the_first_fine_day_is_the_day_after_the_last_old_one() -> None:
    for number in range(366 * 4):
        today = date(2023, 1, 1) + timedelta(days=number)
        first = first_fine_day(today, 3)
        assert not is_old(first, today, 3)
        assert is_old(first - timedelta(days=1), today, 3)
