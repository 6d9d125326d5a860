"""A small workshop for the bench: one bath, one rinse, one route."""

from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from uuid import uuid4

from chemicals.books.occurred import Occurred
from chemicals.journal.services import Appended
from chemicals.process.inputs import HeldRow, Input, OpeningInput, RunInput
from chemicals.process.models import Route, Tank
from chemicals.process.setup import TankInput, create_rack_type, create_route, create_tank
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from chemicals.workshop.services import create_user, create_workshop
from compliance.clearance.services import record

START = datetime(2026, 1, 5, 8, 0, tzinfo=UTC)


@dataclass
class Bench:
    """A workshop with a clock of its own: every entry happens a minute after the last."""

    member: Membership
    bath: Tank
    rinse: Tank
    route: Route
    minutes: int = 0

    def record(self, data: Input) -> Appended:
        """Record through the door that faces use."""
        self.minutes += 1
        moment = START + timedelta(minutes=self.minutes)
        return record(actor=self.member, now=moment, key=uuid4(), data=data, occurred=Occurred(moment))

    def run(self) -> Appended:
        """Record one run: plated by ampere-hours, rinsed."""
        return self.record(RunInput(route=self.route.uuid, charge=parse("2 mAh", "charge")))


def make_bench(name: str) -> Bench:
    """Create a workshop with a copper bath of 20 L and a rinse of 10 L."""
    user = create_user(email=f"{name}@bench.example", password="gilt-edge-4711", name=name)
    member = create_workshop(now=START, name=name, time_zone="UTC", owner=user)
    bath = create_tank(actor=member, now=START, tank=TankInput(kind="bath", name="bath", metal="Cu", valence=2))
    rinse = create_tank(actor=member, now=START, tank=TankInput(kind="rinse", name="rinse"))
    rack = create_rack_type(actor=member, name="rack", drag_out=100_000)
    route = create_route(actor=member, name="route", rack=rack, vessels=[bath.vessel, rinse.vessel])
    bench = Bench(member, bath, rinse, route)
    copper = HeldRow(metal="Cu", amount=parse("50 g/L", "concentration"))
    bench.record(OpeningInput(vessel=bath.vessel.uuid, volume=parse("20 L", "volume"), held=(copper,), complete=True))
    bench.record(OpeningInput(vessel=rinse.vessel.uuid, volume=parse("10 L", "volume"), complete=True))
    return bench
