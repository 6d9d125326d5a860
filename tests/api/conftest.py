"""A small workshop, and people who ask the API with a token."""

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from datetime import datetime
from typing import Any
from uuid import UUID, uuid4

import pytest
import time_machine
from rest_framework.test import APIClient

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.models import RackType, Route
from chemicals.process.setup import TankInput, create_holder, create_rack_type, create_route, create_tank
from chemicals.register.models import Product, Substance
from chemicals.register.services import LineInput, RevisionInput, create_product, create_substance
from chemicals.workshop.models import Membership, Place, Role, Workshop
from chemicals.workshop.services import create_place, create_token
from compliance.dropoffs.models import Receiver
from compliance.dropoffs.services import create_receiver
from compliance.waste.models import WasteContainer, WasteStream
from compliance.waste.services import StreamInput, create_container, create_stream

LITRE, GRAM = 10**9, 10**6
"""Base units: nanolitres and micrograms."""

Json = Any


class Caller:
    """A member with a token, inside one workshop."""

    def __init__(self, token: str, workshop: UUID) -> None:
        self.client = APIClient()
        self.token, self.workshop = token, workshop
        self.client.credentials(HTTP_AUTHORIZATION=f"Bearer {token}")

    def path(self, address: str) -> str:
        """Return a path of the workshop; one that begins with a slash is meant from the top of the API."""
        return f"/api/v1{address}" if address.startswith("/") else f"/api/v1/workshops/{self.workshop}/{address}"

    def get(self, address: str, query: Mapping[str, str] | None = None) -> Any:
        """Read."""
        return self.client.get(self.path(address), query)

    def post(self, address: str, said: Json = None, *, key: UUID | str | None = None) -> Any:
        """Write."""
        headers = {} if key is None else {"Idempotency-Key": str(key)}
        return self.client.post(self.path(address), {} if said is None else said, format="json", headers=headers)

    def record(self, verb: str, key: UUID | None = None, /, **said: Json) -> Any:
        """Record with a fresh key, unless one is given."""
        return self.post(f"record/{verb}", said, key=key or uuid4())


def errors_of(response: Any, status: int) -> dict[str, str]:
    """Return the messages of a refusal by field, after its status and shape were checked."""
    said = response.json()
    assert response.status_code == status, said
    assert set(said) <= {"errors", "reasons"}
    assert all(set(row) == {"field", "message"} and row["message"] for row in said["errors"])
    assert said["errors"]
    return {row["field"]: row["message"] for row in said["errors"]}


@pytest.fixture(autouse=True)
def _clock(now: datetime) -> Iterator[None]:
    """Let the API read the moment that tests agree on, and go on from there."""
    with time_machine.travel(now, tick=True):
        yield


@pytest.fixture
def call(now: datetime) -> Callable[[Membership], Caller]:
    """Return a function that gives a member a token; an observer had it from an earlier role."""

    def give(member: Membership) -> Caller:
        role = member.role
        member.role = Role.WORKER
        token = create_token(actor=member, now=now, name="tests")[1]
        member.role = role
        return Caller(token, member.workshop.uuid)

    return give


@pytest.fixture
def api(call: Callable[[Membership], Caller], owner: Membership) -> Caller:
    """Return the owner of the workshop."""
    return call(owner)


@dataclass(frozen=True)
class Shop:
    """The things of the small workshop."""

    workshop: Workshop
    place: Place
    sulfate: Substance
    product: Product
    acid: Product
    stock: Vessel
    acid_stock: Vessel
    bath: Vessel
    rinse: Vessel
    rack: RackType
    route: Route
    stream: WasteStream
    drum: WasteContainer
    receiver: Receiver


@pytest.fixture
def shop(owner: Membership, now: datetime) -> Shop:
    """Return a workshop with a copper bath, its rinse, stock, a route, and a drum for the spent rinse."""
    make: dict[str, Any] = {"actor": owner, "now": now}
    place = create_place(actor=owner, name="Plating bench", bund="north")
    sulfate = create_substance(
        actor=owner, name="Copper sulfate pentahydrate", cas_number="7758-99-8", formula="CuSO4.5H2O"
    )
    salt = RevisionInput(
        form="solid",
        lines=(LineInput(sulfate, "98 %"),),
        statements=("H302 Harmful",),
        reactivity=("nothing",),
    )
    product = create_product(**make, name="Blue salt", supplier="Invented Supply", revision=salt).product
    sour = RevisionInput(form="liquid", density="1.1 g/mL", reactivity=("acid",))
    acid = create_product(**make, name="Battery acid", supplier="", revision=sour).product
    copper = TankInput(
        kind="bath",
        name="Copper bath",
        place=place,
        capacity=25 * LITRE,
        mark=20 * LITRE,
        metal="Cu",
        valence=2,
        anode_kind="inert",
    )
    bath = create_tank(**make, tank=copper).vessel
    rinse = create_tank(**make, tank=TankInput(kind="rinse", name="Drag-out rinse", capacity=25 * LITRE)).vessel
    rack = create_rack_type(actor=owner, name="Small rack", drag_out=LITRE // 100, area=44 * 10**2)
    stream = create_stream(
        actor=owner, stream=StreamInput(name="Cyanide rinse", origin="Silver line", reactivity=("cyanide",))
    )
    return Shop(
        workshop=owner.workshop,
        place=place,
        sulfate=sulfate,
        product=product,
        acid=acid,
        stock=create_holder(**make, kind=VesselKind.STOCK, name="Blue salt, jar 1", product=product),
        acid_stock=create_holder(**make, kind=VesselKind.STOCK, name="Battery acid, can 1", product=acid),
        bath=bath,
        rinse=rinse,
        rack=rack,
        route=create_route(actor=owner, name="Copper", rack=rack, vessels=[bath, rinse]),
        stream=stream,
        drum=create_container(**make, name="Drum 1", stream=stream, capacity=30 * LITRE, tare=1200 * GRAM),
        receiver=create_receiver(actor=owner, name="Invented Works", address="1 Example Lane"),
    )
