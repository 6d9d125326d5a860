"""One spelling for one meaning: what the bytes of an entry may look like, and what is refused."""

import hashlib
import json
import math
from dataclasses import replace
from datetime import UTC, datetime, timedelta, timezone
from decimal import Decimal
from typing import Any
from uuid import UUID

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.books.canonical import (
    GENESIS,
    Body,
    CanonicalError,
    chain_hash,
    check_text,
    decode_body,
    dump,
    encode_body,
    from_plain,
    load,
    to_plain,
)
from chemicals.books.clearance import Clearance
from tests.books.examples import EXAMPLES, body_of
from tests.books.strategies import texts

plain_values = st.recursive(
    st.none() | st.booleans() | st.integers() | texts,
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(texts, inner, max_size=3),
    max_leaves=8,
)
BODY = body_of(EXAMPLES["move"])


@given(plain_values)
def test_what_is_written_reads_back_and_is_written_the_same(value: Any) -> None:
    data = dump(value)
    assert load(data) == value
    assert dump(load(data)) == data


def test_keys_are_sorted_and_nothing_is_spaced() -> None:
    assert dump({"b": 1, "a": [True, None, "x"]}) == b'{"a":[true,null,"x"],"b":1}'


def test_text_is_utf8_in_composed_form() -> None:
    """A with ring above, as one character and as two, and the angstrom sign: one spelling."""
    assert dump("\u00c5") == dump("A\u030a") == dump("\u212b") == b'"\xc3\x85"'


def test_two_names_that_are_the_same_once_composed_are_refused() -> None:
    with pytest.raises(CanonicalError, match="Two names"):
        dump({"\u00c5": 1, "A\u030a": 2})


def test_a_line_break_is_text() -> None:
    assert load(dump("first\nsecond")) == "first\nsecond"


@pytest.mark.parametrize("character", ["\x00", "\t", "\r", "\x1b", "\x7f", "\x85", "\ud800"])
def test_control_characters_are_refused_wherever_they_stand(character: str) -> None:
    for value in (character, {character: 1}, [f"a{character}b"]):
        with pytest.raises(CanonicalError, match=f"U\\+{ord(character):04X} cannot be recorded"):
            dump(value)
    with pytest.raises(CanonicalError, match="cannot be recorded"):
        check_text(f"name{character}")


@pytest.mark.parametrize(
    "value", [1.5, math.nan, Decimal("1.5"), {"a": [2.0]}, b"bytes", {1, 2}, datetime(2026, 1, 1, tzinfo=UTC), object()]
)
def test_what_has_no_canonical_form_is_refused(value: object) -> None:
    with pytest.raises(CanonicalError, match="has no canonical form"):
        dump(value)


def test_names_are_text() -> None:
    with pytest.raises(CanonicalError, match="a name: str expected, int found"):
        dump({1: "one"})


@pytest.mark.parametrize(
    "data",
    [
        b'{"b":1,"a":2}',  # not sorted
        b'{"a": 1}',  # spaced
        b'{"a":1}\n',
        b'{"a":1,"a":1}',  # said twice
        b'"A\xcc\x8a"',  # not composed
        b'"\\u00c5"',  # escaped without need
        b"-0",
        b"01",
        b"1.0",
        b"1e3",
        b"NaN",
        b"Infinity",
        b"\xef\xbb\xbf1",  # a byte order mark
        b"\xff\xfe1\x00",  # another encoding
        b'"\xff"',
        b"",
        b"{",
        b"[" * 100_000,
    ],
)
def test_bytes_in_another_form_are_refused(data: bytes) -> None:
    with pytest.raises(CanonicalError):
        load(data)


def test_a_float_is_told_as_one() -> None:
    with pytest.raises(CanonicalError, match=r"1\.5 is a float; decimals travel as strings"):
        load(b'{"a":1.5}')


def test_an_entry_reads_back() -> None:
    assert decode_body(encode_body(BODY)) == BODY


def test_times_are_written_in_utc() -> None:
    noon_in_berlin = datetime(2026, 3, 2, 12, tzinfo=timezone(timedelta(hours=1)))
    assert b'"occurred_at":"2026-03-02T11:00:00.000000Z"' in encode_body(replace(BODY, occurred_at=noon_in_berlin))


def test_a_time_long_ago_keeps_its_four_digits() -> None:
    long_ago = datetime(987, 6, 5, tzinfo=UTC)
    assert decode_body(encode_body(replace(BODY, occurred_at=long_ago))).occurred_at == long_ago


def test_a_time_without_a_zone_is_refused() -> None:
    with pytest.raises(CanonicalError, match="without a zone"):
        encode_body(replace(BODY, occurred_at=datetime(2026, 3, 2)))  # noqa: DTZ001


def changed(**fields: object) -> dict[str, Any]:
    """Return the plain entry with some fields changed; None takes a field away."""
    plain = {**to_plain(BODY), **fields}
    return {name: value for name, value in plain.items() if value is not None}


@pytest.mark.parametrize(
    ("plain", "message"),
    [
        (changed(member=None), r"Body: missing \['member'\], surplus \[\]"),
        (changed(colour="blue"), r"Body: missing \[\], surplus \['colour'\]"),
        (changed(sequence="42"), "Body.sequence: int expected, str found"),
        (changed(sequence=True), "Body.sequence: int expected, bool found"),
        (changed(kind=7), "Body.kind: str expected, int found"),
        (changed(payload=[]), "Body.payload: dict expected, list found"),
        (changed(attachments="ab"), "Body.attachments: list expected, str found"),
        (changed(attachments=[1]), r"Body.attachments\[0\]: str expected, int found"),
        (changed(clearance={"verdict": "allowed"}), r"Body.clearance: missing \['reasons'\]"),
        (changed(clearance="allowed"), "Body.clearance: dict expected, str found"),
        (changed(entry="not a name"), "Body.entry: badly formed"),
        (changed(entry="{0B6F7C1E-3F57-4C1D-9D0A-7F5B2F3C9A10}"), "Body.entry: .* is spelled"),
        (changed(entry=5), "Body.entry: str expected, int found"),
        (changed(recorded_at="2026-03-02"), "Body.recorded_at: .*does not match"),
        (changed(recorded_at="2026-03-02T17:30:15.1Z"), "Body.recorded_at: .* is spelled"),
        (changed(recorded_at=0), "Body.recorded_at: str expected, int found"),
    ],
)
def test_a_field_that_is_not_as_it_should_be_is_refused_by_name(plain: dict[str, Any], message: str) -> None:
    with pytest.raises(CanonicalError, match=message):
        from_plain(Body, plain)


def test_another_format_is_refused() -> None:
    with pytest.raises(CanonicalError, match=r"Body\.format: .* format 2"):
        decode_body(dump(changed(format=2)))


def test_the_chain_hash_by_hand() -> None:
    """SHA-256 of a one, the hash before, and the body."""
    expected = hashlib.sha256(bytes([1]) + bytes(32) + b"{}").digest()
    assert chain_hash(GENESIS, b"{}") == expected
    assert chain_hash(expected, b"{}") != expected
    assert expected.hex() == "57a65f4aed3019001e586fed2e4f1fbdb54bc79da77b858dc2ba368c94f603ae"


@given(st.uuids(), texts, st.lists(texts, max_size=2).map(tuple))
def test_any_entry_reads_back(entry: UUID, verdict: str, reasons: tuple[str, ...]) -> None:
    body = replace(BODY, entry=entry, clearance=Clearance(verdict, reasons))
    data = encode_body(body)
    assert decode_body(data) == body
    assert json.loads(data)["entry"] == str(entry)
