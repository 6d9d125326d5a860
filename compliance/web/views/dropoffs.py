"""Drop-offs: draft, packed with a manifest, handed over."""

from uuid import UUID

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseBase, HttpResponseRedirect
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.clearance.services import RefusedError
from compliance.dropoffs.models import DropOff
from compliance.dropoffs.selectors import (
    get_drop_off_for,
    get_receiver_for,
    list_drop_offs_for,
    list_receivers_for,
)  # fmt: skip
from compliance.dropoffs.services import create_drop_off, create_receiver, hand_over, pack_drop_off
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.waste import DropOffForm, HandOverForm, ReceiverForm
from compliance.web.views.acts import address, fill_in, sent

COLUMNS = (
    Column("planned for", lambda row: row.planned_for),
    Column("receiver", lambda row: row.receiver.name),
    Column("mode", lambda row: row.mode),
    Column("state", lambda row: row.state),
    Column("containers", lambda row: "; ".join(each.vessel.code for each in row.containers.all())),
    Column("manifest", lambda row: row.manifest.number if row.manifest else None),
)
RECEIVER_COLUMNS = (
    Column("receiver", lambda row: row.name),
    Column("address", lambda row: row.address),
    Column("our number there", lambda row: row.reference),
)


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List drop-offs and receivers."""
    rows = list_drop_offs_for(member)
    receivers = list_receivers_for(member)
    file = wanted_file(request, drop_offs=(COLUMNS, lambda: rows), receivers=(RECEIVER_COLUMNS, lambda: receivers))
    return file or show(request, member, "web/drop-offs.html", here="drop-offs", drop_offs=rows, receivers=receivers)


@page("GET", "POST", need=require_writer)
def add_receiver(request: HttpRequest, member: Membership) -> HttpResponse:
    """Add a receiver."""

    def act(form: ReceiverForm) -> str:
        create_receiver(actor=member, **form.cleaned_data)
        return address("drop-offs", member)

    words = {"heading": _("Add a receiver"), "button": _("Add the receiver"), "back": address("drop-offs", member)}
    return fill_in(request, member, ReceiverForm(sent(request)), act, here="drop-offs", **words)


@page("GET", "POST", need=require_writer)
def add(request: HttpRequest, member: Membership) -> HttpResponse:
    """Draft a drop-off."""

    def act(form: DropOffForm) -> str:
        made = create_drop_off(
            actor=member,
            now=timezone.now(),
            receiver=get_receiver_for(member, form.cleaned_data["receiver"]),
            mode=form.cleaned_data["mode"],
            planned_for=form.cleaned_data["planned_for"],
            containers=form.containers(),
            stock=form.stock(),
        )
        return address("drop-off", member, made.uuid)

    form = DropOffForm(member, timezone.localdate(), sent(request), vessel=request.GET.get("vessel", ""))
    none = _("Nothing waits for a drop-off: weigh and close a waste container on its page first.")
    intro = "" if form.ready or form.ready_stock else none
    words = {"heading": _("Draft a drop-off"), "button": _("Draft it"), "intro": intro}
    return fill_in(request, member, form, act, here="drop-offs", back=address("drop-offs", member), **words)


@page()
def drop_off(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Show a drop-off; the code on its manifest opens this page."""
    return _drop_off(request, member, get_drop_off_for(member, uuid), HandOverForm(member))


def _drop_off(
    request: HttpRequest,
    member: Membership,
    found: DropOff,
    form: HandOverForm,
    *,
    status: int = 200,
    reasons: tuple[str, ...] = (),
) -> HttpResponse:
    return show(
        request,
        member,
        "web/drop-off.html",
        here="drop-offs",
        status=status,
        drop_off=found,
        form=form,
        reasons=reasons,
    )


@page("POST", need=require_writer)
def pack(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Pack: issue the manifest; refused where containers must not share a load."""
    found = get_drop_off_for(member, uuid)
    try:
        pack_drop_off(actor=member, now=timezone.now(), drop_off=found)
    except RefusedError as error:
        return _drop_off(request, member, found, HandOverForm(member), status=409, reasons=error.reasons)
    messages.success(request, _("Packed. The manifest is issued; the list of containers stands."))
    return HttpResponseRedirect(address("drop-off", member, uuid))


@page("POST", need=require_writer)
def hand_over_page(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Record that every container went to the receiver."""
    found = get_drop_off_for(member, uuid)
    form = HandOverForm(member, request.POST)
    if not form.is_valid():
        return _drop_off(request, member, found, form, status=400)
    hand_over(actor=member, now=timezone.now(), drop_off=found, occurred=form.cleaned_data["occurred"])
    messages.success(request, _("Handed over. The books have it at the receiver now."))
    return HttpResponseRedirect(address("drop-off", member, uuid))
