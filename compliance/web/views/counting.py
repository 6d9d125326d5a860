"""Count days: start or go on, scan and note, look at what differs, finish; the past ones."""

from typing import Any
from uuid import UUID

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseBase, HttpResponseRedirect
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import get_recomputed_to, read_contents
from chemicals.process.counting.selectors import (
    find_countable_for,
    get_count_day_for,
    get_count_line_for,
    list_count_days_for,
    list_lines_of,
    list_open_counts_for,
    reckon_count,
)
from chemicals.process.counting.services import SeenInput, abandon_count, note_line, start_count, take_line_back
from chemicals.process.models import CountDay, Seen
from chemicals.workshop.errors import InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from chemicals.workshop.selectors import get_place_for
from compliance.clearance.counting import finish_count
from compliance.web.counted import COLUMNS, DAY_COLUMNS, SAID_COLUMNS, tell_counted, tell_line
from compliance.web.door import page, show
from compliance.web.export import wanted_file
from compliance.web.forms.counting import CodeForm, SeenForm, StartForm
from compliance.web.views.acts import address, fill_in, sent

LAST = 20
"""How many lines the counting page shows."""

HERE, AGAIN = "here", "again"
"""Presses that set right what the books say of a container beside its content: its place, that it is not gone."""


@page("GET", "POST")
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List the counts, open ones first, and start another."""

    def act(form: StartForm) -> str:
        place = form.cleaned_data["place"] and get_place_for(member, form.cleaned_data["place"])
        made = start_count(actor=member, now=timezone.now(), place=place, note=form.cleaned_data["note"])
        return address("count", member, made.uuid)

    if request.method == "POST":
        require_writer(member)
    rows = list_count_days_for(member)
    file = wanted_file(request, counts=(DAY_COLUMNS, lambda: rows))
    if file is not None:
        return file
    return fill_in(
        request,
        member,
        StartForm(member, sent(request)),
        act,
        template="web/counts.html",
        here="register",
        counts=list_open_counts_for(member),
        over=rows.exclude(finished_at=None),
        any=rows.exists(),
    )


@page("GET", "POST")
def count(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponseBase:
    """Scan a code and note what is there; of a count that is over, show what was seen."""
    day = get_count_day_for(member, uuid)
    if request.method == "POST":
        require_writer(member)
        return _note(request, member, day)
    file = wanted_file(
        request,
        lines=(COLUMNS, lambda: reckon_count(member, day).rows),
        said=(SAID_COLUMNS, lambda: list_lines_of(member, day)),
        about=timezone.localdate(day.started_at).isoformat(),
    )
    if file is not None:
        return file
    if "code" not in request.GET or day.finished_at is not None:
        return _show(request, member, day)
    form = CodeForm(request.GET)
    vessel = _find(member, form)
    if vessel is None:
        return _show(request, member, day, status=400, code_form=form)
    return _show(request, member, day, vessel=vessel)


def _find(member: Membership, form: CodeForm) -> Vessel | None:
    """Return the container that a code names; what is wrong stands in the form."""
    if form.is_valid():
        try:
            return find_countable_for(member, form.cleaned_data["code"])
        except InvalidInputError as error:
            form.add_domain_errors(error)
    return None


def _note(request: HttpRequest, member: Membership, day: CountDay) -> HttpResponse:
    """Do what was pressed for a container, and go on to the next one."""
    code_form, press = CodeForm(request.POST), request.POST.get("do", "")
    vessel = _find(member, code_form)
    if vessel is None:
        return _show(request, member, day, status=400, code_form=code_form)
    if press in (HERE, AGAIN):
        care = CareInput(place=day.place) if press == HERE and day.place else CareInput(gone=False)
        change_vessels(actor=member, now=timezone.now(), vessels=[vessel], care=care)
        messages.success(request, _("%(vessel)s: the books have it here now.") % {"vessel": vessel})
        return HttpResponseRedirect(f"{address('count', member, day.uuid)}?code={vessel.code}")
    said = Seen(press) if press in Seen.values else Seen.AMOUNT
    form = SeenForm(request.POST, said=said)
    if form.is_valid():
        try:
            line = note_line(
                actor=member,
                now=timezone.now(),
                day=day,
                vessel=vessel,
                seen=SeenInput(said=said, **form.cleaned_data),
            )
        except InvalidInputError as error:
            if said != Seen.AMOUNT:  # the button stands beside the amount, which the page then asks for
                form = SeenForm(request.POST)
                form.is_valid()
            form.add_domain_errors(error)
        else:
            messages.success(request, _("%(vessel)s: %(said)s.") % {"vessel": vessel, "said": tell_line(line)})
            back = "count-preview" if request.POST.get("from") == "preview" else "count"
            return HttpResponseRedirect(address(back, member, day.uuid))
    return _show(request, member, day, vessel=vessel, form=form, status=400)


def _show(
    request: HttpRequest,
    member: Membership,
    day: CountDay,
    *,
    vessel: Vessel | None = None,
    form: SeenForm | None = None,
    code_form: CodeForm | None = None,
    status: int = 200,
) -> HttpResponse:
    reckoning = reckon_count(member, day)
    said = list(list_lines_of(member, day))
    context: dict[str, Any] = {
        "day": day,
        "reckoning": reckoning,
        "rows": [tell_counted(row) for row in reckoning.rows],
        "last": [(line, tell_line(line)) for line in said if line.taken_back_at is None][:LAST],
        "taken_back": [(line, tell_line(line)) for line in said if line.taken_back_at is not None],
        "code_form": code_form or CodeForm(ready=vessel is None),
        "form": form or code_form or SeenForm(),
    }
    if vessel is not None:
        context |= {
            "vessel": vessel,
            "contents": read_contents(vessel),
            "before": next((tell_line(line) for line in said if line.vessel == vessel and not line.taken_back_at), ""),
            "elsewhere": day.place is not None and vessel.place != day.place,
        }
    template = "web/count.html" if day.finished_at is None else "web/count-over.html"
    return show(request, member, template, here="register", status=status, **context)


@page("POST", need=require_writer)
def take_back(request: HttpRequest, member: Membership, uuid: UUID, line: UUID) -> HttpResponse:
    """Take a line back."""
    day = get_count_day_for(member, uuid)
    found = get_count_line_for(member, day, line)
    take_line_back(actor=member, now=timezone.now(), line=found)
    messages.success(request, _("%(vessel)s: taken back.") % {"vessel": found.vessel})
    return HttpResponseRedirect(address("count", member, day.uuid))


@page("POST", need=require_writer)
def abandon(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """End a count without any entry."""
    day = get_count_day_for(member, uuid)
    abandon_count(actor=member, now=timezone.now(), day=day)
    messages.success(request, _("Abandoned: nothing was recorded."))
    return HttpResponseRedirect(address("counts", member))


@page("GET", "POST")
def preview(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Show what was counted against what the books say, and what nobody has seen yet; finish the count."""
    day = get_count_day_for(member, uuid)
    errors: list[str] = []
    if request.method == "POST":
        require_writer(member)
        try:
            finish_count(actor=member, now=timezone.now(), day=day)
        except InvalidInputError as error:
            errors = [each.message for each in error.errors]
        else:
            messages.success(request, _("Finished."))
            return HttpResponseRedirect(address("count", member, day.uuid))
    if day.finished_at is not None:
        return HttpResponseRedirect(address("count", member, day.uuid))
    reckoning = reckon_count(member, day)
    rows = [tell_counted(row) for row in reckoning.rows]
    return show(
        request,
        member,
        "web/count-preview.html",
        here="register",
        status=400 if errors else 200,
        day=day,
        reckoning=reckoning,
        differing=[row for row in rows if row.row.makes_entry],
        agreeing=[row for row in rows if not row.row.makes_entry],
        errors=errors,
        recomputing=get_recomputed_to(member.workshop),
    )
