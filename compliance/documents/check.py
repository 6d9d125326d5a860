"""Compares frozen data with the shape of its kind and finds everything that is wrong, before anything is drawn."""

import re
import types
import unicodedata
from collections.abc import Iterator
from datetime import datetime
from typing import Any, Literal, NotRequired, Union, get_args, get_origin, get_type_hints, is_typeddict

from compliance.documents.errors import FieldError, PaperDataError
from compliance.documents.shapes import SHAPES

_UNIONS = (Union, types.UnionType)
_HEX_HASH = re.compile(r"[0-9a-f]{64}")
_DECIMAL = re.compile(r"\d+(\.\d+)?")


def check_data(kind: str, data: object) -> None:
    """Raise `PaperDataError` with every problem if `data` has not the shape of `kind`."""
    if kind not in SHAPES:
        raise PaperDataError([FieldError("kind", f"no paper of kind {kind!r}: use one of {', '.join(SHAPES)}")])
    problems = list(_problems(SHAPES[kind], data, ""))
    if problems:
        raise PaperDataError(problems)


def _problems(shape: Any, value: object, path: str) -> Iterator[FieldError]:
    """Walk shape and value together."""
    origin = get_origin(shape)
    if is_typeddict(shape):
        yield from _dict_problems(shape, value, path)
    elif origin in _UNIONS:
        if value is not None:
            (inner,) = (arg for arg in get_args(shape) if arg is not type(None))
            yield from _problems(inner, value, path)
    elif origin is list:
        yield from _list_problems(get_args(shape)[0], value, path)
    elif origin is Literal:
        if value not in get_args(shape):
            yield FieldError(path, f"{value!r} is not one of {', '.join(map(repr, get_args(shape)))}")
    elif type(value) is not shape:
        yield FieldError(path, f"must be {_NAMES[shape]}, not {value!r}")
    else:
        yield from _text_problems(path, value)


_NAMES = {str: "text", int: "a whole number"}


def _dict_problems(shape: Any, value: object, path: str) -> Iterator[FieldError]:
    if not isinstance(value, dict):
        yield FieldError(path or "data", "must be an object with named fields")
        return
    hints = get_type_hints(shape, include_extras=True)
    prefix = f"{path}." if path else ""
    for name in value.keys() - hints.keys():
        yield FieldError(f"{prefix}{name}", "is not a field of this paper: leave it out")
    for name, hint in hints.items():
        optional = get_origin(hint) is NotRequired
        if name in value:
            yield from _problems(get_args(hint)[0] if optional else hint, value[name], f"{prefix}{name}")
        elif not optional:
            yield FieldError(f"{prefix}{name}", "is missing: state it, or null where unknown is allowed")


def _list_problems(shape: Any, value: object, path: str) -> Iterator[FieldError]:
    if not isinstance(value, list):
        yield FieldError(path, "must be a list")
        return
    for index, item in enumerate(value):
        yield from _problems(shape, item, f"{path}[{index}]")


def _text_problems(path: str, value: object) -> Iterator[FieldError]:
    """Characters that nobody sees, and fields whose text has a form of its own."""
    name = path.rpartition(".")[2]
    unseen = {char for char in str(value) if unicodedata.category(char) in {"Cc", "Cs"} and char != "\n"}
    if unseen:
        codes = ", ".join(f"U+{ord(char):04X}" for char in sorted(unseen))
        yield FieldError(path, f"contains control characters ({codes}): remove them")
    elif name == "chain_head" and not _HEX_HASH.fullmatch(str(value)):
        yield FieldError(path, "must be the 64 hexadecimal digits of a SHA-256")
    elif name == "gross_kg" and not _DECIMAL.fullmatch(str(value)):
        yield FieldError(path, f"must be kilograms as a plain decimal number such as 23.4, not {value!r}")
    elif name in {"issued_at", "date", "first_drop", "full"} and not _is_iso(str(value)):
        yield FieldError(path, f"must be an ISO 8601 date, not {value!r}")
    elif name in {"number", "start"} and int(str(value)) < 1:
        yield FieldError(path, "counts from 1")


def _is_iso(text: str) -> bool:
    try:
        datetime.fromisoformat(text)
    except ValueError:
        return False
    return True
