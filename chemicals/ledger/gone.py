"""Which vessels are gone because they were handed over, brought up to date with the entries.

A vessel is gone from its last hand-over that stands on, unless something was put into it later. What a person put away
by hand stands in no entry and stays as it is, until a hand-over says otherwise. All functions run inside the
workshop's scope.
"""

from collections.abc import Collection, Iterable, Mapping
from dataclasses import dataclass
from datetime import datetime

from django.db.models import OuterRef, Q, Subquery

from chemicals.books import events
from chemicals.books.events import Cancellation, HandOver
from chemicals.books.fold.state import EVERY
from chemicals.journal.models import Entry
from chemicals.journal.selectors import mark_standing, read_event
from chemicals.ledger.models import Content, Vessel
from chemicals.ledger.projection import Order


@dataclass(frozen=True)
class HandedOver:
    """What the entries say of a vessel that was ever handed over.

    ``gone_at`` None: it is here. ``moments``: of all its hand-overs, the cancelled ones too; ``sequence``: of the last.
    """

    gone_at: datetime | None
    moments: frozenset[datetime]
    sequence: int

    def wanted(self, vessel: Vessel) -> datetime | None:
        """Return since when a vessel is gone: what its hand-overs say, else what a person said."""
        return None if self.gone_at is None and vessel.gone_at in self.moments else self.gone_at or vessel.gone_at


def concerned(recorded: Iterable[tuple[Entry, events.Event]]) -> set[str]:
    """Return the vessels that new entries may make gone, or bring back: of hand-overs, and of what is cancelled."""
    found: set[str] = set()
    for entry, event in recorded:
        if isinstance(event, HandOver):
            found.add(event.container)
        elif isinstance(event, Cancellation) and entry.about is not None:
            found.update(read_event(entry.about).vessels())
    return found


def tell(vessels: Collection[str] | None = None) -> dict[str, HandedOver]:
    """Return what the entries say of the vessels (all, if none are named) that were ever handed over, by uuid.

    Two queries.
    """
    if vessels is not None and not vessels:
        return {}
    found: dict[str, list[tuple[Order, bool]]] = {}
    hand_overs = mark_standing(Entry.objects.filter(kind=HandOver.KIND)).order_by("occurred_at", "sequence")
    for entry in hand_overs:
        event = read_event(entry)
        if isinstance(event, HandOver) and (vessels is None or event.container in vessels):
            found.setdefault(event.container, []).append(((entry.occurred_at, entry.sequence), entry.stands))
    filled = _last_filled(found)
    return {vessel: _tell(rows, filled.get(vessel)) for vessel, rows in found.items()}


def _last_filled(vessels: Iterable[str]) -> Mapping[str, Order]:
    """Return after which entry each vessel last held something, or may have. One query."""
    something = ~Q(component__code=EVERY) & ~Q(amount=0) | Q(amount=None)
    rows = Content.objects.filter(something, vessel=OuterRef("pk")).order_by("-occurred_at", "-sequence")
    last = Vessel.objects.filter(uuid__in=list(vessels)).annotate(last=Subquery(rows.values("pk")[:1])).values("last")
    found = Content.objects.filter(pk__in=Subquery(last)).values_list("vessel__uuid", "occurred_at", "sequence")
    return {str(uuid): (at, sequence) for uuid, at, sequence in found}


def _tell(rows: list[tuple[Order, bool]], filled: Order | None) -> HandedOver:
    last = max((order for order, stands in rows if stands), default=None)
    gone = last is not None and (filled is None or filled < last)
    return HandedOver(
        gone_at=last[0] if gone and last is not None else None,
        moments=frozenset(order[0] for order, _ in rows),
        sequence=max(sequence for (_, sequence), _ in rows),
    )


def is_handed_over(vessel: Vessel) -> bool:
    """Say whether it is gone by a hand-over. Two queries."""
    told = tell({str(vessel.uuid)}).get(str(vessel.uuid))
    return told is not None and told.gone_at is not None


def settle(vessels: Collection[str] | None = None) -> None:
    """Make vessels (all, if none are named) gone, or here again, as their hand-overs say. Four queries at most."""
    told = tell(vessels)
    changed = []
    for vessel in Vessel.objects.filter(uuid__in=told):
        wanted = told[str(vessel.uuid)].wanted(vessel)
        if wanted != vessel.gone_at:
            vessel.gone_at = wanted
            changed.append(vessel)
    Vessel.objects.bulk_update(changed, ["gone_at"])
