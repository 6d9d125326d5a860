"""Places: what stands there, how much of it may, and what stands together and must not."""

from collections.abc import Callable, Mapping
from typing import Any
from urllib.parse import urlencode
from uuid import UUID

from django.contrib import messages
from django.http import Http404, HttpRequest, HttpResponse, HttpResponseBase, HttpResponseRedirect
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_owner, require_writer
from chemicals.workshop.selectors import get_place_for, list_places_for
from chemicals.workshop.services import change_place
from compliance.premises import lines
from compliance.premises.emergency import amount_of
from compliance.premises.models import Assessment, KeepApart, QuantityLimit
from compliance.premises.selectors import group_by_place, list_standing_for
from compliance.premises.sorts import list_sorts
from compliance.premises.violation_words import remedies, sentence, sort_name, speaks, total, where
from compliance.premises.violations import (
    Violation,
    get_assessment_for,
    get_keep_apart_for,
    get_limit_for,
    is_stale,
    list_keep_apart_for,
    list_violations_for,
    weigh_limits,
)
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.people import PlaceForm
from compliance.web.forms.places import AssessmentForm, KeepApartForm, LimitForm
from compliance.web.views.acts import address, fill_in, sent

PLACE_COLUMNS = (
    Column("place", lambda row: row["place"].name),
    Column("bund", lambda row: row["place"].bund),
    Column("exhaust duct", lambda row: row["place"].exhaust_duct),
    Column("vessels", lambda row: row["count"]),
    Column("pictograms", lambda row: " ".join(row["pictograms"])),
    Column("wrong", lambda row: row["wrong"]),
)
VIOLATION_COLUMNS = (
    Column("code", lambda row: row.code),
    Column("where", where),
    Column("what", sentence),
    Column("what speaks against it", speaks),
    Column("remedy", lambda row: " ".join(remedies(row))),
    Column("assessed by", lambda row: row.assessment.assessed_by if row.assessment else ""),
    Column("assessed until", lambda row: row.assessment.until if row.assessment else ""),
)
APART_COLUMNS = (
    Column("first", lambda row: row.first),
    Column("second", lambda row: row.second),
    Column("reach", lambda row: row.reach),
    Column("citation", lambda row: row.citation),
    Column("compared on", lambda row: row.checked_on),
    Column("entered", lambda row: row.entered_at),
    Column("by", lambda row: str(row.entered_by.user)),
)
THING_COLUMNS = (
    Column("vessel", lambda row: row["standing"].vessel.name),
    Column("code", lambda row: row["standing"].vessel.code),
    Column("amount", lambda row: row["amount"].text or "unknown"),
    Column("standard uncertainty", lambda row: row["amount"].doubt or ""),
    Column("pictograms", lambda row: " ".join(row["standing"].hazards.pictograms)),
)
LIMIT_COLUMNS = (
    Column("of what", lambda row: row["limit"].sort),
    Column("at most", lambda row: row["limit"].typed),
    Column("stands here", lambda row: row["total"]),
    Column("verdict", lambda row: row["verdict"]),
    Column("citation", lambda row: row["limit"].citation),
    Column("compared on", lambda row: row["limit"].checked_on),
    Column("entered", lambda row: row["limit"].entered_at),
    Column("by", lambda row: str(row["limit"].entered_by.user)),
)

LINES: Mapping[str, Callable[[Membership, UUID], QuantityLimit | KeepApart | Assessment]] = {
    "limits": get_limit_for,
    "apart": get_keep_apart_for,
    "assessments": get_assessment_for,
}
"""What an address calls a line -> how it is found."""


def _today(member: Membership) -> Any:
    return timezone.localdate(timezone=member.workshop.zone)


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """Show every place with what is wrong there, and what is kept apart."""
    standing = list_standing_for(member, brief=True)
    found = list_violations_for(member, timezone.now(), standing)
    grouped, apart = group_by_place(each for each in standing if each.is_here), list_keep_apart_for(member)
    places = [
        {
            "place": place,
            "count": len(grouped.get(place.pk, ())),
            "pictograms": sorted({code for each in grouped.get(place.pk, ()) for code in each.hazards.pictograms}),
            "wrong": sum(each.is_alarm and place in each.places for each in found),
        }
        for place in list_places_for(member)
    ]
    file = wanted_file(request, places=(PLACE_COLUMNS, lambda: places), keep_apart=(APART_COLUMNS, lambda: apart))
    return file or show(
        request,
        member,
        "web/places.html",
        here="register",
        places=places,
        apart=[_apart(row, member) for row in apart],
        wrong=sum(each.is_alarm for each in found),
        remarks=sum(each.is_remark for each in found),
    )


