"""A count day with a phone: three containers, of which one agrees, one differs and one is not there."""

import re
from collections.abc import Callable
from pathlib import Path

import pytest
from django_scopes import scopes_disabled

from chemicals.journal.models import Entry
from chemicals.ledger.models import Posting
from tests.journeys.conftest import PHONE, Visitor
from tests.journeys.test_bench import People, vessel_of


def unaccounted() -> dict[tuple[str, str], int]:
    """Return what the last two counts left unaccounted, by container and component."""
    with scopes_disabled():
        last = Entry.objects.filter(kind="count").order_by("-sequence")[:2]
        rows = Posting.objects.filter(entry__in=list(last), boundary="unaccounted").select_related("component", "entry")
        pairs = {(row.entry_id, row.transfer): str(row.vessel) for row in Posting.objects.filter(vessel__isnull=False)}
        return {(pairs[row.entry_id, row.transfer], row.component.code): row.amount for row in rows}


def scan(visitor: Visitor, text: str) -> None:
    """Type what a scanner types: the text, and Enter."""
    field = visitor.page.get_by_label(re.compile("code", re.IGNORECASE))
    field.fill(text)
    field.press("Enter")


@pytest.mark.parametrize("script", [True, False], ids=["script", "no-script"])
def test_three_containers_are_counted(
    demo: People, visit: Callable[..., Visitor], pictures: Path | None, *, script: bool
) -> None:
    visitor = visit(PHONE, java_script_enabled=script)
    page = visitor.page

    def look(name: str) -> None:
        if script:
            visitor.check_page()
        if pictures is not None:
            page.screenshot(path=pictures / f"count-day-{name}.png", full_page=True)

    visitor.sign_in(*demo["worker"])
    page.get_by_role("link", name="Register").click()
    page.get_by_text("More of the register").click()
    page.get_by_role("link", name="Count days").click()
    look("counts")
    page.get_by_label("Where").select_option("Cupboard")
    page.get_by_role("button", name="Start").click()
    page.get_by_text(re.compile(r"\b0 of \d+ seen")).wait_for()
    look("begun")

    scan(visitor, "no such")
    page.get_by_text("No container of this workshop has the code NOSUCH").first.wait_for()
    look("unknown")
    scan(visitor, f"http://shop.example/c/{vessel_of('Bottle of sulfuric acid').code}")
    page.get_by_role("heading", name="Bottle of sulfuric acid").wait_for()
    look("scanned")
    page.get_by_role("button", name="As the books say").click()
    page.get_by_text(re.compile(r"\b1 of \d+ seen")).wait_for()
    assert page.evaluate("document.activeElement.name") == "code", "the next one can be scanned at once"

    scan(visitor, vessel_of("Jar of copper sulfate").code.lower())
    page.get_by_label("What is there").fill("900")
    page.get_by_role("button", name="Save").click()
    page.get_by_text("has no unit").or_(page.get_by_text("unit")).first.wait_for()
    look("wrong")
    page.get_by_label("What is there").fill("900 g")
    page.get_by_role("button", name="Save").click()
    page.get_by_text(re.compile(r"\b2 of \d+ seen")).wait_for()
    look("two")

    page.get_by_role("link", name="Compare with the books, and finish").click()
    look("preview")
    page.get_by_role("button", name=re.compile("Not there.*Bottle of gold sulfite")).click()
    page.get_by_text(re.compile(r"3 of \d+ seen")).wait_for()
    page.get_by_role("button", name="Finish the count").click()
    page.get_by_text("2 entries followed.").wait_for()
    look("over")
    text = page.inner_text("main")
    assert "counted 900 g" in text
    assert "counted not there" in text

    left = unaccounted()
    assert left["Jar of copper sulfate", "gross mass"] > 0
    assert left["Bottle of gold sulfite", "Au"] > 0
    with scopes_disabled():
        jar = Entry.objects.filter(kind="count").order_by("-sequence")
        assert {entry.occurred_at < entry.recorded_at for entry in jar[:2]} == {True}
    page.get_by_role("link", name=re.compile(r"^entry \d+")).first.click()
    page.get_by_text("unaccounted").first.wait_for()
    visitor.go(f"/w/{_workshop()}/vessels/{vessel_of('Jar of copper sulfate').uuid}/")
    page.get_by_text("Last seen").wait_for()
    look("vessel")


def _workshop() -> str:
    with scopes_disabled():
        return str(vessel_of("Jar of copper sulfate").workshop.uuid)
