"""A new jar on the pages: with its product or for one of the register, and what was set up with its codes."""

import re
from typing import Any
from uuid import uuid4

import pytest
from django_scopes import scopes_disabled

from chemicals.journal.models import Entry
from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import read_contents
from chemicals.register.models import Product
from chemicals.workshop.models import Membership
from compliance.web.forms import jar as jar_forms
from tests.web.conftest import GRAM, LITRE, Line, Visitor, text_of


def said(**changes: object) -> dict[str, Any]:
    """Return what a form of a jar sends."""
    return {"key": uuid4(), "count": "1", "received_on": "2026-03-02", **changes}


def test_a_jar_comes_in_with_its_new_product(visit: Visitor) -> None:
    new = {"new_name": "Brightener", "new_supplier": "Invented Supply", "new_form": "liquid"}
    answer = visit.post("new-jar", **said(amount="500 mL", lot="A 7", expires_on="2027-01-01", **new))
    assert answer.status_code == 302
    jar = Vessel._base_manager.get(name="Brightener 1")
    page = text_of(visit.client.get(answer.headers["Location"]))
    assert f'<p class="code large">{jar.code}</p>' in page
    assert f"labels/?code={jar.code}" in page
    assert "Another jar" in page
    with scopes_disabled():
        assert read_contents(jar).volume.amount == LITRE // 2  # type: ignore[union-attr]  # else this fails
        product = Product.objects.get(name="Brightener")
    assert "None have been entered." in text_of(visit.get("product", product.uuid))


def test_a_product_is_chosen_already_where_its_page_leads_here(visit: Visitor, line: Line) -> None:
    assert f"/register/jar/?product={line.salt.uuid}" in text_of(visit.get("product", line.salt.uuid))
    page = text_of(visit.get("new-jar", query=f"?product={line.salt.uuid}&place={line.bath.place.uuid}"))  # type: ignore[union-attr]
    assert f'<option value="{line.salt.uuid}" selected>Blue salt · Invented Supply</option>' in page
    assert f'<option value="{line.bath.place.uuid}" selected>' in page  # type: ignore[union-attr]
    assert "Empty: Blue salt 1." in page
    assert visit.get("new-jar", query="?product=nonsense").status_code == 200


def test_several_alike_have_labels_together(visit: Visitor, line: Line) -> None:
    answer = visit.post("new-jar", **said(product=line.salt.uuid, count="3", amount="1 kg", name="Tub 7"))
    jars = list(Vessel._base_manager.filter(name__startswith="Tub").order_by("name"))
    assert [jar.name for jar in jars] == ["Tub 7", "Tub 8", "Tub 9"]
    page = text_of(visit.client.get(answer.headers["Location"]))
    labels = re.search(r'href="([^"]+/labels/[^"]+)"', page)
    assert labels is not None
    asked = text_of(visit.client.get(labels[1].replace("&amp;", "&")))
    assert " ".join(jar.code for jar in jars) in asked


def test_an_empty_container_is_set_up_without_an_entry(visit: Visitor, line: Line) -> None:
    visit.post("new-jar", **said(product=line.salt.uuid, name="Salt tub 2", capacity="5 L"))
    jar = Vessel._base_manager.get(name="Salt tub 2")
    assert (jar.product_id, jar.capacity) == (line.salt.pk, 5 * LITRE)
    assert not Entry._base_manager.exists()


def test_a_second_press_sets_up_nothing_more(visit: Visitor, line: Line) -> None:
    sent = said(product=line.salt.uuid, amount="2 kg")
    first, second = (visit.post("new-jar", **sent) for _press in range(2))
    assert first.headers["Location"] == second.headers["Location"]
    jar = Vessel._base_manager.get(name="Blue salt 1")
    with scopes_disabled():
        assert read_contents(jar).mass.amount == 2000 * GRAM  # type: ignore[union-attr]  # else this fails
    assert visit.post("new-jar", **{**sent, "amount": "3 kg"}).status_code == 409


def test_all_that_is_wrong_comes_at_once_with_what_was_typed(visit: Visitor, line: Line) -> None:
    wrong = said(
        new_name="x" * 121, count="30", amount="1,500 kg", received_on="2.3.2026", name="Salt tub", expires_on="soon"
    )
    page = visit.post("new-jar", **wrong)
    assert page.status_code == 400
    targets = set(re.findall(r'href="#(id_[a-z_]+)"', text_of(page)))
    assert targets == {"id_new_name", "id_count", "id_amount", "id_received_on", "id_expires_on"}
    assert 'value="1,500 kg"' in text_of(page)
    page = visit.post("new-jar", **said(new_supplier="Somebody", name="Salt tub", opened_on="2026-03-03", lot="B"))
    targets = set(re.findall(r'href="#(id_[a-z_]+)"', text_of(page)))
    assert targets == {"id_new_name", "id_new_form", "id_name", "id_opened_on", "id_amount"}
    assert page.content.decode().count("<details") == page.content.decode().count("<details") > 0
    assert not re.search(r'<details class="group" id="group-\w+">', page.content.decode()), (
        "what is wrong is not folded"
    )
    assert not Product._base_manager.filter(supplier="Somebody").exists()


def test_a_jar_of_nothing_is_told_with_all_else(visit: Visitor, line: Line) -> None:
    page = text_of(visit.post("new-jar", **said(amount="1,500 kg")))
    assert "Choose the product, or write a new one." in page
    assert "ambiguous" in page


def test_without_any_product_the_new_one_is_asked_at_once(visit: Visitor) -> None:
    page = text_of(visit.get("new-jar"))
    assert '<details class="group" id="group-new" open>' in page
    assert '<details class="group" id="group-more">' in page


def test_of_too_many_products_only_the_chosen_one_is_listed(
    visit: Visitor, line: Line, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(jar_forms, "MOST_OFFERED", 1)
    page = text_of(visit.get("new-jar"))
    assert "find it in the register" in page
    assert "Blue salt" not in page
    assert '<details class="group" id="group-new" open>' in page
    page = text_of(visit.get("new-jar", query=f"?product={line.salt.uuid}"))
    assert "Blue salt · Invented Supply</option>" in page
    assert "Acid" not in page
    assert visit.post("new-jar", **said(product=line.salt.uuid, amount="1 kg")).status_code == 302
    assert visit.post("new-jar", **said(product=uuid4(), amount="1 kg")).status_code == 400
    assert visit.get("new-jar", query="?product=nonsense").status_code == 200


def test_what_is_of_another_workshop_is_not_there(line: Line, stranger: Membership) -> None:
    visitor = Visitor(stranger)
    page = visitor.post("new-jar", **said(product=line.salt.uuid))
    assert page.status_code == 400
    assert "Blue salt" not in text_of(visitor.get("new-jar", query=f"?product={line.salt.uuid}"))
    assert visitor.get("jars", query=f"?code={line.tub.code}").status_code == 400
    assert "Salt tub" not in text_of(visitor.get("jars", query=f"?code={line.tub.code}"))


def test_the_page_asks_as_often_for_many_products_as_for_one(
    visit: Visitor, line: Line, django_assert_num_queries: Any
) -> None:
    with django_assert_num_queries(6):
        visit.get("new-jar", query=f"?product={line.salt.uuid}")
    for number in range(3):
        product = {"new_name": f"Salt {number}", "new_form": "solid"}
        assert visit.post("new-jar", **said(**product, amount="1 kg", count="2")).status_code == 302
    with django_assert_num_queries(6):
        visit.get("new-jar", query=f"?product={line.salt.uuid}")