def _apart(row: KeepApart, member: Membership) -> dict[str, Any]:
    names = {"first": sort_name(row.first), "second": sort_name(row.second)}
    return {"row": row, "stale": is_stale(row, _today(member)), **names}


@page()
def violations(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """Show everything that stands together and must not, limits that are passed, and what is not known."""
    found = list_violations_for(member, timezone.now())
    file = wanted_file(request, violations=(VIOLATION_COLUMNS, lambda: found))
    return file or show(request, member, "web/violations.html", here="register", found=tell(member, found))


def tell(member: Membership, found: list[Violation]) -> list[dict[str, Any]]:
    """Return violations with their sentences, as pages show them."""
    return [
        {
            "violation": each,
            "where": where(each),
            "sentence": sentence(each),
            "speaks": speaks(each),
            "remedies": remedies(each),
            "assess": _assess_address(member, each),
        }
        for each in found
    ]


def _assess_address(member: Membership, violation: Violation) -> str:
    """Return where an owner notes that it was assessed; nowhere if it cannot be, or was."""
    if not violation.can_be_assessed or violation.is_assessed:
        return ""
    place = "" if violation.shared or violation.place is None else violation.place.uuid
    said = {
        "first": violation.first,
        "second": violation.second,
        "reach": violation.reach,
        "place": place,
        "shared": violation.shared,
    }
    return f"{address('assess', member)}?{urlencode({name: str(value) for name, value in said.items()})}"


@page()
def place(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponseBase:
    """Show a place: what stands there, its limits, what is wrong."""
    found, now = get_place_for(member, uuid), timezone.now()
    standing = list_standing_for(member, brief=True)
    wrong = [each for each in list_violations_for(member, now, standing) if found in each.places]
    here = [each for each in standing if each.vessel.place_id == found.pk and each.is_here]
    things = [{"standing": each, "amount": amount_of(each)} for each in here]
    limits = [
        {
            "limit": each.limit,
            "sort": sort_name(each.limit.sort),
            "total": total(each.weighed, each.limit),
            "verdict": each.weighed.verdict,
            "stale": each.stale,
        }
        for each in weigh_limits(member, now, standing, found)
    ]
    file = wanted_file(
        request, things=(THING_COLUMNS, lambda: things), limits=(LIMIT_COLUMNS, lambda: limits), about=found.name
    )
    return file or show(
        request,
        member,
        "web/place.html",
        here="register",
        place=found,
        things=things,
        limits=limits,
        found=tell(member, wrong),
        alarm=any(each.is_alarm for each in wrong),
    )


def find_around(member: Membership, vessels: list[Any]) -> list[dict[str, Any]]:
    """Return what is wrong where vessels stand, as far as they are part of it: said right after they came there."""
    keys = {vessel.pk for vessel in vessels}
    near = list_standing_for(member, near={vessel.place for vessel in vessels if vessel.place}, brief=True)
    found = list_violations_for(member, timezone.now(), near)
    return tell(member, [each for each in found if not each.is_remark and keys & {v.pk for v in each.vessels}])


def list_for_today(member: Membership, most: int) -> dict[str, Any]:
    """Return what Today says: the worst first, at most so many, and how many there are."""
    found = list_violations_for(member, timezone.now())
    wrong = [each for each in found if not each.is_remark]
    return {
        "violations": tell(member, wrong[:most]),
        "violations_alarm": any(each.is_alarm for each in wrong),
        "violations_more": max(0, len(wrong) - most),
        "not_known": len(found) - len(wrong),
    }


@page("GET", "POST", need=require_writer)
def change(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Change a place's name, bund and exhaust duct."""
    found = get_place_for(member, uuid)
    back = address("place", member, found.uuid)

    def act(form: PlaceForm) -> str:
        change_place(actor=member, place=found, **form.cleaned_data)
        messages.success(request, _("Saved."))
        return back

    start = {name: getattr(found, name) for name in ("name", "bund", "exhaust_duct")}
    words = {"heading": _("Change %(place)s") % {"place": found}, "button": _("Save"), "back": back}
    return fill_in(request, member, PlaceForm(sent(request), initial=start), act, here="register", **words)


@page("GET", "POST", need=require_owner)
def add_limit(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Set a limit of a place."""
    found = get_place_for(member, uuid)
    back = address("place", member, found.uuid)

    def act(form: LimitForm) -> str:
        said = lines.LimitInput(**form.cleaned_data)
        lines.add_limit(actor=member, now=timezone.now(), place=found, limit=said)
        return back

    words = {"heading": _("A limit for %(place)s") % {"place": found}, "button": _("Set the limit"), "back": back}
    return fill_in(request, member, LimitForm(_today(member), sent(request)), act, here="register", **words)


@page("GET", "POST", need=require_owner)
def limit(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Change a limit, or say that it was compared again."""
    row: QuantityLimit = get_limit_for(member, uuid)
    back = address("place", member, row.place.uuid)

    def act(form: LimitForm) -> str:
        lines.change_limit(actor=member, now=timezone.now(), row=row, limit=lines.LimitInput(**form.cleaned_data))
        return back

    start = {"sort": row.sort, "amount": row.typed, "citation": row.citation}
    form = LimitForm(_today(member), sent(request), initial=start)
    words = {"heading": _("The limit for %(place)s") % {"place": row.place}, "button": _("Save"), "back": back}
    return fill_in(request, member, form, act, here="register", **words)


@page("GET", "POST", need=require_owner)
def add_keep_apart(request: HttpRequest, member: Membership) -> HttpResponse:
    """Add a line on what is kept apart."""

    def act(form: KeepApartForm) -> str:
        lines.add_keep_apart(actor=member, now=timezone.now(), line=lines.KeepApartInput(**form.cleaned_data))
        return address("places", member)

    intro = _("What must never meet is looked for without a line. Write here what else your rules keep apart.")
    words = {"heading": _("Keep apart"), "button": _("Add the line"), "back": address("places", member)}
    form = KeepApartForm(_today(member), sent(request))
    return fill_in(request, member, form, act, here="register", intro=intro, **words)


@page("GET", "POST", need=require_owner)
def keep_apart(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Change a line on what is kept apart, or say that it was compared again."""
    row = get_keep_apart_for(member, uuid)

    def act(form: KeepApartForm) -> str:
        said = lines.KeepApartInput(**form.cleaned_data)
        lines.change_keep_apart(actor=member, now=timezone.now(), row=row, line=said)
        return address("places", member)

    start = {name: getattr(row, name) for name in ("first", "second", "reach", "citation")}
    form = KeepApartForm(_today(member), sent(request), initial=start)
    words = {"heading": _("Keep apart"), "button": _("Save"), "back": address("places", member)}
    return fill_in(request, member, form, act, here="register", **words)


@page("POST", need=require_owner)
def remove(request: HttpRequest, member: Membership, what: str, uuid: UUID) -> HttpResponse:
    """Remove a limit, a line on what is kept apart, or an assessment."""
    if what not in LINES:
        raise Http404("no such line")
    row = LINES[what](member, uuid)
    back = address("place", member, row.place.uuid) if isinstance(row, QuantityLimit) else address("places", member)
    lines.remove_line(actor=member, row=row)
    messages.success(request, _("Removed. It no longer counts."))
    return HttpResponseRedirect(back)


@page("GET", "POST", need=require_owner)
def assess(request: HttpRequest, member: Membership) -> HttpResponse:
    """Note that somebody assessed two sorts that stand together, as the address names them."""
    said = {name: request.GET.get(name, "") for name in ("first", "second", "reach", "shared")}
    key = request.GET.get("place", "")
    where_ = _find_place(member, key) if key else None
    is_named = {said["first"], said["second"]} <= {*list_sorts()} and (where_ or said["shared"])
    if request.method == "GET" and not is_named:
        messages.error(request, _("Nothing is named that was assessed. Choose it below."))
        return HttpResponseRedirect(address("violations", member))

    def act(form: AssessmentForm) -> str:
        about = {"place": where_, **said, **form.cleaned_data}
        found = lines.AssessmentInput(**about)
        lines.note_assessment(actor=member, now=timezone.now(), assessment=found)
        messages.success(request, _("Noted. It is shown as assessed, not hidden."))
        return address("violations", member)

    intro = _(
        "%(first)s and %(second)s, %(where)s. What stands there stays on the list, with your name and reason."
    ) % {
        "first": sort_name(said["first"]),
        "second": sort_name(said["second"]),
        "where": where_ or said["shared"],
    }
    words = {"heading": _("Assessed"), "button": _("Note it"), "back": address("violations", member)}
    return fill_in(request, member, AssessmentForm(sent(request)), act, here="register", intro=intro, **words)


def _find_place(member: Membership, key: str) -> Any:
    try:
        return get_place_for(member, UUID(key))
    except ValueError as error:
        raise Http404("no such place") from error
