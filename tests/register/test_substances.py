"""Substances: numbers, synonyms, what follows from a formula, corrections, and the usual ones to begin with."""

from datetime import datetime
from decimal import Decimal
from typing import Any

import pytest
from django_scopes import scope
from pytest_django import DjangoAssertNumQueries

from chemicals.register.models import Substance
from chemicals.register.selectors import get_makeup, list_missing_starters, list_substances_for
from chemicals.register.services import (
    LineInput,
    RevisionInput,
    add_starter_substances,
    change_substance,
    create_product,
    create_substance,
)
from chemicals.science.substances import list_starters
from chemicals.workshop.errors import InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership


@pytest.mark.parametrize(
    ("said", "fields"),
    [
        ({"ec_number": "231-847-5"}, ["ec_number"]),
        ({"ec_number": "231-847"}, ["ec_number"]),
        ({"ec_number": "x" * 10}, ["ec_number"]),
        ({"synonyms": ("a\nb",)}, ["synonyms"]),
        ({"synonyms": ("a\x00b",)}, ["synonyms"]),
        ({"synonyms": ("x" * 121,)}, ["synonyms"]),
        ({"synonyms": [f"name {number}" for number in range(31)]}, ["synonyms"]),
        ({"name": "", "cas_number": "7758-99-7", "ec_number": "1"}, ["name", "cas_number", "ec_number"]),
    ],
)
def test_a_substance_is_refused_by_field(worker: Membership, said: dict[str, Any], fields: list[str]) -> None:
    with pytest.raises(InvalidInputError) as caught:
        create_substance(actor=worker, **({"name": "Copper"} | said))
    assert [each.field for each in caught.value.errors] == fields


def test_numbers_and_synonyms_come_in_one_spelling(worker: Membership) -> None:
    made = create_substance(
        actor=worker,
        name="Copper sulfate",
        cas_number="7758–99–8",
        ec_number=" 231‑847‑6 ",
        synonyms=[" blue vitriol ", "", "Blaustein", "blue vitriol"],
    )
    assert (made.cas_number, made.ec_number) == ("7758-99-8", "231-847-6")
    assert made.synonyms == ["blue vitriol", "Blaustein"]


def test_molar_mass_and_metals_follow_from_the_formula(worker: Membership) -> None:
    """KAu(CN)2: 288.10 g/mol (Wikipedia, Potassium dicyanoaurate), 68.4 % gold; nobody balances the potassium."""
    gold = get_makeup(create_substance(actor=worker, name="Gold salt", formula="KAu(CN)2"))
    assert gold.molar_mass == pytest.approx(Decimal("288.10"), abs=Decimal("0.01"))
    assert list(gold.metals) == ["Au"]
    assert gold.metals["Au"] == pytest.approx(Decimal("0.6837"), abs=Decimal("0.0001"))
    secret = get_makeup(create_substance(actor=worker, name="Brightener"))
    assert (secret.molar_mass, secret.metals) == (None, {})


def product_of(member: Membership, now: datetime, substance: Substance) -> None:
    revision = RevisionInput(form="solid", lines=(LineInput(substance, "98 %"),))
    create_product(actor=member, now=now, name="Salt", supplier="", revision=revision)


def test_a_substance_is_corrected(worker: Membership, observer: Membership, stranger: Membership) -> None:
    made = create_substance(actor=worker, name="Coper", formula="Cu")
    change_substance(
        actor=worker, substance=made, name="Copper sulfate", formula="CuSO4", cas_number="7758-98-7", synonyms=("blue",)
    )
    with scope(workshop=worker.workshop):
        row = list_substances_for(worker).get()
    assert (row.name, row.formula, row.cas_number, row.synonyms) == ("Copper sulfate", "CuSO4", "7758-98-7", ["blue"])
    for other in (observer, stranger):
        with pytest.raises(NotPermittedError):
            change_substance(actor=other, substance=made, name="Gold")


def test_a_correction_is_refused_like_a_new_one(worker: Membership) -> None:
    create_substance(actor=worker, name="Gold")
    made = create_substance(actor=worker, name="Copper")
    with pytest.raises(InvalidInputError, match="in the register already") as caught:
        change_substance(actor=worker, substance=made, name="Gold", formula="?")
    assert {each.field for each in caught.value.errors} == {"name", "formula"}
    change_substance(actor=worker, substance=made, name="Copper")


def test_what_a_composition_names_keeps_its_formula(worker: Membership, now: datetime) -> None:
    made = create_substance(actor=worker, name="Copper", formula="Cu")
    product_of(worker, now, made)
    with pytest.raises(InvalidInputError) as caught:
        change_substance(actor=worker, substance=made, name="Copper", formula="CuSO4")
    assert [each.field for each in caught.value.errors] == ["formula"]
    salt = create_substance(actor=worker, name="Sodium sulfate", formula="Na2SO4")
    revision = RevisionInput(form="solid", lines=(LineInput(salt, "98 %"),))
    create_product(actor=worker, now=now, name="Filler", supplier="", revision=revision)
    with pytest.raises(InvalidInputError) as caught:
        change_substance(actor=worker, substance=salt, name="Sodium sulfate", formula="Na2SO4", inert=True)
    assert [each.field for each in caught.value.errors] == ["inert"]
    changed = change_substance(actor=worker, substance=made, name="Copper metal", formula="Cu", cas_number="7440-50-8")
    assert changed.name == "Copper metal"


def test_the_usual_substances_come_when_wanted_and_leave_the_others_alone(
    worker: Membership, observer: Membership
) -> None:
    mine = create_substance(actor=worker, name="Blue vitriol", formula="CuSO4.5H2O", synonyms=("vitriol of Cyprus",))
    gold = create_substance(actor=worker, name="My gold salt", cas_number="13967-50-5")
    with pytest.raises(NotPermittedError):
        add_starter_substances(actor=observer)
    assert len(list_missing_starters(list_substances_for(worker))) == len(list_starters()) - 2
    added = add_starter_substances(actor=worker)
    with scope(workshop=worker.workshop):
        rows = {row.name: row for row in list_substances_for(worker)}
    assert len(added) + 2 == len(rows) == len(list_starters())
    assert (rows["Blue vitriol"], rows["My gold salt"].formula) == (mine, gold.formula)
    nickel = rows["Nickel sulfate hexahydrate"]
    assert (nickel.cas_number, nickel.formula, nickel.inert) == ("10101-97-0", "NiSO4.6H2O", False)
    assert add_starter_substances(actor=worker) == []


def test_the_usual_substances_pass_the_checks_of_any_other(worker: Membership) -> None:
    for row in list_starters():
        create_substance(
            actor=worker, name=row.name, cas_number=row.cas_number, formula=row.formula, synonyms=row.synonyms
        )
    assert list_missing_starters(list_substances_for(worker)) == []


def test_the_usual_substances_are_written_by_few_queries(
    worker: Membership, django_assert_num_queries: DjangoAssertNumQueries
) -> None:
    with django_assert_num_queries(4):  # savepoint, the names here, the new ones, release
        assert add_starter_substances(actor=worker)
