"""What runs out: containers with something in them whose day has passed, or comes soon."""

from dataclasses import dataclass
from datetime import date, timedelta

from django_scopes import scope

from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import list_vessels_for
from chemicals.workshop.models import Membership
from compliance.premises.empties import keep_emptied

SOON = 30
"""Days."""


@dataclass(frozen=True)
class Keeping:
    """A container with the days that are left until what is in it has kept long enough; below nothing they are over."""

    vessel: Vessel
    days: int

    @classmethod
    def of(cls, vessel: Vessel, today: date) -> "Keeping | None":
        """Return how long a container keeps; None where nobody said."""
        return None if vessel.expires_on is None else cls(vessel, (vessel.expires_on - today).days)

    @property
    def is_over(self) -> bool:
        """Whether its day has passed; on that day itself it still keeps."""
        return self.days < 0

    @property
    def is_soon(self) -> bool:
        """Whether its day comes within SOON days."""
        return 0 <= self.days <= SOON


def list_running_out(member: Membership, today: date, most: int) -> list[Keeping]:
    """Return what runs out, what is over first, the longest over at the top; at most ``most``. One query.

    What is gone, or was emptied, is left out; what nobody measured may well be there.
    """
    with scope(workshop=member.workshop):
        rows = list_vessels_for(member).filter(gone_at=None, expires_on__lte=today + timedelta(days=SOON))
        rows = rows.exclude(pk__in=keep_emptied(rows).order_by().values("pk"))
        found = (Keeping.of(vessel, today) for vessel in rows.order_by("expires_on", "name")[:most])
        return [each for each in found if each is not None]
