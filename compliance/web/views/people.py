"""The workshop itself: settings, people, places, keys for programs."""

from uuid import UUID

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseBase, HttpResponseRedirect
from django.urls import reverse
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.journal.selectors import get_head
from chemicals.workshop.links import make_password_link
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_owner, require_writer
from chemicals.workshop.selectors import (
    get_member_for,
    list_emergency_numbers_for,
    list_members_for,
    list_places_for,
    list_tokens_for,
)  # fmt: skip
from chemicals.workshop.services import (
    change_member,
    change_workshop,
    create_place,
    create_token,
    invite_member,
    revoke_token,
    set_emergency_numbers,
)
from compliance.documents.words import grouped
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.people import InviteForm, MemberForm, PlaceForm, TokenForm, WorkshopForm
from compliance.web.forms.premises import NumbersForm
from compliance.web.views.acts import address, fill_in, sent

COLUMNS = (
    Column("name", lambda row: row.user.name),
    Column("e-mail address", lambda row: row.user.email),
    Column("role", lambda row: row.role),
    Column("active", lambda row: "yes" if row.active else "no"),
    Column("uuid", lambda row: str(row.uuid)),
)
PLACE_COLUMNS = (
    Column("place", lambda row: row.name),
    Column("bund", lambda row: row.bund),
    Column("exhaust duct", lambda row: row.exhaust_duct),
)

NUMBER_COLUMNS = (
    Column("whom to call", lambda row: row.label),
    Column("telephone", lambda row: row.number),
    Column("entered", lambda row: row.entered_at),
    Column("by", lambda row: str(row.entered_by.user)),
)


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """Show the workshop: settings, people, places, the member's own keys, the end of the chain."""
    people, places = list_members_for(member), list_places_for(member)
    numbers = list_emergency_numbers_for(member)
    file = wanted_file(
        request,
        people=(COLUMNS, lambda: people),
        places=(PLACE_COLUMNS, lambda: places),
        emergency_numbers=(NUMBER_COLUMNS, lambda: numbers),
    )
    sequence, head = get_head(member.workshop)
    return file or show(
        request,
        member,
        "web/workshop.html",
        here="workshop",
        people=people,
        places=places,
        numbers=numbers,
        tokens=list_tokens_for(member),
        sequence=sequence,
        head=grouped(head),
    )


@page("GET", "POST", need=require_owner)
def settings(request: HttpRequest, member: Membership) -> HttpResponse:
    """Change name, address, telephone, time zone, and when a sheet is old."""
    workshop = member.workshop

    def act(form: WorkshopForm) -> str:
        change_workshop(actor=member, **form.cleaned_data)
        messages.success(request, _("Saved."))
        return address("workshop", member)

    fields = ("name", "address", "telephone", "time_zone", "sheet_years")
    form = WorkshopForm(sent(request), initial={name: getattr(workshop, name) for name in fields})
    words = {"heading": _("The workshop"), "button": _("Save"), "back": address("workshop", member)}
    return fill_in(request, member, form, act, here="workshop", **words)


@page("GET", "POST", need=require_owner)
def emergency_numbers(request: HttpRequest, member: Membership) -> HttpResponse:
    """Change whom to call in an emergency."""

    def act(form: NumbersForm) -> str:
        set_emergency_numbers(actor=member, now=timezone.now(), numbers=form.list_numbers())
        messages.success(request, _("Saved. Issue the emergency sheet anew."))
        return address("workshop", member)

    rows = [{"label": row.label, "number": row.number} for row in list_emergency_numbers_for(member)]
    words = {"heading": _("Emergency numbers"), "button": _("Save"), "back": address("workshop", member)}
    return fill_in(request, member, NumbersForm(rows, sent(request)), act, here="workshop", **words)


@page("GET", "POST", need=require_owner)
def invite(request: HttpRequest, member: Membership) -> HttpResponse:
    """Give a person a role."""

    def act(form: InviteForm) -> str:
        invite_member(actor=member, **form.cleaned_data)
        messages.success(request, _("Invited. Make a link for setting a password and hand it over."))
        return address("workshop", member)

    words = {"heading": _("Invite a person"), "button": _("Invite"), "back": address("workshop", member)}
    return fill_in(request, member, InviteForm(sent(request)), act, here="workshop", **words)


@page("GET", "POST", need=require_owner)
def change(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Change a role, or end a membership."""
    found = get_member_for(member, uuid)

    def act(form: MemberForm) -> str:
        change_member(actor=member, member_uuid=uuid, **form.cleaned_data)
        messages.success(request, _("Saved."))
        return address("workshop", member)

    words = {"heading": str(found.user), "button": _("Save"), "back": address("workshop", member)}
    return fill_in(request, member, MemberForm(found, sent(request)), act, here="workshop", **words)


@page("POST", need=require_owner)
def link(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Show a link with which a person sets a password, to hand over: there is no mail."""
    found = get_member_for(member, uuid)
    parts = make_password_link(actor=member, member=found)
    made = request.build_absolute_uri(reverse("set-password", args=parts))
    return show(request, member, "web/link.html", here="workshop", person=found.user, link=made)


@page("GET", "POST", need=require_writer)
def add_place(request: HttpRequest, member: Membership) -> HttpResponse:
    """Add a place."""

    def act(form: PlaceForm) -> str:
        create_place(actor=member, **form.cleaned_data)
        return address("workshop", member)

    words = {"heading": _("Add a place"), "button": _("Add the place"), "back": address("workshop", member)}
    return fill_in(request, member, PlaceForm(sent(request)), act, here="workshop", **words)


@page("GET", "POST", need=require_writer)
def add_token(request: HttpRequest, member: Membership) -> HttpResponse:
    """Make a key for the API; it is shown this once."""
    form = TokenForm(sent(request))
    if form.is_bound and form.is_valid():
        token, key = create_token(actor=member, now=timezone.now(), name=form.cleaned_data["name"])
        return show(request, member, "web/token.html", here="workshop", token=token, key=key)
    words = {"heading": _("A key for a program"), "button": _("Make the key"), "back": address("workshop", member)}
    return fill_in(request, member, form, lambda _form: address("workshop", member), here="workshop", **words)


@page("POST", need=require_writer)
def end_token(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """End one of the member's own keys."""
    revoke_token(actor=member, now=timezone.now(), token_uuid=uuid)
    messages.success(request, _("The key is ended."))
    return HttpResponseRedirect(address("workshop", member))
