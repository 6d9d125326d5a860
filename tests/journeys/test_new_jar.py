"""A bottle in one hand, the phone in the other: from the register to a label for what was not in it."""

import re
from collections.abc import Callable
from dataclasses import dataclass

from django_scopes import scopes_disabled
from playwright.sync_api import Locator, Page

from chemicals.ledger.models import Vessel
from chemicals.register.models import Product
from tests.journeys.conftest import PHONE, Visitor
from tests.journeys.test_bench import People

MOST_FIELDS, MOST_PRESSES = 7, 5
"""What fits into two minutes with one hand: some ten seconds each."""


@dataclass
class Hand:
    """Counts what a hand does on a page."""

    page: Page
    fields: int = 0
    presses: int = 0

    def fill(self, label: str, text: str) -> None:
        """Write into a field."""
        self._field(label).fill(text)
        self.fields += 1

    def choose(self, label: str, choice: str) -> None:
        """Choose from a list."""
        self._field(label).select_option(label=choice)
        self.fields += 1

    def _field(self, label: str) -> Locator:
        return self.page.get_by_label(re.compile(rf"^\s*{label}(\s+needed)?\s*$"))

    def press(self, role: str, name: str) -> None:
        """Press a link or a button."""
        self.page.get_by_role(role, name=name, exact=True).click()  # type: ignore[arg-type]  # one of its many roles
        self.presses += 1

    def unfold(self, text: str) -> None:
        """Open what is folded."""
        self.page.get_by_text(text, exact=True).click()
        self.presses += 1


def test_a_jar_that_the_register_does_not_know_has_its_label_in_two_minutes(
    demo: People, visit: Callable[..., Visitor]
) -> None:
    visitor = visit(PHONE)
    visitor.sign_in(*demo["worker"])
    visitor.page.get_by_role("navigation").get_by_role("link", name="Register").click()
    hand = Hand(visitor.page)
    hand.press("link", "A new jar")
    visitor.page.get_by_role("heading", level=1, name="A new jar").wait_for()
    visitor.check_page()
    hand.unfold("It is not in the register yet")
    hand.fill("Name of the product", "Invented brightener")
    hand.fill("Supplier", "Invented Supplies")
    hand.choose("Physical form", "liquid")
    hand.fill("Amount in each", "500 mL")
    hand.choose("Place", "Cupboard")
    hand.fill("Lot", "DEMO-9")
    hand.fill("Keeps until", "2027-06-30")
    hand.press("button", "Set it up")
    visitor.page.get_by_role("heading", level=1, name="Set up").wait_for()
    visitor.check_page()
    with scopes_disabled():
        jar = Vessel.objects.select_related("product", "place").get(name="Invented brightener 1")
        assert str(jar.place) == "Cupboard"
    assert jar.code in visitor.page.inner_text("main")
    hand.press("link", "Labels")
    hand.press("button", "Issue the labels")
    visitor.page.get_by_role("heading", level=1, name=re.compile("^Labels [0-9]")).wait_for()
    visitor.check_page()
    paper = visitor.page.inner_text("main")
    assert jar.code in paper
    assert "Invented brightener" in paper
    assert "2027-06-30" in paper
    assert hand.fields <= MOST_FIELDS
    assert hand.presses <= MOST_PRESSES


def test_the_next_one_of_the_same_needs_two_fields_and_nothing_is_set_up_twice(
    demo: People, visit: Callable[..., Visitor]
) -> None:
    visitor = visit(PHONE, java_script_enabled=False)
    visitor.sign_in(*demo["worker"])
    with scopes_disabled():
        product = Product.objects.get(name="Gold sulfite solution")
        before = Vessel.objects.count()
    visitor.go(f"/w/{product.workshop.uuid}/register/{product.uuid}/")
    hand = Hand(visitor.page)
    hand.press("link", "A new jar")
    hand.fill("Amount in each", "100 mL")
    hand.fill("How many alike", "2")
    visitor.page.get_by_role("button", name="Set it up").dblclick()
    visitor.page.get_by_role("heading", level=1, name="Set up").wait_for()
    with scopes_disabled():
        assert Vessel.objects.count() == before + 2
    assert "Gold sulfite solution 2" in visitor.page.inner_text("main")
