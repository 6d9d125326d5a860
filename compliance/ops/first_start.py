"""The first start: whoever reads the terminal becomes the first owner.

The token stands in the printed address; the data folder keeps only its SHA-256. Each start prints a new one until there
is a user.
"""

import hashlib
import hmac
import secrets
from contextlib import suppress
from datetime import datetime
from pathlib import Path

from django.conf import settings
from django.core.exceptions import ValidationError
from django.db import transaction

from chemicals.workshop.errors import ConflictError, FieldError, InvalidInputError
from chemicals.workshop.models import Membership, User, Workshop
from chemicals.workshop.services import create_user, create_workshop
from compliance.ops.start import write_private


class FirstStartOverError(ConflictError):
    """There is a user already, or the token is not the one that was printed last."""


def _token_file(data_folder: Path) -> Path:
    return data_folder / "first-start-token"


def _hash(token: str) -> str:
    return hashlib.sha256(token.encode()).hexdigest()


def ensure_token(data_folder: Path) -> str | None:
    """Make a new token and return it; None if there is a user. The token of an earlier start ends."""
    if User.objects.exists():
        _token_file(data_folder).unlink(missing_ok=True)
        return None
    token = secrets.token_urlsafe(24)
    write_private(_token_file(data_folder), _hash(token))
    return token


def token_is_valid(token: str) -> bool:
    """Tell whether this is the token that was printed last and nobody has used it."""
    with suppress(FileNotFoundError):
        kept = _token_file(settings.DATA).read_text()
        return hmac.compare_digest(kept, _hash(token)) and not User.objects.exists()
    return False


def complete_first_start(
    *, token: str, now: datetime, workshop_name: str, time_zone: str, name: str, email: str, password: str
) -> Membership:
    """Create the first user and workshop in one transaction and use the token up.

    Raises FirstStartOverError, or InvalidInputError with all that is wrong with the input.
    """
    if not token_is_valid(token):
        raise FirstStartOverError("This address has been used, or a later start has replaced it. See the terminal.")
    kept = _token_file(settings.DATA)
    used = kept.with_suffix(".used")
    try:
        kept.rename(used)  # of two at once only one succeeds
    except FileNotFoundError as error:
        raise FirstStartOverError("Somebody else has completed the first start just now. Sign in instead.") from error
    try:
        with transaction.atomic():
            member = _create(
                now=now,
                workshop_name=workshop_name,
                time_zone=time_zone,
                name=name,
                email=email,
                password=password,
            )
    except BaseException:
        used.rename(kept)
        raise
    used.unlink()
    return member


def _create(*, now: datetime, workshop_name: str, time_zone: str, name: str, email: str, password: str) -> Membership:
    """Create both, or raise what is wrong with both."""
    errors = _errors_of_workshop(now, workshop_name, time_zone)
    try:
        user = create_user(email=email, password=password, name=name)
    except InvalidInputError as error:
        raise InvalidInputError([*errors, *error.errors]) from error
    if errors:
        raise InvalidInputError(errors)
    return create_workshop(now=now, name=workshop_name, time_zone=time_zone, owner=user)


def _errors_of_workshop(now: datetime, name: str, time_zone: str) -> list[FieldError]:
    """Ask the model beforehand: its "name" is the form's "workshop_name", and the user's errors stand beside them."""
    try:
        Workshop(name=name.strip(), time_zone=time_zone, created_at=now).full_clean()
    except ValidationError as error:
        fields = {"name": "workshop_name"}
        return [FieldError(fields.get(f, f), text) for f, texts in error.message_dict.items() for text in texts]
    return []
