"""What is wrong with a row before it is written: Django's checks in our words, and characters no paper can carry."""

from collections.abc import Collection, Iterator

from django.core.exceptions import ValidationError
from django.db import models

from chemicals.workshop.errors import FieldError
from chemicals.workshop.texts import find_bad_lines, find_unwritable, tidy

SENTENCES = {
    "blank": "This cannot stay empty. Write it down.",
    "null": "This cannot stay empty. Write it down.",
    "max_length": "This is too long. Write it in at most %(limit_value)s characters.",
    "min_value": "This is too little. Write at least %(limit_value)s.",
    "max_value": "This is too much. Write at most %(limit_value)s.",
    "invalid_choice": "This is not in the list. Choose from the list.",
    "unique": "There is one of this name already. Choose another name.",
    "unique_together": "There is one of this name already. Choose another name.",
}
"""Django's code of an error -> what to do."""


def check_row(row: models.Model, *, leave_out: Collection[str] = (), unique: bool = False) -> list[FieldError]:
    """Tidy the texts of a row, and return everything that is wrong with it, by field.

    ``unique`` asks the database as well, inside the workshop's scope, whether there is one of this name.
    """
    errors = list(_check_texts(row))
    unique = unique and not errors  # PostgreSQL cannot even look for a text with a NUL
    try:
        row.full_clean(exclude=leave_out, validate_unique=unique, validate_constraints=unique)
    except ValidationError as error:
        for field, problems in error.error_dict.items():
            name = "name" if field == "__all__" else field
            errors += [FieldError(name, _in_our_words(problem)) for problem in problems]
    return errors


def _in_our_words(problem: ValidationError) -> str:
    sentence = SENTENCES.get(problem.code or "")
    return problem.messages[0] if sentence is None else sentence % (problem.params or {})


def _check_texts(row: models.Model) -> Iterator[FieldError]:
    for field in row._meta.concrete_fields:
        value = getattr(row, field.attname)
        if isinstance(value, str):
            setattr(row, field.attname, tidy(value))
            many_lines = isinstance(field, models.TextField)
            yield from find_unwritable(value, field.attname) if many_lines else find_bad_lines(**{field.attname: value})
