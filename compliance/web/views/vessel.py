"""The page of a vessel: what it holds, and what is done most at a bench."""

from typing import Any
from uuid import UUID

from django.http import HttpRequest, HttpResponseBase, HttpResponseRedirect
from django.utils import timezone

from chemicals.journal.selectors import list_entries_naming
from chemicals.ledger.care import CONTAINERS
from chemicals.ledger.gone import is_handed_over
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import get_recomputed_to, get_vessel_for, is_known_empty, list_changes_of, read_contents
from chemicals.process.counting.selectors import COUNTABLE, find_last_seen, list_open_counts_for
from chemicals.process.levels import list_level_marks
from chemicals.process.selectors import find_last_run, get_tank_of, list_open_analyses_for, list_tank_changes_of
from chemicals.science.reactivity import REACTS_AS
from chemicals.workshop.models import Membership
from compliance.clearance.selectors import react_as
from compliance.premises.empties import find_empty
from compliance.premises.expiry import Keeping
from compliance.premises.received import list_received
from compliance.premises.selectors import list_labels_of, list_standing_for
from compliance.web.bench import list_bench, list_groups
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.rows import entry_rows
from compliance.web.views.acts import address
from compliance.web.views.places import find_around
from compliance.web.views.readings import last_readings
from compliance.web.views.tanks import list_tank_files

LAST = 10
"""How many entries, and how many changes, the page of a vessel shows."""
CHANGE_COLUMNS = (
    Column("changed", lambda row: row.changed_at),
    Column("by", lambda row: str(row.changed_by.user)),
    Column("what", lambda row: row.fact),
    Column("before", lambda row: row.before),
    Column("after", lambda row: row.after),
    Column("note", lambda row: row.note),
)


@page()
def vessel(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponseBase:
    """Show a vessel; the code on it opens this page."""
    found = get_vessel_for(member, uuid)
    if found.kind == VesselKind.WASTE:
        return HttpResponseRedirect(address("waste-container", member, found.uuid))
    changes = list_changes_of(found)
    file = wanted_file(request, changes=(CHANGE_COLUMNS, lambda: changes), about=found.code, **list_tank_files(found))
    return file or show(
        request,
        member,
        "web/vessel.html",
        here="register" if found.kind == VesselKind.STOCK else "tanks",
        recomputing=get_recomputed_to(member.workshop),
        vessel=found,
        **_tank(found),
        **last_readings(member, found),
        contents=read_contents(found),
        reacts_as=[REACTS_AS[kind] for kind in sorted(react_as(found))],
        bench=list_bench(found),
        groups=list_groups(found),
        again=find_last_run(member, found),
        analyses=[pair for pair in list_open_analyses_for(member) if pair[1].vessel == str(found.uuid)],
        papers=list_labels_of(found, member),
        rows=entry_rows(member, list_entries_naming(member, found.uuid)[:LAST]),
        changes=changes[:LAST],
        **_counts(member, found),
        handed_over=found.gone_at is not None and is_handed_over(found),
        is_empty=found.kind == VesselKind.STOCK and found.gone_at is None and is_known_empty(found),
        empty=find_empty(member, found),
        **_known(member, found),
        around=find_around(member, [found]),
    )


def _tank(found: Vessel) -> dict[str, Any]:
    """Return how a bath or a rinse is set up, and its level table."""
    tank = get_tank_of(found)
    if tank is None:
        return {"tank": None}
    return {"tank": tank, "tank_changes": list_tank_changes_of(found)[:LAST], "marks": list_level_marks(found)}


def _counts(member: Membership, found: Vessel) -> dict[str, Any]:
    """Return when it was last seen on a count, and the counts that are open."""
    if found.kind not in COUNTABLE:
        return {}
    return {"countable": True, "last_seen": find_last_seen(member, found), "counts": list_open_counts_for(member)}


def _known(member: Membership, found: Vessel) -> dict[str, Any]:
    """Return what is known of a container beside what it holds."""
    if found.kind not in CONTAINERS:
        return {}
    return {
        "is_container": True,
        "standing": list_standing_for(member, [found.uuid])[0],
        "received": list_received(member, [found]).get(str(found.uuid), ()),
        "keeping": Keeping.of(found, timezone.localdate()),
    }
