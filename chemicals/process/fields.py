"""What the fields of an input are: one description for the page, the API and the error that names the field."""

import dataclasses
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

from django.utils.functional import Promise

from chemicals.books.events import GROSS_MASS, SPECIES, VOLUME
from chemicals.ledger.models import VesselKind
from chemicals.science.formula import METALS
from chemicals.science.quantity import Quantity
from chemicals.science.reading import parse_in

Text = str | Promise


@dataclass(frozen=True)
class FieldKind:
    """Base: label and help as shown; required or not; ``detail`` for those who know more than is needed."""

    label: Text
    help: Text = ""
    required: bool = True
    detail: bool = False


@dataclass(frozen=True)
class AmountField(FieldKind):
    """An amount as typed; its unit must be of one of the dimensions of science.units."""

    dimensions: tuple[str, ...] = ()
    example: str = ""


@dataclass(frozen=True)
class VesselField(FieldKind):
    """One vessel of the workshop, of one of the kinds; ``fills`` where something goes in."""

    kinds: tuple[VesselKind, ...] = ()
    fills: bool = False


@dataclass(frozen=True)
class ReferenceField(FieldKind):
    """One row of the workshop: product, rack type, route, receiver or entry (by its kind)."""

    to: str = ""


@dataclass(frozen=True)
class InstrumentField(ReferenceField):
    """One instrument of the workshop that measures one of these; ``by`` names the field that says which of them."""

    to: str = "instrument"
    measures: tuple[str, ...] = ()
    by: str = ""


@dataclass(frozen=True)
class ChoiceField(FieldKind):
    """One of a list of (value, label)."""

    choices: tuple[tuple[str, Text], ...] = ()


@dataclass(frozen=True)
class ComponentField(FieldKind):
    """What is balanced: a metal, a species, or a solute that the workshop declared inert.

    ``bulk``: also the liquid or the weight as a whole.
    """

    bulk: bool = False

    @property
    def known(self) -> tuple[str, ...]:
        """Return what every workshop balances."""
        return (*METALS, *SPECIES, *((VOLUME, GROSS_MASS) if self.bulk else ()))


@dataclass(frozen=True)
class WholeField(FieldKind):
    """A whole number between two ends."""

    least: int = 1
    most: int = 1000


@dataclass(frozen=True)
class TextField(FieldKind):
    """A line of text."""

    longest: int = 200


@dataclass(frozen=True)
class FlagField(FieldKind):
    """Yes or no."""


@dataclass(frozen=True)
class MomentField(FieldKind):
    """A date and time in the workshop's zone."""


@dataclass(frozen=True)
class RowsField(FieldKind):
    """A list of smaller inputs of one type."""

    of: type[Any] = object
    blank_rows: int = 3


EMPTY: dict[type[FieldKind], Any] = {RowsField: (), TextField: "", FlagField: False, ChoiceField: ""}
"""What a field holds that was left empty, where it is not None."""


def use(kind: FieldKind, default: Any = dataclasses.MISSING) -> Any:
    """Return a dataclass field that carries its description; one that is not required has a default."""
    if default is dataclasses.MISSING and not kind.required:
        default = EMPTY.get(type(kind))
    return field(default=default, metadata={"kind": kind})


def describe(data: type[Any]) -> Sequence[tuple[str, FieldKind]]:
    """Return (name, description) of every field of an input, in order."""
    return [(f.name, f.metadata["kind"]) for f in dataclasses.fields(data)]


def read_amount(kind: AmountField, typed: str, unit: str | None = None) -> Quantity:
    """Return the amount that was typed, in the dimension that its unit belongs to. Raises QuantityError.

    A bare number is taken in the ``unit``, if one is given.
    """
    return parse_in(typed, kind.dimensions, example=kind.example, default_unit=unit)
