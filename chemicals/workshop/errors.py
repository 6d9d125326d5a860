"""Errors that every room shares. Faces translate them: 404, 403, 400 and 409."""

from collections.abc import Sequence
from dataclasses import dataclass


class DomainError(Exception):
    """Base of every error that a face must show to a person."""


class NotFoundError(DomainError):
    """There is no such thing for this member: it does not exist or belongs to another workshop."""


class NotPermittedError(DomainError):
    """The member's role does not allow this."""


@dataclass(frozen=True)
class FieldError:
    """One thing wrong with one field: a sentence that names the remedy."""

    field: str
    message: str


class InvalidInputError(DomainError):
    """Everything that is wrong with an input, all at once."""

    def __init__(self, errors: Sequence[FieldError]) -> None:
        super().__init__("; ".join(f"{error.field}: {error.message}" for error in errors))
        self.errors = tuple(errors)

    @classmethod
    def of(cls, field: str, message: str) -> "InvalidInputError":
        """Return the error for a single field."""
        return cls([FieldError(field, message)])


class ConflictError(DomainError):
    """The same key came with another content, or the state has moved on."""
