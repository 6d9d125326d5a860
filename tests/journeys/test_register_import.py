"""Somebody brings the register of a spreadsheet along: looks at what it makes, lets places be added, imports it."""

from collections.abc import Callable
from pathlib import Path

import pytest

from tests.journeys.conftest import DESK, PHONE, Visitor
from tests.journeys.test_bench import People

SAMPLES = Path(__file__).parents[2] / "fixtures" / "imports"


@pytest.mark.parametrize("size", [PHONE, DESK], ids=["phone", "desk"])
def test_a_spreadsheet_becomes_the_register(
    demo: People, visit: Callable[..., Visitor], pictures: Path | None, size: dict[str, int]
) -> None:
    visitor = visit(size)
    page = visitor.page

    def look(name: str) -> None:
        visitor.check_page()
        if pictures is not None:
            page.screenshot(path=pictures / f"register-import-{name}-{size['width']}.png", full_page=True)

    visitor.sign_in(*demo["worker"])
    page.get_by_role("navigation").get_by_role("link", name="Register").first.click()
    page.get_by_text("More of the register").click()
    page.get_by_role("link", name="Import", exact=True).click()
    page.get_by_label("File").set_input_files(SAMPLES / "register-mistakes-invented.csv")
    page.get_by_role("button", name="Look at the file").click()
    assert page.get_by_text("The check digit of 7758-99-9 does not fit").is_visible()
    look("mistakes")
    page.get_by_role("link", name="Another file").click()
    page.get_by_label("What the rows are").select_option("register")
    page.get_by_label("File").set_input_files(SAMPLES / "register-invented.xlsx")
    look("upload")
    page.get_by_role("button", name="Look at the file").click()
    page.get_by_label("Rows may name places that are not here yet").check()
    page.get_by_role("button", name="Look again").click()
    page.get_by_text("4 new products").wait_for()
    look("understood")
    page.get_by_role("button", name="Import all of it").click()
    look("imported")
    page.get_by_role("link", name="To the register").click()
    assert page.get_by_text("Invented nickel salt").first.is_visible()
