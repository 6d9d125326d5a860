"""Tanks: baths and rinses with what they hold, anode sets, filters and the like, rack types, routes."""

from typing import Any
from uuid import UUID

from django.contrib import messages
from django.http import Http404, HttpRequest, HttpResponse, HttpResponseBase
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import get_recomputed_to, get_vessel_for, list_contents_for, list_vessels_for
from chemicals.process.levels import list_level_marks
from chemicals.process.selectors import (
    get_rack_type_for,
    get_tank_of,
    list_rack_types_for,
    list_routes_for,
    list_tank_changes_of,
)
from chemicals.process.setup import (
    SOLID_HOLDERS,
    change_tank,
    create_holder,
    create_rack_type,
    create_route,
    create_tank,
)
from chemicals.register.selectors import get_product_for
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.web.contents import CONTENT_COLUMNS, parts_of
from compliance.web.door import page, show
from compliance.web.export import Column, Listed, litres, wanted_file
from compliance.web.forms.tanks import (
    AnodeForm,
    BathForm,
    ChangeBathForm,
    ChangeRinseForm,
    HolderForm,
    RackTypeForm,
    RinseForm,
    RouteForm,
)
from compliance.web.views.acts import address, fill_in, sent

KINDS = (VesselKind.BATH, VesselKind.RINSE, VesselKind.ANODE, *SOLID_HOLDERS)
FORMS = {"bath": BathForm, "rinse": RinseForm}
RACK_COLUMNS = (
    Column("rack type", lambda row: row.name),
    Column("area (mm2)", lambda row: row.area),
    Column("drag-out per load (L)", lambda row: litres(row.drag_out)),
    Column("its relative uncertainty (ppm)", lambda row: row.drag_out_sd),
)
ROUTE_COLUMNS = (
    Column("route", lambda row: row.name),
    Column("rack type", lambda row: row.rack.name),
    Column("tanks", lambda row: "; ".join(step.vessel.name for step in row.steps.all())),
)


MARK_COLUMNS = (
    Column("height or mark", lambda row: row.mark),
    Column("read hot", lambda row: "yes" if row.hot else "no"),
    Column("volume at 20 C (L)", lambda row: litres(row.volume)),
    Column("entered", lambda row: row.entered_at),
    Column("by", lambda row: str(row.entered_by.user)),
)
TANK_CHANGE_COLUMNS = (
    Column("changed", lambda row: row.changed_at),
    Column("by", lambda row: str(row.changed_by.user)),
    Column("what", lambda row: row.fact),
    Column("before", lambda row: row.before),
    Column("after", lambda row: row.after),
    Column("note", lambda row: row.note),
)


