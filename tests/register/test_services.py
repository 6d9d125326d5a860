"""The catalogue: what is refused by field, what is never changed, what an entry relies on."""

from datetime import datetime
from decimal import Decimal
from pathlib import Path
from typing import Any

import pytest
from django_scopes import scope
from pytest_django import Settings

from chemicals.books.events import Share
from chemicals.journal.services import add_attachment
from chemicals.register.models import Product, ProductRevision, Substance
from chemicals.register.selectors import (
    build_recipe,
    get_current_revision,
    get_product_for,
    list_current_revisions_for,
    list_products_for,
    list_revisions_of,
    list_solutes,
    list_substances_for,
)
from chemicals.register.services import (
    LineInput,
    RevisionInput,
    create_product,
    create_substance,
    keep_sheet,
    revise_product,
)
from chemicals.workshop.errors import InvalidInputError, NotFoundError, NotPermittedError
from chemicals.workshop.models import Membership, Role
from tests.conftest import make_member


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


@pytest.fixture
def salt(worker: Membership) -> Substance:
    return create_substance(actor=worker, name="Copper sulfate", cas_number="7758-99-8", formula="CuSO4.5H2O")


def fields_of(error: InvalidInputError) -> list[str]:
    return [each.field for each in error.errors]


@pytest.mark.parametrize(
    ("said", "fields"),
    [
        ({"name": " "}, ["name"]),
        ({"name": "x" * 121}, ["name"]),
        ({"name": "a\tb"}, ["name"]),
        ({"name": "a\nb"}, ["name"]),
        ({"cas_number": "7758-99-7"}, ["cas_number"]),
        ({"cas_number": "copper"}, ["cas_number"]),
        ({"formula": "CuSO5x"}, ["formula"]),
        ({"name": "", "cas_number": "1", "formula": "?"}, ["name", "cas_number", "formula"]),
        ({"inert": True}, ["formula"]),
        ({"inert": True, "formula": "?"}, ["formula"]),
        ({"inert": True, "formula": "Cu"}, ["inert"]),
        ({"inert": True, "formula": "NaCN"}, ["inert"]),
        ({"inert": True, "formula": "C" * 41}, ["formula"]),
    ],
)
def test_a_substance_is_refused_by_field(worker: Membership, said: dict[str, Any], fields: list[str]) -> None:
    with pytest.raises(InvalidInputError) as caught:
        create_substance(actor=worker, **({"name": "Copper"} | said))
    assert fields_of(caught.value) == fields


def test_a_substance_stands_there_once_however_it_is_typed(worker: Membership, stranger: Membership) -> None:
    create_substance(actor=worker, name="Café salt")
    with pytest.raises(InvalidInputError, match="in the register already"):
        create_substance(actor=worker, name=" Cafe\u0301 salt ")
    create_substance(actor=stranger, name="Café salt")


def revision(**said: Any) -> RevisionInput:
    return RevisionInput(**({"form": "solid"} | said))


@pytest.mark.parametrize(
    ("said", "fields"),
    [
        ({"form": "plasma"}, ["form"]),
        ({"density": "1,500 g/mL"}, ["density"]),
        ({"density": "0 g/mL"}, ["density"]),
        ({"signal_word": "Caution"}, ["signal_word"]),
        ({"pictograms": ("GHS99",)}, ["pictograms"]),
        ({"reactivity": ("water",)}, ["reactivity"]),
        ({"statements": ("H302 Harmful", "harmful")}, ["statements"]),
        ({"statements": ("H302 a\x1bb",)}, ["statements"]),
        ({"form": "plasma", "density": "x", "signal_word": "Oh"}, ["form", "signal_word", "density"]),
    ],
)
def test_a_revision_is_refused_by_field(
    worker: Membership, now: datetime, said: dict[str, Any], fields: list[str]
) -> None:
    with pytest.raises(InvalidInputError) as caught:
        create_product(actor=worker, now=now, name="Salt", supplier="Anyone", revision=revision(**said))
    assert fields_of(caught.value) == fields
    assert list(list_products_for(worker)) == []


@pytest.mark.parametrize(
    ("form", "contents", "fields"),
    [
        ("solid", ["101 %"], ["lines"]),
        ("solid", ["abc"], ["lines.0.content"]),
        ("solid", ["250 g/L"], ["lines.0.content"]),
        ("solid", ["60 %", "60 %"], ["lines", "lines"]),
        ("liquid", ["10 %", "5 g/L"], ["lines"]),
    ],
)
def test_a_composition_is_refused_by_line(salt: Substance, form: str, contents: list[str], fields: list[str]) -> None:
    owner = make_member(salt.workshop, Role.OWNER, "olga@alder.example")
    said = revision(form=form, lines=tuple(LineInput(salt, content) for content in contents))
    with pytest.raises(InvalidInputError) as caught:
        create_product(actor=owner, now=salt.workshop.created_at, name="Salt", supplier="", revision=said)
    assert fields_of(caught.value) == fields


def test_all_that_is_wrong_with_a_product_is_said_at_once(worker: Membership, now: datetime) -> None:
    with pytest.raises(InvalidInputError) as caught:
        create_product(actor=worker, now=now, name="", supplier="a\x00", revision=revision(form="plasma"))
    assert fields_of(caught.value) == ["supplier", "name", "form"]


def test_the_same_product_of_the_same_supplier_is_revised_instead(worker: Membership, now: datetime) -> None:
    create_product(actor=worker, now=now, name="Salt", supplier="Anyone", revision=revision())
    create_product(actor=worker, now=now, name="Salt", supplier="Another", revision=revision())
    with pytest.raises(InvalidInputError, match="Revise it instead"):
        create_product(actor=worker, now=now, name=" Salt", supplier="Anyone ", revision=revision())


