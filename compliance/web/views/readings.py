"""What was read at a vessel, all of it or one quantity, with a plot over time."""

from collections.abc import Sequence
from typing import Any
from urllib.parse import urlencode
from uuid import UUID

from django.http import HttpRequest, HttpResponseBase
from django.utils import timezone

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import get_vessel_for
from chemicals.process.readings import Taken, find_last_of_each, list_readings_of
from chemicals.workshop.models import Membership
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.reading_plot import draw_readings
from compliance.web.words import verb_of
from compliance.web.words.readings import amount_of

WIDE, NARROW = (1060, 340), (350, 280)
"""Width and height of the plot in pixels: on a desk, on a phone."""
COLUMNS = (
    Column("happened", lambda row: row.entry.occurred_at),
    Column("precision", lambda row: row.entry.precision),
    Column("entry", lambda row: row.entry.sequence),
    Column("what was read", lambda row: row.quantity),
    Column("of what", lambda row: row.shows),
    Column("as typed", lambda row: row.typed),
    Column("understood", amount_of),
    Column("read with", lambda row: row.instrument),
    Column("by", lambda row: str(row.entry.member.user)),
)


@page()
def index(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponseBase:
    """Show what was read at a vessel, the latest first; ``of`` and ``shows`` choose one quantity."""
    vessel = get_vessel_for(member, uuid)
    everything = list_readings_of(member, vessel)
    chosen = request.GET.get("of", ""), request.GET.get("shows", "").casefold()
    rows = [row for row in everything if not chosen[0] or row.key == chosen]
    kept = urlencode({"of": chosen[0], "shows": chosen[1]}) if chosen[0] else ""
    file = wanted_file(request, readings=(COLUMNS, lambda: rows), about=vessel.code)
    return file or show(
        request,
        member,
        "web/readings.html",
        here="register" if vessel.kind == VesselKind.STOCK else "tanks",
        vessel=vessel,
        quantities=find_last_of_each(everything),
        chosen=rows[0] if chosen[0] and rows else None,
        verb=verb_of(rows[0].entry.kind) if rows else "",
        again=urlencode({"quantity": chosen[0], "shows": rows[0].shows}) if rows else "",
        kept=kept,
        rows=rows,
        now=timezone.now(),
        **_plots(rows if chosen[0] else ()),
    )


def _plots(rows: Sequence[Taken]) -> dict[str, Any]:
    return {
        name: draw_readings(rows, width=size[0], height=size[1]) for name, size in (("wide", WIDE), ("narrow", NARROW))
    }


def last_readings(member: Membership, vessel: Vessel) -> dict[str, Any]:
    """Return what the page of a vessel shows of its readings. Two queries."""
    return {"readings": find_last_of_each(list_readings_of(member, vessel)), "now": timezone.now()}
