"""The register: products with their revisions and sheets, substances, stock containers."""

from typing import Any
from uuid import UUID

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseBase
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.journal.models import Attachment
from chemicals.ledger.models import VesselKind
from chemicals.ledger.selectors import list_contents_for, list_vessels_for
from chemicals.process.setup import create_holder
from chemicals.register.selectors import (
    get_current_revision,
    get_product_for,
    list_current_revisions_for,
    list_revisions_of,
    list_substances_for,
)
from chemicals.register.services import create_product, create_substance, keep_sheet, revise_product
from chemicals.science.reactivity import REACTS_AS, declared
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from chemicals.workshop.selectors import get_place_for
from compliance.web.contents import CONTENT_COLUMNS, parts_of
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.register import ProductForm, RevisionForm, StockForm, SubstanceForm, start_from
from compliance.web.views.acts import address, fill_in, sent

COLUMNS = (
    Column("product", lambda row: row.product.name),
    Column("supplier", lambda row: row.product.supplier),
    Column("revision", lambda row: row.number),
    Column("since", lambda row: row.created_at),
    Column("form", lambda row: row.form),
    Column("composition", lambda row: "; ".join(f"{line.substance.name} {line.typed}" for line in row.lines.all())),
    Column("names every metal", lambda row: "yes" if row.complete else "no"),
    Column("signal word", lambda row: row.signal_word),
    Column("pictograms", lambda row: " ".join(row.pictograms)),
    Column("hazard statements", lambda row: "; ".join(row.statements)),
    Column("reacts as", lambda row: "; ".join(row.reactivity)),
    Column("sheet date", lambda row: row.sheet_date),
    Column("sheet sha256", lambda row: row.safety_data_sheet.sha256 if row.safety_data_sheet else None),
)
SUBSTANCE_COLUMNS = (
    Column("substance", lambda row: row.name),
    Column("formula", lambda row: row.formula),
    Column("cas number", lambda row: row.cas_number),
    Column("inert", lambda row: "yes" if row.inert else "no"),
)


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List the products as they are known now."""
    revisions = list_current_revisions_for(member)
    contents = list_contents_for(member)
    held = [(vessel, contents.get(vessel.pk)) for vessel in list_vessels_for(member, VesselKind.STOCK)]
    file = wanted_file(request, products=(COLUMNS, lambda: revisions), stock=(CONTENT_COLUMNS, lambda: parts_of(held)))
    return file or show(request, member, "web/register.html", here="register", revisions=revisions, stocks=held)


@page()
def substances(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List the substances."""
    rows = list_substances_for(member)
    file = wanted_file(request, substances=(SUBSTANCE_COLUMNS, lambda: rows))
    return file or show(request, member, "web/substances.html", here="register", substances=rows)


@page("GET", "POST", need=require_writer)
def add_substance(request: HttpRequest, member: Membership) -> HttpResponse:
    """Add a substance."""

    def act(form: SubstanceForm) -> str:
        create_substance(actor=member, **form.cleaned_data)
        return address("substances", member)

    words = {"heading": _("Add a substance"), "button": _("Add the substance")}
    back = address("substances", member)
    return fill_in(request, member, SubstanceForm(sent(request)), act, here="register", back=back, **words)


@page()
def product(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Show a product with all its revisions and its containers."""
    found = get_product_for(member, uuid)
    revisions = list(list_revisions_of(found))
    contents = list_contents_for(member)
    stocks = list(list_vessels_for(member).filter(product=found))
    return show(
        request,
        member,
        "web/product.html",
        here="register",
        product=found,
        current=revisions[0],
        reacts_as=[REACTS_AS[kind] for kind in sorted(declared(revisions[0].reactivity))],
        revisions=revisions,
        stocks=[(vessel, contents.get(vessel.pk)) for vessel in stocks],
    )


@page("GET", "POST", need=require_writer)
def add_product(request: HttpRequest, member: Membership) -> HttpResponse:
    """Add a product with its first revision."""

    def act(form: ProductForm) -> str:
        cleaned = form.cleaned_data
        revision = create_product(
            actor=member,
            now=timezone.now(),
            name=cleaned["name"],
            supplier=cleaned["supplier"],
            revision=form.to_revision(_keep(member, cleaned["sheet"])),
        )
        return address("product", member, revision.product.uuid)

    form = ProductForm(member, sent(request), request.FILES or None)
    words = {"heading": _("Add a product"), "button": _("Add the product"), "intro": _intro(form)}
    return fill_in(request, member, form, act, here="register", back=address("register", member), **words)


def _intro(form: RevisionForm) -> str:
    return "" if form.substances else _("There is no substance yet: add those of the product first, then come back.")


def _keep(member: Membership, upload: Any) -> Attachment | None:
    """Keep an uploaded sheet."""
    return upload and keep_sheet(actor=member, now=timezone.now(), name=upload.name, data=upload.read())


@page("GET", "POST", need=require_writer)
def revise(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Write the next revision of a product; without a new sheet the present one stays."""
    found = get_product_for(member, uuid)
    current = get_current_revision(found)

    def act(form: RevisionForm) -> str:
        sheet = _keep(member, form.cleaned_data["sheet"]) or current.safety_data_sheet
        revise_product(actor=member, now=timezone.now(), product=found, revision=form.to_revision(sheet))
        messages.success(request, _("The next revision is written. Entries so far keep the one they relied on."))
        return address("product", member, found.uuid)

    data = sent(request)
    start = {} if data is not None else start_from(current)
    form = RevisionForm(member, data, request.FILES or None, **start)
    words = {"heading": _("Revise %(product)s") % {"product": found}, "button": _("Write the next revision")}
    back = address("product", member, found.uuid)
    return fill_in(request, member, form, act, here="register", back=back, **words)


@page("GET", "POST", need=require_writer)
def add_stock(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Set up a container for a product."""
    found = get_product_for(member, uuid)

    def act(form: StockForm) -> str:
        cleaned = form.cleaned_data
        vessel = create_holder(
            actor=member,
            now=timezone.now(),
            kind=VesselKind.STOCK,
            name=cleaned["name"],
            product=found,
            place=cleaned["place"] and get_place_for(member, cleaned["place"]),
            capacity=cleaned["capacity"] and cleaned["capacity"].base,
        )
        return address("vessel", member, vessel.uuid)

    form = StockForm(member, sent(request), name=found.name)
    words = {
        "heading": _("A container for %(product)s") % {"product": found},
        "button": _("Set up the container"),
        "intro": _("It is empty until something is received into it."),
    }
    return fill_in(request, member, form, act, here="register", back=address("product", member, found.uuid), **words)
