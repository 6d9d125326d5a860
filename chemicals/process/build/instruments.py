"""The instrument of a reading: which one it was, and how sure its reading is where nobody says."""

from typing import NamedTuple
from uuid import UUID

from chemicals.books.events import Gauge
from chemicals.process.draft import Draft
from chemicals.process.models import Instrument
from chemicals.science.level import add_in_squares
from chemicals.science.quantity import Quantity


class Used(NamedTuple):
    """An instrument as an event names it, and as it was relied on."""

    instrument: UUID | None = None
    gauge: Gauge | None = None

    def doubt(self, base: int, said: Quantity | int | None) -> int | None:
        """Return the standard uncertainty of a reading: as said, else the instrument's, else none that is known."""
        if said is not None:
            return said.base if isinstance(said, Quantity) else said
        if self.gauge is None or not (self.gauge.sd or self.gauge.relative_sd):
            return None
        return add_in_squares(self.gauge.sd, -(-base * self.gauge.relative_sd // 10**6))


NONE = Used()


def find_instrument(draft: Draft, uuid: UUID | None, quantity: str, *, field: str = "instrument") -> Used:
    """Return the instrument that was named, if it measures this; what is wrong is noted in the draft."""
    row = None if uuid is None else draft.find(Instrument, field, uuid)
    if row is None:
        return NONE
    if row.measures != quantity:
        draft.refuse(field, f"{row.name} is for {row.measures}. Choose another one, or leave it out.")
    calibrated_on = "" if row.calibrated_on is None else row.calibrated_on.isoformat()
    return Used(row.uuid, Gauge(row.name, row.sd or 0, row.relative_sd or 0, calibrated_on))
