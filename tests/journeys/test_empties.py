"""A very toxic empty on a phone: from Today to the drop-off, gone and found by its code; and what will not do."""

from collections.abc import Callable
from pathlib import Path

import pytest

from tests.journeys.conftest import DESK, PHONE, Visitor
from tests.journeys.test_bench import People, vessel_of


@pytest.mark.parametrize("size", [PHONE, DESK], ids=["phone", "desk"])
def test_a_very_toxic_empty_goes_by_a_drop_off(
    demo: People, visit: Callable[..., Visitor], pictures: Path | None, size: dict[str, int]
) -> None:
    visitor = visit(size, "light")
    page = visitor.page
    jar = vessel_of("Jar of pickling paste")
    visitor.sign_in(*demo["worker"])

    def look(name: str) -> None:
        if pictures is not None:
            page.screenshot(path=pictures / f"empties-{name}-{size['width']}.png", full_page=True)

    page.get_by_role("link", name="1 empty container stays a waste").click()
    visitor.check_page()
    look("waste")
    page.get_by_role("link", name="Jar of pickling paste").click()
    look("jar")
    assert page.get_by_role("link", name="Put it away").count() == 0
    page.get_by_role("link", name="Put it on a drop-off").click()
    assert page.get_by_label("Jar of pickling paste").is_checked()
    page.get_by_label("Receiver").select_option(index=1)
    visitor.check_page()
    look("draft")
    page.get_by_role("button", name="Draft it").click()
    page.get_by_role("button", name="Pack, and issue the manifest").click()
    page.get_by_role("link", name="Manifest").first.click()
    assert "empty, not cleaned, last held: Pickling paste with hydrofluoric acid" in page.content()
    page.go_back()
    page.get_by_role("button", name="It was handed over").click()
    look("handed-over")
    visitor.go(f"/c/{jar.code}")
    assert page.get_by_role("heading", name="Gone since").is_visible()
    look("gone")
    assert page.get_by_role("link", name="Received").count() == 0
