"""What a day sheet asks in this workshop: which rows, which baths; and the sheets that are there already."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import date, timedelta
from uuid import UUID

from django.db.models import QuerySet

from chemicals.books.events import DaySheet, Run
from chemicals.books.occurred import Occurred
from chemicals.journal.models import Entry
from chemicals.journal.selectors import list_unanswered_for, read_event
from chemicals.ledger.models import Vessel
from chemicals.process.models import RackType, Route
from chemicals.process.selectors import list_rack_types_for, list_routes_for, list_tanks_for
from chemicals.workshop.models import Membership

RECENT_SHEETS = 20
"""How many day sheets are looked through for rack types that went through another route than their usual one."""


@dataclass(frozen=True)
class Loads:
    """A row of a day sheet: loads of a rack type through a route."""

    route: Route
    rack: RackType

    @property
    def key(self) -> tuple[UUID, UUID]:
        """Return what tells the row from others."""
        return self.route.uuid, self.rack.uuid

    def __str__(self) -> str:
        return f"{self.route}: {self.rack}"


@dataclass(frozen=True)
class DayGrid:
    """The rows of a day sheet, and what the ``last`` one said in them: loads, and ampere-hours as typed."""

    loads: Sequence[Loads]
    baths: Sequence[Vessel]
    last: Entry | None
    last_loads: Mapping[tuple[UUID, UUID], int]
    last_charges: Mapping[UUID, str]


def read_day_grid(member: Membership) -> DayGrid:
    """Return the grid: each route with its own rack type and those that it had lately, each bath that plates.

    Five queries. Tanks that are gone are left out, with the routes through them.
    """
    routes = [route for route in list_routes_for(member) if not _is_gone(route)]
    racks = {rack.name: rack for rack in list_rack_types_for(member)}
    by_tanks = {tuple(str(step.vessel.uuid) for step in route.steps.all()): route for route in routes}
    entries = list_standing_sheets(member)[:RECENT_SHEETS]
    sheets = [(entry, event) for entry in entries if isinstance(event := read_event(entry), DaySheet)]
    rows = {(row := Loads(route, route.rack)).key: row for route in routes}
    last: dict[tuple[UUID, UUID], int] = {}
    for number, (_entry, event) in enumerate(sheets):
        for said in event.racks:
            if said.route in by_tanks and said.rack in racks:
                row = Loads(by_tanks[said.route], racks[said.rack])
                rows.setdefault(row.key, row)
                if number == 0:
                    last[row.key] = last.get(row.key, 0) + said.loads
    return DayGrid(
        loads=sorted(rows.values(), key=lambda row: (row.route.name, row.rack != row.route.rack, row.rack.name)),
        baths=[tank.vessel for tank in list_tanks_for(member) if tank.metal and tank.vessel.gone_at is None],
        last=sheets[0][0] if sheets else None,
        last_loads=last,
        last_charges={UUID(row.bath): row.charge.typed for row in sheets[0][1].charges} if sheets else {},
    )


def _is_gone(route: Route) -> bool:
    return any(step.vessel.gone_at is not None for step in route.steps.all())


def list_standing_sheets(member: Membership) -> QuerySet[Entry]:
    """Return the day sheets that nobody cancelled, the latest day first. One query."""
    return list_unanswered_for(member, DaySheet.KIND).order_by("-occurred_at", "-sequence")


def list_sheets_of_days(member: Membership, first: date, last: date) -> dict[date, list[Entry]]:
    """Return the day sheets that stand of each day, by the workshop's clock. One query."""
    zone = member.workshop.zone
    found: dict[date, list[Entry]] = {}
    since, until = Occurred.on_day(first, zone).at, Occurred.on_day(last, zone).at
    near = timedelta(days=1)
    for entry in list_standing_sheets(member).filter(occurred_at__gt=since - near, occurred_at__lt=until + near):
        found.setdefault(entry.occurred_at.astimezone(zone).date(), []).append(entry)
    return {day: entries for day, entries in found.items() if first <= day <= last}


def find_latest_run(member: Membership) -> Entry | None:
    """Return the run that was recorded last and not cancelled. One query."""
    return list_unanswered_for(member, Run.KIND).first()
