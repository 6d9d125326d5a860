"""The service against its own description: made-up requests, good and bad, and whether the answers are as described."""

import copy
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from typing import Any

import schemathesis
from django.core.signals import request_finished, request_started
from django.db import close_old_connections
from hypothesis import HealthCheck, Phase, given, settings
from schemathesis.checks import CheckFunction, content_type_conformance, negative_data_rejection, not_a_server_error
from schemathesis.core.result import Ok
from schemathesis.specs.openapi.checks import response_schema_conformance, status_code_conformance

from compliance.api.views.description import describe_api
from compliance.wsgi import application
from tests.api.conftest import Caller, Shop

Json = Any

ANSWERS: Sequence[CheckFunction] = (
    not_a_server_error, status_code_conformance, content_type_conformance, response_schema_conformance,
)  # fmt: skip
Case = Any
FEW = {schemathesis.GenerationMode.POSITIVE: 4, schemathesis.GenerationMode.NEGATIVE: 2}
"""How many requests each operation gets."""
Known = dict[str, list[str]]


def narrow(schema: Json, known: Known, name: str = "") -> Json:
    """Return a schema with identifiers that exist and amounts that can be read: chance would find none."""
    if isinstance(schema, dict):
        found = {inner: narrow(value, known, name if inner == "items" else inner) for inner, value in schema.items()}
        if found.get("format") == "uuid" and name in known:
            found["enum"] = known[name]
        if "examples" in found and "string" in found.get("type", ()):
            found["enum"] = [*found["examples"], "1,500 L"]
        return found
    return [narrow(inner, known, name) for inner in schema] if isinstance(schema, list) else schema


def name_things(api: Caller, shop: Shop) -> Known:
    """Return the identifiers of things by the fields, and by the rooms of the API, that may name them."""
    entry = api.record("opening", vessel=str(shop.bath.uuid), volume="20 L", complete=True).json()["uuid"]
    tanks = [str(shop.bath.uuid), str(shop.rinse.uuid)]
    stock, drum = [str(shop.stock.uuid)], [str(shop.drum.vessel.uuid)]
    one = {name: [str(thing.uuid)] for name, thing in vars(shop).items() if hasattr(thing, "uuid")}
    return one | {
        "vessel": tanks, "vessels": tanks, "tank": tanks, "tanks": tanks, "source": tanks, "stock": stock,
        "target": [*tanks, *drum], "container": drum, "containers": drum, "waste-containers": drum, "anode": stock,
        "entry": [entry], "entries": [entry], "analysis": [entry], "places": one["place"], "products": one["product"],
        "substance": one["sulfate"], "substances": one["sulfate"], "rack-types": one["rack"], "routes": one["route"],
        "bath": tanks[:1], "filtrate": [*tanks, *drum], "sludge": drum,
        "waste-streams": one["stream"], "receivers": one["receiver"], "workshops": one["workshop"],
    }  # fmt: skip


def describe_shop(api: Caller, shop: Shop) -> Json:
    """Return the description of the API as it is for the things of this workshop."""
    known = name_things(api, shop)
    found = copy.deepcopy(describe_api("en"))
    bodies = found["components"]["schemas"]
    bodies |= {name: narrow(body, known) for name, body in bodies.items() if body.get("additionalProperties") is False}
    for path, operations in found["paths"].items():
        for operation in operations.values():
            parameters = [each for each in operation.get("parameters", []) if each["name"] != "cursor"]
            for each in parameters:
                room = path.split("/{uuid}")[0].rsplit("/", 1)[1]
                each["schema"] = narrow(each["schema"], known, room if each["name"] == "uuid" else each["name"])
            operation["parameters"] = parameters
    return found


@contextmanager
def one_connection() -> Iterator[None]:
    """Keep the test's own connection open from one request to the next."""
    signals = (request_started, request_finished)
    for signal in signals:
        signal.disconnect(close_old_connections)
    yield
    for signal in signals:
        signal.connect(close_old_connections)


def try_all(
    described: Json, api: Caller, mode: schemathesis.GenerationMode, checks: Sequence[CheckFunction]
) -> list[int]:
    """Send made-up requests to every operation, validate each answer, and return the statuses."""
    schema = schemathesis.openapi.from_dict(described)
    schema.app = application
    statuses: list[int] = []

    def send(case: Case) -> None:
        headers = {"Authorization": f"Bearer {api.token}"}
        response = case.call_and_validate(headers=headers, checks=list(checks))
        statuses.append(response.status_code)

    with one_connection():
        for operation in schema.get_all_operations():
            assert isinstance(operation, Ok)
            run(operation.ok().as_strategy(generation_mode=mode), send, FEW[mode])
    return statuses


def run(strategy: Any, send: Callable[[Case], None], few: int) -> None:
    """Send a few cases of an operation."""
    sparing = settings(
        max_examples=few,
        phases=[Phase.generate],
        suppress_health_check=list(HealthCheck),
        derandomize=True,
        database=None,
    )
    sparing(given(case=strategy)(send))()


def test_answers_are_as_described(api: Caller, shop: Shop) -> None:
    statuses = try_all(describe_shop(api, shop), api, schemathesis.GenerationMode.POSITIVE, ANSWERS)
    assert statuses.count(200) > 60
    assert 201 in statuses


def test_what_is_not_described_is_refused(api: Caller, shop: Shop) -> None:
    checks = [*ANSWERS, negative_data_rejection]
    statuses = try_all(describe_shop(api, shop), api, schemathesis.GenerationMode.NEGATIVE, checks)
    assert statuses.count(400) > 30
