"""A workshop as its people speak of it: things have names, amounts are typed, records go through the door."""

from collections.abc import Sequence
from datetime import datetime, timedelta
from typing import Any
from uuid import UUID, uuid4

import pytest
from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.journal.models import Entry
from chemicals.ledger.models import Finding, Holding, Posting, Vessel, VesselKind
from chemicals.ledger.services import create_vessel
from chemicals.ledger.verify import verify_projection
from chemicals.process import setup
from chemicals.process.build import build
from chemicals.process.inputs import INPUTS, Input
from chemicals.process.models import Instrument, RackType, Route
from chemicals.register.models import Product
from chemicals.register.services import LineInput, RevisionInput, create_product, create_substance
from chemicals.science.quantity import parse
from chemicals.workshop.errors import InvalidInputError
from chemicals.workshop.models import Membership
from compliance.clearance.services import record
from compliance.ops.demo_reader import read_input
from compliance.waste import services as waste
from compliance.waste.models import WasteContainer

G, KG, ML, L = 10**6, 10**9, 10**6, 10**9
"""Micrograms in a gram and a kilogram, nanolitres in a millilitre and a litre."""


class Shop:
    """One workshop, seen by one member who records."""

    def __init__(self, member: Membership, now: datetime) -> None:
        self.member = member
        self.now = now
        self.entries: dict[str, Entry] = {}

    def product(self, name: str, lines: dict[str, str], *, inert: Sequence[str] = (), **sheet: Any) -> Product:
        """Register a product; lines: formula -> content; ``inert`` names formulas that react with nothing here."""
        found = []
        for formula, content in lines.items():
            named = f"{formula} of {name}"
            substance = create_substance(actor=self.member, name=named, formula=formula, inert=formula in inert)
            found.append(LineInput(substance, content))
        said = RevisionInput(lines=tuple(found), **{"form": "solid", **sheet})
        return create_product(actor=self.member, now=self.now, name=name, supplier="Anyone", revision=said).product

    def holder(self, name: str, product: Product | None = None, kind: str = "stock") -> Vessel:
        """Put up a stock container, an anode set, or what stands for solids."""
        return create_vessel(actor=self.member, now=self.now, kind=VesselKind(kind), name=name, product=product)

    def tank(self, name: str, mark: str = "", **said: Any) -> Vessel:
        """Put up a bath or a rinse."""
        level = parse(mark, "volume").base if mark else None
        tank = setup.TankInput(name=name, mark=level, **{"kind": "rinse", **said})
        return setup.create_tank(actor=self.member, now=self.now, tank=tank).vessel

    def rack(self, name: str, drag_out: str, area: str = "") -> RackType:
        """Enter a rack type."""
        size = parse(area, "area").base if area else None
        return setup.create_rack_type(actor=self.member, name=name, drag_out=parse(drag_out, "volume").base, area=size)

    def route(self, name: str, rack: RackType, *vessels: Vessel) -> Route:
        """Enter a route."""
        return setup.create_route(actor=self.member, name=name, rack=rack, vessels=list(vessels))

    def drum(self, name: str, reactivity: Sequence[str] = ("acid",), **said: Any) -> WasteContainer:
        """Put up a waste container with a stream of its own."""
        about = waste.StreamInput(name=f"Stream of {name}", origin="plating", reactivity=tuple(reactivity))
        stream = waste.create_stream(actor=self.member, stream=about)
        return waste.create_container(actor=self.member, now=self.now, name=name, stream=stream, **said)

    def read(self, verb: str, **said: Any) -> Input:
        """Return the input of a verb; vessels, routes, products and entries stand there by name."""
        data: Input = read_input(INPUTS[verb], said, self.find)
        return data

    def event(self, verb: str, **said: Any) -> Any:
        """Return the event that recording would write, with the figures that it relies on."""
        with scope(workshop=self.member.workshop):
            return build(self.member, self.now, self.read(verb, **said), None).event

    def wrong(self, verb: str, **said: Any) -> dict[str, str]:
        """Return everything that is wrong with what was said, by field; nothing must have been written."""
        before = self.ledger()
        with pytest.raises(InvalidInputError) as caught:
            self.record(verb, **said)
        assert self.ledger() == before
        return {error.field: error.message for error in caught.value.errors}

    def record(
        self,
        verb: str,
        *,
        days_ago: float = 0,
        label: str = "",
        happened: bool = False,
        key: UUID | None = None,
        **said: Any,
    ) -> Entry:
        """Record something, now or some days ago."""
        occurred = Occurred(self.now - timedelta(days=days_ago)) if days_ago else None
        done = record(
            actor=self.member,
            now=self.now,
            key=key or uuid4(),
            data=self.read(verb, **said),
            occurred=occurred,
            already_happened=happened,
        )
        self.entries[label] = done.entry
        return done.entry

    def find(self, table: str, name: str) -> UUID:
        """Return what a form would send for a name."""
        if table == "entries":
            return self.entries[name].uuid
        tables: dict[str, Any] = {
            "vessels": Vessel,
            "routes": Route,
            "products": Product,
            "rack_types": RackType,
            "instruments": Instrument,
        }
        with scope(workshop=self.member.workshop):
            uuid: UUID = tables[table]._default_manager.get(name=name).uuid
            return uuid

    def holds(self, vessel: Vessel) -> dict[str, int | None]:
        """Return what a vessel holds, by component; None is unknown."""
        with scope(workshop=self.member.workshop):
            return dict(Holding.objects.filter(vessel=vessel).values_list("component__code", "amount"))

    def went(self, entry: Entry, component: str) -> dict[str, int]:
        """Return what an entry moved of a component, by end: above zero it came in."""
        ends: dict[str, int] = {}
        with scope(workshop=self.member.workshop):
            rows = Posting.objects.filter(entry=entry, component__code=component).select_related("vessel")
            for row in rows:
                end = row.boundary or str(row.vessel)
                ends[end] = ends.get(end, 0) + row.amount
        return ends

    def findings(self) -> list[str]:
        """Return the codes of all findings, in order of time."""
        with scope(workshop=self.member.workshop):
            return list(Finding.objects.order_by("occurred_at", "pk").values_list("code", flat=True))

    def ledger(self) -> dict[str, Any]:
        """Return everything that the ledger says, by names, whatever the numbers of its rows are."""
        with scope(workshop=self.member.workshop):
            return {
                "holdings": sorted(
                    Holding.objects.values_list("vessel__name", "component__code", "amount", "variance", "known_part"),
                    key=str,
                ),
                "postings": sorted(
                    Posting.objects.values_list(
                        "entry__occurred_at", "component__code", "vessel__name", "boundary", "amount", "sd", "basis"
                    ),
                    key=str,
                ),
                "findings": sorted(Finding.objects.values_list("occurred_at", "code", "component"), key=str),
            }

    def is_proved(self) -> bool:
        """Say whether the ledger is what the journal says."""
        return verify_projection(self.member.workshop) == []
