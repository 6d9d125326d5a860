"""Recording what happened: form, preview with the verdict, saved. One view for every verb."""

from typing import Any

from django.contrib import messages
from django.http import Http404, HttpRequest, HttpResponse, HttpResponseRedirect
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.ledger.selectors import list_vessels_for
from chemicals.process.inputs import INPUTS
from chemicals.workshop.errors import ConflictError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.clearance.selectors import preview
from compliance.clearance.services import RefusedError, record
from compliance.web import words
from compliance.web.door import page, show
from compliance.web.forms.base import hidden_pairs
from compliance.web.forms.prefill import prefill
from compliance.web.forms.record import RecordForm
from compliance.web.recorded import tell_taken
from compliance.web.views.acts import address

SAVE, INCIDENT, BACK = "save", "incident", "back"


@page("GET", "POST", need=require_writer)
def record_page(request: HttpRequest, member: Membership, verb: str) -> HttpResponse:
    """Show the form of a verb, its preview, or save it."""
    if verb not in INPUTS:
        raise Http404("no such verb")
    if request.method != "POST":
        return _form(request, RecordForm(member, verb, initial=prefill(member, verb, request.GET.dict())))
    form, step = RecordForm(member, verb, request.POST), request.POST.get("step", "")
    if step == BACK or "more" in request.POST:
        form.hush()
        return _form(request, form)
    if not form.is_valid():
        return _form(request, form, status=400)
    try:
        return _save(request, form, step) if step in (SAVE, INCIDENT) else _preview(request, form)
    except InvalidInputError as error:
        form.add_domain_errors(error)
        return _form(request, form, status=400)


def _form(request: HttpRequest, form: RecordForm, status: int = 200) -> HttpResponse:
    return show(request, form.member, "web/record.html", here="", status=status, form=form, heading=form.input.title)


def _save(request: HttpRequest, form: RecordForm, step: str) -> HttpResponse:
    """Record it and show the entry; a second press of the button shows the same entry."""
    member = form.member
    try:
        appended = record(
            actor=member,
            now=timezone.now(),
            key=form.cleaned_data["key"],
            data=form.to_input(),
            occurred=form.occurred,
            already_happened=step == INCIDENT,
        )
    except RefusedError:
        return _preview(request, form, status=409)
    except ConflictError as error:
        form.add_error(None, str(error))
        return _form(request, form, status=409)
    messages.success(request, _("Recorded.") if appended.is_new else _("This was recorded already: here it is."))
    return HttpResponseRedirect(address("entry", member, appended.entry.uuid))


def _preview(request: HttpRequest, form: RecordForm, status: int = 200) -> HttpResponse:
    member = form.member
    verdict = preview(member, timezone.now(), form.to_input(), form.occurred)
    ends = words.Ends.of(list_vessels_for(member).values_list("uuid", "name"))
    folded = verdict.trial.folded
    context: dict[str, Any] = {
        "heading": form.input.title,
        "form": form,
        "answer": verdict.answer,
        "follows": words.Follows.of(folded.transfers, ends),
        "taken": tell_taken(verdict.trial.event, ends),
        "findings": words.findings(folded.findings, ends),
        "pairs": hidden_pairs(request.POST, without=("csrfmiddlewaretoken", "step", "more")),
    }
    return show(request, member, "web/preview.html", status=status, **context)
