"""The list of chemicals and the rule that its columns follow: off until chosen, and never a verdict."""

from datetime import date, timedelta
from typing import Any
from uuid import uuid4

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext

from chemicals.journal.services import add_attachment
from chemicals.register.services import RevisionInput, revise_product
from chemicals.science.quantity import parse
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from compliance.documents.models import Paper
from compliance.documents.register_words import list_column
from compliance.documents.render import render_pdf
from compliance.documents.selectors import read_data, read_html, read_pdf
from compliance.premises import rules
from compliance.premises.chemicals import band, read_list
from compliance.premises.models import ChosenRule
from compliance.premises.selectors import find_chosen_rule
from compliance.premises.services import choose_rule, issue_chemical_list
from tests.documents.test_pdf import squeezed, text_of
from tests.premises.conftest import product_of
from tests.process.shop import Shop

GERMAN, US = "de-gefstoffv-6-12", "us-hazcom-e-1"


def choose(shop: Shop, rule: str = GERMAN, **said: Any) -> ChosenRule:
    options = {"checked_on": date(2026, 2, 1), **said}
    return choose_rule(actor=shop.member, now=shop.now, rule=rule, **options)


def issue(shop: Shop, **said: Any) -> Paper:
    return issue_chemical_list(actor=shop.member, now=shop.now, **{"key": uuid4(), **said})


def cells(shop: Shop, product: str) -> dict[str, list[str]]:
    found = read_list(shop.member, shop.now)
    return next(row.cells for row in found.rows if row.revision.product.name == product)


def test_every_line_has_columns_a_source_an_edition_and_says_whether_it_was_read() -> None:
    assert {rule.code for rule in rules.list_rules()} == {GERMAN, US}
    for rule in rules.list_rules():
        assert set(rule.columns) <= set(rules.COLUMNS)
        assert rule.columns[0] == "name"
        assert all((rule.source, rule.edition, rule.provision, rule.asks_for))
        assert rule.read in ("read", "memory")
        assert all(list_column(column) for column in rule.columns)  # type: ignore[arg-type]


def test_the_german_line_asks_for_five_things() -> None:
    """GefStoffV s. 6(12): name, classification, quantity ranges, work areas, reference to the safety data sheet."""
    rule = rules.find_rule(GERMAN)
    assert rule is not None
    assert rule.columns == ("name", "classification", "quantities", "areas", "sheet")
    assert len(rule.asks_for.split(";")) == 5


def test_there_is_no_list_until_a_rule_is_chosen(filled: Shop) -> None:
    assert find_chosen_rule(filled.member) is None
    with pytest.raises(ConflictError, match="No rule is chosen"):
        issue(filled)
    choose(filled)
    assert read_data(issue(filled))["columns"] == ["name", "classification", "quantities", "areas", "sheet"]


def test_another_choice_takes_the_place_of_the_first(filled: Shop) -> None:
    choose(filled)
    choose(filled, US, citation="29 CFR 1910.1200, as printed")
    found = find_chosen_rule(filled.member)
    assert found is not None
    assert (found[0].code, found[1].citation) == (US, "29 CFR 1910.1200, as printed")
    paper = issue(filled)
    assert read_data(paper)["columns"] == ["name", "areas", "sheet"]
    assert "Quantity ranges" not in text_of(read_pdf(paper))
    assert squeezed("Cited as: 29 CFR 1910.1200, as printed") in squeezed(text_of(read_pdf(paper)))


def test_a_wrong_choice_is_told_at_once(filled: Shop) -> None:
    with pytest.raises(InvalidInputError) as caught:
        choose(filled, "the-moon", checked_on=filled.now.date() + timedelta(days=2), citation="a\nb")
    assert sorted(error.field for error in caught.value.errors) == ["checked_on", "citation", "rule"]
    assert find_chosen_rule(filled.member) is None


