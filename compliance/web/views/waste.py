"""Waste: streams, containers with their fill, what may go in, closing, labels."""

from typing import Any
from uuid import UUID, uuid4

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseBase, HttpResponseRedirect
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.journal.selectors import list_entries_naming
from chemicals.ledger.gone import is_handed_over
from chemicals.ledger.selectors import get_recomputed_to, get_vessel_for, list_vessels_for, read_contents
from chemicals.process.fields import VesselField, describe
from chemicals.process.inputs import DrumOffInput
from chemicals.science.reactivity import REACTS_AS
from chemicals.workshop.errors import InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from chemicals.workshop.selectors import get_place_for
from compliance.clearance.selectors import preview, react_as
from compliance.documents.selectors import list_papers_naming
from compliance.premises.empties import list_empties_for
from compliance.waste.models import WasteContainer
from compliance.waste.selectors import (
    get_container_for,
    get_stream_for,
    list_containers_for,
    list_streams_for,
    read_fill,
    state_of,
)
from compliance.waste.services import StreamInput, close_container, create_container, create_stream, issue_label
from compliance.web.bench import list_groups
from compliance.web.door import page, show
from compliance.web.export import Column, grams, litres, wanted_file
from compliance.web.forms.base import KeyForm
from compliance.web.forms.waste import CloseForm, ContainerForm, MayForm, StreamForm
from compliance.web.rows import entry_rows
from compliance.web.views.acts import address, fill_in, sent

LAST = 10
COLUMNS = (
    Column("container", lambda row: row.vessel.name),
    Column("code", lambda row: row.vessel.code),
    Column("stream", lambda row: row.stream.name),
    Column("place", lambda row: row.vessel.place.name if row.vessel.place else ""),
    Column("volume (L)", lambda row: litres(read_fill(row).volume)),
    Column("capacity (L)", lambda row: litres(row.vessel.capacity)),
    Column("tare (g)", lambda row: grams(row.tare)),
    Column("gross (g)", lambda row: grams(row.gross)),
    Column("closed", lambda row: row.closed_at),
    Column("state", state_of),
    Column("gone since", lambda row: row.vessel.gone_at),
)
EMPTY_COLUMNS = (
    Column("container", lambda row: row.vessel.name),
    Column("code", lambda row: row.vessel.code),
    Column("place", lambda row: row.vessel.place.name if row.vessel.place else ""),
    Column("held", lambda row: "; ".join(row.names)),
    Column("stays a waste", lambda row: "yes" if row.stays_waste else "ask" if row.must_ask else "no"),
    Column("why", lambda row: row.why),
)
STREAM_COLUMNS = (
    Column("stream", lambda row: row.name),
    Column("origin", lambda row: row.origin),
    Column("profile number", lambda row: row.profile_number),
    Column("code", lambda row: row.code),
    Column("may react as", lambda row: "; ".join(row.reactivity)),
    Column("signal word", lambda row: row.signal_word),
    Column("pictograms", lambda row: " ".join(row.pictograms)),
    Column("hazard statements", lambda row: "; ".join(row.statements)),
)
PAPER_COLUMNS = (
    Column("kind", lambda row: row.kind),
    Column("number", lambda row: row.number),
    Column("issued", lambda row: row.issued_at),
    Column("by", lambda row: str(row.issued_by.user)),
)


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List containers with their fill, and the streams."""
    containers = list_containers_for(member)
    streams = list_streams_for(member)
    file = wanted_file(
        request,
        containers=(COLUMNS, lambda: containers),
        streams=(STREAM_COLUMNS, lambda: streams),
        empties=(EMPTY_COLUMNS, lambda: list_empties_for(member)),
    )
    return file or show(request, member, "web/waste.html", here="waste", streams=streams, **_standing(member))


def _standing(member: Membership) -> dict[str, Any]:
    """Return what still stands here: waste containers with their fill, and empty stock containers."""
    containers = list_containers_for(member).filter(vessel__gone_at=None)
    empties = list_empties_for(member)
    return {
        "rows": [(row, read_fill(row), state_of(row)) for row in containers],
        "staying": [each for each in empties if each.stays_waste],
        "others": [each for each in empties if not each.stays_waste],
    }


@page()
def container(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponseBase:
    """Show a waste container; the code on it opens this page."""
    found = get_container_for(member, uuid)
    file = wanted_file(request, papers=(PAPER_COLUMNS, lambda: list_papers_naming(member, found.vessel.code)))
    return file or _container(request, member, found)


def _container(
    request: HttpRequest, member: Membership, found: WasteContainer, *, status: int = 200, **more: Any
) -> HttpResponse:
    context: dict[str, Any] = {
        "container": found,
        "vessel": found.vessel,
        "recomputing": get_recomputed_to(member.workshop),
        "fill": read_fill(found),
        "contents": read_contents(found.vessel),
        "reacts_as": [REACTS_AS[kind] for kind in sorted(react_as(found.vessel))],
        "rows": entry_rows(member, list_entries_naming(member, found.vessel.uuid)[:LAST]),
        "papers": list_papers_naming(member, found.vessel.code),
        "groups": list_groups(found.vessel),
        "state": state_of(found),
        "handed_over": found.vessel.gone_at is not None and is_handed_over(found.vessel),
        "close_form": CloseForm(),
        "may_form": MayForm(_sources(member), None),
        "key": uuid4(),
    }
    return show(request, member, "web/waste-container.html", here="waste", status=status, **{**context, **more})


def _sources(member: Membership) -> list[tuple[UUID, str]]:
    """Return what can be drummed off: tanks first, then stock and what stands for solids."""
    source = dict(describe(DrumOffInput))["source"]
    assert isinstance(source, VesselField)  # noqa: S101  (a table error, not an input error)
    vessels = sorted(
        list_vessels_for(member, *source.kinds).filter(gone_at=None), key=lambda vessel: source.kinds.index(vessel.kind)
    )
    return [(vessel.uuid, f"{vessel.name} ({vessel.code})") for vessel in vessels]


@page()
def may_go_in(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Answer whether the contents of a tank, or expired stock, may go into a waste container. Writes nothing."""
    found = get_container_for(member, uuid)
    form = MayForm(_sources(member), request.GET)
    only_answer = bool(request.headers.get("HX-Request"))
    context: dict[str, Any] = {"may_form": form}
    if form.is_valid():
        source = get_vessel_for(member, form.cleaned_data["source"])
        data = DrumOffInput(source=source.uuid, target=found.vessel.uuid)
        context |= {"source": source, "verdict": preview(member, timezone.now(), data, None)}
    if only_answer:
        return show(request, member, "web/_may.html", container=found, **context)
    return _container(request, member, found, status=200 if form.is_valid() else 400, **context)