def test_revisions_are_numbered_and_stay(worker: Membership, now: datetime, salt: Substance) -> None:
    first = create_product(
        actor=worker, now=now, name="Salt", supplier="", revision=revision(lines=(LineInput(salt, "98 %"),))
    )
    second = revise_product(
        actor=worker, now=now, product=first.product, revision=revision(lines=(LineInput(salt, "99 %"),))
    )
    assert (first.number, second.number) == (1, 2)
    assert get_current_revision(first.product) == second
    with scope(workshop=worker.workshop):
        assert [line.typed for row in list_revisions_of(first.product) for line in row.lines.all()] == ["99 %", "98 %"]
        assert list(list_current_revisions_for(worker)) == [second]


def test_a_recipe_holds_metal_and_species_of_each_line(worker: Membership, now: datetime, salt: Substance) -> None:
    """98 % of CuSO4.5H2O, of which 0.2545 is copper; 1 % of H2SO4, 10 g at 98.08 g/mol with two hydrogens."""
    acid = create_substance(actor=worker, name="Sulfuric acid", formula="H2SO4")
    secret = create_substance(actor=worker, name="Brightener")
    lines = (LineInput(salt, "98 %"), LineInput(acid, "1 %"), LineInput(secret, "1 %"))
    made = create_product(
        actor=worker,
        now=now,
        name="Mix",
        supplier="",
        revision=revision(form="liquid", density="1.2 g/mL", lines=lines),
    )
    recipe = build_recipe(get_current_revision(made.product))
    share, acidity = recipe.shares
    assert (share.component, share.per) == ("Cu", "kg")
    assert (acidity.component, acidity.per) == ("acid", "kg")
    assert abs(Decimal(acidity.amount) / 10**9 - 2 * Decimal(10) / Decimal("98.08")) < Decimal("0.0001")
    assert abs(Decimal(share.amount) / 10**9 - Decimal("0.98") * Decimal("0.25451")) < Decimal("0.00001")
    assert (recipe.solid, recipe.complete) == (False, True)
    assert recipe.density is not None
    assert recipe.density.base == 1_200_000


def test_what_was_declared_inert_is_balanced_by_its_formula(
    worker: Membership, stranger: Membership, now: datetime
) -> None:
    salt = create_substance(actor=worker, name="Glauber's salt", formula="Na2SO4·10 H2O", inert=True)
    double = create_substance(actor=worker, name="Nickel salt", formula="NiSO4.6H2O", inert=True)
    lines = (LineInput(salt, "50 %"), LineInput(double, "10 %"))
    made = create_product(actor=worker, now=now, name="Salts", supplier="", revision=revision(lines=lines))
    shares = {share.component: share.amount for share in build_recipe(get_current_revision(made.product)).shares}
    assert shares.pop("Ni") == pytest.approx(0.1 * 10**9 * 58.693 / 262.84, rel=1e-4)
    assert shares == {"Na2SO4.10H2O": 5 * 10**8, "NiSO4.6H2O": 10**8}
    assert list_solutes(worker.workshop) == set(shares)
    assert list_solutes(stranger.workshop) == set()


def test_a_content_per_litre_stays_per_litre(worker: Membership, now: datetime) -> None:
    gold = create_substance(actor=worker, name="Gold", formula="Au")
    made = create_product(
        actor=worker,
        now=now,
        name="Bath salt",
        supplier="",
        revision=revision(form="liquid", lines=(LineInput(gold, "100 g/L"),)),
    )
    assert build_recipe(get_current_revision(made.product)).shares == (Share("Au", 10**8, 0, "L"),)


def test_a_sheet_is_a_pdf_of_this_workshop(worker: Membership, stranger: Membership, now: datetime) -> None:
    sheet = keep_sheet(actor=worker, now=now, name="sheet.pdf", data=b"%PDF-1.4 x")
    photo = add_attachment(actor=worker, now=now, name="photo.jpg", data=b"\xff\xd8\xff x")
    theirs = keep_sheet(actor=stranger, now=now, name="sheet.pdf", data=b"%PDF-1.4 y")
    made = create_product(actor=worker, now=now, name="Salt", supplier="", revision=revision(safety_data_sheet=sheet))
    assert made.safety_data_sheet == sheet
    with pytest.raises(InvalidInputError, match="Choose the PDF"):
        revise_product(actor=worker, now=now, product=made.product, revision=revision(safety_data_sheet=photo))
    with pytest.raises(NotPermittedError):
        revise_product(actor=worker, now=now, product=made.product, revision=revision(safety_data_sheet=theirs))
    with pytest.raises(InvalidInputError, match="Choose the PDF"):
        keep_sheet(actor=worker, now=now, name="sheet.pdf", data=b"<html>")


def test_observers_and_strangers(
    worker: Membership, observer: Membership, stranger: Membership, now: datetime, salt: Substance
) -> None:
    made = create_product(actor=worker, now=now, name="Salt", supplier="", revision=revision())
    with pytest.raises(NotPermittedError):
        create_substance(actor=observer, name="Copper")
    for member in (observer, stranger):
        with pytest.raises(NotPermittedError):
            revise_product(actor=member, now=now, product=made.product, revision=revision())
    with pytest.raises(NotPermittedError):
        create_product(
            actor=stranger, now=now, name="Mine", supplier="", revision=revision(lines=(LineInput(salt, "1 %"),))
        )
    assert get_product_for(observer, made.product.uuid) == made.product
    with pytest.raises(NotFoundError):
        get_product_for(stranger, made.product.uuid)
    with scope(workshop=stranger.workshop):
        assert list(list_substances_for(stranger)) == []
        assert not Product.objects.exists()
        assert not ProductRevision.objects.exists()
