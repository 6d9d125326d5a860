"""One entry of every kind in a workshop's books, for pages and files that must know them all."""

from collections.abc import Mapping
from datetime import datetime
from uuid import UUID, uuid5

from django_scopes import scope

from chemicals.books.clearance import ALLOWED, OVERRIDDEN, Clearance
from chemicals.books.events import Event
from chemicals.books.occurred import DAY, Occurred
from chemicals.journal.models import Entry
from chemicals.journal.services import append
from chemicals.ledger.codes import make_code
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.services import project_entry
from chemicals.workshop.models import Membership
from tests.books import examples

VESSELS = {
    "Copper bath": (examples.BATH, VesselKind.BATH),
    "Rinse": (examples.RINSE, VesselKind.RINSE),
    "Salt tub": (examples.STOCK, VesselKind.STOCK),
    "Anodes": (examples.ANODES, VesselKind.ANODE),
    "Drum 7": (examples.DRUM, VesselKind.WASTE),
    "Racks of line 1": (examples.RACKS, VesselKind.RACKS),
    "Sludge pail": (examples.SLUDGE, VesselKind.SLUDGE),
}
KEYS = {"analysis": "analysis", "move": "a mistake", "drum off": "an old mistake", "period closing": "March"}
"""The keys of entries that others speak of: kind -> name."""


def record_all(member: Membership, now: datetime, *, attachments: tuple[str, ...] = ()) -> Mapping[str, Entry]:
    """Record the example of every kind, in the order of the table of kinds; return the entries by kind."""
    with scope(workshop=member.workshop):
        for name, (uuid, kind) in VESSELS.items():
            made = {"workshop": member.workshop, "created_at": now, "created_by": member}
            Vessel.objects.create(uuid=UUID(uuid), name=name, kind=kind, code=make_code(), **made)
    return {kind: _record(member, now, event, attachments) for kind, event in examples.EXAMPLES.items()}


def _record(member: Membership, now: datetime, event: Event, attachments: tuple[str, ...]) -> Entry:
    entry = append(
        actor=member,
        now=now,
        key=uuid5(examples.WORKSHOP, KEYS.get(event.KIND, event.KIND)),
        event=event,
        occurred=Occurred(now, DAY) if event.KIND == "day sheet" else None,
        clearance=Clearance(OVERRIDDEN, ("The owner said so.",)) if event.KIND == "move" else Clearance(ALLOWED),
        attachments=attachments,
    ).entry
    project_entry(entry, event)
    return entry
