"""From what the scenario says to the input of a verb: the same descriptions that forms are made from."""

from collections.abc import Callable, Mapping
from typing import Any
from uuid import UUID

from chemicals.process.counting.services import SeenInput
from chemicals.process.fields import AmountField, FieldKind, ReferenceField, RowsField, VesselField, describe
from chemicals.process.models import Seen
from chemicals.science.quantity import Quantity, QuantityError, parse

TABLES = {
    "product": "products",
    "rack type": "rack_types",
    "route": "routes",
    "receiver": "receivers",
    "analysis": "entries",
    "entry": "entries",
    "instrument": "instruments",
}
"""What a reference names -> the table of the scenario in which the name stands."""

Find = Callable[[str, str], UUID]
"""(table, name) -> what a form would send."""


def read_input(kind: type[Any], said: Mapping[str, Any], find: Find) -> Any:
    """Return the input; a word that its form does not ask for raises KeyError."""
    fields = dict(describe(kind))
    return kind(**{name: _read(fields[name], value, find) for name, value in said.items()})


def _read(field: FieldKind, value: Any, find: Find) -> Any:
    if isinstance(field, RowsField):
        return tuple(read_input(field.of, row, find) for row in value)
    if isinstance(field, AmountField):
        return read_amount(value, field.dimensions)
    if isinstance(field, VesselField):
        return find("vessels", value)
    if isinstance(field, ReferenceField):
        return find(TABLES[field.to], value)
    return value


def read_seen(said: Mapping[str, Any]) -> SeenInput:
    """Return what was seen of a container on a count day; where no amount stands, one of the words."""
    amounts = {name: read_amount(said[name], ("mass", "volume")) for name in ("amount", "sd") if name in said}
    return SeenInput(said=Seen(said.get("said", Seen.AMOUNT)), remark=said.get("remark", ""), **amounts)


def read_amount(text: str, dimensions: tuple[str, ...]) -> Quantity:
    """Return the amount in the first of the dimensions that fits; the error of the last one that does not."""
    for dimension in dimensions[:-1]:
        try:
            return parse(text, dimension)
        except QuantityError:
            continue
    return parse(text, dimensions[-1])
