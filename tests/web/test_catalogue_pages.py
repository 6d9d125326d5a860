"""Everything of a sheet on the pages: the long form in its groups, the product's page, substances, old sheets."""

import re
from datetime import timedelta

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.http import HttpResponse
from django.utils import timezone
from django_scopes import scopes_disabled

from chemicals.register.models import Product, ProductRevision, Substance
from chemicals.register.selectors import get_current_revision
from chemicals.science.substances import list_starters
from chemicals.workshop.models import Membership
from tests.web.conftest import Visitor, text_of

SHEET = b"%PDF-1.4\ninvented sheet\n"


@pytest.fixture
def salt(owner: Membership) -> Substance:
    return Substance._base_manager.create(workshop=owner.workshop, name="Nickel sulfate", formula="NiSO4.6H2O")


def said(salt: Substance, **changes: object) -> dict[str, object]:
    return {
        "name": "Green salt",
        "form": "solid",
        "ph_floor": "3.5",
        "lines-0-substance": salt.uuid,
        "lines-0-content": "20-30 %",
        "hazard_classes-0-kind": "Acute Tox. 4 oral",
        "hazard_classes-2-kind": "Carc. 1A",
        "signal_word": "Danger",
        "pictograms": ["GHS07", "GHS08"],
        "statements": "H302, H350i\r\nP280 Wear gloves",
        "reactivity": ["acid"],
        "limits-0-substance": salt.uuid,
        "limits-0-kind": "8 h",
        "limits-0-value": "0.006 mg/m3",
        "limits-0-source": "invented list",
        "gloves": "Nitrile\r\n0.4 mm",
        "un_number": "UN 3077",
        "shipping_name": "ENVIRONMENTALLY HAZARDOUS SUBSTANCE, SOLID, N.O.S.",
        "transport_class": "9",
        "packing_group": "III",
        "sheet_language": "de-at",
        "supplier_telephone": "+49 000 222",
        **changes,
    }


def added(page: HttpResponse) -> Product:
    assert page.status_code == 302, text_of(page)
    return Product._base_manager.get(name="Green salt")


def group_states(page: HttpResponse) -> dict[str, bool]:
    """Return which groups of a form are unfolded."""
    found = re.findall(r'<details class="group" id="group-(\w+)"( open)?>', page.content.decode())
    return {name: bool(is_open) for name, is_open in found}


def test_everything_on_the_sheet_is_entered_in_one_form(visit: Visitor, salt: Substance) -> None:
    product = added(visit.post("add-product", **said(salt)))
    with scopes_disabled():
        revision = get_current_revision(product)
        limits = [(row.substance, row.value, row.source) for row in revision.limits.all()]
    assert (revision.ph_floor, revision.hazard_classes) == (3500, ["Acute Tox. 4 oral", "Carc. 1A"])
    assert revision.statements == ["H302", "H350i", "P280 Wear gloves"]
    assert limits == [(salt, "0.006 mg/m3", "invented list")]
    assert (revision.un_number, revision.packing_group, revision.sheet_language) == ("3077", "III", "de-AT")
    page = text_of(visit.get("product", product.uuid))
    for words in (
        "20-30 %", "Ni 22.33 %", "pH 3.5", "Harmful if swallowed", "Carcinogenicity, 1A", "0.006 mg/m3", "Nitrile",
        "UN 3077", "N.O.S.",
    ):  # fmt: skip
        assert words in page
    assert "do not go together" not in page


def test_what_does_not_go_together_stands_on_the_page(visit: Visitor, salt: Substance) -> None:
    product = added(visit.post("add-product", **said(salt, signal_word="Warning", pictograms=["GHS07"])))
    page = text_of(visit.get("product", product.uuid))
    assert "do not go together" in page
    assert "Carc. 1A calls for the signal word Danger; entered is Warning." in page
    assert "Carc. 1A calls for GHS08, which is not among the pictograms." in page


def test_the_next_revision_begins_with_all_of_this_one(visit: Visitor, salt: Substance) -> None:
    product = added(visit.post("add-product", **said(salt)))
    form = visit.get("revise-product", product.uuid)
    assert group_states(form) == dict.fromkeys(["composition", "hazards", "exposure", "transport", "sheet"], True)
    content = form.content.decode()
    for value in ("20-30 %", "pH 3.5", "0.006 mg/m3", "invented list", "3077", "de-AT"):
        assert f'value="{value}"' in content
    assert '<option value="Carc. 1A" selected>' in content
    again = {name: value for name, value in said(salt).items() if name not in ("name", "ph_floor")}
    visit.post("revise-product", product.uuid, **again, ph_floor="pH 3.5")
    with scopes_disabled():
        first, second = ProductRevision._base_manager.order_by("number")
    kept = ("ph_floor", "hazard_classes", "statements", "gloves", "un_number", "sheet_language", "supplier_telephone")
    assert [getattr(first, name) for name in kept] == [getattr(second, name) for name in kept]


