"""Tanks: baths and rinses with what they hold, anode sets, rack types, routes."""

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import Contents, Held, list_contents_for, list_vessels_for
from chemicals.process.selectors import get_rack_type_for, list_rack_types_for, list_routes_for
from chemicals.process.setup import create_holder, create_rack_type, create_route, create_tank
from chemicals.register.selectors import get_product_for
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.web.door import page, show
from compliance.web.export import Column, grams, is_wanted, litres, to_csv
from compliance.web.forms.tanks import AnodeForm, BathForm, RackTypeForm, RinseForm, RouteForm
from compliance.web.views.acts import address, fill_in, sent

KINDS = (VesselKind.BATH, VesselKind.RINSE, VesselKind.ANODE)
FORMS = {"bath": BathForm, "rinse": RinseForm}
COLUMNS = (
    Column("tank", lambda row: row[0].name),
    Column("code", lambda row: row[0].code),
    Column("kind", lambda row: row[0].kind),
    Column("place", lambda row: row[0].place.name if row[0].place else ""),
    Column("component", lambda row: row[1].component if row[1] else ""),
    Column("unit", lambda row: "" if row[1] is None else "L" if row[1].component == "volume" else "g"),
    Column("amount", lambda row: _number(row[1], row[1].amount) if row[1] else None),
    Column("standard uncertainty", lambda row: _number(row[1], row[1].sd) if row[1] and row[1].amount else None),
)


def _number(held: Held, base: int | None) -> object:
    return litres(base) if held.component == "volume" else grams(base)


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponse:
    """List tanks and anode sets with what they hold, and the set-up of the line."""
    contents = list_contents_for(member)
    rows = [(vessel, contents.get(vessel.pk)) for vessel in list_vessels_for(member, *KINDS)]
    if is_wanted(request):
        return to_csv("tanks", COLUMNS, [(vessel, part) for vessel, held in rows for part in _parts(held)])
    groups = [(kind.label, [row for row in rows if row[0].kind == kind]) for kind in KINDS]
    return show(
        request,
        member,
        "web/tanks.html",
        here="tanks",
        groups=groups,
        racks=list_rack_types_for(member),
        routes=list_routes_for(member),
    )


def _parts(held: Contents | None) -> list[Held | None]:
    """Return what a vessel holds one by one; a line without a component if nothing was recorded."""
    if held is None:
        return [None]
    return [part for part in (held.volume, held.mass, *held.metals) if part is not None] or [None]


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
