"""At the desk, on the first of a month: what a vessel held, what the month changed, and the month is closed."""

from collections.abc import Callable

from tests.journeys.conftest import DESK, PHONE, Visitor
from tests.journeys.test_bench import People, scan_and_sign_in


def test_from_a_vessel_to_its_ledger_and_an_entry_of_it(demo: People, visit: Callable[..., Visitor]) -> None:
    """Without JavaScript, on a phone; only one of the two plots is there to see."""
    visitor = visit(PHONE, java_script_enabled=False)
    scan_and_sign_in(visitor, "Acid copper", demo["observer"])
    page = visitor.page
    page.get_by_role("link", name="What came and went").click()
    page.get_by_label("From").fill("2026-02-01")
    page.get_by_label("Through").fill("2026-02-28")
    page.get_by_label("What").select_option("volume")
    page.get_by_role("button", name="Show").click()
    page.get_by_role("heading", name="Liquid in it, 2026-02-01 to 2026-02-28").wait_for()
    assert page.locator("svg.plot:visible").count() == 1
    page.get_by_role("link", name="Period before").click()
    page.get_by_role("heading", name="Liquid in it, 2026-01-01 to 2026-01-31").wait_for()
    page.get_by_role("link", name="make-up").click()
    page.get_by_role("heading", level=1, name="make-up").wait_for()


def test_the_owner_compares_two_dates_closes_a_period_and_opens_it_again(
    demo: People, visit: Callable[..., Visitor]
) -> None:
    visitor = visit(DESK)
    scan_and_sign_in(visitor, "Acid copper", demo["owner"])
    page = visitor.page
    page.get_by_role("navigation").get_by_role("link", name="Balance").click()
    page.get_by_role("link", name="Compare two dates").click()
    page.get_by_role("heading", level=2, name="Copper").wait_for()
    visitor.check_page()
    page.get_by_role("link", name="Balance").last.click()
    page.get_by_role("link", name="Closed periods").click()
    visitor.check_page()
    page.get_by_role("link", name="Close a period").click()
    page.get_by_label("Last day").fill("2026-02-15")
    page.get_by_role("button", name="Close it").click()
    page.get_by_text("Closed. What followed from its entries is proved by two hashes.").wait_for()
    visitor.check_page()
    page.get_by_role("link", name="Open it again").click()
    page.get_by_label("Reason").fill("A drum was forgotten.")
    page.get_by_role("button", name="Open it again").click()
    page.get_by_text("superseded").first.wait_for()
    visitor.check_page()
    assert "superseded" in page.get_by_role("main").inner_text()
