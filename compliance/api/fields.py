"""Fields as strict as their description: nothing is guessed, and every refusal says what to write instead."""

from collections.abc import Mapping, Sequence
from datetime import date, datetime
from typing import Any, cast
from uuid import UUID

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.books.canonical import CanonicalError, check_text
from chemicals.process import fields as kinds
from chemicals.science.formula import FormulaError, parse_formula
from chemicals.science.quantity import LONGEST, Quantity, QuantityError

EARLIEST, LATEST = date(1900, 1, 1), date(2999, 12, 31)
"""The days that may be written: beyond them a time zone cannot be applied."""

MISSING = {
    "required": _("This is missing. Write it."),
    "null": _("This is null. Write a value, or leave the field out if it is optional."),
}


def check_characters(text: str) -> str:
    """Return the text in one spelling; refuse characters that the journal cannot keep."""
    try:
        return check_text(text)
    except CanonicalError as error:
        raise serializers.ValidationError(str(error)) from error


class Text(serializers.CharField):
    """A line of text, and nothing but text: a number is not turned into one."""

    default_error_messages = {
        **MISSING,
        "invalid": _("This is no text. Write it between quotation marks."),
        "blank": _("This is empty. Write something."),
        "max_length": _("This is too long. Write at most {max_length} characters."),
    }

    def to_internal_value(self, data: Any) -> str:
        """Return the text, trimmed."""
        if not isinstance(data, str):
            self.fail("invalid")
        return super().to_internal_value(check_characters(data))


class Flag(serializers.BooleanField):
    """true or false; neither "yes" nor 1."""

    default_error_messages = {**MISSING, "invalid": _("Write true or false, without quotation marks.")}

    def to_internal_value(self, data: Any) -> bool:
        """Return the flag."""
        if not isinstance(data, bool):
            self.fail("invalid", input=data)
        return data


class Whole(serializers.IntegerField):
    """A whole number in a body."""

    default_error_messages = {
        **MISSING,
        "invalid": _("Write a whole number, without quotation marks."),
        "max_value": _("Write at most {max_value}."),
        "min_value": _("Write at least {min_value}."),
    }

    def to_internal_value(self, data: Any) -> int:
        """Return the number."""
        if not isinstance(data, int) or isinstance(data, bool):
            self.fail("invalid")
        return data


class PageSize(serializers.IntegerField):
    """A whole number in an address."""

    default_error_messages = {
        "invalid": _("Write a whole number."),
        "max_value": _("Write at most {max_value}."),
        "min_value": _("Write at least {min_value}."),
    }


class Yes(serializers.BooleanField):
    """true or false in an address."""

    default_error_messages = {"invalid": _("Write true or false.")}

    def to_internal_value(self, data: Any) -> bool:
        """Return the flag."""
        if data not in ("true", "false"):
            self.fail("invalid", input=data)
        return bool(data == "true")


class Choice(serializers.ChoiceField):
    """One word of a list; a wrong one is answered with the list."""

    default_error_messages = {**MISSING, "invalid_choice": _('"{input}" is no choice. Write one of: {known}.')}

    def to_internal_value(self, data: Any) -> Any:
        """Return the word."""
        if not isinstance(data, str) or data not in self.choices:
            self.fail("invalid_choice", input=str(data)[:80], known=", ".join(map(str, self.choices)))
        return data


class Component(Text):
    """What is balanced: one of the known names, or the formula of a substance declared inert."""

    default_error_messages = {
        **Text.default_error_messages,
        "unknown": _('"{input}" is not balanced. Write a formula that was declared inert, or one of: {known}.'),
    }

    def __init__(self, *, known: Sequence[str], **options: Any) -> None:
        self.known = known
        super().__init__(max_length=80, **options)

    def to_internal_value(self, data: Any) -> str:
        """Return the code; whether a formula was declared inert is known in the workshop alone."""
        code = super().to_internal_value(data)
        if code in self.known:
            return code
        try:
            parse_formula(code)
        except FormulaError:
            self.fail("unknown", input=code, known=", ".join(self.known))
        return code


class Identifier(serializers.UUIDField):
    """A uuid in its usual spelling, eight-four-four-four-twelve."""

    default_error_messages = {
        **MISSING,
        "invalid": _("This is no identifier. Copy it from an answer, like 7b0e2a52-0f3c-4d37-9d0e-0f6b7d0f9b11."),
    }

    def to_internal_value(self, data: Any) -> UUID:
        """Return the identifier."""
        try:
            found = UUID(data) if isinstance(data, str) else None
        except ValueError:
            found = None
        if found is None or str(found) != data.lower():
            self.fail("invalid")
        return found


class Day(serializers.DateField):
    """A date as 2026-03-02."""

    default_error_messages = {
        **MISSING,
        "invalid": _("Write the date as 2026-03-02."),
        "out_of_range": _("Write a date between {earliest} and {latest}."),
    }

    def to_internal_value(self, value: Any) -> date:
        """Return the date."""
        found = _read_date(value)
        if found is None:
            self.fail("invalid")
        if not EARLIEST <= found <= LATEST:
            self.fail("out_of_range", earliest=EARLIEST, latest=LATEST)
        return found


