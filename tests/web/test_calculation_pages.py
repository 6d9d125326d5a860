"""The calculations: one page for all, generated from their table."""

from collections.abc import Mapping
from typing import Any

import pytest

from chemicals.science.calculations import CALCULATIONS
from compliance.web.forms.calculation import CalculationForm
from tests.web.conftest import Visitor, text_of


def as_sent(example: Mapping[str, Any]) -> dict[str, str]:
    """An example as the page sends it: the parts of a group by `group.part`."""
    flat: dict[str, str] = {}
    for name, value in example.items():
        parts = {f"{name}.{part}": one for part, one in value.items()} if isinstance(value, dict) else {name: value}
        flat |= {key: str(one) for key, one in parts.items()}
    return flat


@pytest.mark.parametrize("name", CALCULATIONS)
def test_every_calculation_has_a_page_that_works_out_its_example(name: str, visit: Visitor) -> None:
    found = CALCULATIONS[name]
    blank = visit.client.get(f"/calculations/{name}/")
    assert blank.status_code == 200
    names = [f"{spec.name}.{part.name}" for spec in found.inputs for part in spec.parts]
    names += [spec.name for spec in found.inputs if not spec.parts]
    assert all(f'name="{each}"' in blank.content.decode() for each in names)
    page = visit.client.get(f"/calculations/{name}/", as_sent(found.example))
    assert page.status_code == 200
    assert "<h2>Result</h2>" in text_of(page)


def test_a_list_is_numbered_and_a_choice_without_a_default_is_asked_for(visit: Visitor) -> None:
    assert "Choose" in text_of(visit.client.get("/calculations/rinse/"))
    text = text_of(visit.client.get("/calculations/rinse/", as_sent(CALCULATIONS["rinse"].example)))
    assert "Concentration of stage, 2" in text
    assert "81.6538 L/h" in text


def test_a_table_names_inputs_as_the_form_does(visit: Visitor) -> None:
    text = text_of(visit.client.get("/calculations/titration/", as_sent(CALCULATIONS["titration"].example)))
    assert "<h3>Uncertainty budget</h3>" in text
    assert '<td>Volume of titrant</td><td class="number">0.146695</td>' in text


def test_what_is_wrong_in_a_group_stands_at_its_field_and_opens_the_group(visit: Visitor) -> None:
    asked = as_sent(CALCULATIONS["titration"].example) | {"sd.volume": "-1 mL", "analyte": ""}
    page = visit.client.get("/calculations/titration/", asked)
    text = text_of(page)
    assert page.status_code == 400
    assert 'href="#id_sd.volume"' in text
    assert 'href="#id_analyte"' in text
    assert '<details class="group" id="group-sd" open>' in text


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