def list_tank_files(vessel: Vessel) -> dict[str, Listed]:
    """Return the lists of a tank that may be downloaded from its page."""
    return {
        "level_table": (MARK_COLUMNS, lambda: list_level_marks(vessel)),
        "tank_changes": (TANK_CHANGE_COLUMNS, lambda: list_tank_changes_of(vessel)),
    }


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List tanks, anode sets, filters and the like with what they hold, and the set-up of the line."""
    contents = list_contents_for(member)
    rows = [(vessel, contents.get(vessel.pk)) for vessel in list_vessels_for(member, *KINDS).filter(gone_at=None)]
    racks, routes = list_rack_types_for(member), list_routes_for(member)
    file = wanted_file(
        request,
        tanks=(CONTENT_COLUMNS, lambda: parts_of(rows)),
        rack_types=(RACK_COLUMNS, lambda: racks),
        routes=(ROUTE_COLUMNS, lambda: routes),
    )
    groups = [(kind.label, [row for row in rows if row[0].kind == kind]) for kind in KINDS]
    more: dict[str, Any] = {"groups": groups, "any_tank": bool(rows), "racks": racks, "routes": routes}
    return file or show(
        request, member, "web/tanks.html", here="tanks", recomputing=get_recomputed_to(member.workshop), **more
    )


@page("GET", "POST", need=require_writer)
def add_tank(request: HttpRequest, member: Membership, kind: str) -> HttpResponse:
    """Set up a bath or a rinse."""
    if kind not in FORMS:
        raise Http404("no such kind of tank")

    def act(form: RinseForm) -> str:
        tank = create_tank(actor=member, now=timezone.now(), tank=form.to_tank())
        return address("vessel", member, tank.vessel.uuid)

    heading = _("Set up a bath") if kind == VesselKind.BATH else _("Set up a rinse")
    form = FORMS[kind](member, sent(request))
    back = address("tanks", member)
    return fill_in(request, member, form, act, here="tanks", heading=heading, button=_("Set it up"), back=back)


@page("GET", "POST", need=require_writer)
def change(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Change how a bath or a rinse is set up."""
    vessel = get_vessel_for(member, uuid)
    tank = get_tank_of(vessel)
    if tank is None:
        raise NotFoundError("This vessel is neither a bath nor a rinse.")
    back = address("vessel", member, vessel.uuid)

    def act(form: ChangeBathForm | ChangeRinseForm) -> str:
        note = form.cleaned_data["note"]
        change_tank(actor=member, now=timezone.now(), row=tank, tank=form.to_tank(), note=note)
        messages.success(request, _("Saved."))
        return back

    make = ChangeBathForm if vessel.kind == VesselKind.BATH else ChangeRinseForm
    words = {
        "heading": _("Change how %(tank)s is set up") % {"tank": vessel},
        "button": _("Save"),
        "intro": _("Entries so far keep the figures that they relied on; new entries rely on the new ones."),
    }
    return fill_in(request, member, make(member, tank, sent(request)), act, here="tanks", back=back, **words)


@page("GET", "POST", need=require_writer)
def add_anode(request: HttpRequest, member: Membership) -> HttpResponse:
    """Set up an anode set."""

    def act(form: AnodeForm) -> str:
        product = form.cleaned_data["product"]
        vessel: Vessel = create_holder(
            actor=member,
            now=timezone.now(),
            kind=VesselKind.ANODE,
            name=form.cleaned_data["name"],
            product=product and get_product_for(member, product),
            place=form.place(),
        )
        return address("vessel", member, vessel.uuid)

    words = {"heading": _("Set up an anode set"), "button": _("Set it up"), "back": address("tanks", member)}
    return fill_in(request, member, AnodeForm(member, sent(request)), act, here="tanks", **words)


@page("GET", "POST", need=require_writer)
def add_holder(request: HttpRequest, member: Membership) -> HttpResponse:
    """Set up a filter, a recovery cell, rack build-up, sludge or the like."""

    def act(form: HolderForm) -> str:
        made = create_holder(actor=member, now=timezone.now(), kind=form.cleaned_data["kind"], **form.common())
        return address("vessel", member, made.uuid)

    words = {
        "heading": _("Set up a filter, recovery cell, sludge or the like"),
        "button": _("Set it up"),
        "back": address("tanks", member),
        "intro": _("It stands for solids that take metal out of a liquid, so that the metal is counted there."),
    }
    return fill_in(request, member, HolderForm(member, sent(request)), act, here="tanks", **words)


@page("GET", "POST", need=require_writer)
def add_rack_type(request: HttpRequest, member: Membership) -> HttpResponse:
    """Set up a rack type."""

    def act(form: RackTypeForm) -> str:
        create_rack_type(actor=member, **form.to_rack_type())
        return address("tanks", member)

    words = {"heading": _("Add a rack type"), "button": _("Add the rack type"), "back": address("tanks", member)}
    return fill_in(request, member, RackTypeForm(sent(request)), act, here="tanks", **words)


@page("GET", "POST", need=require_writer)
def add_route(request: HttpRequest, member: Membership) -> HttpResponse:
    """Set up a route."""

    def act(form: RouteForm) -> str:
        rack: UUID = form.cleaned_data["rack"]
        create_route(
            actor=member,
            name=form.cleaned_data["name"],
            rack=get_rack_type_for(member, rack),
            vessels=form.vessels(),
        )
        return address("tanks", member)

    words = {"heading": _("Add a route"), "button": _("Add the route"), "back": address("tanks", member)}
    return fill_in(request, member, RouteForm(member, sent(request)), act, here="tanks", **words)
