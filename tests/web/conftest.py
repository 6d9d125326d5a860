"""A small workshop with a copper line and a drum that must never take acid, and people who open its pages."""

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from datetime import datetime
from typing import Any
from uuid import uuid4

import pytest
import time_machine
from django.test import Client
from django.urls import reverse

from chemicals.journal.models import Entry
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.inputs import DrumOffInput, IngredientRow, Input, MakeUpInput, ReceiptInput
from chemicals.process.models import RackType, Route
from chemicals.process.setup import TankInput, create_holder, create_rack_type, create_route, create_tank
from chemicals.register.models import Product
from chemicals.register.services import LineInput, RevisionInput, create_product, create_substance
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from chemicals.workshop.services import create_place
from compliance.clearance.services import record
from compliance.waste.models import WasteContainer
from compliance.waste.services import StreamInput, create_container, create_stream

LITRE, GRAM = 10**9, 10**6
"""Base units: nanolitres and micrograms."""


class Visitor:
    """A member with a browser, in one workshop."""

    def __init__(self, member: Membership) -> None:
        self.member, self.client = member, Client()
        self.client.force_login(member.user, backend="django.contrib.auth.backends.ModelBackend")

    def address(self, name: str, *args: object) -> str:
        """Return the address of a page of the workshop."""
        return reverse(name, args=[self.member.workshop.uuid, *args])

    def get(self, name: str, /, *args: object, query: str = "") -> Any:
        """Open a page."""
        return self.client.get(self.address(name, *args) + query)

    def post(self, name: str, /, *args: object, **said: object) -> Any:
        """Send a form."""
        return self.client.post(self.address(name, *args), said)


def text_of(response: Any) -> str:
    """Return a page without line breaks and runs of blanks."""
    return " ".join(response.content.decode().split())


@pytest.fixture(autouse=True)
def _clock(now: datetime) -> Iterator[None]:
    """Let the pages read the moment that tests agree on, and go on from there."""
    with time_machine.travel(now, tick=True):
        yield


@pytest.fixture
def visit(owner: Membership) -> Visitor:
    """Return the owner at a browser."""
    return Visitor(owner)


@dataclass(frozen=True)
class Line:
    """The things of the small workshop."""

    salt: Product
    tub: Vessel
    acid: Vessel
    bath: Vessel
    rinse: Vessel
    rack: RackType
    route: Route
    drum: WasteContainer
    cyanide_drum: WasteContainer


@pytest.fixture
def line(owner: Membership, now: datetime) -> Line:
    """Return a copper line: salt in a tub, acid, a bath, its rinse, a drum for rinse and one for cyanide."""
    make: dict[str, Any] = {"actor": owner, "now": now}
    place = create_place(actor=owner, name="Bench")
    sulfate = create_substance(actor=owner, name="Copper sulfate", cas_number="7758-99-8", formula="CuSO4.5H2O")
    known = RevisionInput(
        form="solid",
        lines=(LineInput(sulfate, "100 %"),),
        signal_word="Danger",
        pictograms=("GHS05", "GHS09"),
        statements=("H318 Causes serious eye damage",),
        reactivity=("acid",),
    )
    salt = create_product(**make, name="Blue salt", supplier="Invented Supply", revision=known).product
    sour = create_product(
        **make,
        name="Acid",
        supplier="",
        revision=RevisionInput(form="liquid", density="1.8 g/mL", reactivity=("acid",)),
    ).product
    bath = TankInput(
        kind="bath", name="Copper bath", place=place, capacity=30 * LITRE, mark=20 * LITRE, metal="Cu", valence=2,
        anode_kind="inert",
    )  # fmt: skip
    tanks = [
        create_tank(**make, tank=bath).vessel,
        create_tank(**make, tank=TankInput(kind="rinse", name="Rinse", capacity=12 * LITRE)).vessel,
    ]
    rack = create_rack_type(actor=owner, name="Small rack", drag_out=LITRE // 100, area=4_400)
    rinse = StreamInput(name="Copper rinse", origin="Copper line", reactivity=("acid",))
    poison = StreamInput(name="Cyanide waste", origin="Silver line", reactivity=("cyanide",))
    drums = [
        create_container(**make, name=name, stream=create_stream(actor=owner, stream=stream), capacity=25 * LITRE)
        for name, stream in (("Drum 7", rinse), ("Can 2", poison))
    ]
    return Line(
        salt=salt,
        tub=create_holder(**make, kind=VesselKind.STOCK, name="Salt tub", product=salt),
        acid=create_holder(**make, kind=VesselKind.STOCK, name="Acid bottle", product=sour),
        bath=tanks[0],
        rinse=tanks[1],
        rack=rack,
        route=create_route(actor=owner, name="Copper line", rack=rack, vessels=tanks),
        drum=drums[0],
        cyanide_drum=drums[1],
    )


Say = Callable[[Input], Entry]


@pytest.fixture
def say(owner: Membership, now: datetime) -> Say:
    """Return a function that records what the owner says."""
    return lambda data: record(actor=owner, now=now, key=uuid4(), data=data).entry


@pytest.fixture
def filled(line: Line, say: Say) -> Line:
    """Return the line with 4 kg of salt in 20 L of bath, and 5 L of it in the rinse's drum."""
    say(ReceiptInput(vessel=line.tub.uuid, amount=parse("5 kg", "mass")))
    say(
        MakeUpInput(
            tank=line.bath.uuid,
            ingredients=(IngredientRow(stock=line.tub.uuid, amount=parse("4 kg", "mass")),),
            level=parse("20 L", "volume"),
        )
    )
    say(MakeUpInput(tank=line.rinse.uuid, level=parse("10 L", "volume")))
    say(DrumOffInput(source=line.bath.uuid, target=line.drum.vessel.uuid, volume=parse("5 L", "volume")))
    return line
