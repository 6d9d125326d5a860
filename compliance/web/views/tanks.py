"""Tanks: baths and rinses with what they hold, anode sets, filters and the like, rack types, routes."""

from typing import Any
from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse, HttpResponseBase
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import get_recomputed_to, list_contents_for, list_vessels_for
from chemicals.process.selectors import get_rack_type_for, list_rack_types_for, list_routes_for
from chemicals.process.setup import SOLID_HOLDERS, create_holder, create_rack_type, create_route, create_tank
from chemicals.register.selectors import get_product_for
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.web.contents import CONTENT_COLUMNS, parts_of
from compliance.web.door import page, show
from compliance.web.export import Column, litres, wanted_file
from compliance.web.forms.tanks import AnodeForm, BathForm, HolderForm, RackTypeForm, RinseForm, RouteForm
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


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List tanks, anode sets, filters and the like with what they hold, and the set-up of the line."""
    contents = list_contents_for(member)
    rows = [(vessel, contents.get(vessel.pk)) for vessel in list_vessels_for(member, *KINDS)]
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
