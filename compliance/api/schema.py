"""The description of the API, OpenAPI 3.1, drawn from the views themselves: it cannot lag behind them."""

import inspect
from typing import Any

from django.utils.translation import gettext_lazy as _
from drf_spectacular.extensions import OpenApiAuthenticationExtension, OpenApiSerializerFieldExtension
from drf_spectacular.openapi import AutoSchema
from drf_spectacular.types import OpenApiTypes
from drf_spectacular.utils import OpenApiParameter, OpenApiResponse

from chemicals.science.quantity import LONGEST
from compliance.api.fields import Strict
from compliance.api.serializers.base import Errors, Refusal

PATH_HELP = {
    "workshop": _("The token's own workshop."),
    "uuid": _("The thing's identifier."),
    "line": _("The line's identifier."),
    "sha256": _("SHA-256 of the file in hex."),
    "metal": _("The metal's symbol."),
}
KEY_HELP = _("A fresh uuid for each record: sent again with the same body it changes nothing and answers 200.")
FAILURES: dict[int, tuple[Any, Any]] = {
    400: (Errors, _("Something in the request is wrong.")),
    401: (Errors, _("The token is missing, unknown or revoked.")),
    403: (Errors, _("The token's member only reads, or is no owner.")),
    404: (Errors, _("There is no such thing in the token's workshop.")),
    409: (Refusal, _("The key was used for something else, the state has moved on, or this may not be done.")),
    415: (Errors, _("The body is of another kind.")),
}
"""Every answer that is no success, with what it means."""


class ApiSchema(AutoSchema):
    """Reads what a view says of itself: ``shape``, ``input_class``, ``query_class``, ``statuses``, ``media_types``."""

    view: Any

    def get_description(self) -> str:  # type: ignore[override]  # as the generator calls it
        """Return what the view is; of a list that a POST adds to, what the POST does."""
        does = getattr(self.view, "create", None) if self.method == "POST" else None
        return inspect.getdoc(does or type(self.view)) or ""

    def get_tags(self) -> list[str]:
        """Return the room of the API: what stands after the workshop in the address."""
        return self._words()[:1]

    def get_operation_id(self) -> str:
        """Return the address in words; of a list or thing also what is done with it."""
        verb = self.method == "POST" and not self.path.endswith("/")
        many = self.method == "GET" and self.path.endswith("/") and not self.path.endswith("}/")
        action = [] if verb else ["list" if many else self.method_mapping[self.method.lower()]]
        return "_".join(word.strip(".").replace("-", "_") for word in [*self._words(), *action])

    def _words(self) -> list[str]:
        """Return the words of the address, without the workshop that all of them begin with."""
        words = self._tokenize_path()
        return words[1:] if words[:1] == ["workshops"] and len(words) > 1 else words

    def _map_serializer(self, serializer: Any, direction: Any, bypass_extensions: bool = False) -> Any:  # noqa: FBT001, FBT002
        """Return the schema of a serializer; what is strict takes no other field."""
        schema: Any = super()._map_serializer(serializer, direction, bypass_extensions)  # type: ignore[no-untyped-call]
        kind = serializer if isinstance(serializer, type) else type(serializer)
        if issubclass(kind, Strict):
            schema["additionalProperties"] = False
        return schema

    def get_request_serializer(self) -> Any:
        """Return what a body says."""
        return getattr(self.view, "input_class", None) if self.method == "POST" else None

    def get_response_serializers(self) -> Any:
        """Return the success and every failure that this operation may answer with."""
        view, writes = self.view, self.method == "POST"
        statuses = view.statuses if writes else (200,)
        good: dict[Any, Any] = dict.fromkeys(statuses, view.shape)
        if view.media_types:
            good = {(200, *view.media_types): OpenApiTypes.BINARY}
        codes = [400, 401]
        if "{workshop}" in self.path:
            codes += [404, *((403, 409) if writes else (409,) if view.read_conflicts else ())]
        if writes:
            codes += [415]
        return good | {
            code: OpenApiResponse(shape, str(text)) for code, (shape, text) in FAILURES.items() if code in codes
        }

    def get_override_parameters(self) -> list[Any]:
        """Return what stands in the address and in headers."""
        path = [
            OpenApiParameter(
                name,
                OpenApiTypes.UUID if name in ("workshop", "uuid", "line") else OpenApiTypes.STR,
                "path",
                description=text,
            )
            for name, text in PATH_HELP.items()
            if f"{{{name}}}" in self.path
        ]
        query = [self.view.query_class] if self.method == "GET" and self.view.query_class().fields else []
        key = OpenApiParameter("Idempotency-Key", OpenApiTypes.UUID, "header", required=True, description=KEY_HELP)
        return [*path, *query, *([key] if self.view.needs_key and self.method == "POST" else [])]


class TokenScheme(OpenApiAuthenticationExtension):  # type: ignore[no-untyped-call]
    """How a token is sent."""

    target_class = "compliance.api.authentication.TokenAuthentication"
    name = "token"

    def get_security_definition(self, auto_schema: AutoSchema) -> dict[str, str]:
        """Return the scheme."""
        text = _("A token of one member of one workshop, created on the page Workshop: Authorization: Bearer glt_...")
        return {"type": "http", "scheme": "bearer", "description": str(text)}


class AmountSchema(OpenApiSerializerFieldExtension):  # type: ignore[no-untyped-call]
    """An amount is a text with a number and a unit."""

    target_class = "compliance.api.fields.Amount"
    match_subclasses = True

    def map_serializer_field(self, auto_schema: AutoSchema, direction: str) -> dict[str, Any]:
        """Return its schema."""
        return {"type": "string", "maxLength": LONGEST, "examples": [self.target.kind.example]}


class MomentOrDaySchema(OpenApiSerializerFieldExtension):  # type: ignore[no-untyped-call]
    """A moment or a day."""

    target_class = "compliance.api.fields.MomentOrDay"

    def map_serializer_field(self, auto_schema: AutoSchema, direction: str) -> dict[str, Any]:
        """Return its schema."""
        return {"type": "string", "anyOf": [{"format": "date-time"}, {"format": "date"}]}


class CalculationFieldSchema(OpenApiSerializerFieldExtension):  # type: ignore[no-untyped-call]
    """An input of a calculation: a text, or a bare number in the unit that its help names."""

    target_class = "compliance.api.calculation_fields.CalculationField"

    def map_serializer_field(self, auto_schema: AutoSchema, direction: str) -> dict[str, Any]:
        """Return its schema."""
        spec = self.target.spec
        number = {"integer": "integer"}.get(spec.kind, "number")
        types = ["string"] if spec.kind in ("text", "choice") else ["string", number]
        schema: dict[str, Any] = {"type": types, "examples": [spec.example]}
        schema |= {} if spec.default is None else {"default": spec.default}
        return {**schema, "enum": list(spec.choices)} if spec.choices else schema


def drop_enum_marks(result: Any, generator: Any, request: Any, public: Any) -> Any:
    """Remove the generator's own marks on lists of choices, which mean nothing to a reader."""
    if isinstance(result, dict):
        result.pop("x-spec-enum-id", None)
    for inner in result.values() if isinstance(result, dict) else result if isinstance(result, list) else ():
        drop_enum_marks(inner, generator, request, public)
    return result
