"""Compares frozen data with the shape of its kind and finds everything that is wrong, before anything is drawn."""

import re
import types
from collections.abc import Iterator
from datetime import datetime
from typing import Any, Literal, NotRequired, Union, get_args, get_origin, get_type_hints, is_typeddict

from .errors import PaperDataError, Problem
from .shapes import SHAPES

_UNIONS = (Union, types.UnionType)
_HEX_HASH = re.compile(r"[0-9a-f]{64}")
_DECIMAL = re.compile(r"\d+(\.\d+)?")


def check_data(kind: str, data: object) -> None:
    """Raise `PaperDataError` with every problem if `data` has not the shape of `kind`."""
    if kind not in SHAPES:
        raise PaperDataError([Problem("kind", f"no paper of kind {kind!r}: use one of {', '.join(SHAPES)}")])
    problems = list(_problems(SHAPES[kind], data, ""))
    if problems:
        raise PaperDataError(problems)


def _problems(shape: Any, value: object, path: str) -> Iterator[Problem]:
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
            yield Problem(path, f"{value!r} is not one of {', '.join(map(repr, get_args(shape)))}")
    elif type(value) is not shape:
        yield Problem(path, f"must be {_NAMES[shape]}, not {value!r}")
    else:
        yield from _text_problems(path, value)


_NAMES = {str: "text", int: "a whole number"}


def _dict_problems(shape: Any, value: object, path: str) -> Iterator[Problem]:
    if not isinstance(value, dict):
        yield Problem(path or "data", "must be an object with named fields")
        return
    hints = get_type_hints(shape, include_extras=True)
    prefix = f"{path}." if path else ""
    for name in value.keys() - hints.keys():
        yield Problem(f"{prefix}{name}", "is not a field of this paper: leave it out")
    for name, hint in hints.items():
        optional = get_origin(hint) is NotRequired
        if name in value:
            yield from _problems(get_args(hint)[0] if optional else hint, value[name], f"{prefix}{name}")
        elif not optional:
            yield Problem(f"{prefix}{name}", "is missing: state it, or null where unknown is allowed")


def _list_problems(shape: Any, value: object, path: str) -> Iterator[Problem]:
    if not isinstance(value, list):
        yield Problem(path, "must be a list")
        return
    for index, item in enumerate(value):
        yield from _problems(shape, item, f"{path}[{index}]")


def _text_problems(path: str, value: object) -> Iterator[Problem]:
    """Fields whose text has a form of its own."""
    name = path.rpartition(".")[2]
    if name == "chain_head" and not _HEX_HASH.fullmatch(str(value)):
        yield Problem(path, "must be the 64 hexadecimal digits of a SHA-256")
    elif name == "gross_kg" and not _DECIMAL.fullmatch(str(value)):
        yield Problem(path, f"must be kilograms as a plain decimal number such as 23.4, not {value!r}")
    elif name in {"issued_at", "date", "first_drop", "full"} and not _is_iso(str(value)):
        yield Problem(path, f"must be an ISO 8601 date, not {value!r}")
    elif name in {"number", "start"} and int(str(value)) < 1:
        yield Problem(path, "counts from 1")


def _is_iso(text: str) -> bool:
    try:
        datetime.fromisoformat(text)
    except ValueError:
        return False
    return True
