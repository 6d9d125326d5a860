"""Entries as lines of a list: what each was about in a few words."""

import dataclasses
from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from django.utils.translation import gettext as _

from chemicals.books import events
from chemicals.books.events import Event, Measured
from chemicals.journal.models import Entry
from chemicals.journal.selectors import find_cancelled, read_event
from chemicals.ledger.selectors import list_vessels_for
from chemicals.register.selectors import list_products_for
from chemicals.workshop.models import Membership
from compliance.documents.models import PaperKind
from compliance.web.words import Ends, component_name, moment
from compliance.web.words.readings import quantity_name


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
    """Return one line: where, and what was measured, or why."""
    if isinstance(event, events.Paper):
        return f"{PaperKind(event.paper).label} {event.number}"
    if isinstance(event, events.PeriodClosing):
        return _("everything before %(until)s") % {"until": moment(event.until)}
    if isinstance(event, events.Cancellation | events.Correction | events.PeriodReopening):
        number = entry.about.sequence if entry.about else ""
        text = _("of entry %(number)s: %(reason)s") % {"number": number, "reason": event.reason}
        return ", ".join([*map(ends.name, event.vessels()), text])
    return ": ".join(filter(None, (_places(event, ends), ", ".join(_figures(event)))))


def _places(event: Event, ends: Ends) -> str:
    vessels = event.route if isinstance(event, events.Run) else event.vessels()
    if isinstance(event, events.DaySheet):
        vessels = tuple(row.bath for row in event.charges) or event.vessels()
    joint = " → " if isinstance(event, events.Move | events.Run) else ", "
    return joint.join(dict.fromkeys(ends.name(vessel) for vessel in vessels))


def _figures(event: Event) -> Iterator[str]:
    """Yield what was plated or analysed, then what was measured, as typed."""
    if isinstance(event, events.Run) and event.parts:
        yield event.parts
    if isinstance(event, events.Reading):
        yield quantity_name(event.quantity, event.shows)
        yield event.result.typed
    if isinstance(event, events.Analysis | events.Acceptance):
        yield component_name(event.component)
    if isinstance(event, events.DaySheet):
        yield from (row.charge.typed for row in event.charges)
        yield from (f"{row.loads} × {row.rack}" for row in event.racks)
    for field in dataclasses.fields(event):  # type: ignore[arg-type]  # every event is a dataclass
        value = getattr(event, field.name)
        if isinstance(value, Measured):
            yield value.typed
