"""Entries of many kinds on the screens that people have: told in full, found, taken along as files."""

import json
from collections.abc import Callable
from datetime import datetime
from pathlib import Path

import pytest

from chemicals.workshop.models import Membership, Role
from tests.journeys.conftest import DESK, PHONE, Visitor
from tests.journeys.test_bench import People
from tests.web.kinds import record_all

SHOWN = ("opening", "make-up", "run", "day sheet", "treatment", "move", "correction", "period closing")
"""Kinds whose pages are looked at: the longest, and each with something that the others do not have."""


@pytest.fixture(params=[(PHONE, "dark"), (DESK, "light")], ids=["phone", "desk"])
def looks(request: pytest.FixtureRequest) -> tuple[dict[str, int], str]:
    """Return the size of a window, and light or dark."""
    size, scheme = request.param
    return size, scheme


def test_entries_of_many_kinds_can_be_read(
    demo: People, now: datetime, visit: Callable[..., Visitor], pictures: Path | None, looks: tuple[dict[str, int], str]
) -> None:
    owner = Membership.objects.get(role=Role.OWNER)
    recorded = record_all(owner, now)
    visitor = visit(*looks)
    visitor.sign_in(*demo["owner"])
    for kind in SHOWN:
        visitor.go(f"/w/{owner.workshop.uuid}/entries/{recorded[kind].uuid}/")
        assert visitor.page.get_by_role("heading", name="Place in the chain").is_visible()
        visitor.check_page()
        if pictures is not None:
            name = f"entry-{kind.replace(' ', '-')}-{looks[0]['width']}-{looks[1]}.png"
            visitor.page.screenshot(path=pictures / name, full_page=True)


def test_an_entry_is_found_and_taken_along(demo: People, visit: Callable[..., Visitor]) -> None:
    owner = Membership.objects.get(role=Role.OWNER)
    visitor = visit(PHONE)
    visitor.sign_in(*demo["observer"])
    visitor.go(f"/w/{owner.workshop.uuid}/entries/")
    page = visitor.page
    page.get_by_label("Kind").select_option("run")
    page.get_by_text("show all").wait_for()
    assert set(page.locator(".list .lead").all_inner_texts()) == {"run"}
    page.get_by_text("Look for more").click()
    words = page.get_by_label("Words")
    words.fill("no such words")
    words.press("Tab")
    page.get_by_text("No entry fits.").wait_for()
    visitor.check_page()
    words.fill("")
    words.press("Tab")
    page.get_by_role("link", name="Export with everything that the entries say").click()
    visitor.check_page()
    with page.expect_download() as download:
        page.get_by_role("link", name="JSON lines").first.click()
    about, *lines = Path(download.value.path()).read_bytes().splitlines()
    assert json.loads(about)["about"]["only"] == "kind run"
    assert {json.loads(line)["body"]["kind"] for line in lines} == {"run"}


def test_without_javascript_entries_are_found_too(demo: People, visit: Callable[..., Visitor]) -> None:
    owner = Membership.objects.get(role=Role.OWNER)
    visitor = visit(DESK, java_script_enabled=False)
    visitor.sign_in(*demo["owner"])
    visitor.go(f"/w/{owner.workshop.uuid}/entries/")
    visitor.page.get_by_label("Kind").select_option("run")
    visitor.page.get_by_role("button", name="Show", exact=True).click()
    visitor.page.get_by_text("show all").wait_for()
    assert set(visitor.page.locator(".list .lead").all_inner_texts()) == {"run"}
