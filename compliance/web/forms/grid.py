"""Grids of numbers at a bench: fields in whose unit a bare number is taken, and records that a whole grid makes."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any
from uuid import uuid4

from django import forms
from django.core.exceptions import ValidationError
from django.utils.translation import gettext as _

from chemicals.process.levels import as_height
from chemicals.science.quantity import MESSAGES, Quantity, QuantityError, echo, parse, pretty
from chemicals.workshop.errors import InvalidInputError
from chemicals.workshop.models import Membership
from compliance.clearance.together import Said
from compliance.web.forms.base import WebForm
from compliance.web.forms.fields import LineField, Text, WholeField, parse_amount

PAD = {"autocomplete": "off", "autocapitalize": "off", "spellcheck": "false", "class": "figure"}


class NumberInput(forms.TextInput):
    """A number as text: a field that drops what it cannot read would lose what was typed."""

    def __init__(self, pad: str) -> None:
        super().__init__(attrs={**PAD, "inputmode": pad})


def complete(typed: str, dimension: str, unit: str) -> str:
    """Return what was typed with the unit that stands beside the field, where none was written.

    Number pads of phones may have a comma for a decimal sign, and no point: it is taken for one where it can be
    nothing else, as in 31,5. What cannot be read is returned as it is.
    """
    try:
        parse(typed, dimension, default_unit=unit)
    except QuantityError as error:
        remedy = error.params.get("remedy", "")
        if error.code != "ambiguous" or " or " in remedy:
            return typed
        typed = typed.replace(error.params["number"], remedy)
    return f"{typed} {pretty(unit)}" if unit and typed[-1:].isdecimal() else typed


class FigureField(LineField):
    """A number with ``unit`` beside it. Cleans to text with its unit: a reading may also be a range.

    ``note`` tells what is known of it already.
    """

    def __init__(self, dimension: str, unit: str, *, note: Text = "", **kwargs: Any) -> None:
        super().__init__(required=False, max_length=80, widget=NumberInput("decimal"), **kwargs)
        self.dimension, self.base_unit, self.note = dimension, unit, note

    @property
    def unit(self) -> str:
        """Return the unit as people write it."""
        return pretty(self.base_unit)

    def to_python(self, value: Any) -> str | None:
        typed = super().to_python(value)
        return complete(typed, self.dimension, self.base_unit) if typed else None


class QuantityField(FigureField):
    """The same of an amount. Cleans to a Quantity, or None."""

    def clean(self, value: Any) -> Any:
        typed = super().clean(value)
        return parse_amount(typed, [self.dimension]) if typed else None


class LevelField(FigureField):
    """A level: a volume, or a height or mark where the tank has a level table.

    Cleans to what a level reading says: ``volume`` or ``mark``; None where nothing is written.
    """

    def __init__(self, *, marks: Sequence[str], **kwargs: Any) -> None:
        heights = [height.unit for mark in marks if (height := as_height(mark)) is not None]
        super().__init__(*(("length", heights[0]) if heights else ("volume", "L")), **kwargs)
        self.has_marks = bool(marks)

    def clean(self, value: Any) -> Any:
        said = super().clean(value)
        if not said:
            return None
        try:
            return {"volume": parse(said, "volume")}
        except QuantityError as error:
            if not self.has_marks:
                raise ValidationError(_(MESSAGES[error.code]) % error.params, code=error.code) from error
        return {"mark": said}


class LoadsField(WholeField):
    """How many loads; none is as good as nothing."""

    unit, note = "", ""

    def __init__(self, most: int, **kwargs: Any) -> None:
        super().__init__(0, most, required=False, widget=NumberInput("numeric"), **kwargs)

    def to_python(self, value: Any) -> Any:
        return super().to_python(value.strip() if isinstance(value, str) else value)


@dataclass(frozen=True)
class Part:
    """One of the records that a grid makes.

    ``title`` tells it from the others, ``understood`` is what was written as it was understood, ``fields`` says which
    field of the form a field of the record comes from, ``notes`` what a person should know before it is saved.
    """

    title: str
    said: Said
    understood: Sequence[tuple[str, str]]
    fields: Mapping[str, str]
    notes: Sequence[str] = ()


class GridForm(WebForm):
    """A page of numbers that makes records."""

    key = forms.UUIDField(widget=forms.HiddenInput)

    def __init__(self, member: Membership, data: Any = None, **kwargs: Any) -> None:
        super().__init__(data, initial={"key": uuid4()}, **kwargs)
        self.member = member

    def to_parts(self) -> list[Part]:
        """Return the records that the valid form describes, in order."""
        raise NotImplementedError

    def add_domain_errors(self, error: InvalidInputError) -> None:
        """Put each error under the field that its record was made of; else name the record."""
        parts = self.to_parts()
        for each in error.errors:
            _records, number, *path = [*each.field.split(".", 2), "", ""]
            part = parts[int(number)] if number.isdecimal() else None
            field = None if part is None else part.fields.get(path[0])
            if field is None and part is not None:
                self.add_error(None, f"{part.title}: {each.message}")
            else:
                self.add_error(field, each.message)


def tell(value: Any) -> str:
    """Return a number or an amount as it was understood."""
    return echo(value) if isinstance(value, Quantity) else str(value)
