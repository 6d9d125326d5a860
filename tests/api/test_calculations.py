"""The calculations: one table, the same results as the command line, errors by field."""

import pytest

from chemicals.science.calculations import CALCULATIONS, calculate
from chemicals.workshop.models import Membership
from tests.api.conftest import Caller, errors_of


def test_the_list_gives_examples_that_can_be_sent(api: Caller) -> None:
    rows = api.get("/calculations/").json()["calculations"]
    assert [row["name"] for row in rows] == list(CALCULATIONS)
    for row in rows:
        answer = api.post(f"/calculations/{row['name']}", row["example"])
        assert answer.status_code == 200
        assert answer.json() == calculate(row["name"], row["example"])
        assert answer.json()["basis"]


def test_bad_input_comes_back_all_at_once(api: Caller) -> None:
    said = {"element": "Xx", "valence": 2, "current": "1,500 A", "time": "4 kg", "colour": "red"}
    assert set(errors_of(api.post("/calculations/faraday", said), 400)) == {"element", "current", "time", "colour"}


@pytest.mark.parametrize(
    "body", [b"[]", b"null", b'"text"', b'{"formula": NaN}', b'{"formula": "Cu", "formula": "Ni"}']
)
def test_a_body_that_is_no_object_is_refused(api: Caller, body: bytes) -> None:
    response = api.client.post("/api/v1/calculations/composition", body, content_type="application/json")
    assert errors_of(response, 400)


def test_an_unknown_calculation_is_404(api: Caller) -> None:
    assert errors_of(api.post("/calculations/alchemy", {}), 404)


def test_a_token_is_asked_for(owner: Membership) -> None:
    stranger = Caller("glt_none", owner.workshop.uuid)
    assert errors_of(stranger.get("/calculations/"), 401)
    assert errors_of(stranger.post("/calculations/composition", {"formula": "Cu"}), 401)
