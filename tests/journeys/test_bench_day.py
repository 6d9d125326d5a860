"""Gloves just off: the morning at the tanks and the evening at the line, each under ten taps and under a minute."""

import re
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass

import pypdfium2
from django_scopes import scopes_disabled
from playwright.sync_api import Locator, Page

from chemicals.books.events import DaySheet
from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_event
from tests.journeys.conftest import PHONE, Visitor
from tests.journeys.test_bench import People

MOST_TAPS, MOST_SECONDS = 10, 60


@dataclass
class Thumb:
    """Counts taps: a press of a link, a button or a choice, and going into a field."""

    page: Page
    taps: int = 0

    def press(self, role: str, name: str) -> None:
        """Press a link or a button."""
        self.page.get_by_role(role, name=name, exact=True).click()  # type: ignore[arg-type]  # one of its many roles
        self.taps += 1

    def write(self, field: Locator, text: str) -> None:
        """Go into a field and write."""
        field.click()
        self.page.keyboard.type(text)
        self.taps += 1


@contextmanager
def in_time(thumb: Thumb) -> Iterator[None]:
    """Fail if what is done inside takes too many taps or too long."""
    begun = time.monotonic()
    yield
    assert thumb.taps < MOST_TAPS
    assert time.monotonic() - begun < MOST_SECONDS


def begin(visitor: Visitor, person: tuple[str, str]) -> Thumb:
    """Sign in; the page Today is open then."""
    visitor.sign_in(*person)
    visitor.page.get_by_role("heading", level=1, name="Today").wait_for()
    return Thumb(visitor.page)


def latest(kind: str, many: int) -> list[Entry]:
    """Return the entries that were recorded last, all of one kind."""
    with scopes_disabled():
        found = list(Entry.objects.order_by("-sequence")[:many])[::-1]
    assert {entry.kind for entry in found} == {kind}
    return found


def test_the_morning_is_three_levels_in_seven_taps(demo: People, visit: Callable[..., Visitor]) -> None:
    visitor = visit(PHONE)
    thumb = begin(visitor, demo["worker"])
    with in_time(thumb):
        thumb.press("link", "At the bench")
        thumb.press("link", "Morning readings")
        for tank, level in (("Gold sulfite", "1.9"), ("Copper drag-out rinse", "9,5"), ("Acid copper", "30")):
            group = visitor.page.get_by_role("group", name=tank, exact=True)
            thumb.write(group.get_by_label("Level"), level)
        visitor.check_page()
        thumb.press("button", "See what follows")
        visitor.check_page()
        said = visitor.page.inner_text("main")
        assert "1.9 L" in said
        assert "9.5 L" in said
        assert "30 cm" in said
        thumb.press("button", "Save")
        visitor.page.get_by_text("Recorded: 3 entries.").wait_for()
    assert thumb.taps == 7
    latest("level reading", 3)


def test_the_evening_is_a_day_sheet_in_eight_taps_without_javascript(
    demo: People, visit: Callable[..., Visitor]
) -> None:
    visitor = visit(PHONE, java_script_enabled=False)
    thumb = begin(visitor, demo["worker"])
    with in_time(thumb):
        thumb.press("link", "At the bench")
        thumb.press("link", "Day sheet")
        thumb.press("radio", re.findall("Yesterday, [0-9-]+", visitor.page.inner_text("main"))[0])
        thumb.write(visitor.page.get_by_label("Copper, two rinses: Rack of six props"), "4")
        thumb.write(visitor.page.get_by_label("Gilding: Gilding wire"), "2")
        thumb.write(visitor.page.get_by_label("Acid copper, ampere-hours"), "31.5")
        thumb.press("button", "See what follows")
        assert "31.5 Ah" in visitor.page.inner_text("main")
        thumb.press("button", "Save")
        visitor.page.get_by_text("Recorded: one entry.").wait_for()
    assert thumb.taps == 8
    (entry,) = latest("day sheet", 1)
    sheet = read_event(entry)
    assert isinstance(sheet, DaySheet)
    assert ([row.loads for row in sheet.racks], [row.charge.typed for row in sheet.charges]) == ([4, 2], ["31.5 Ah"])
    assert entry.precision == "day"


def test_the_same_as_last_time_is_four_taps(demo: People, visit: Callable[..., Visitor]) -> None:
    visitor = visit(PHONE)
    thumb = begin(visitor, demo["worker"])
    with in_time(thumb):
        thumb.press("link", "At the bench")
        thumb.press("link", "Day sheet, same as last time")
        visitor.check_page()
        thumb.press("button", "See what follows")
        visitor.check_page()
        thumb.press("button", "Save")
        visitor.page.get_by_text("Recorded: one entry.").wait_for()
    assert thumb.taps == 4
    (entry,) = latest("day sheet", 1)
    with scopes_disabled():
        before = Entry.objects.filter(kind="day sheet").exclude(pk=entry.pk).order_by("-occurred_at")[0]
    now, then = read_event(entry), read_event(before)
    assert isinstance(now, DaySheet)
    assert isinstance(then, DaySheet)
    assert (now.racks, now.charges) == (then.racks, then.charges)


def test_the_keyboard_goes_down_the_sheet_row_by_row(demo: People, visit: Callable[..., Visitor]) -> None:
    visitor = visit(PHONE)
    begin(visitor, demo["worker"])
    visitor.page.get_by_role("link", name="At the bench", exact=True).click()
    visitor.page.get_by_role("link", name="Day sheet", exact=True).click()
    fields = visitor.page.locator("input.figure")
    fields.first.focus()
    for number in range(fields.count()):
        assert fields.nth(number).evaluate("each => each === document.activeElement")
        visitor.page.keyboard.press("Tab")
    assert visitor.page.evaluate("document.activeElement.textContent") == "See what follows"


def test_the_paper_of_a_week_is_one_page_across(demo: People, visit: Callable[..., Visitor]) -> None:
    visitor = visit(PHONE)
    begin(visitor, demo["worker"])
    visitor.page.get_by_role("link", name="At the bench", exact=True).click()
    visitor.page.get_by_role("link", name="A week sheet on paper", exact=True).click()
    visitor.check_page()
    paper = pypdfium2.PdfDocument(visitor.page.pdf(prefer_css_page_size=True))
    width, height = paper[0].get_size()
    assert (len(paper), round(width), round(height)) == (1, 842, 595)  # A4 across, in points
    text = paper[0].get_textpage().get_text_range()
    assert "Rack of six props" in text
    assert "Sign out" not in text
