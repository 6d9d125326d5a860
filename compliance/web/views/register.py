"""The register: products with their revisions and sheets, substances, stock containers."""

from typing import Any
from uuid import UUID

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseBase, HttpResponseRedirect
from django.utils import timezone
from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from chemicals.journal.models import Attachment
from chemicals.ledger.selectors import list_contents_for, list_vessels_for
from chemicals.register.selectors import (
    get_current_revision,
    get_product_for,
    get_substance_for,
    list_missing_starters,
    list_revisions_of,
    list_substances_for,
)
from chemicals.register.services import (
    add_starter_substances,
    change_substance,
    create_product,
    create_substance,
    keep_sheet,
    revise_product,
)
from chemicals.register.sheets import list_sheets
from chemicals.science.quantity import show as show_amount
from chemicals.science.reactivity import REACTS_AS, declared
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.web.catalogue import Described, HazardLines, limit_words, sheet_mark
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.register import (
    ProductForm,
    RevisionForm,
    SubstanceForm,
    start_from,
    start_substance,
)
from compliance.web.views.acts import address, fill_in, sent

COLUMNS = (
    Column("product", lambda row: row.product.name),
    Column("supplier", lambda row: row.product.supplier),
    Column("revision", lambda row: row.number),
    Column("since", lambda row: row.created_at),
    Column("form", lambda row: row.form),
    Column("density", lambda row: None if row.density is None else show_amount(row.density, "density", digits=9)),
    Column("lowest ph", lambda row: None if row.ph_floor is None else show_amount(row.ph_floor, "ph", digits=9)),
    Column("composition", lambda row: "; ".join(f"{line.substance.name} {line.typed}" for line in row.lines.all())),
    Column("names every metal", lambda row: "yes" if row.complete else "no"),
    Column("hazard classes", lambda row: "; ".join(row.hazard_classes)),
    Column("signal word", lambda row: row.signal_word),
    Column("pictograms", lambda row: " ".join(row.pictograms)),
    Column("hazard statements", lambda row: "; ".join(row.statements)),
    Column("reacts as", lambda row: "; ".join(row.reactivity)),
    Column("contradictions", lambda row: " ".join(each.message for each in row.contradictions)),
    Column("exposure limits", lambda row: "; ".join(limit_words(limit) for limit in row.limits.all())),
    Column("gloves", lambda row: row.gloves),
    Column("un number", lambda row: row.un_number),
    Column("proper shipping name", lambda row: row.shipping_name),
    Column("transport class", lambda row: row.transport_class),
    Column("packing group", lambda row: row.packing_group),
    Column("not classified for transport", lambda row: "yes" if row.transport_unclassified else "no"),
    Column("supplier's telephone", lambda row: row.supplier_telephone),
    Column("sheet language", lambda row: row.sheet_language),
    Column("sheet date", lambda row: row.sheet_date),
    Column("sheet sha256", lambda row: row.safety_data_sheet.sha256 if row.safety_data_sheet else None),
)
SUBSTANCE_COLUMNS = (
    Column("substance", lambda row: row.substance.name),
    Column("other names", lambda row: "; ".join(row.substance.synonyms)),
    Column("formula", lambda row: row.substance.formula),
    Column("molar mass", lambda row: row.molar_mass),
    Column("metals", lambda row: row.metals),
    Column("cas number", lambda row: row.substance.cas_number),
    Column("ec number", lambda row: row.substance.ec_number),
    Column("inert", lambda row: "yes" if row.substance.inert else "no"),
)


@page()
def substances(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List the substances."""
    known = list(list_substances_for(member))
    rows = [Described.of(row) for row in known]
    file = wanted_file(request, substances=(SUBSTANCE_COLUMNS, lambda: rows))
    starters = list_missing_starters(known)
    return file or show(request, member, "web/substances.html", here="register", rows=rows, starters=starters)


@page("GET", "POST", need=require_writer)
def add_substance(request: HttpRequest, member: Membership) -> HttpResponse:
    """Add a substance."""

    def act(form: SubstanceForm) -> str:
        create_substance(actor=member, **form.said())
        return address("substances", member)

    words = {"heading": _("Add a substance"), "button": _("Add the substance")}
    back = address("substances", member)
    return fill_in(request, member, SubstanceForm(sent(request)), act, here="register", back=back, **words)


@page("GET", "POST", need=require_writer)
def substance(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Correct a substance."""
    found = get_substance_for(member, uuid)

    def act(form: SubstanceForm) -> str:
        change_substance(actor=member, substance=found, **form.said())
        messages.success(request, _("Saved."))
        return address("substances", member)

    form = SubstanceForm(sent(request), initial=start_substance(found))
    words = {"heading": found.name, "button": _("Save"), "back": address("substances", member)}
    return fill_in(request, member, form, act, here="register", **words)


@page("POST", need=require_writer)
def add_starters(request: HttpRequest, member: Membership) -> HttpResponse:
    """Add the usual substances of plating; those that are here stay as they are."""
    count = len(add_starter_substances(actor=member))
    told = ngettext("%(count)d substance is added.", "%(count)d substances are added.", count)
    messages.success(request, told % {"count": count})
    return HttpResponseRedirect(address("substances", member))


@page()
def product(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Show a product with all its revisions and its containers."""
    found = get_product_for(member, uuid)
    revisions = list(list_revisions_of(found))
    contents = list_contents_for(member)
    stocks = list(list_vessels_for(member).filter(product=found, gone_at=None))
    return show(
        request,
        member,
        "web/product.html",
        here="register",
        product=found,
        current=revisions[0],
        lines=[(line, Described.of(line.substance)) for line in revisions[0].lines.all()],
        hazards=HazardLines.of(revisions[0]),
        sheets=list_sheets(revisions),
        sheet_mark=sheet_mark(revisions[0], timezone.localdate(), member.workshop),
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
