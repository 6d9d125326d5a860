"""Entries as pages tell them: one line in a list, every figure on the page of the entry."""

import dataclasses
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import Any

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.books import events
from chemicals.books.events import Event, Measured
from chemicals.journal.models import Entry
from chemicals.journal.selectors import find_cancelled, read_event
from chemicals.ledger.selectors import list_vessels_for
from chemicals.register.selectors import list_products_for
from chemicals.science.units import find_elsewhere
from chemicals.workshop.models import Membership
from compliance.web.words import Ends, component_name, in_one_unit

LABELS = {
    "vessel": gettext_lazy("vessel"),
    "tank": gettext_lazy("tank"),
    "source": gettext_lazy("from"),
    "target": gettext_lazy("to"),
    "container": gettext_lazy("container"),
    "stock": gettext_lazy("stock container"),
    "volume": gettext_lazy("volume"),
    "mass": gettext_lazy("mass"),
    "level": gettext_lazy("filled to"),
    "complete": gettext_lazy("no other metal is in it"),
    "route": gettext_lazy("route"),
    "charge": gettext_lazy("ampere-hours"),
    "current": gettext_lazy("current"),
    "time": gettext_lazy("time"),
    "weight_before": gettext_lazy("weight before"),
    "weight_after": gettext_lazy("weight after"),
    "drag_out": gettext_lazy("drag-out"),
    "water_density": gettext_lazy("density of water"),
    "lost_to": gettext_lazy("less of it went to"),
    "expressed_as": gettext_lazy("expressed as"),
    "reported_at": gettext_lazy("reported"),
    "molar_mass": gettext_lazy("molar mass (g/mol)"),
    "faraday": gettext_lazy("Faraday constant (C/mol)"),
    "poured": gettext_lazy("poured in"),
    "entry": gettext_lazy("entry"),
    "gross": gettext_lazy("gross weight"),
}
"""Fields whose name alone would not do; the others are called as they are."""

DIMENSIONS = {
    "density": "density",
    "water_density": "density",
    "drag_out": "volume",
    "efficiency": "fraction",
    "concentration": "concentration",
}
"""The dimension of each figure that an entry relies on."""


@dataclass(frozen=True)
class EntryRow:
    """An entry in a list: what it was about in one line, and whether it was cancelled."""

    entry: Entry
    summary: str
    cancelled: bool


def entry_rows(member: Membership, entries: Iterable[Entry]) -> list[EntryRow]:
    """Return entries as lines of a list. Two queries besides the entries."""
    listed = list(entries)
    ends, cancelled = ends_of(member), find_cancelled(listed)
    return [EntryRow(entry, summarise(entry, read_event(entry), ends), entry.pk in cancelled) for entry in listed]


def ends_of(member: Membership) -> Ends:
    """Return the names of all vessels of the workshop. One query."""
    return Ends.of(list_vessels_for(member).values_list("uuid", "name"))


def names_of(member: Membership) -> Ends:
    """Return the names of all vessels and products of the workshop: what an entry may speak of. Two queries."""
    vessels, products = list_vessels_for(member), list_products_for(member)
    return Ends.of([*vessels.values_list("uuid", "name"), *products.values_list("uuid", "name")])


def summarise(entry: Entry, event: Event, ends: Ends) -> str:
    """Return one line: where, and what was measured."""
    if isinstance(event, events.Paper):
        return f"{event.paper.replace('-', ' ')} {event.number}"
    if isinstance(event, events.Cancellation):
        return _("of entry %(number)s: %(reason)s") % {
            "number": entry.about.sequence if entry.about else "",
            "reason": event.reason,
        }
    vessels = event.route if isinstance(event, events.Run) else event.vessels()
    places = list(dict.fromkeys(ends.name(vessel) for vessel in vessels))
    joint = " → " if isinstance(event, events.Move | events.Run) else ", "
    figures = [value.typed for name in _names(event) if isinstance(value := getattr(event, name), Measured)]
    told = [event.parts] if isinstance(event, events.Run) and event.parts else []
    told += [component_name(event.component)] if isinstance(event, events.Analysis | events.Acceptance) else []
    return ": ".join(filter(None, (joint.join(places), ", ".join([*told, *figures]))))


def _names(event: Event) -> list[str]:
    return [field.name for field in dataclasses.fields(event)]  # type: ignore[arg-type]  # every event is a dataclass


def tell(part: Mapping[str, Any], ends: Ends) -> list[tuple[str, str]]:
    """Return a part of a payload (observed or used) as lines of a name and a text."""
    return list(_tell("", part, ends))


def _tell(name: str, value: Any, ends: Ends) -> Iterator[tuple[str, str]]:
    label = str(LABELS.get(name, name.replace("_", " ")))
    if isinstance(value, dict) and not _is_figure(value):
        for inner, part in value.items():
            if inner != "product" or "name" not in value:  # a product goes by the name that it had then
                yield from _tell(inner, part, ends)
    elif isinstance(value, list):
        for number, part in enumerate(value, 1):
            yield f"{label} {number}", _tell_one(name, part, ends)
    elif value not in (None, ""):
        yield label, _figure(name, value) if isinstance(value, dict) else _word(value, ends)


def _tell_one(name: str, part: Any, ends: Ends) -> str:
    """Return one of several in one line, the words before the figures: "Copper sulfate tub, 4 kg"."""
    if not isinstance(part, dict) or _is_figure(part):
        return ", ".join(text for _label, text in _tell(name, part, ends))
    ordered = sorted(part.items(), key=lambda item: isinstance(item[1], dict))
    return ", ".join(text for inner, value in ordered for _label, text in _tell(inner, value, ends))


def _is_figure(value: Mapping[str, Any]) -> bool:
    return "base" in value or "per" in value


def _figure(name: str, value: Mapping[str, Any]) -> str:
    if "per" in value:
        return f"{value['component']}: {_shown(value['amount'], value['sd'], 'mass')} / {value['per']}"
    if "typed" in value:
        found = find_elsewhere(value["unit"])
        shown = _shown(value["base"], value["sd"], found.name) if found else ""
        return value["typed"] if shown == value["typed"] else f"{value['typed']} = {shown}"
    return f"{_shown(value['base'], value['sd'], DIMENSIONS[name])} ({value['source']})"


def _shown(base: int, sd: int | None, dimension: str) -> str:
    return in_one_unit(base, sd or 0, dimension)


def _word(value: Any, ends: Ends) -> str:
    if isinstance(value, bool):
        return _("yes") if value else _("no")
    text = str(value)
    if text.startswith(events.UNKNOWN_LIQUID):
        return _("unknown")
    thing, slash, number = text.partition("/")
    if slash and thing in ends.vessels:  # a recipe: a product and its revision
        return _("%(product)s, revision %(number)s") % {"product": ends.name(thing), "number": number}
    return ends.name(text)
