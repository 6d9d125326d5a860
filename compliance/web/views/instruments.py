"""Instruments, and the level tables of tanks."""

from typing import Any
from uuid import UUID

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseBase
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.ledger.selectors import get_vessel_for
from chemicals.process.instruments import (
    change_instrument,
    create_instrument,
    get_instrument_for,
    list_instruments_for,
)
from chemicals.process.levels import list_level_marks, set_level_table
from chemicals.process.models import Instrument
from chemicals.process.selectors import get_tank_of
from chemicals.workshop.errors import InvalidInputError, NotFoundError
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer
from compliance.documents.uploads import add_file
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.instruments import InstrumentForm, LevelTableForm
from compliance.web.views.acts import address, fill_in, sent

COLUMNS = (
    Column("instrument", lambda row: row.name),
    Column("measures", lambda row: row.measures),
    Column("standard uncertainty", lambda row: row.sd_typed),
    Column("standard uncertainty as a share", lambda row: row.relative_typed),
    Column("calibrated on", lambda row: row.calibrated_on),
    Column("valid until", lambda row: row.valid_until),
    Column("retired", lambda row: "yes" if row.retired else "no"),
    Column("changed", lambda row: row.changed_at),
    Column("by", lambda row: str(row.changed_by.user)),
    Column("uuid", lambda row: str(row.uuid)),
)


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """List the instruments, those in use first."""
    rows = list_instruments_for(member)
    file = wanted_file(request, instruments=(COLUMNS, lambda: rows))
    return file or show(
        request, member, "web/instruments.html", here="tanks", instruments=rows, today=timezone.localdate()
    )


@page("GET", "POST", need=require_writer)
def add(request: HttpRequest, member: Membership) -> HttpResponse:
    """Enter an instrument."""
    return _write(request, member, None, heading=_("Enter an instrument"), button=_("Enter it"))


@page("GET", "POST", need=require_writer)
def change(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Change an instrument, or retire it."""
    row = get_instrument_for(member, uuid)
    heading = _("Change %(instrument)s") % {"instrument": row}
    intro = _("What was read with it so far keeps the figures that it relied on.")
    return _write(request, member, row, heading=heading, button=_("Save"), intro=intro)


def _write(request: HttpRequest, member: Membership, row: Instrument | None, **words: str) -> HttpResponse:
    back, now = address("instruments", member), timezone.now()

    def act(form: InstrumentForm) -> str:
        upload = form.cleaned_data["picture"]
        said = form.to_instrument(_keep(member, upload) if upload else None)
        if row is None:
            create_instrument(actor=member, now=now, instrument=said)
        else:
            change_instrument(actor=member, now=now, row=row, instrument=said)
        messages.success(request, _("Saved."))
        return back

    form = InstrumentForm(row, sent(request), request.FILES or None)
    return fill_in(request, member, form, act, here="tanks", back=back, **words)


def _keep(member: Membership, upload: Any) -> Any:
    """Keep a picture; what is wrong with the file is told under its field."""
    try:
        return add_file(actor=member, now=timezone.now(), name=upload.name, data=upload.read())
    except InvalidInputError as error:
        raise InvalidInputError.of("picture", error.errors[0].message) from error


@page("GET", "POST", need=require_writer)
def level_table(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponse:
    """Enter the level table of a tank as a whole."""
    vessel = get_vessel_for(member, uuid)
    if get_tank_of(vessel) is None:
        raise NotFoundError("This vessel is neither a bath nor a rinse.")
    back = address("vessel", member, vessel.uuid)

    def act(form: LevelTableForm) -> str:
        set_level_table(actor=member, now=timezone.now(), vessel=vessel, marks=form.to_marks())
        messages.success(request, _("Saved."))
        return back

    words = {
        "heading": _("Level table of %(tank)s") % {"tank": vessel},
        "button": _("Save the table"),
        "intro": _("Which height, or which mark, stands for how much. Between two heights it is a straight line."),
    }
    form = LevelTableForm(list_level_marks(vessel), sent(request))
    return fill_in(request, member, form, act, here="tanks", back=back, **words)
