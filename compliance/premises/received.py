"""What was received into stock containers since each was last empty: the days and the lots, as recorded."""

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import date

from django.db.models import Max
from django.utils import timezone
from django_scopes import scope

from chemicals.books.events import GROSS_MASS, VOLUME, Receipt
from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_event
from chemicals.ledger.models import Content, Posting, Vessel
from chemicals.workshop.models import Membership


@dataclass(frozen=True)
class Received:
    """A purchase: the day by the workshop's clock, and the lot; empty where nobody wrote it down."""

    day: date
    lot: str


def list_received(member: Membership, vessels: Iterable[Vessel]) -> dict[str, list[Received]]:
    """Return by the uuid of each vessel what was received since it was last empty, the earliest first. Two queries.

    A receipt that was cancelled has no postings and does not count.
    """
    wanted = [vessel.pk for vessel in vessels]
    zone = member.workshop.zone
    with scope(workshop=member.workshop):
        empty = Content.objects.filter(vessel__in=wanted, component__code__in=(VOLUME, GROSS_MASS), amount=0)
        emptied = dict(empty.order_by().values_list("vessel__uuid").annotate(last=Max("occurred_at")))
        posted = Posting.objects.filter(vessel__in=wanted, entry__kind=Receipt.KIND).values("entry")
        entries = list(Entry.objects.filter(pk__in=posted).order_by("occurred_at", "sequence"))
    last_empty = {str(uuid): moment for uuid, moment in emptied.items()}
    found: dict[str, list[Received]] = {}
    for entry in entries:
        event = read_event(entry)
        if isinstance(event, Receipt) and (
            event.vessel not in last_empty or entry.occurred_at > last_empty[event.vessel]
        ):
            day = timezone.localtime(entry.occurred_at, zone).date()
            found.setdefault(event.vessel, []).append(Received(day, event.lot))
    return found