class Moment(serializers.DateTimeField):
    """A date and time with its offset from UTC: without one it is not known which moment is meant."""

    default_error_messages = {
        **MISSING,
        "invalid": _("Write date, time and offset as 2026-03-02T14:30+01:00."),
        "no_offset": _("Add the offset from UTC, as in 2026-03-02T14:30+01:00, or Z for UTC."),
        "out_of_range": _("Write a time between {earliest} and {latest}."),
    }

    def to_internal_value(self, value: Any) -> datetime:
        """Return the moment."""
        found = _read_moment(value)
        if found is None:
            self.fail("invalid", format="")
        if found.tzinfo is None:
            self.fail("no_offset")
        if not EARLIEST < found.date() < LATEST:
            self.fail("out_of_range", earliest=EARLIEST, latest=LATEST)
        return found


class MomentOrDay(serializers.Field[datetime | date, str, str, Any]):
    """When something happened: a moment with its offset, or only the day if nothing finer is known."""

    default_error_messages = {**MISSING}

    def to_internal_value(self, data: str) -> datetime | date:
        """Return the moment, or the day."""
        field: serializers.Field[Any, Any, Any, Any] = Moment() if _read_date(data) is None else Day()
        found: datetime | date = field.run_validation(data)
        return found

    def to_representation(self, value: datetime | date) -> str:
        """Return it in ISO 8601."""
        return value.isoformat()


def _read_date(value: Any) -> date | None:
    try:
        return date.fromisoformat(value) if isinstance(value, str) and len(value) == len("2026-03-02") else None
    except ValueError:
        return None


def _read_moment(value: Any) -> datetime | None:
    try:
        return datetime.fromisoformat(value) if isinstance(value, str) and _read_date(value) is None else None
    except ValueError:
        return None


class Amount(serializers.Field[Quantity, str, str, Any]):
    """An amount as people write it, number and unit in one text: "2.5 gal". Never a bare JSON number."""

    default_error_messages = {
        **MISSING,
        "not_text": _('Write number and unit as one text, for example "{example}".'),
    }

    def __init__(self, *dimensions: str, example: str, **options: Any) -> None:
        self.kind = kinds.AmountField("", dimensions=dimensions, example=example)
        super().__init__(**options)

    def to_internal_value(self, data: str) -> Quantity:
        """Return the amount."""
        if not isinstance(data, str):
            self.fail("not_text", example=self.kind.example)
        try:
            return kinds.read_amount(self.kind, check_characters(data))
        except QuantityError as error:
            raise serializers.ValidationError(error.message) from error

    def to_representation(self, value: Quantity) -> str:
        """Return it as typed."""
        return value.typed


class BaseUnits(Amount):
    """An amount of which only the whole number of base units is kept: a setting, not a fact."""

    def run_validation(self, data: Any = serializers.empty) -> Any:
        """Return the number of base units, or None."""
        found = super().run_validation(data)
        return found.base if isinstance(found, Quantity) else found


LONGEST_AMOUNT = LONGEST


class Words(serializers.ListField):
    """A list of words or sentences."""

    default_error_messages = {
        **MISSING,
        "not_a_list": _("Write a list between square brackets."),
        "max_length": _("Write at most {max_length}."),
    }

    def __init__(self, *, child: serializers.Field[Any, Any, Any, Any], **options: Any) -> None:
        super().__init__(child=child, max_length=options.pop("max_length", 50), **options)


class Strict(serializers.Serializer[Any]):
    """What a request may say: a field that is not in the description is refused by its name, together with the rest."""

    default_error_messages = {
        **MISSING,
        "invalid": _("Write a JSON object: fields by name between braces."),
        "unknown": _("There is no such field. Leave it out, or write one of: {known}."),
    }

    def to_internal_value(self, data: Any) -> Any:
        """Return the values by name; every error at once."""
        errors: dict[str, Any] = {}
        if isinstance(data, Mapping):
            message = self.error_messages["unknown"].format(known=", ".join(self.fields) or _("none"))
            errors = {str(name): [message] for name in data if name not in self.fields}
        try:
            values = super().to_internal_value(data)
        except serializers.ValidationError as error:
            raise serializers.ValidationError({**errors, **_as_dict(error.detail)}) from error
        if errors:
            raise serializers.ValidationError(errors)
        return values


def rows(row: type[Strict], *, most: int, **options: Any) -> Any:
    """Return a field that takes a list of smaller inputs of one kind."""
    return cast("Any", row)(many=True, max_length=most, **options)


def _as_dict(detail: Any) -> dict[str, Any]:
    return dict(detail) if isinstance(detail, Mapping) else {"": detail}


def read(kind: type[Strict], data: Any) -> dict[str, Any]:
    """Return what a request says, or raise ValidationError with everything that is wrong. What is null was left out."""
    return {name: value for name, value in read_nulls(kind, data).items() if value is not None}


def read_nulls(kind: type[Strict], data: Any) -> dict[str, Any]:
    """Return what a request says as ``read`` does, but where null says something: take it away."""
    found = kind(data=data)
    found.is_valid(raise_exception=True)
    return dict(found.validated_data)
