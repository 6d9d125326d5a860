"""A day's work at the bench: the morning's readings, the sheet of a day, the sheets of a week and their paper."""

from contextlib import suppress
from dataclasses import dataclass, replace
from datetime import date, timedelta
from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseRedirect, QueryDict
from django.utils import timezone
from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from chemicals.books.events import LevelReading
from chemicals.journal.models import Attachment
from chemicals.journal.selectors import get_attachment_for
from chemicals.ledger.selectors import list_vessels_for
from chemicals.process.counting.selectors import list_open_counts_for
from chemicals.process.day_sheets import find_latest_run, list_standing_sheets, read_day_grid
from chemicals.process.inputs import INPUTS
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotFoundError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.clearance.selectors import Answer, Preview
from compliance.clearance.services import RefusedError
from compliance.clearance.together import preview_all, record_all
from compliance.documents.uploads import add_file
from compliance.web import words
from compliance.web.door import page, show
from compliance.web.forms.base import hidden_pairs
from compliance.web.forms.grid import GridForm, Part
from compliance.web.forms.morning import MorningForm
from compliance.web.forms.sheets import DAYS, DayForm, WeekForm
from compliance.web.recorded import Told, tell_taken
from compliance.web.views.acts import address, sent
from compliance.web.views.record import BACK, INCIDENT, SAVE

AT_THE_BENCH = ("run", "top-up", "drum-off", "spill")
"""Verbs that have a large button, besides the grids and the count."""
STEPS = ("csrfmiddlewaretoken", "step", "more")


@page(need=require_writer)
def bench(request: HttpRequest, member: Membership) -> HttpResponse:
    """Show what is recorded every day, as large buttons."""
    return show(
        request,
        member,
        "web/bench.html",
        here="today",
        verbs=[(verb, INPUTS[verb].title) for verb in AT_THE_BENCH],
        last=list_standing_sheets(member).first(),
        last_run=find_latest_run(member),
        counts=list_open_counts_for(member),
    )


@page("GET", "POST", need=require_writer)
def day(request: HttpRequest, member: Membership) -> HttpResponse:
    """Show the sheet of a day, its preview, or save it; ``again`` fills in what the last one said."""
    form = DayForm(member, timezone.localdate(), sent(request), again="again" in request.GET)
    return _serve(request, form, template="web/day.html", heading=_("Day sheet"), last=form.grid.last)


@page("GET", "POST", need=require_writer)
def morning(request: HttpRequest, member: Membership) -> HttpResponse:
    """Show a field for each reading of the morning, what is understood, or save all of them."""
    form = MorningForm(member, sent(request))
    return _serve(request, form, template="web/morning.html", heading=_("Morning"))


@page("GET", "POST", need=require_writer)
def week(request: HttpRequest, member: Membership) -> HttpResponse:
    """Show the sheets of a week, their preview, or save them; a photograph is kept as soon as it is sent."""
    today, said = timezone.localdate(), sent(request)
    first = _begin_week(request.POST.get("first") or request.GET.get("first", ""), today)
    wrong = None
    if said is not None:
        said, wrong = _keep_photo(request, member)
    form = WeekForm(member, today, first, said)
    if wrong is not None:
        form.is_valid()
        form.add_error("photo", [each.message for each in wrong.errors])
    return _serve(
        request,
        form,
        template="web/week.html",
        heading=_("Week sheet"),
        days=form.list_days(),
        photo=_find_photo(member, said),
        first=first,
        before=first - timedelta(days=DAYS),
        after=first + timedelta(days=DAYS) if form.days[-1] < today else None,
    )


@page()
def week_paper(request: HttpRequest, member: Membership) -> HttpResponse:
    """Show the grid of a week to print, empty, to hang at the line."""
    first = _begin_week(request.GET.get("first", ""), timezone.localdate())
    return show(
        request,
        member,
        "web/week-paper.html",
        grid=read_day_grid(member),
        days=[first + timedelta(days=number) for number in range(DAYS)],
        first=first,
    )


def _begin_week(typed: str, today: date) -> date:
    """Return the Monday of the week of a day: of the one that is written, else of today."""
    with suppress(ValueError):
        found = date.fromisoformat(typed)
        if date(1900, 1, 8) <= found <= today + timedelta(days=DAYS):
            today = found
    return today - timedelta(days=today.weekday())


