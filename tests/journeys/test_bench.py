"""At the bench, on a phone: from the code on the tank to the balance."""

from collections.abc import Callable

from django_scopes import scopes_disabled

from chemicals.journal.models import Entry
from chemicals.ledger.models import Vessel
from tests.journeys.conftest import PHONE, Visitor

People = dict[str, tuple[str, str]]


def vessel_of(name: str) -> Vessel:
    """Return a vessel of the demo."""
    with scopes_disabled():
        return Vessel.objects.get(name=name)


def count_entries() -> int:
    """Return how many entries the journal has."""
    with scopes_disabled():
        return Entry.objects.count()


def scan_and_sign_in(visitor: Visitor, name: str, person: tuple[str, str]) -> None:
    """Scan the code on a vessel while signed out; sign in; stand on the vessel's page."""
    visitor.go(f"/c/{vessel_of(name).code}")
    visitor.page.get_by_label("E-mail").fill(person[0])
    visitor.page.get_by_label("Password").fill(person[1])
    visitor.page.get_by_role("button", name="Sign in").click()
    visitor.page.get_by_role("heading", level=1, name=name).wait_for()


def log_the_run(visitor: Visitor) -> None:
    """Log a small part: weighed before and after, 1 A/dm2 for four hours."""
    page = visitor.page
    page.get_by_role("link", name="Log a run").click()
    page.get_by_label("Parts").fill("finial")
    page.get_by_label("Current", exact=True).fill("0.44 A")
    page.get_by_label("Time", exact=True).fill("4 h")
    page.get_by_label("Weight before").fill("5.6 g")
    page.get_by_label("Weight after").fill("7.7 g")
    page.get_by_role("button", name="See what follows").click()
    page.get_by_text("2.1 g copper goes from Acid copper to parts").wait_for()


def test_scan_log_a_run_and_see_the_balance(demo: People, visit: Callable[..., Visitor]) -> None:
    visitor = visit(PHONE)
    scan_and_sign_in(visitor, "Acid copper", demo["worker"])
    visitor.check_page()
    before = count_entries()
    log_the_run(visitor)
    visitor.check_page()
    assert count_entries() == before, "a preview writes nothing"
    visitor.page.get_by_role("button", name="Save").click()
    visitor.page.get_by_role("heading", level=1, name="Run").wait_for()
    visitor.check_page()
    assert count_entries() == before + 1
    assert "finial" in visitor.page.inner_text("main")
    visitor.page.get_by_role("navigation").get_by_role("link", name="Balance").click()
    visitor.page.get_by_label("Metal").select_option("Cu")
    visitor.page.get_by_role("button", name="Show").click()
    visitor.page.get_by_role("heading", name="Where the copper went").wait_for()
    assert "went onto and with parts" in visitor.page.inner_text("main")
    visitor.check_page()


def test_everything_at_the_bench_works_without_javascript(demo: People, visit: Callable[..., Visitor]) -> None:
    visitor = visit(PHONE, java_script_enabled=False)
    scan_and_sign_in(visitor, "Acid copper", demo["worker"])
    before = count_entries()
    log_the_run(visitor)
    visitor.page.get_by_role("button", name="Save").click()
    visitor.page.get_by_role("heading", level=1, name="Run").wait_for()
    assert count_entries() == before + 1


def test_wrong_figures_are_named_all_at_once_and_nothing_typed_is_lost(
    demo: People, visit: Callable[..., Visitor]
) -> None:
    visitor = visit(PHONE)
    scan_and_sign_in(visitor, "Acid copper", demo["worker"])
    before, page = count_entries(), visitor.page
    page.get_by_role("link", name="Log a run").click()
    page.get_by_label("Ampere-hours").fill("1,500 Ah")
    page.get_by_label("Weight before").fill("5.6 parsecs")
    page.get_by_label("Parts").fill("kept <b>text</b>")
    page.get_by_role("button", name="See what follows").click()
    text = page.inner_text("main")
    assert "1500 or 1.5" in text
    assert "parsecs" in text
    assert page.get_by_label("Ampere-hours").input_value() == "1,500 Ah"
    assert page.get_by_label("Parts").input_value() == "kept <b>text</b>"
    visitor.check_page()
    assert count_entries() == before


def test_saving_twice_records_once(demo: People, visit: Callable[..., Visitor]) -> None:
    visitor = visit(PHONE)
    scan_and_sign_in(visitor, "Acid copper", demo["worker"])
    before = count_entries()
    log_the_run(visitor)
    visitor.page.get_by_role("button", name="Save").dblclick()
    visitor.page.get_by_role("heading", level=1, name="Run").wait_for()
    visitor.page.go_back()
    visitor.page.get_by_role("button", name="Save").click()
    visitor.page.get_by_role("heading", level=1, name="Run").wait_for()
    assert count_entries() == before + 1
