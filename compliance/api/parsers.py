"""What a body may be: JSON that says one thing only."""

import json
from collections.abc import Mapping
from typing import IO, Any

from django.utils.translation import gettext as _
from rest_framework.exceptions import ParseError, ValidationError
from rest_framework.parsers import BaseParser

LARGEST_BODY = 1024 * 1024
"""Bytes of the largest JSON body: some thousand times what an entry needs."""


class StrictJSONParser(BaseParser):
    """JSON in UTF-8. NaN and infinities, names written twice, and what is nested too deeply are refused."""

    media_type = "application/json"

    def parse(
        self, stream: IO[Any], media_type: str | None = None, parser_context: Mapping[str, Any] | None = None
    ) -> Any:
        """Return the value; ParseError if there is none, ValidationError if a name stands twice."""
        data = stream.read(LARGEST_BODY + 1)
        if len(data) > LARGEST_BODY:
            raise ParseError(_("This is more than 1 MB. Send less in one request."))
        try:
            return json.loads(data.decode(), object_pairs_hook=_once, parse_constant=_refuse_constant)
        except (ValueError, RecursionError) as error:
            raise ParseError(_("This is no JSON ({error}). Send one JSON object.").format(error=error)) from error


def _once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    """Of two values under one name it would be a guess which one is meant."""
    names = [name for name, _value in pairs]
    twice = {name for name in names if names.count(name) > 1} if len(set(names)) < len(names) else set()
    if twice:
        raise ValidationError({name: [_("This is written twice. Leave one out.")] for name in sorted(twice)})
    return dict(pairs)


def _refuse_constant(text: str) -> Any:
    raise ValueError(f"{text} is no number")
