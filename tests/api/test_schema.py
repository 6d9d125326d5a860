"""The description of the API: valid OpenAPI 3.1, help on every field, nothing left out, nothing guessed."""

from collections.abc import Iterator
from typing import Any

import pytest
from drf_spectacular.drainage import GENERATOR_STATS
from openapi_spec_validator import validate

from chemicals.process.fields import RowsField, describe
from chemicals.process.inputs import INPUTS
from chemicals.science.calculations import CALCULATIONS
from compliance.api import urls
from compliance.api.views.base import ApiView
from compliance.api.views.description import describe_api
from tests.api.conftest import Caller

Json = dict[str, Any]


@pytest.fixture(scope="module")
def schema() -> Json:
    """Return the description."""
    GENERATOR_STATS.reset()
    describe_api.cache_clear()
    return describe_api("en")


def operations(schema: Json) -> Iterator[tuple[str, str, Json]]:
    """Yield (path, method, operation)."""
    for path, methods in schema["paths"].items():
        for method, operation in methods.items():
            yield path, method, operation


def test_it_is_valid_openapi_3_1_without_a_warning(schema: Json) -> None:
    assert schema["openapi"] == "3.1.0"
    validate(schema)
    assert dict(GENERATOR_STATS._warn_cache) == {}
    assert dict(GENERATOR_STATS._error_cache) == {}


def test_it_is_served_as_json_to_whoever_has_a_token(api: Caller) -> None:
    response = api.get("/schema")
    assert response.headers["Content-Type"] == "application/json"
    assert response.json()["info"]["title"] == "Gramledger"
    assert response.json()["components"]["securitySchemes"]["token"]["scheme"] == "bearer"


def test_every_field_has_its_help(schema: Json) -> None:
    silent = [
        f"{name}.{field}"
        for name, component in schema["components"]["schemas"].items()
        for field, said in component.get("properties", {}).items()
        if len(str(said.get("description", ""))) < 4
    ]
    assert silent == []
    assert sum(len(component.get("properties", {})) for component in schema["components"]["schemas"].values()) > 400


def test_every_parameter_operation_and_answer_is_described(schema: Json) -> None:
    silent = []
    for path, method, operation in operations(schema):
        named = [operation, *operation.get("parameters", [])]
        named += [answer for code, answer in operation["responses"].items() if code >= "400"]
        silent += [f"{method} {path}" for each in named if not each.get("description")]
    assert silent == []


def test_every_address_is_described(schema: Json) -> None:
    described = {path.removeprefix("/api/v1/workshops/{workshop}/") for path in schema["paths"]}
    assert len([path for path in described if not path.startswith("/")]) == len(urls.WORKSHOP)
    views = [each.callback.view_class for each in urls.WORKSHOP]  # type: ignore[attr-defined]  # what as_view() adds
    assert all(issubclass(view, ApiView) for view in views)


def test_each_verb_has_its_own_fields_at_both_doors(schema: Json) -> None:
    for verb, data in INPUTS.items():
        own = {name for name, _kind in describe(data)}
        required = {name for name, kind in describe(data) if kind.required}
        for door in ("preview", "record"):
            operation = schema["paths"][f"/api/v1/workshops/{{workshop}}/{door}/{verb}"]["post"]
            component = body_of(schema, operation)
            assert set(component["properties"]) == own | {"occurred_at", "already_happened", "attachments"}
            assert set(component.get("required", [])) == required
            assert component["additionalProperties"] is False
            keys = [each["name"] for each in operation["parameters"] if each["in"] == "header"]
            assert keys == (["Idempotency-Key"] if door == "record" else [])


def body_of(schema: Json, operation: Json) -> Json:
    """Return the schema of a body."""
    (content,) = operation["requestBody"]["content"].values()
    found: Json = schema["components"]["schemas"][content["schema"]["$ref"].rsplit("/", 1)[1]]
    return found


def test_rows_are_described_like_fields(schema: Json) -> None:
    rows = [kind.of for data in INPUTS.values() for _name, kind in describe(data) if isinstance(kind, RowsField)]
    assert len(rows) >= 2
    for row in rows:
        component = schema["components"]["schemas"][row.__name__]
        assert set(component["properties"]) == {name for name, _kind in describe(row)}
        assert component["additionalProperties"] is False


def test_an_amount_is_a_text_with_an_example(schema: Json) -> None:
    mass = schema["components"]["schemas"]["WeightInput"]["properties"]["mass"]
    assert (mass["type"], mass["examples"]) == ("string", ["22.4 kg"])
    assert mass["description"].startswith('Weight, such as "22.4 kg". As the scale')


def test_a_vessel_says_of_which_kinds(schema: Json) -> None:
    fields = schema["components"]["schemas"]["ReceiptInput"]["properties"]
    assert fields["vessel"]["description"] == "Container: a vessel (stock container, anode set)."


def test_each_calculation_has_the_schema_of_its_table(schema: Json) -> None:
    for name, calculation in CALCULATIONS.items():
        operation = schema["paths"][f"/api/v1/calculations/{name}"]["post"]
        assert set(body_of(schema, operation)["properties"]) == {spec.name for spec in calculation.inputs}
        answer = operation["responses"]["200"]["content"]["application/json"]["schema"]["$ref"].rsplit("/", 1)[1]
        assert set(schema["components"]["schemas"][answer]["properties"]) == {spec.name for spec in calculation.outputs}


def test_groups_lists_and_tables_of_calculations_are_described(schema: Json) -> None:
    known = schema["components"]["schemas"]
    assert set(known["TitrationInputSd"]["properties"]) >= {"titrant", "volume", "sample"}
    assert known["TitrationInputSd"]["additionalProperties"] is False
    assert known["TitrationInputSd"]["properties"]["volume"]["type"] == ["string", "number", "null"]
    assert known["TitrationOutput"]["properties"]["budget"]["items"]["$ref"].endswith("/TitrationOutputBudget")
    assert set(known["TitrationOutputBudget"]["properties"]) == {"quantity", "share"}
    assert known["RinseOutput"]["properties"]["stage_concentrations_g_per_L"]["items"]["type"] == "number"


def test_names_of_operations_are_words(schema: Json) -> None:
    names = [operation["operationId"] for _path, _method, operation in operations(schema)]
    assert len(names) == len(set(names))
    assert all(name.isidentifier() for name in names)
    assert {"preview_drum_off", "record_run", "entries_list", "vessels_create", "papers_pdf_retrieve"} <= set(names)
