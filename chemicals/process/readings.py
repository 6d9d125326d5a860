"""What was read at a vessel, by quantity: readings of every kind, levels, weights, densities and analyses."""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from chemicals.books import events
from chemicals.books.events import Event
from chemicals.journal.models import Entry
from chemicals.journal.selectors import find_cancelled, list_entries_naming, read_event
from chemicals.ledger.models import Vessel
from chemicals.science.reading import ANALYSIS, DENSITY, LEVEL, WEIGHT, dimension_of
from chemicals.workshop.models import Membership

KINDS = (
    events.Reading.KIND, events.LevelReading.KIND, events.WeightReading.KIND, events.DensityReading.KIND,
    events.Analysis.KIND,
)  # fmt: skip
MOST = 1000
"""How many of the latest readings of a vessel are looked through."""


@dataclass(frozen=True)
class Taken:
    """A reading that stands: of what (``shows``: of which of several), and what was read.

    ``least`` and ``most`` in base units of the ``dimension``: equal for a number, None where there is no such end.
    """

    entry: Entry
    quantity: str
    shows: str
    typed: str
    unit: str
    dimension: str
    least: int | None
    most: int | None
    sd: int | None
    instrument: str

    @property
    def key(self) -> tuple[str, str]:
        """Return what readings have in common that can be compared: quantity and what is shown, and its dimension."""
        return self.quantity, self.shows.casefold()


def list_readings_of(member: Membership, vessel: Vessel, most: int = MOST) -> list[Taken]:
    """Return the readings of a vessel that were not cancelled, the latest first. Two queries."""
    named = list_entries_naming(member, vessel.uuid).filter(kind__in=KINDS).select_related("workshop")
    rows = list(named.order_by("-occurred_at", "-sequence")[:most])
    cancelled = find_cancelled(rows)
    return [taken for row in rows if row.pk not in cancelled and (taken := _take(row, read_event(row))) is not None]


def find_last_of_each(readings: Iterable[Taken]) -> list[Taken]:
    """Return the first reading of every quantity, in the order in which they come."""
    last: dict[tuple[str, str], Taken] = {}
    for taken in readings:
        last.setdefault(taken.key, taken)
    return list(last.values())


def _take(entry: Entry, event: Event) -> Taken | None:
    gauge = getattr(event, "gauge", None)
    name = "" if gauge is None else gauge.name
    if isinstance(event, events.Reading):
        result = event.result
        dimension = dimension_of(event.quantity, result.unit)
        ends = result.least, result.most, result.sd
        return Taken(entry, event.quantity, event.shows, result.typed, result.unit, dimension, *ends, name)
    found = next(_figures(event), None)
    if found is None:
        return None
    quantity, shows, dimension, figure = found
    ends = figure.base, figure.base, figure.sd
    return Taken(entry, quantity, shows, figure.typed, figure.unit, dimension, *ends, name)


def _figures(event: Event) -> Iterator[tuple[str, str, str, events.Measured]]:
    if isinstance(event, events.LevelReading):
        yield LEVEL, "", "volume", event.volume
    if isinstance(event, events.WeightReading):
        yield WEIGHT, "", "mass", event.mass
    if isinstance(event, events.DensityReading):
        yield DENSITY, "", "density", event.density
    if isinstance(event, events.Analysis):
        yield ANALYSIS, event.component, dimension_of(ANALYSIS, event.result.unit), event.result
