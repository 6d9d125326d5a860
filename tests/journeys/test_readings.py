"""Readings on a phone: with an instrument chosen by its picture, and of a mark instead of a volume."""

import struct
import zlib
from collections.abc import Callable
from pathlib import Path

from chemicals.process.instruments import list_instruments_for
from chemicals.workshop.models import Membership, Role
from tests.journeys.conftest import DESK, PHONE, Visitor
from tests.journeys.test_bench import People, scan_and_sign_in, vessel_of


def a_picture() -> bytes:
    """Return a small grey PNG (PNG specification, third edition)."""

    def chunk(kind: bytes, data: bytes) -> bytes:
        return struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))

    head = struct.pack(">IIBBBBB", 8, 8, 8, 0, 0, 0, 0)
    return b"\x89PNG\r\n\x1a\n" + b"".join(
        chunk(kind, data)
        for kind, data in ((b"IHDR", head), (b"IDAT", zlib.compress((b"\0" + b"\x88" * 8) * 8)), (b"IEND", b""))
    )


def look(visitor: Visitor, pictures: Path | None, name: str) -> None:
    """Check the page, and keep a picture of it if that is wanted."""
    visitor.check_page()
    if pictures is not None:
        visitor.page.screenshot(path=pictures / f"readings-{name}.png", full_page=True)


def test_a_temperature_is_read_with_the_thermometer_of_a_picture(
    demo: People, visit: Callable[..., Visitor], pictures: Path | None
) -> None:
    visitor = visit(PHONE)
    page = visitor.page
    scan_and_sign_in(visitor, "Acid copper", demo["worker"])
    workshop = Membership.objects.get(role=Role.OWNER)
    thermometer = list_instruments_for(workshop).get(name="Glass thermometer")
    visitor.go(f"/w/{workshop.workshop.uuid}/instruments/{thermometer.uuid}/")
    page.get_by_label("Picture").set_input_files({"name": "t.png", "mimeType": "image/png", "buffer": a_picture()})
    page.get_by_role("button", name="Save").click()
    page.get_by_role("heading", level=1, name="Instruments").wait_for()
    look(visitor, pictures, "instruments")
    visitor.go(f"/c/{vessel_of('Acid copper').code}")
    look(visitor, pictures, "tank")
    page.get_by_role("link", name="22.5 °C ±").click()
    look(visitor, pictures, "list")
    page.get_by_role("link", name="Read it again").click()
    assert page.get_by_label("Glass thermometer").is_checked(), "the one used last is chosen already"
    look(visitor, pictures, "form")
    page.get_by_label("Result").fill("75 °F")
    page.get_by_role("button", name="See what follows").click()
    page.get_by_text("75 °F = 23.89 °C ± 0.5 K").wait_for()
    look(visitor, pictures, "preview")
    page.get_by_role("button", name="Save").click()
    page.get_by_role("heading", level=1, name="Reading").wait_for()
    look(visitor, pictures, "entry")


def test_a_level_is_read_as_a_height(demo: People, visit: Callable[..., Visitor], pictures: Path | None) -> None:
    visitor = visit(PHONE)
    page = visitor.page
    scan_and_sign_in(visitor, "Acid copper", demo["worker"])
    page.get_by_role("link", name="Read the level").click()
    page.get_by_label("Height or mark").fill("60 cm")
    look(visitor, pictures, "level-form")
    page.get_by_role("button", name="See what follows").click()
    page.get_by_text("lies outside the level table").first.wait_for()
    look(visitor, pictures, "level-wrong")
    page.get_by_label("Height or mark").fill("39 cm")
    page.get_by_role("button", name="See what follows").click()
    page.get_by_text("39 cm = 18.72 ± 0.25 L").wait_for()
    look(visitor, pictures, "level-preview")
    assert "30 cm: 14.4 L, 40 cm: 19.2 L" in page.inner_text("main")


def test_tables_and_set_up_on_both_screens(demo: People, visit: Callable[..., Visitor], pictures: Path | None) -> None:
    for size in (PHONE, DESK):
        visitor = visit(size)
        scan_and_sign_in(visitor, "Gold sulfite", demo["worker"])
        page = visitor.page
        page.get_by_role("link", name="pH 9.4 ±").click()
        assert page.locator("svg.plot:visible .measured").count() == 2
        look(visitor, pictures, f"plot-{size['width']}")
        visitor.go(f"/c/{vessel_of('Acid copper').code}")
        look(visitor, pictures, f"vessel-{size['width']}")
        page.get_by_role("link", name="Change the level table").click()
        look(visitor, pictures, f"table-{size['width']}")
        visitor.go(f"/c/{vessel_of('Acid copper').code}")
        page.get_by_role("link", name="Change the set-up").click()
        look(visitor, pictures, f"set-up-{size['width']}")