def test_a_line_from_memory_needs_a_citation(filled: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    remembered = rules.ListRule("x", "XX", "Rule", "names", ("name",), "somebody", "unknown", "memory")
    monkeypatch.setattr("compliance.premises.services.find_rule", lambda code: remembered)
    with pytest.raises(InvalidInputError, match="written from memory"):
        choose(filled, "x")
    assert choose(filled, "x", citation="read in the library").citation == "read in the library"


def test_only_an_owner_chooses(filled: Shop, worker: Membership, observer: Membership) -> None:
    for member in (worker, observer):
        with pytest.raises(NotPermittedError):
            choose_rule(actor=member, now=filled.now, rule=GERMAN, checked_on=date(2026, 2, 1))
    choose(filled)
    with pytest.raises(NotPermittedError):
        issue_chemical_list(actor=observer, now=filled.now, key=uuid4())


def test_a_line_says_what_is_here_what_was_used_and_where(filled: Shop) -> None:
    assert cells(filled, "Copper salt") == {
        "name": ["Copper salt", "Anyone"],
        "classification": ["Warning", "H302, H411"],
        "quantities": ["here: 1 to 10 kg", "used in twelve months: 1 to 10 kg"],
        "areas": ["Bench", "Shelf"],
        "sheet": ["none kept here"],
    }
    assert cells(filled, "Sulfuric acid")["classification"] == ["Danger", "Skin Corr. 1A", "H314, EUH014"]
    assert cells(filled, "Potassium cyanide")["quantities"] == ["here: 0.1 to 1 kg", "used in twelve months: none"]
    assert cells(filled, "Potassium cyanide")["areas"] == ["Shelf"]


def test_what_moves_between_containers_of_one_product_is_no_use(filled: Shop) -> None:
    filled.holder("Small jar", product_of(filled, "Copper salt"))
    filled.record("move", source="Salt jar", target="Small jar", mass="500 g")
    filled.record("count", vessel="Salt jar", amount="490 g")
    row = next(row for row in read_list(filled.member, filled.now).rows if row.revision.product.name == "Copper salt")
    assert row.used == {"gross mass": parse("4 kg", "mass").base}
    assert row.here["gross mass"] == parse("990 g", "mass").base


def test_what_was_used_more_than_a_year_ago_counts_no_longer(filled: Shop) -> None:
    found = read_list(filled.member, filled.now + timedelta(days=400))
    assert {row.revision.product.name: row.used for row in found.rows} == {
        "Copper salt": {},
        "Potassium cyanide": {},
        "Sulfuric acid": {},
    }


def test_an_unknown_amount_makes_an_unknown_range(filled: Shop) -> None:
    filled.holder("Second jar", product_of(filled, "Potassium cyanide"))
    assert cells(filled, "Potassium cyanide")["quantities"][0] == "here: unknown"


def test_what_is_not_here_is_left_off_and_counted(filled: Shop) -> None:
    filled.product("Forgotten", {})
    choose(filled)
    paper = issue(filled)
    data = read_data(paper)
    assert data["left_out"] == 1
    assert [row["name"][0] for row in data["rows"]] == ["Copper salt", "Potassium cyanide", "Sulfuric acid"]
    assert squeezed("1 product of the register, of which nothing is here") in squeezed(text_of(read_pdf(paper)))


def test_hazards_that_nobody_entered_are_told_as_that(filled: Shop) -> None:
    filled.holder("Bare", filled.product("Bare powder", {}))
    assert cells(filled, "Bare powder")["classification"] == ["not entered"]


def test_the_sheet_is_named_with_its_date_and_language(filled: Shop) -> None:
    product = product_of(filled, "Sulfuric acid")
    kept = add_attachment(actor=filled.member, now=filled.now, name="säure.pdf", data=b"%PDF-1.4 invented")
    said = RevisionInput(
        form="liquid", safety_data_sheet=kept, sheet_language="de", sheet_date=date(2025, 1, 31), reactivity=("acid",)
    )
    revise_product(actor=filled.member, now=filled.now, product=product, revision=said)
    assert cells(filled, "Sulfuric acid")["sheet"] == ["säure.pdf", "2025-01-31, de"]


@pytest.mark.parametrize(
    ("amount", "said"),
    [
        ("0 kg", "none"), ("1 mg", "less than 0.1 kg"), ("99.9 g", "less than 0.1 kg"), ("100 g", "0.1 to 1 kg"),
        ("999 g", "0.1 to 1 kg"), ("1 kg", "1 to 10 kg"), ("25 kg", "10 to 100 kg"), ("100 kg", "100 to 1000 kg"),
        ("1000 kg", "1000 kg or more"),
    ],
)  # fmt: skip
def test_ranges_are_decades(amount: str, said: str) -> None:
    assert band(parse(amount, "mass").base, "kg") == said


def test_an_unknown_range_is_a_word() -> None:
    assert band(None, "L") == "unknown"


def test_the_list_is_numbered_stays_as_issued_and_judges_nothing(filled: Shop) -> None:
    choose(filled)
    key = uuid4()
    paper = issue(filled, key=key)
    before = read_pdf(paper)
    choose(filled, US)
    assert issue(filled, key=key) == paper
    assert read_pdf(paper) == before == render_pdf("register", read_data(paper), paper_size="A4")
    said = " ".join(read_html(paper).split())
    assert "Whether that is what a rule asks for, it does not say." in said
    assert "Columns after GefStoffV s. 6(12)" in said
    assert issue(filled, paper_size="Letter").number == 2


@pytest.mark.parametrize("count", [1, 3])
def test_the_list_takes_the_same_queries_however_long_it_is(filled: Shop, count: int) -> None:
    filled.drum("Canister")
    for number in range(count):
        filled.holder(f"Can {number}", filled.product(f"Product {number}", {"NaCl": "99 %"}))
        filled.record("receipt", vessel=f"Can {number}", amount="1 kg")
    with CaptureQueriesContext(connection) as queries:
        rows = read_list(filled.member, filled.now).rows
        assert len([row.cells for row in rows]) == 3 + count
    assert len(queries) == 12
