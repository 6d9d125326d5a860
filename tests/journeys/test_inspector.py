"""An inspector with a phone finds where the nitric acid is, how much and how hazardous, and can change nothing."""

from collections.abc import Callable
from pathlib import Path

import pytest
from playwright.sync_api import expect

from tests.journeys.conftest import PHONE, Visitor
from tests.journeys.test_bench import People


@pytest.mark.parametrize("words", ["salpetersaure", "Aqua Fortis", "7697-37-2", "nitric cupboard"])
def test_where_is_the_nitric_acid(
    demo: People, visit: Callable[..., Visitor], pictures: Path | None, words: str
) -> None:
    visitor = visit(PHONE)
    visitor.sign_in(*demo["observer"])
    page = visitor.page
    page.get_by_role("link", name="Register", exact=True).click()
    box = page.get_by_label("Look for")
    box.press_sequentially(words)
    expect(page.get_by_role("status")).to_contain_text("One is found")
    expect(box).to_be_focused()
    assert "?q=" in page.url
    assert page.url.count("=") == 1, "the address says what was chosen and nothing else"
    found = page.locator("#list")
    for said in ("Nitric acid 53 %", "Danger", "skull and crossbones", "Cupboard", "1 L"):
        assert said in found.inner_text(), said
    visitor.check_page()
    if pictures is not None:
        page.screenshot(path=pictures / "inspector.png", full_page=True)
    page.get_by_role("link", name="Bottle of nitric acid").click()
    page.get_by_role("heading", level=1, name="Bottle of nitric acid").wait_for()
    visitor.check_page()
    assert page.locator("main form").count() == 0, "an observer is shown nothing that writes"
    page.go_back()
    expect(page.get_by_role("link", name="Bottle of nitric acid")).to_be_visible()
    expect(page.get_by_label("Look for")).to_have_value(words)


def test_the_list_works_without_scripts(demo: People, visit: Callable[..., Visitor]) -> None:
    visitor = visit(PHONE, java_script_enabled=False)
    visitor.sign_in(*demo["observer"])
    page = visitor.page
    page.get_by_label("Code on a vessel, or what you look for").fill("aqua fortis")
    page.get_by_role("button", name="Open").click()
    expect(page.get_by_role("link", name="Bottle of nitric acid")).to_be_visible()
    page.get_by_role("link", name="Containers").click()
    page.get_by_label("Look for").fill("hno3")
    page.get_by_role("button", name="Show").click()
    expect(page.get_by_role("status")).to_contain_text("One is found")
    assert page.locator("main input[type=checkbox]").count() == 0
