"""What a request may say: strict, and every refusal in one shape."""

from datetime import date
from typing import Any
from uuid import uuid4

import pytest
from rest_framework import exceptions

from chemicals.workshop.errors import DomainError
from compliance.api.errors import answer, flatten
from compliance.api.fields import Choice, Day, Flag, Identifier, Moment, Strict, Text, Whole
from tests.api.conftest import Caller, Shop, errors_of


def test_an_unknown_field_is_refused_by_name_with_the_known_ones(api: Caller) -> None:
    said = errors_of(api.post("places/", {"name": "Shelf", "colour": "red"}), 400)
    assert said == {"colour": "There is no such field. Leave it out, or write one of: name, bund, exhaust_duct."}


def test_an_unknown_query_parameter_is_refused_by_name(api: Caller) -> None:
    assert set(errors_of(api.get("entries/", {"vesel": str(uuid4()), "kind": "runs"}), 400)) == {"vesel", "kind"}
    assert set(errors_of(api.get("", {"format": "xml"}), 400)) == {"format"}
    assert set(errors_of(api.client.get(api.path("entries/") + "?kind=run&kind=move"), 400)) == {"kind"}


@pytest.mark.parametrize(
    "body",
    [b"{", b'{"name": "a", "name": "b"}', b'{"name": NaN}', b"\xff", b"[" * 5000, b"1" * 5000, b'"' + b"x" * 1_100_000],
)
def test_a_body_that_is_no_json_is_refused_in_the_same_shape(api: Caller, body: bytes) -> None:
    response = api.client.post(api.path("places/"), body, content_type="application/json")
    assert errors_of(response, 400)


@pytest.mark.parametrize("body", [b"[]", b"null", b'"text"', b"3"])
def test_a_body_that_is_no_object_is_refused(api: Caller, body: bytes) -> None:
    response = api.client.post(api.path("places/"), body, content_type="application/json")
    assert errors_of(response, 400)


def test_a_name_written_twice_is_named(api: Caller) -> None:
    response = api.client.post(api.path("places/"), b'{"name": "a", "name": "b"}', content_type="application/json")
    assert errors_of(response, 400) == {"name": "This is written twice. Leave one out."}


def test_another_kind_of_body_is_refused(api: Caller) -> None:
    response = api.client.post(api.path("places/"), b"name=Shelf", content_type="application/x-www-form-urlencoded")
    assert "Content-Type" in errors_of(response, 415)


def test_another_method_is_refused(api: Caller) -> None:
    for method in ("put", "patch", "delete", "options"):
        response = getattr(api.client, method)(api.path("places/"))
        assert errors_of(response, 405)
        assert response.headers["Allow"] == "GET, HEAD, POST"


def test_what_is_not_there_is_said_in_the_same_shape(api: Caller) -> None:
    assert "" in errors_of(api.get(f"vessels/{uuid4()}/"), 404)
    assert "slash" in errors_of(api.get("vessels"), 404)[""]
    assert "slash" in errors_of(api.get("/nowhere/at/all"), 404)[""]
    assert "slash" in errors_of(api.get("/"), 404)[""]
    assert "slash" in errors_of(api.get("vessels/line%0Abreak/"), 404)[""]


def test_every_answer_is_json_whatever_is_accepted(api: Caller) -> None:
    response = api.client.get(api.path("places/"), headers={"Accept": "text/html"})
    assert (response.status_code, response.headers["Content-Type"]) == (200, "application/json")


def test_control_characters_are_refused_before_they_reach_the_journal(api: Caller, shop: Shop) -> None:
    for text in ("bell\x07", "nul\x00", "return\r"):
        assert "name" in errors_of(api.post("places/", {"name": text}), 400)
        said = {"route": str(shop.route.uuid), "charge": "1 Ah", "parts": text}
        assert "parts" in errors_of(api.record("run", **said), 400)
    volume = api.record("level-reading", vessel=str(shop.bath.uuid), volume="20\x1cL")
    assert "volume" in errors_of(volume, 400)
    half = api.client.post(api.path("places/"), b'{"name": "half \\ud800"}', content_type="application/json")
    assert "name" in errors_of(half, 400)


def test_two_spellings_of_one_text_are_one(api: Caller) -> None:
    assert api.post("places/", {"name": "Cafe\u0301"}).json()["name"] == "Caf\u00e9"
    assert "name" in errors_of(api.post("places/", {"name": "Caf\u00e9"}), 400)


@pytest.mark.parametrize(
    ("field", "value"),
    [
        (Text(), 3), (Text(), None), (Text(), "  "), (Text(max_length=3), "four"), (Text(), ["a"]),
        (Flag(), "yes"), (Flag(), 1), (Flag(), None),
        (Whole(), "3"), (Whole(), True), (Whole(), 2.0), (Whole(min_value=1), 0), (Whole(max_value=8), 9),
        (Choice(choices=["a"]), "b"), (Choice(choices=["a"]), ["a"]), (Choice(choices=["1"]), 1),
        (Identifier(), 5), (Identifier(), "5"), (Identifier(), "{7b0e2a52-0f3c-4d37-9d0e-0f6b7d0f9b11}"),
        (Day(), "2026-3-2"), (Day(), "2026-03-02T10:00"), (Day(), 20260302), (Day(), "1899-12-31"),
        (Moment(), "2026-03-02"), (Moment(), "2026-03-02T10:00"), (Moment(), 5), (Moment(), "9999-12-31T23:59-14:00"),
    ],
)  # fmt: skip
def test_fields_take_nothing_but_what_they_say(field: Any, value: object) -> None:
    with pytest.raises(exceptions.ValidationError) as refused:
        field.run_validation(value)
    assert all(str(message).endswith((".", ".}")) or "Write" in str(message) for message in refused.value.detail)


def test_fields_take_what_they_say() -> None:
    found = uuid4()
    assert Identifier().run_validation(str(found).upper()) == found
    assert Day().run_validation("2026-03-02") == date(2026, 3, 2)
    assert Moment().run_validation("2026-03-02T10:00Z").utcoffset() is not None
    assert (Flag().run_validation(data=False), Whole().run_validation(3), Text().run_validation(" a ")) == (
        False,
        3,
        "a",
    )


def test_errors_of_rows_have_dotted_paths() -> None:
    detail = {"a": ["one", "two"], "b": [{"c": ["three"]}, {}], "d": {0: ["four"]}, "non_field_errors": ["five"]}
    assert [(row.field, row.message) for row in flatten(detail)] == [
        ("a", "one"), ("a", "two"), ("b.0.c", "three"), ("d.0", "four"), ("", "five"),
    ]  # fmt: skip


def test_an_error_that_nobody_foresaw_is_not_hidden() -> None:
    assert answer(ZeroDivisionError(), {}) is None
    broken = answer(DomainError("The file is missing. Restore it from a backup."), {})
    assert broken is not None
    assert (broken.status_code, broken.data["errors"][0]["message"][:20]) == (500, "The file is missing.")


def test_a_strict_serializer_says_everything_at_once() -> None:
    class Two(Strict):
        one = Text()
        two = Whole()

    found = Two(data={"one": 1, "three": 3})
    assert found.is_valid() is False
    assert set(found.errors) == {"one", "two", "three"}
