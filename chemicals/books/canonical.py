"""The bytes of an entry: one spelling for one meaning, so that a hash proves it.

UTF-8, NFC, sorted keys, no spaces, no floats (decimals travel as strings), no control characters.
"""

import dataclasses
import hashlib
import json
import types
import typing
import unicodedata
from collections.abc import Callable
from dataclasses import dataclass
from datetime import UTC, datetime
from functools import cache
from typing import Any, TypeVar
from uuid import UUID

from chemicals.books.clearance import Clearance

FORMAT = 1
GENESIS = bytes(32)
"""What the first entry of a workshop takes as the hash before it."""

SCALARS = (str, int, bool)
T = TypeVar("T")


class CanonicalError(ValueError):
    """A value cannot be written canonically, or bytes do not have the expected shape."""


@dataclass(frozen=True)
class Body:
    """Everything that the chain protects. ``attachments`` are SHA-256 in hex, sorted."""

    format: int
    workshop: UUID
    sequence: int
    entry: UUID
    kind: str
    kind_version: int
    occurred_at: datetime
    precision: str
    recorded_at: datetime
    member: UUID
    clearance: Clearance
    payload: dict[str, Any]
    attachments: tuple[str, ...] = ()


def dump(value: Any) -> bytes:
    """Return the canonical bytes of a plain value (dict, list, str, int, bool, None)."""
    return json.dumps(
        _plain(value), ensure_ascii=False, allow_nan=False, sort_keys=True, separators=(",", ":")
    ).encode()


def load(data: bytes) -> Any:
    """Return the plain value behind canonical bytes; floats and odd spellings are refused."""
    try:
        value = json.loads(data.decode(), parse_float=_refuse_float, parse_constant=_refuse_float)
    except CanonicalError:
        raise
    except (ValueError, RecursionError) as error:
        raise CanonicalError(f"These bytes are no canonical text: {error}") from error
    if dump(value) != data:
        raise CanonicalError("These bytes are not in canonical form.")
    return value


def encode_body(body: Body) -> bytes:
    """Return the canonical bytes of an entry."""
    return dump(to_plain(body))


def decode_body(data: bytes) -> Body:
    """Return the entry behind its canonical bytes; another format is refused."""
    body = from_plain(Body, load(data))
    if body.format != FORMAT:
        raise CanonicalError(f"Body.format: this version of the program does not know format {body.format}.")
    return body


def chain_hash(previous: bytes, body: bytes) -> bytes:
    """Return SHA-256(0x01 | previous hash | body): 32 bytes."""
    return hashlib.sha256(b"\x01" + previous + body).digest()


def to_plain(value: Any) -> Any:
    """Turn dataclasses, tuples, UUIDs and times into plain values."""
    if value is None or type(value) in SCALARS:
        return value
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        return {name: to_plain(getattr(value, name)) for name in field_names(type(value))}
    if isinstance(value, UUID):
        return str(value)
    if isinstance(value, datetime):
        return _format_time(value)
    if isinstance(value, dict):
        return {key: to_plain(item) for key, item in value.items()}
    return [to_plain(item) for item in value] if isinstance(value, list | tuple) else value


def from_plain(kind: type[T], value: Any) -> T:
    """Build a value of the type from plain values; a missing, surplus or wrong field is refused by name."""
    return typing.cast("T", _build(kind, value, kind.__name__))


def _build(hint: Any, value: Any, where: str) -> Any:
    if type(value) is hint and hint in SCALARS:
        return value
    origin, args = _take_apart(hint)
    if origin is typing.Annotated:
        return _build(args[0], value, where)
    if origin in (types.UnionType, typing.Union):
        return None if value is None else _build(next(a for a in args if a is not type(None)), value, where)
    if origin is tuple:
        _expect(value, list, where)
        return tuple(_build(args[0], item, f"{where}[{i}]") for i, item in enumerate(value))
    if origin is dict:
        _expect(value, dict, where)
        return {key: _build(args[1], item, f"{where}.{key}") for key, item in value.items()}
    build = _build_dataclass if dataclasses.is_dataclass(hint) else _build_scalar
    return build(hint, value, where)


@cache
def _take_apart(hint: Any) -> tuple[Any, tuple[Any, ...]]:
    return typing.get_origin(hint), typing.get_args(hint)


def _build_dataclass(hint: Any, value: Any, where: str) -> Any:
    _expect(value, dict, where)
    hints = type_hints(hint)
    names = set(field_names(hint))
    if value.keys() != names:
        raise CanonicalError(f"{where}: missing {sorted(names - set(value))}, surplus {sorted(set(value) - names)}")
    return hint(**{name: _build(hints[name], value[name], f"{where}.{name}") for name in names})


def _build_scalar(hint: Any, value: Any, where: str) -> Any:
    if hint is Any:
        return value
    if hint is UUID:
        return _build_spelled(UUID, value, where)
    if hint is datetime:
        return _build_spelled(_parse_time, value, where)
    _expect(value, hint, where)
    return value


def _build_spelled(build: Callable[[str], Any], value: Any, where: str) -> Any:
    """Build a value from its one spelling."""
    _expect(value, str, where)
    try:
        built = build(value)
    except ValueError as error:
        raise CanonicalError(f"{where}: {error}") from error
    if to_plain(built) != value:
        raise CanonicalError(f"{where}: {value!r} is spelled {to_plain(built)!r}")
    return built


def _expect(value: Any, kind: Any, where: str) -> None:
    if type(value) is not kind:  # bool is an int to isinstance, and must not pass as one
        raise CanonicalError(f"{where}: {kind.__name__} expected, {type(value).__name__} found")


def type_hints(kind: type) -> dict[str, Any]:
    """Return the resolved type hints of a dataclass, with their annotations."""
    return _cached_hints(kind)


@cache
def field_names(kind: Any) -> tuple[str, ...]:
    """Return the names of a dataclass's fields."""
    return tuple(f.name for f in dataclasses.fields(kind))


@cache
def _cached_hints(kind: Any) -> dict[str, Any]:
    return typing.get_type_hints(kind, include_extras=True)


def _plain(value: Any) -> Any:
    if isinstance(value, str):
        return check_text(value)
    if isinstance(value, dict):
        plain = {_check_key(key): _plain(item) for key, item in value.items()}
        if len(plain) != len(value):
            raise CanonicalError("Two names differ in their bytes only. Keep one of them.")
        return plain
    if isinstance(value, list):
        return [_plain(item) for item in value]
    if value is None or isinstance(value, bool | int):
        return value
    raise CanonicalError(f"{type(value).__name__} has no canonical form; write decimals as strings.")


def _check_key(key: Any) -> str:
    _expect(key, str, "a name")
    return check_text(key)


def check_text(text: str) -> str:
    """Return the text in NFC; refuse control characters other than line breaks."""
    if text.isascii() and text.isprintable():  # most texts are
        return text
    for character in text:
        if unicodedata.category(character) in ("Cc", "Cs") and character != "\n":
            raise CanonicalError(f"The control character U+{ord(character):04X} cannot be recorded. Remove it.")
    return unicodedata.normalize("NFC", text)


def _format_time(value: datetime) -> str:
    if value.tzinfo is None:
        raise CanonicalError("A time without a zone cannot be recorded.")
    return value.astimezone(UTC).replace(tzinfo=None).isoformat(timespec="microseconds") + "Z"


def _parse_time(text: str) -> datetime:
    return datetime.strptime(text, "%Y-%m-%dT%H:%M:%S.%fZ").replace(tzinfo=UTC)


def _refuse_float(text: str) -> Any:
    raise CanonicalError(f"{text} is a float; decimals travel as strings.")
