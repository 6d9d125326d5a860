"""A new jar: set up and received on one page, and what was set up with its codes."""

from urllib.parse import urlencode
from uuid import uuid4

from django.http import HttpRequest, HttpResponse
from django.utils import timezone

from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.clearance.receiving import receive_containers
from compliance.premises.selectors import find_vessels_by_code
from compliance.web.door import page, show
from compliance.web.forms.jar import JarForm
from compliance.web.views.acts import address, fill_in, sent
from compliance.web.views.places import find_around


@page("GET", "POST", need=require_writer)
def new_jar(request: HttpRequest, member: Membership) -> HttpResponse:
    """Set up containers alike, with their product if it is new, and record what was received into them."""

    def act(form: JarForm) -> str:
        key = form.cleaned_data["key"]
        found = receive_containers(actor=member, now=timezone.now(), key=key, jar=form.to_jar())
        return f"{address('jars', member)}?{urlencode([('code', vessel.code) for vessel in found.vessels])}"

    start = {name: request.GET[name] for name in ("product", "place") if name in request.GET}
    form = JarForm(member, timezone.localdate(), sent(request), initial={"key": uuid4(), **start})
    return fill_in(
        request, member, form, act, template="web/new-jar.html", here="register", back=address("register", member)
    )


@page()
def jars(request: HttpRequest, member: Membership) -> HttpResponse:
    """Show containers with their codes, to write on them until they have labels."""
    codes = request.GET.getlist("code")
    vessels = find_vessels_by_code(member, list(dict.fromkeys(codes)))
    labels = urlencode([("code", vessel.code) for vessel in vessels])
    around = find_around(member, vessels)
    return show(request, member, "web/jars.html", here="register", vessels=vessels, labels=labels, around=around)
