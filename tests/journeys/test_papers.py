"""Papers about vessels, from the bench to the printer: each page and each twin is looked at by axe on the way."""

from collections.abc import Callable

import pytest
from django_scopes import scopes_disabled

from chemicals.ledger.models import Vessel
from compliance.documents.models import Paper, PaperKind
from tests.journeys.conftest import DESK, PHONE, Visitor
from tests.journeys.test_bench import People

Sizes = dict[str, int]


def look(visitor: Visitor) -> None:
    """Look at the page as it is."""
    visitor.page.wait_for_load_state()
    visitor.check_page()


@pytest.mark.parametrize("size", [PHONE, DESK], ids=["phone", "desk"])
def test_a_worker_labels_a_bath_and_what_is_decanted(demo: People, visit: Callable[..., Visitor], size: Sizes) -> None:
    with scopes_disabled():
        bath = Vessel.objects.get(name="Acid copper")
    visitor = visit(size)
    visitor.sign_in(*demo["worker"])
    visitor.go(f"/c/{bath.code}")
    look(visitor)
    visitor.page.get_by_role("link", name="Issue a label", exact=True).click()
    look(visitor)
    visitor.page.get_by_label("Label stock").select_option("4 per A4")
    assert visitor.page.get_by_label("First free label").input_value() == "6"  # of the sheet that was printed last
    visitor.page.get_by_label("First free label").fill("1")
    visitor.page.get_by_label("Of each").fill("2")
    visitor.page.get_by_role("button", name="Issue the labels").click()
    visitor.page.get_by_role("heading", name="Labels 3", exact=True).wait_for()
    look(visitor)
    visitor.go(f"/c/{bath.code}")
    visitor.page.get_by_role("link", name="Label what is decanted").click()
    look(visitor)
    visitor.page.get_by_label("Note").fill("for the Hull cell")
    visitor.page.get_by_role("button", name="Issue the label").click()
    visitor.page.get_by_role("heading", name="Labels 4", exact=True).wait_for()
    look(visitor)
    with scopes_disabled():
        assert Paper.objects.filter(kind=PaperKind.LABELS).count() == 4


@pytest.mark.parametrize("size", [PHONE, DESK], ids=["phone", "desk"])
def test_an_owner_hangs_up_the_emergency_sheet_and_lists_the_chemicals(
    demo: People, visit: Callable[..., Visitor], size: Sizes
) -> None:
    visitor = visit(size)
    visitor.sign_in(*demo["owner"])
    visitor.page.get_by_role("link", name="Register", exact=True).click()
    look(visitor)
    visitor.page.get_by_role("link", name="What is where").click()
    look(visitor)
    visitor.page.get_by_role("link", name="Change the numbers").click()
    look(visitor)
    visitor.page.get_by_label("Whom to call").last.fill("Landlord")
    visitor.page.get_by_label("Telephone").last.fill("000 42")
    visitor.page.get_by_role("button", name="Save").click()
    look(visitor)
    visitor.page.get_by_role("link", name="What is where").click()
    assert visitor.page.get_by_text("000 42").is_visible()
    visitor.page.get_by_role("button", name="Issue the sheet").click()
    visitor.page.get_by_role("heading", name="Emergency sheet 2", exact=True).wait_for()
    look(visitor)
    visitor.page.go_back()
    visitor.page.get_by_role("link", name="Register", exact=True).click()
    visitor.page.get_by_text("More of the register").click()
    visitor.page.get_by_role("link", name="List of chemicals").click()
    look(visitor)
    visitor.page.get_by_role("link", name="Choose another rule").click()
    look(visitor)
    visitor.page.get_by_label("Rule").select_option("us-hazcom-e-1")
    visitor.page.get_by_role("button", name="Choose this rule").click()
    look(visitor)
    visitor.page.get_by_role("button", name="Issue the list").click()
    visitor.page.get_by_role("heading", name="List of chemicals 2", exact=True).wait_for()
    look(visitor)
    with scopes_disabled():
        assert Paper.objects.filter(kind=PaperKind.REGISTER).count() == 2


def test_an_observer_reads_what_is_where_and_every_paper(demo: People, visit: Callable[..., Visitor]) -> None:
    visitor = visit(PHONE)
    visitor.sign_in(*demo["observer"])
    visitor.page.get_by_role("link", name="Register", exact=True).click()
    visitor.page.get_by_role("link", name="What is where").click()
    look(visitor)
    assert visitor.page.get_by_role("link", name="Bottle of sulfuric acid").is_visible()
    assert visitor.page.get_by_role("button", name="Issue the sheet").count() == 0
    with scopes_disabled():
        papers = {paper.kind: paper for paper in Paper.objects.select_related("workshop")}
    assert set(papers) == set(PaperKind)
    for paper in papers.values():
        visitor.go(f"/w/{paper.workshop.uuid}/papers/{paper.uuid}/")
        look(visitor)