def _keep_photo(request: HttpRequest, member: Membership) -> tuple[QueryDict, InvalidInputError | None]:
    """Return what was sent, with the photograph by its hash: no browser sends a file again from a hidden field."""
    said, upload = request.POST.copy(), request.FILES.get("photo")
    if upload is None:
        return said, None
    try:
        kept = add_file(actor=member, now=timezone.now(), name=upload.name or "", data=upload.read())
    except InvalidInputError as error:
        return said, error
    said["photo_sha256"] = kept.sha256
    return said, None


def _find_photo(member: Membership, said: QueryDict | None) -> Attachment | None:
    with suppress(NotFoundError):
        return get_attachment_for(member, said.get("photo_sha256", "")) if said else None
    return None


def _serve(request: HttpRequest, form: GridForm, *, template: str, heading: str, **context: Any) -> HttpResponse:
    """Show a grid, say what would follow from it, or save it; nothing that was typed is lost on the way."""

    def again(status: int = 400) -> HttpResponse:
        return show(request, form.member, template, status=status, here="today", form=form, heading=heading, **context)

    step = form.data.get("step", "")
    if not form.is_bound or step == BACK:
        form.hush()
        return again(200)
    if not form.is_valid():
        return again()
    try:
        return _save(request, form, heading, step) if step in (SAVE, INCIDENT) else _preview(request, form, heading)
    except InvalidInputError as error:
        form.add_domain_errors(error)
        return again()
    except ConflictError as error:
        form.add_error(None, str(error))
        return again(409)


def _save(request: HttpRequest, form: GridForm, heading: str, step: str) -> HttpResponse:
    """Record all of it and say so; a second press of the button finds what the first one wrote."""
    member, happened = form.member, step == INCIDENT
    said = [replace(part.said, already_happened=happened) for part in form.to_parts()]
    try:
        found = record_all(actor=member, now=timezone.now(), key=form.cleaned_data["key"], said=said)
    except RefusedError:
        return _preview(request, form, heading, status=409)
    if not all(appended.is_new for appended in found):
        messages.success(request, _("This was recorded already."))
    else:
        told = ngettext("Recorded: one entry.", "Recorded: %(n)d entries.", len(found)) % {"n": len(found)}
        messages.success(request, told)
    if len(found) == 1:
        return HttpResponseRedirect(address("entry", member, found[0].entry.uuid))
    return HttpResponseRedirect(address("bench", member))


@dataclass(frozen=True)
class ShownPart:
    """A record of a grid with what would follow from it, as sentences."""

    part: Part
    follows: words.Follows
    findings: list[str]
    taken: list[Told]
    """What it would be taken for: a height for a volume."""


def _preview(request: HttpRequest, form: GridForm, heading: str, status: int = 200) -> HttpResponse:
    member, parts = form.member, form.to_parts()
    found = preview_all(member, timezone.now(), [part.said for part in parts])
    ends = words.Ends.of(list_vessels_for(member).values_list("uuid", "name"))
    shown = [
        ShownPart(
            part,
            words.Follows.of(each.trial.folded.transfers, ends),
            words.findings(each.trial.folded.findings, ends),
            tell_taken(each.trial.event, ends) if isinstance(each.trial.event, LevelReading) else [],
        )
        for part, each in zip(parts, found, strict=True)
    ]
    return show(
        request,
        member,
        "web/grid-preview.html",
        status=status,
        here="today",
        heading=heading,
        form=form,
        answer=_answer_all(found),
        parts=shown,
        pairs=hidden_pairs(form.data, without=STEPS),  # type: ignore[arg-type]  # what was sent is a QueryDict
    )


def _answer_all(found: list[Preview]) -> Answer:
    """Return one answer for all: what speaks against one of them speaks against the whole."""

    def gather(name: str) -> tuple[str, ...]:
        return tuple(dict.fromkeys(text for each in found for text in getattr(each.answer, name)))

    names = ("dangers", "obstacles", "questions", "cautions", "first_steps")
    return Answer(**{name: gather(name) for name in names}, happened=any(each.answer.happened for each in found))
