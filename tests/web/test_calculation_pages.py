"""The calculations: one page for all, generated from their table."""

import pytest

from chemicals.science.calculations import CALCULATIONS
from compliance.web.forms.calculation import CalculationForm
from tests.web.conftest import Visitor, text_of


@pytest.mark.parametrize("name", CALCULATIONS)
def test_every_calculation_has_a_page_that_works_out_its_example(name: str, visit: Visitor) -> None:
    found = CALCULATIONS[name]
    blank = visit.client.get(f"/calculations/{name}/")
    assert blank.status_code == 200
    assert all(f'name="{spec.name}"' in blank.content.decode() for spec in found.inputs)
    page = visit.client.get(f"/calculations/{name}/", {key: str(value) for key, value in found.example.items()})
    assert page.status_code == 200
    assert "<h2>Result</h2>" in text_of(page)


def test_the_result_stands_with_its_unit(visit: Visitor) -> None:
    asked = {"element": "Cu", "valence": "2", "current": "0.44 A", "time": "4 h", "efficiency": "1"}
    assert "2.08647 g" in text_of(visit.client.get("/calculations/faraday/", asked))


def test_everything_that_is_wrong_comes_at_once(visit: Visitor) -> None:
    page = visit.client.get("/calculations/faraday/", {"element": "Xx", "valence": "0", "current": "1,500 A"})
    text = text_of(page)
    assert page.status_code == 400
    assert all(f'href="#id_{name}"' in text for name in ("element", "valence", "current"))
    assert "write 1500 or 1.5" in text


def test_needed_fields_are_named() -> None:
    form = CalculationForm(CALCULATIONS["faraday"])
    assert [name for name in form.fields if form.fields[name].widget.is_required] == ["element", "valence"]


def test_there_is_no_other_calculation(visit: Visitor) -> None:
    assert visit.client.get("/calculations/alchemy/").status_code == 404
    assert "Faraday" in text_of(visit.client.get("/calculations/"))
