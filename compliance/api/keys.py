"""The Idempotency-Key: with it a record that was sent twice is written once."""

from uuid import UUID

from django.utils.translation import gettext as _
from rest_framework.exceptions import ValidationError
from rest_framework.request import Request

from compliance.api.fields import Identifier

HEADER = "Idempotency-Key"


def read_key(request: Request) -> UUID:
    """Return the key of a record, or raise ValidationError that says how to make one."""
    sent = request.headers.get(HEADER)
    if sent is None:
        raise ValidationError(
            {HEADER: [_("This header is missing. Send a fresh uuid for each record, and the same one when you retry.")]}
        )
    try:
        key: UUID = Identifier().run_validation(sent)
    except ValidationError as error:
        raise ValidationError({HEADER: error.detail}) from error
    return key
