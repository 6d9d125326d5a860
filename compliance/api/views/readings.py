"""Instruments, level tables, and what was read at a vessel."""

from typing import Any

from django.db.models import QuerySet
from django.utils.translation import gettext as _
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.journal.selectors import get_attachment_for
from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import get_vessel_for
from chemicals.process.instruments import (
    InstrumentInput,
    change_instrument,
    create_instrument,
    get_instrument_for,
    list_instruments_for,
)
from chemicals.process.levels import MarkInput, list_level_marks, set_level_table
from chemicals.process.models import Instrument, Tank
from chemicals.process.readings import list_readings_of
from chemicals.process.selectors import get_tank_of, list_tank_changes_of
from chemicals.process.setup import TankInput, change_tank
from chemicals.workshop.errors import NotFoundError
from compliance.api.serializers import readings as shapes
from compliance.api.views.base import ListCreateView, Lookup, WorkshopView


class InstrumentsView(ListCreateView):
    """What things are measured with, retired ones included. A POST enters one."""

    shape, input_class = shapes.InstrumentShape, shapes.InstrumentInput

    def rows(self) -> QuerySet[Instrument]:
        """Return the instruments."""
        return list_instruments_for(self.member)

    def create(self, said: dict[str, Any]) -> Instrument:
        """Enter an instrument."""
        return create_instrument(actor=self.member, now=self.now, instrument=_build(self, said))


class InstrumentView(WorkshopView):
    """One instrument."""

    shape = shapes.InstrumentShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the instrument."""
        return self.respond(get_instrument_for(self.member, kwargs["uuid"]))


class ChangeInstrumentView(WorkshopView):
    """Changes an instrument: what is left out is empty. Entries so far keep the figures that they relied on."""

    shape, input_class, statuses = shapes.InstrumentShape, shapes.InstrumentChange, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Change the instrument."""
        row = get_instrument_for(self.member, kwargs["uuid"])
        said = _build(self, {**self.read_body(request), "measures": row.measures})
        return self.respond(change_instrument(actor=self.member, now=self.now, row=row, instrument=said))


def _build(view: WorkshopView, said: dict[str, Any]) -> InstrumentInput:
    lookup = Lookup(view.member)
    picture = lookup.find("picture", get_attachment_for, said.pop("picture", None))
    lookup.finish()
    return InstrumentInput(picture=picture, **said)


class _OfTank(WorkshopView):
    """Base of what belongs to a bath or a rinse."""

    def find(self, uuid: Any) -> tuple[Vessel, Tank]:
        """Return the tank with its vessel."""
        vessel = get_vessel_for(self.member, uuid)
        tank = get_tank_of(vessel)
        if tank is None:
            raise NotFoundError(_("This vessel is neither a bath nor a rinse."))
        return vessel, tank


class LevelTableView(_OfTank):
    """Which height, or which mark, stands for how much in a tank; a POST replaces the table as a whole."""

    shape, input_class, statuses = shapes.LevelTableShape, shapes.LevelTableInput, (200,)

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the table."""
        vessel, _tank = self.find(kwargs["uuid"])
        return self.respond({"marks": list_level_marks(vessel)})

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Put this table in the place of the one so far."""
        vessel, _tank = self.find(kwargs["uuid"])
        marks = [
            MarkInput(mark=row["mark"], volume=row["volume"], hot=bool(row.get("hot")))
            for row in self.read_body(request)["marks"]
        ]
        return self.respond({"marks": set_level_table(actor=self.member, now=self.now, vessel=vessel, marks=marks)})


class TankChangesView(_OfTank):
    """What was changed of how a tank is set up; a POST says how it is set up from now on, all of it."""

    shape, input_class, statuses = shapes.TankChangesShape, shapes.TankChangeInput, (200,)

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return what was changed."""
        return self._answer(self.find(kwargs["uuid"])[0])

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Change it."""
        vessel, tank = self.find(kwargs["uuid"])
        said, lookup = self.read_body(request), Lookup(self.member)
        note = said.pop("note", "")
        anode = lookup.find("anode", get_vessel_for, said.pop("anode", None))
        racks = lookup.find("racks", get_vessel_for, said.pop("racks", None))
        lookup.finish()
        data = TankInput(kind=vessel.kind, name=vessel.name, anode=anode, racks=racks, **said)
        change_tank(actor=self.member, now=self.now, row=tank, tank=data, note=note)
        return self._answer(vessel)

    def _answer(self, vessel: Vessel) -> Response:
        return self.respond({"changes": list_tank_changes_of(vessel)})


class ReadingsView(WorkshopView):
    """What was read at a vessel: readings of every kind, levels, weights, densities, analyses."""

    shape = shapes.ReadingsShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return them."""
        vessel = get_vessel_for(self.member, kwargs["uuid"])
        return self.respond({"vessel": vessel, "readings": list_readings_of(self.member, vessel)})
