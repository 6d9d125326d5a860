"""Turns what a person says into names and rows, and collects everything that is wrong with it."""

from collections.abc import Callable, Hashable
from datetime import datetime
from typing import Any, TypeVar
from uuid import UUID

from django.db.models import Model
from django_scopes import scope

from chemicals.books import events
from chemicals.books.events import GROSS_MASS, SPECIES, VOLUME, Figure, Measured
from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_event
from chemicals.ledger.models import Vessel
from chemicals.process.fields import VesselField, describe
from chemicals.register.selectors import list_solutes, solute_code
from chemicals.science.formula import METALS
from chemicals.science.quantity import Quantity
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership

WATER = Figure(998_200, 2_000, "water at 20 °C, 0.9982 g/mL (CRC Handbook); hotter or colder is within the uncertainty")
"""Density of water in ug/mL."""


GONE = (
    "%(vessel)s is gone since %(day)s. If it stands here again, say so on its page; if it was never handed over, "
    "cancel that entry; else set up another container."
)


Row = TypeVar("Row", bound=Model)
T = TypeVar("T")


class Known:
    """What was looked up is not asked for again: by one draft, or by all drafts of an import.

    An import adds the entries that it is about to write, so that others of its rows can speak of them.
    """

    def __init__(self) -> None:
        self._found: dict[Hashable, Any] = {}
        self._fresh: dict[UUID, tuple[Entry, events.Event]] = {}

    def once(self, key: Hashable, ask: Callable[[], T]) -> T:
        """Return what was found under the key, or ask for it."""
        if key not in self._found:
            self._found[key] = ask()
        found: T = self._found[key]
        return found

    def add(self, entry: Entry, event: events.Event) -> None:
        """Let drafts find an entry that is not written yet."""
        self._fresh[entry.uuid] = entry, event

    def entry(self, uuid: UUID) -> Entry | None:
        """Return such an entry."""
        return self._fresh[uuid][0] if uuid in self._fresh else None

    def event_of(self, entry: Entry) -> events.Event:
        """Return what an entry records."""
        return self._fresh[entry.uuid][1] if entry.uuid in self._fresh else read_event(entry)


class Draft:
    """Looks things up for one member; what is missing is noted under its field and raised at the end, all at once."""

    def __init__(self, member: Membership, known: Known | None = None) -> None:
        self.member = member
        self.known = known or Known()
        self.errors: list[FieldError] = []
        self.vessels: list[tuple[str, Vessel]] = []
        """Every vessel that was named, under its field."""

    def refuse(self, field: str, message: str) -> None:
        """Note what is wrong with a field and how to mend it."""
        self.errors.append(FieldError(field, message))

    def finish(self) -> None:
        """Raise everything that was noted."""
        if self.errors:
            raise InvalidInputError(self.errors)

    def vessel(self, data: Any, field: str, *, under: str = "") -> Vessel | None:
        """Return the vessel that a field names, of the kinds that the field allows."""
        uuid = getattr(data, field)
        kind = dict(describe(type(data)))[field]
        assert isinstance(kind, VesselField)  # noqa: S101  (a table error, not an input error)
        if uuid is None:
            return None
        with scope(workshop=self.member.workshop):
            row = Vessel.objects.filter(uuid=uuid).select_related("product")
            vessel = self.known.once((Vessel, uuid), row.first)
        if vessel is None or vessel.kind not in kind.kinds:
            self.refuse(under + field, "There is no such vessel here. Choose one from the list.")
            return None
        self.vessels.append((under + field, vessel))
        return vessel

    def find_gone(self, at: datetime) -> tuple[FieldError, ...]:
        """Return what is wrong with the named vessels that are gone at a moment."""
        zone = self.member.workshop.zone
        return tuple(
            FieldError(field, GONE % {"vessel": vessel, "day": vessel.gone_at.astimezone(zone).date().isoformat()})
            for field, vessel in self.vessels
            if vessel.gone_at is not None and vessel.gone_at <= at
        )

    def component(self, field: str, said: str, *, bulk: bool = False) -> str | None:
        """Return what is balanced by its code: a metal, a species, a solute declared inert; ``bulk``: as a whole."""
        if said in (*METALS, *SPECIES) or (bulk and said in (VOLUME, GROSS_MASS)):
            return said
        if solute_code(said) in self.known.once("solutes", lambda: list_solutes(self.member.workshop)):
            return solute_code(said)
        self.refuse(field, "This is not balanced here. Choose one from the list, or declare the substance inert first.")
        return None

    def entry(self, field: str, uuid: UUID, *kinds: type[events.Event]) -> Entry | None:
        """Return an entry of the workshop, of one of the kinds (any, if none is named)."""
        entry = self.known.entry(uuid) or self.find(Entry, field, uuid)
        if entry is not None and kinds and entry.kind not in {kind.KIND for kind in kinds}:
            self.refuse(field, f"This is no {kinds[0].KIND}. Choose one from the list.")
            return None
        return entry

    def find(self, table: type[Row], field: str, uuid: UUID) -> Row | None:
        """Return a row of the workshop by its uuid."""
        with scope(workshop=self.member.workshop):
            found = self.known.once((table, uuid), table._default_manager.filter(uuid=uuid).first)
        if found is None:
            self.refuse(field, "There is no such thing in this workshop. Choose one from the list.")
        return found


def measured(quantity: Quantity | None, sd: Quantity | None = None) -> Measured | None:
    """Return the amount as the journal keeps it."""
    if quantity is None:
        return None
    return Measured(quantity.typed, quantity.unit, quantity.base, None if sd is None else sd.base)


def by_dimension(quantity: Quantity | None, dimension: str, sd: Quantity | None = None) -> Measured | None:
    """Return the amount if it is of the dimension: a mass or a volume may be typed in the same field."""
    return measured(quantity, sd) if quantity is not None and quantity.dimension == dimension else None


def vessel_name(vessel: Vessel | None, otherwise: str) -> str:
    """Return the name by which events know a vessel, or a boundary where none was chosen."""
    return otherwise if vessel is None else str(vessel.uuid)
