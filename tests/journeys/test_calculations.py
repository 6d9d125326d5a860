"""Calculations on a phone and at a desk: results, long tables, and everything that was typed wrongly."""

from collections.abc import Callable
from pathlib import Path
from typing import Any
from urllib.parse import urlencode

import pytest

from chemicals.science.calculations import CALCULATIONS
from tests.journeys.conftest import DESK, PHONE, Visitor
from tests.journeys.test_bench import People
from tests.web.test_calculation_pages import as_sent

WRONG: dict[str, dict[str, Any]] = {
    "rinse": {"arrangement": "", "stages": "0", "bath": "1,500", "target": "40 kg", "drag_out": "1 furlong"},
    "drag-out": {"rinse_volume": "-1 L", "dips": "2.5", "rise": "60 g/L", "bath": "60 g/L", "area_per_dip": "1 cm"},
    "titration": {
        "analyte": "copper", "titrant": "0.1 N", "volume": "1 mL", "blank": "2 mL", "sd": {"volume": "-0.1 mL"},
    },
}  # fmt: skip
REFUSED = {"rinse": 5, "drag-out": 4, "titration": 5}
LONG = {"rinse": dict(CALCULATIONS["rinse"].example) | {"stages": 20}}


@pytest.mark.parametrize("size", [PHONE, DESK], ids=["phone", "desk"])
def test_results_and_refusals_are_accessible(
    demo: People, visit: Callable[..., Visitor], pictures: Path | None, size: dict[str, int]
) -> None:
    visitor = visit(size)
    visitor.sign_in(*demo["owner"])
    examples = {name: calculation.example for name, calculation in CALCULATIONS.items()}
    for kind, asked in (("done", examples), ("long", LONG), ("wrong", WRONG)):
        for name, fields in asked.items():
            visitor.page.goto(f"{visitor.url}/calculations/{name}/?{urlencode(as_sent(fields))}")
            assert visitor.page.locator("#results").count() == (kind != "wrong")
            assert visitor.page.locator(".problems li").count() == (REFUSED[name] if kind == "wrong" else 0)
            visitor.check_page()
            if pictures is not None:
                visitor.page.screenshot(path=pictures / f"{name}-{kind}-{size['width']}.png", full_page=True)


def test_the_form_is_filled_by_hand_and_the_address_keeps_what_was_asked(
    demo: People, visit: Callable[..., Visitor]
) -> None:
    visitor = visit(PHONE)
    visitor.sign_in(*demo["owner"])
    visitor.go("/calculations/titration/")
    page = visitor.page
    for label, typed in (
        ("Analyte", "Cu"),
        ("Titrant", "0.1 mol/L"),
        ("Volume of titrant", "7.623 mL"),
        ("Sample", "5"),
    ):
        page.get_by_label(label, exact=True).fill(typed)
    page.get_by_text("Standard uncertainties").click()
    page.get_by_label("Uncertainty of the sample").fill("0,3 %")
    page.get_by_role("button", name="Work it out").click()
    page.locator(".problems a").click()
    assert page.url.endswith("#id_sd.sample")
    page.get_by_label("Uncertainty of the sample").fill("0.3 %")
    page.get_by_role("button", name="Work it out").click()
    assert "9.68822 g/L" in page.locator("#results").inner_text()
    page.reload()
    assert "Sample" in page.locator("#results table").nth(1).inner_text()
    visitor.check_page()