def test_groups_that_few_need_are_folded_until_something_stands_in_them(visit: Visitor, salt: Substance) -> None:
    states = {"composition": True, "hazards": True, "exposure": False, "transport": False, "sheet": True}
    assert group_states(visit.get("add-product")) == states
    wrong = visit.post("add-product", name="Green salt", form="solid", un_number="12")
    assert group_states(wrong) == {**states, "transport": True}
    assert "#id_un_number" in text_of(wrong)
    more = visit.post("add-product", name="Green salt", form="solid", more="limits")
    assert group_states(more) == {**states, "exposure": True}
    assert more.content.decode().count("-source") > visit.get("add-product").content.decode().count("-source")


def test_what_is_wrong_stands_at_its_row(visit: Visitor, salt: Substance) -> None:
    wrong = said(salt, **{"limits-0-value": "5", "lines-0-content": "30-20 %", "transport_unclassified": "on"})
    page = visit.post("add-product", **wrong)
    assert page.status_code == 400
    targets = set(re.findall(r'href="#(id_[a-z_0-9-]+)"', text_of(page)))
    assert targets == {"id_limits-0-value", "id_lines-0-content", "id_transport_unclassified"}
    assert not Product._base_manager.exists()


def test_a_limit_needs_all_but_its_substance(visit: Visitor, salt: Substance) -> None:
    page = visit.post("add-product", **said(salt, **{"limits-0-kind": "", "limits-0-source": ""}))
    assert set(re.findall(r'href="#(id_limits[a-z_0-9-]+)"', text_of(page))) == {
        "id_limits-0-kind",
        "id_limits-0-source",
    }
    whole = added(visit.post("add-product", **said(salt, **{"limits-0-substance": ""})))
    assert "Green salt" in text_of(visit.get("product", whole.uuid))


def test_an_old_sheet_is_marked_by_the_workshop_s_own_figure(
    visit: Visitor, owner: Membership, salt: Substance
) -> None:
    today = timezone.localdate()
    sheet = SimpleUploadedFile("sheet.pdf", SHEET, "application/pdf")
    product = added(
        visit.post("add-product", **said(salt, sheet=sheet, sheet_date=str(today - timedelta(days=4 * 366))))
    )
    page = text_of(visit.get("product", product.uuid))
    assert "sheet older than 3 years" in page
    assert "its own figure" in page
    assert "sheet older than 3 years" in text_of(visit.get("register"))
    type(owner.workshop).objects.update(sheet_years=10)
    assert "older than" not in text_of(visit.get("product", product.uuid))
    visit.post("revise-product", product.uuid, form="solid", sheet_date="")
    assert "sheet without a date" in text_of(visit.get("register"))
    page = text_of(visit.get("product", product.uuid))
    assert page.count("Safety data sheet (PDF)") == 2


def test_a_product_without_a_sheet_is_marked(visit: Visitor, salt: Substance) -> None:
    product = added(visit.post("add-product", **said(salt)))
    assert "no sheet" in text_of(visit.get("register"))
    assert "Ask the supplier for it" in text_of(visit.get("product", product.uuid))


def test_the_file_of_products_has_all_of_it(visit: Visitor, salt: Substance) -> None:
    added(visit.post("add-product", **said(salt)))
    file = b"".join(visit.get("register", query="?list=products&as=csv")).decode()
    for words in ("pH 3.5", "Carc. 1A", "Nickel sulfate: 0.006 mg/m3", "3077", "de-AT", "Nitrile"):
        assert words in file


def test_a_substance_shows_what_follows_from_its_formula(visit: Visitor) -> None:
    names = {"synonyms": "blue vitriol\r\n\r\nBlaustein", "cas_number": "7758–99–8", "ec_number": "231-847-6"}
    assert visit.post("add-substance", name="Copper sulfate", formula="CuSO4.5H2O", **names).status_code == 302
    page = text_of(visit.get("substances"))
    for words in ("249.68 g/mol", "Cu 25.45 %", "blue vitriol; Blaustein", "7758-99-8", "231-847-6"):
        assert words in page


def test_a_substance_is_corrected(visit: Visitor, salt: Substance) -> None:
    assert 'value="NiSO4.6H2O"' in visit.get("substance", salt.uuid).content.decode()
    page = visit.post("substance", salt.uuid, name="Nickel sulfate", formula="NiSO4.6H2O", cas_number="10101-97-1")
    assert (page.status_code, "#id_cas_number" in text_of(page)) == (400, True)
    page = visit.post("substance", salt.uuid, name="Nickel salt", formula="NiSO4.6H2O", cas_number="10101-97-0")
    assert page.status_code == 302
    assert "Nickel salt" in text_of(visit.get("substances"))


def test_the_usual_substances_are_added_by_a_button(visit: Visitor, salt: Substance) -> None:
    Substance._base_manager.filter(pk=salt.pk).update(cas_number="10101-97-0")
    page = text_of(visit.get("substances"))
    assert f"{len(list_starters()) - 1} that are not here yet" in page
    assert visit.post("add-starters").status_code == 302
    page = text_of(visit.get("substances"))
    assert "Potassium gold cyanide" in page
    assert "not here yet" not in page
    assert Substance._base_manager.get(pk=salt.pk).name == "Nickel sulfate"


def test_an_observer_gets_no_button(observer: Membership, salt: Substance) -> None:
    visitor = Visitor(observer)
    page = visitor.get("substances")
    assert "Add them" not in text_of(page)
    assert visitor.post("add-starters").status_code == 403
