"""Empty containers: put away what may go, and take it back."""

from uuid import UUID

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseRedirect
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import get_vessel_for, is_known_empty
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.premises.empties import find_empty
from compliance.premises.services import bring_back, put_away
from compliance.web.door import page
from compliance.web.forms.empties import PutAwayForm
from compliance.web.views.acts import address, fill_in, sent


@page("GET", "POST", need=require_writer)
def put_away_page(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Note that an empty stock container is gone."""
    found = get_vessel_for(member, uuid)
    empty = find_empty(member, found)
    back = address("vessel", member, found.uuid)

    def act(form: PutAwayForm) -> str:
        put_away(actor=member, now=timezone.now(), vessels=[found], **form.cleaned_data)
        messages.success(request, _("Noted: it is gone. What came and went stays in the books."))
        return back

    words = {
        "heading": _("Put %(vessel)s away") % {"vessel": found},
        "button": _("It is gone"),
        "intro": empty.why if empty else _why_not(found),
    }
    return fill_in(request, member, PutAwayForm(empty, sent(request)), act, here="waste", back=back, **words)


def _why_not(vessel: Vessel) -> str:
    """Return why a vessel that is not known to have been emptied may not go; nothing if nothing ever was in it."""
    if is_known_empty(vessel):
        return ""
    return _("The books do not know it as empty: something is in it, or may be. Count it, or move what is left.")


@page("POST", need=require_writer)
def here_again(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Note that a container that was put away is here again."""
    found = get_vessel_for(member, uuid)
    bring_back(actor=member, now=timezone.now(), vessels=[found])
    messages.success(request, _("Noted: it is here again."))
    return HttpResponseRedirect(address("vessel", member, found.uuid))