@page("POST", need=require_writer)
def close(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Close a container with its gross weight."""
    found = get_container_for(member, uuid)
    form = CloseForm(request.POST)
    if form.is_valid():
        try:
            close_container(actor=member, now=timezone.now(), container=found, gross=form.cleaned_data["gross"].base)
            messages.success(request, _("Closed. Print a new label, then put it on a drop-off."))
            return HttpResponseRedirect(address("waste-container", member, uuid))
        except InvalidInputError as error:
            form.add_domain_errors(error)
    return _container(request, member, found, close_form=form, status=400)


@page("POST", need=require_writer)
def label(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Issue the numbered label of a container and show it; pressed twice, it is the same label."""
    found = get_container_for(member, uuid)
    form = KeyForm(request.POST)
    if not form.is_valid():
        raise InvalidInputError.of("key", _("This page is too old. Open the container once more."))
    paper = issue_label(actor=member, now=timezone.now(), key=form.cleaned_data["key"], container=found)
    return HttpResponseRedirect(address("paper", member, paper.uuid))


@page("GET", "POST", need=require_writer)
def add_stream(request: HttpRequest, member: Membership) -> HttpResponse:
    """Add a waste stream."""

    def act(form: StreamForm) -> str:
        cleaned = form.cleaned_data
        texts = {name: cleaned[name] for name in ("name", "origin", "profile_number", "code")}
        create_stream(actor=member, stream=StreamInput(**texts, **form.hazards()))
        return address("waste", member)

    words = {"heading": _("Add a waste stream"), "button": _("Add the stream"), "back": address("waste", member)}
    return fill_in(request, member, StreamForm(sent(request)), act, here="waste", **words)


@page("GET", "POST", need=require_writer)
def add_container(request: HttpRequest, member: Membership) -> HttpResponse:
    """Put up an empty waste container."""

    def act(form: ContainerForm) -> str:
        cleaned = form.cleaned_data
        made = create_container(
            actor=member,
            now=timezone.now(),
            name=cleaned["name"],
            stream=get_stream_for(member, cleaned["stream"]),
            place=cleaned["place"] and get_place_for(member, cleaned["place"]),
            capacity=cleaned["capacity"] and cleaned["capacity"].base,
            material=cleaned["material"],
            tare=cleaned["tare"] and cleaned["tare"].base,
        )
        return address("waste-container", member, made.vessel.uuid)

    words = {"heading": _("Put up a waste container"), "button": _("Put it up"), "back": address("waste", member)}
    return fill_in(request, member, ContainerForm(member, sent(request)), act, here="waste", **words)
