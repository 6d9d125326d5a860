"""Rows of a file of past records, as they were understood: when, what, and every amount with what it was taken for."""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from datetime import datetime
from typing import Any
from uuid import UUID

from django.utils.translation import gettext as _

from chemicals.ledger.selectors import list_vessels_for
from chemicals.process.fields import RowsField, describe
from chemicals.process.importing.understanding import Made
from chemicals.process.selectors import list_rack_types_for, list_routes_for
from chemicals.register.selectors import list_products_for
from chemicals.science.quantity import Quantity, echo
from chemicals.workshop.models import Membership
from compliance.web import words


@dataclass(frozen=True)
class Told:
    """A row: its number, when, what happened, and what was written, by label."""

    number: int
    when: str
    what: str
    said: tuple[tuple[str, str], ...]


class RowTeller:
    """Tells rows; things are called by their names. Four queries."""

    def __init__(self, member: Membership) -> None:
        things = (list_vessels_for, list_products_for, list_routes_for, list_rack_types_for)
        self.names: Mapping[UUID, str] = {row.uuid: str(row) for find in things for row in find(member)}

    def tell(self, made: Made) -> Told:
        """Return a row in words."""
        when = words.moment(made.occurred.at, made.occurred.precision)
        return Told(made.said.row, when, str(words.KINDS[made.event.KIND]), tuple(self._tell(made.said.data)))

    def _tell(self, data: Any) -> Iterator[tuple[str, str]]:
        for name, kind in describe(type(data)):
            value = getattr(data, name)
            if isinstance(kind, RowsField):
                for group in value:
                    yield str(kind.label), ", ".join(text for _, text in self._tell(group))
            else:
                text = self._spell(value)
                if text:
                    yield str(kind.label), text

    def _spell(self, value: object) -> str:
        if isinstance(value, Quantity):
            return echo(value)
        if isinstance(value, bool):
            return _("yes") if value else ""
        if isinstance(value, UUID):
            return self.names.get(value, _("another entry"))
        if isinstance(value, datetime):
            return words.moment(value)
        return "" if value is None else str(value)
