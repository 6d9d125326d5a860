"""Names of the ends of movements: vessels, and the boundaries where matter enters or leaves."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from uuid import UUID

from django.utils.translation import gettext_lazy

from chemicals.balance.selectors import FlowEnd
from chemicals.books import events
from chemicals.ledger.models import Vessel

BOUNDARIES = {
    events.OPENING: gettext_lazy("opening"),
    events.SUPPLIER: gettext_lazy("supplier"),
    events.WATER_SUPPLY: gettext_lazy("water supply"),
    events.PARTS: gettext_lazy("parts"),
    events.AIR: gettext_lazy("air"),
    events.SEWER: gettext_lazy("sewer"),
    events.SAMPLE: gettext_lazy("sample"),
    events.SPILL: gettext_lazy("spill"),
    events.RECEIVER: gettext_lazy("receiver"),
    events.REACTION: gettext_lazy("reaction"),
    events.UNACCOUNTED: gettext_lazy("unaccounted"),
}


def end_name(end: FlowEnd) -> str:
    """Return the name of the end of a flow: a vessel or a boundary."""
    return end.name if isinstance(end, Vessel) else str(BOUNDARIES[end])


@dataclass(frozen=True)
class Ends:
    """Names of the ends of movements: things by their uuid as text, most of them vessels, and the boundaries."""

    vessels: Mapping[str, str]

    @classmethod
    def of(cls, vessels: Iterable[tuple[UUID, str]]) -> "Ends":
        """Return the names of these vessels."""
        return cls({str(uuid): name for uuid, name in vessels})

    def name(self, end: str) -> str:
        """Return the name of a vessel or of a boundary."""
        return str(BOUNDARIES.get(end, "")) or self.vessels.get(end, end)

    def names(self, ends: Sequence[str]) -> str:
        """Return several names, as a route is read."""
        return " → ".join(self.name(end) for end in ends)
