"""The description of this API."""

from functools import cache
from typing import Any

from django.utils.translation import get_language
from rest_framework.request import Request
from rest_framework.response import Response

from compliance.api.views.base import ApiView


class SchemaView(ApiView):
    """Everything that this API understands and answers, as OpenAPI 3.1 in JSON."""

    schema = None

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the description."""
        return Response(describe_api(get_language()))


@cache
def describe_api(language: str | None) -> dict[str, Any]:
    """Return the description in a language; drawing it takes a second, so each is drawn once."""
    from drf_spectacular.generators import SchemaGenerator

    generator: Any = SchemaGenerator()  # type: ignore[no-untyped-call]
    found: dict[str, Any] = generator.get_schema(request=None, public=True)
    return found
