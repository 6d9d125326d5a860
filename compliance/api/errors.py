"""Every error in one shape: ``{"errors": [{"field": "...", "message": "..."}]}``, all of them at once.

``field`` is the dotted path of a field of the body, the name of a query parameter or of a header; it is empty where
the whole request is meant.
"""

from collections.abc import Iterable, Iterator, Mapping, Sequence
from typing import Any

from django.core.exceptions import BadRequest, PermissionDenied, SuspiciousOperation
from django.http import Http404
from django.utils.translation import gettext as _
from rest_framework import exceptions
from rest_framework.response import Response
from rest_framework.settings import api_settings

from chemicals.science.calculation import CalculationErrors
from chemicals.workshop.errors import (
    ConflictError,
    DomainError,
    FieldError,
    InvalidInputError,
    NotFoundError,
    NotPermittedError,
)
from compliance.clearance.services import RefusedError

STATUS: tuple[tuple[type[Exception], int], ...] = (
    (InvalidInputError, 400),
    (CalculationErrors, 400),
    (SuspiciousOperation, 400),
    (BadRequest, 400),
    (NotPermittedError, 403),
    (PermissionDenied, 403),
    (NotFoundError, 404),
    (Http404, 404),
    (ConflictError, 409),
    (DomainError, 500),
)
"""The status of each error that is not the framework's own; the first that fits counts."""


def answer(error: Exception, context: Mapping[str, Any]) -> Response | None:
    """Return the response to an error, or None for one that nobody foresaw."""
    if isinstance(error, exceptions.APIException):
        headers = {"WWW-Authenticate": error.auth_header} if hasattr(error, "auth_header") else {}
        return _respond(error.status_code, _framework_errors(error), headers=headers)
    status = next((status for kind, status in STATUS if isinstance(error, kind)), None)
    if status is None:
        return None
    reasons = error.reasons if isinstance(error, RefusedError) else None
    return _respond(status, _domain_errors(error), reasons=reasons)


def _respond(
    status: int,
    errors: Iterable[FieldError],
    *,
    headers: Mapping[str, str] | None = None,
    reasons: Sequence[str] | None = None,
) -> Response:
    said: dict[str, Any] = {"errors": [{"field": error.field, "message": error.message} for error in errors]}
    if reasons is not None:
        said["reasons"] = list(reasons)
    return Response(said, status=status, headers=headers)


def _domain_errors(error: Exception) -> Iterator[FieldError]:
    if isinstance(error, InvalidInputError):
        yield from error.errors
    elif isinstance(error, CalculationErrors):
        yield from (FieldError(row["field"], row["message"]) for row in error.errors)
    elif isinstance(error, Http404):
        yield FieldError("", _("There is no such thing here. Follow the links of the lists."))
    elif isinstance(error, DomainError):
        yield FieldError("", str(error))
    else:
        yield FieldError("", _("This request cannot be read. Send it again as the description of the API says."))


def _framework_errors(error: exceptions.APIException) -> list[FieldError]:
    if isinstance(error, exceptions.ValidationError):
        return list(flatten(error.detail))
    named = {401: "Authorization", 406: "Accept", 415: "Content-Type"}
    return [FieldError(named.get(error.status_code, ""), str(error.detail))]


def flatten(detail: Any, path: str = "") -> Iterator[FieldError]:
    """Yield the errors of nested serializers with dotted paths: ``held.0.amount``."""
    if isinstance(detail, Mapping):
        for name, inner in detail.items():
            yield from flatten(inner, _join(path, str(name)))
    elif isinstance(detail, list):
        for number, inner in enumerate(detail):
            yield from flatten(inner, _join(path, str(number)) if isinstance(inner, Mapping | list) else path)
    else:
        yield FieldError(path, str(detail))


def _join(path: str, name: str) -> str:
    if name == api_settings.NON_FIELD_ERRORS_KEY:
        return path
    return f"{path}.{name}" if path else name
