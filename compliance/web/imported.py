"""Rows of a file, as they were understood: when, what, and every amount with what it was taken for."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from typing import Any
from uuid import UUID

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.ledger.selectors import list_vessels_for
from chemicals.process.fields import RowsField, describe
from chemicals.process.importing.register.columns import OF_PRODUCT
from chemicals.process.importing.register.plan import Container, Plan, Planned
from chemicals.process.importing.understanding import Made
from chemicals.process.selectors import list_rack_types_for, list_routes_for
from chemicals.register.selectors import list_products_for
from chemicals.science.quantity import Quantity, echo, show
from chemicals.workshop.models import Membership
from compliance.web import words
from compliance.web.catalogue import limit_words

STATES = {
    "new": gettext_lazy("a new product"),
    "revised": gettext_lazy("the next revision of a product"),
    "here": gettext_lazy("a product that is here already"),
}
"""What becomes of a product, by its state."""


@dataclass(frozen=True)
class Told:
    """A row: its number, when, what happened, and what was written, by label."""

    number: int
    when: str
    what: str
    said: tuple[tuple[str, str], ...]


def tell_register(plan: Plan, most: int) -> list[Told]:
    """Return the first rows of a file of the register: what becomes of the product, and the containers of the row."""
    return [_tell_row(*each) for each in plan.list_rows(most)]


def _tell_row(row: int, planned: Planned, containers: Sequence[Container]) -> Told:
    is_first, product = planned.row == row, planned.revision.product
    what = STATES[planned.state] if is_first else _("a container of the same product")
    said = [(_("Product"), product.name), (_("Supplier"), product.supplier)]
    if is_first and planned.checked is not None:
        said += _tell_revision(planned)
    if containers:
        said += _tell_containers(containers)
    return Told(row, "", str(what), tuple((str(label), text) for label, text in said if text))


def _tell_revision(planned: Planned) -> Iterator[tuple[str, str]]:
    row = planned.revision
    words_of = {
        "form": row.get_form_display(),
        "density": "" if row.density is None else show(row.density, "density", digits=6),
        "ph_floor": "" if row.ph_floor is None else show(row.ph_floor, "ph", digits=6),
        "composition": "; ".join(f"{line.substance.name} {line.typed}" for line in planned.lines),
        "complete": _("yes") if row.complete else _("no"),
        "hazard_classes": "; ".join(row.hazard_classes),
        "signal_word": row.signal_word,
        "pictograms": " ".join(row.pictograms),
        "statements": "; ".join(row.statements),
        "reactivity": "; ".join(row.reactivity),
        "limits": "; ".join(map(limit_words, planned.checked.limits if planned.checked else ())),
        "gloves": row.gloves,
        "un_number": row.un_number,
        "shipping_name": row.shipping_name,
        "transport_class": row.transport_class,
        "packing_group": row.packing_group,
        "transport_unclassified": _("yes") if row.transport_unclassified else "",
        "supplier_telephone": row.supplier_telephone,
        "sheet_language": row.sheet_language,
        "sheet_date": "" if row.sheet_date is None else row.sheet_date.isoformat(),
    }
    for target, text in words_of.items():
        yield str(OF_PRODUCT[target]), text


def _tell_containers(containers: Sequence[Container]) -> Iterator[tuple[str, str]]:
    first = containers[0]
    names = [each.vessel.name for each in containers]
    shown = names if len(names) < 4 else [*names[:2], "…", names[-1]]
    yield _("Containers") if len(names) > 1 else _("Container"), ", ".join(shown)
    place = first.vessel.place
    yield _("Place"), f"{first.new_place} ({_('new')})" if first.new_place else "" if place is None else place.name
    if first.amount is not None:
        day = first.received_on
        label = _("There now, in each") if day is None else _("Received, in each")
        yield label, echo(first.amount) + ("" if day is None else f", {day.isoformat()}")
    yield _("Lot"), first.lot
    for label, date in ((_("Opened on"), first.vessel.opened_on), (_("Keeps until"), first.vessel.expires_on)):
        yield label, "" if date is None else date.isoformat()


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
