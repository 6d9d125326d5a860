"""What vessels hold, as lines of a file: one for each vessel and component."""

from collections.abc import Iterable, Iterator

from chemicals.ledger.components import dimension_of
from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import Contents, Held
from compliance.web.export import Column, grams, litres, millimoles

Part = tuple[Vessel, Held | None]
IN_FILES = {"volume": ("L", litres), "mass": ("g", grams), "amount_of_substance": ("mmol", millimoles)}
"""Unit and number of an amount in a file, by its dimension."""


def parts_of(vessels: Iterable[tuple[Vessel, Contents | None]]) -> Iterator[Part]:
    """Yield what each vessel holds one by one; a line without a component where nothing was recorded."""
    for vessel, held in vessels:
        listed = () if held is None else (held.volume, held.mass, *held.metals)
        parts: list[Held | None] = [part for part in listed if part is not None]
        yield from ((vessel, part) for part in parts or [None])


def _unit(part: Part) -> str:
    held = part[1]
    return "" if held is None else IN_FILES[dimension_of(held.component)][0]


def _amount(part: Part, *, of_sd: bool = False) -> object:
    held = part[1]
    if held is None or held.amount is None:
        return None
    base = held.sd if of_sd else held.amount
    return IN_FILES[dimension_of(held.component)][1](base)


CONTENT_COLUMNS = (
    Column("vessel", lambda part: part[0].name),
    Column("code", lambda part: part[0].code),
    Column("kind", lambda part: part[0].kind),
    Column("place", lambda part: part[0].place.name if part[0].place else ""),
    Column("component", lambda part: part[1].component if part[1] else ""),
    Column("unit", _unit),
    Column("amount", _amount),
    Column("standard uncertainty", lambda part: _amount(part, of_sd=True)),
)
