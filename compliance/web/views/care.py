"""What is cared for without anything being poured: one vessel, or many containers alike."""

from uuid import UUID

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseRedirect
from django.utils import timezone
from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.selectors import get_vessel_for
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.premises.selectors import find_vessels_by_code
from compliance.web.door import page
from compliance.web.forms.care import CareForm, ManyForm
from compliance.web.views.acts import address, fill_in, sent


@page("GET", "POST", need=require_writer)
def care(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Change name, place and days of a vessel."""
    found = get_vessel_for(member, uuid)
    back = address("vessel", member, found.uuid)

    def act(form: CareForm) -> str:
        change_vessels(actor=member, now=timezone.now(), vessels=[found], care=form.to_care())
        messages.success(request, _("Saved."))
        return back

    words = {
        "heading": _("Change %(vessel)s") % {"vessel": found},
        "button": _("Save"),
        "intro": _(
            "Nothing is poured by this. What changes is noted with who and when; labels so far stay as printed."
        ),
    }
    return fill_in(request, member, CareForm(member, found, sent(request)), act, here="register", back=back, **words)


@page("POST", need=require_writer)
def open_today(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Note that a container was opened today."""
    found = get_vessel_for(member, uuid)
    now = timezone.now()
    change_vessels(actor=member, now=now, vessels=[found], care=CareInput(opened_on=timezone.localdate(now)))
    messages.success(request, _("Noted: opened today."))
    return HttpResponseRedirect(address("vessel", member, found.uuid))


@page("GET", "POST", need=require_writer)
def change_containers(request: HttpRequest, member: Membership) -> HttpResponse:
    """Change place and days of the containers that the address names, all of them or none."""
    vessels = find_vessels_by_code(member, list(dict.fromkeys(request.GET.getlist("code"))))

    def act(form: ManyForm) -> str:
        changed = change_vessels(actor=member, now=timezone.now(), vessels=vessels, care=form.to_care())
        told = ngettext("%(count)d container is changed.", "%(count)d containers are changed.", len(changed))
        messages.success(request, told % {"count": len(changed)})
        return request.get_full_path()

    form = ManyForm(member, sent(request))
    return fill_in(
        request,
        member,
        form,
        act,
        template="web/change-containers.html",
        here="register",
        vessels=vessels,
        back=address("containers", member),
    )
