"""The invented workshop of the machine, its two people, and the program through which they may be killed."""

import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from datetime import datetime
from itertools import count
from multiprocessing import Pipe
from multiprocessing.connection import Connection
from pathlib import Path
from subprocess import Popen

from chemicals.journal.models import Entry
from chemicals.ledger.models import VesselKind
from chemicals.process.instruments import InstrumentInput, create_instrument
from chemicals.workshop.models import Membership, Role, Workshop
from tests.conftest import make_member
from tests.jobs.processes import ROOT, environment, kill
from tests.process.machine.acting import Act, Answer
from tests.process.shop import Shop

PROGRAM = "from tests.process.machine.acting import main; main()"
NUMBERS = count(1)

VESSELS = {
    VesselKind.STOCK: ("Salt", "Acid", "Cyanide"),
    VesselKind.ANODE: ("Anodes",),
    VesselKind.BATH: ("Copper", "Zinc"),
    VesselKind.RINSE: ("First rinse", "Second rinse"),
    VesselKind.RACKS: ("Build-up",),
    VesselKind.FILTER: ("Filter",),
    VesselKind.CARBON: ("Carbon",),
    VesselKind.RESIN: ("Resin",),
    VesselKind.RECOVERY_CELL: ("Cell",),
    VesselKind.SLUDGE: ("Sludge",),
    VesselKind.WASTE: ("Acid drum", "Alkaline drum"),
}
THINGS = {
    "product": ("Copper salt", "Sulphuric acid", "Copper cyanide"),
    "route": ("Copper line", "Zinc line"),
    "rack type": ("Small part", "Barrel"),
    "receiver": (),
    "instrument": ("level", "weight", "analysis", "pH"),
}


def open_workshop(now: datetime) -> tuple[Shop, Membership, Membership]:
    """Return a furnished workshop of nobody else, with its owner and its worker."""
    number = next(NUMBERS)
    workshop = Workshop.objects.create(name=f"Machine {number}", time_zone="Europe/Berlin", created_at=now)
    owner, worker = (make_member(workshop, role, f"{role}{number}@alder.example") for role in (Role.OWNER, Role.WORKER))
    shop = Shop(worker, now)
    furnish(shop)
    return shop, owner, worker


def furnish(shop: Shop) -> None:
    """Put up a copper line on soluble anodes and a zinc line on inert ones, which share a rinse."""
    inert = {"inert": ("NaCl",)}
    salt = shop.product("Copper salt", {"CuSO4.5H2O": "99 %", "NaCl": "1 %"}, reactivity=("acid",), **inert)
    acid = shop.product("Sulphuric acid", {"H2SO4": "96 %"}, form="liquid", density="1.84 g/mL", reactivity=("acid",))
    cyanide = shop.product("Copper cyanide", {"CuCN": "60 %", "NaCN": "39 %"}, reactivity=("cyanide",))
    metal = shop.product("Anode copper", {"Cu": "99.9 %"})
    products = {"Salt": salt, "Acid": acid, "Cyanide": cyanide, "Anodes": metal}
    solid = [kind for kind in VESSELS if kind not in (VesselKind.BATH, VesselKind.RINSE, VesselKind.WASTE)]
    holders = {name: shop.holder(name, products.get(name), kind) for kind in solid for name in VESSELS[kind]}
    rinses = [shop.tank(name, "10 L") for name in VESSELS[VesselKind.RINSE]]
    grows = {"racks": holders["Build-up"], "rack_share": 20_000}
    copper = shop.tank(
        "Copper", "20 L", kind="bath", metal="Cu", valence=2, anode_kind="soluble", anode=holders["Anodes"], **grows
    )
    zinc = shop.tank("Zinc", "15 L", kind="bath", metal="Zn", valence=2, anode_kind="inert", side_reaction="alkali")
    shop.route("Copper line", shop.rack("Small part", "4 mL", "44 cm2"), copper, *rinses)
    shop.route("Zinc line", shop.rack("Barrel", "60 mL"), zinc, rinses[1])
    for measured in THINGS["instrument"]:
        said = InstrumentInput(name=measured, measures=measured, relative_sd="1 %" if measured != "pH" else "")
        create_instrument(actor=shop.member, now=shop.now, instrument=said)
    shop.drum("Acid drum")
    shop.drum("Alkaline drum", reactivity=("cyanide",), capacity=30 * 10**9)


def begin(shop: Shop) -> list[Entry]:
    """Buy, make the copper bath up and open the rest, nine days ago."""
    shop.record("receipt", days_ago=9.5, label="1", vessel="Salt", amount="9 kg")
    shop.record("receipt", days_ago=9.4, label="2", vessel="Acid", amount="2.5 L")
    shop.record("receipt", days_ago=9.3, label="3", vessel="Anodes", amount="5 kg")
    salt, acid = {"stock": "Salt", "amount": "4 kg"}, {"stock": "Acid", "amount": "0.6 L"}
    shop.record("make-up", days_ago=9.2, label="4", tank="Copper", ingredients=[salt, acid], level="20 L")
    shop.record("make-up", days_ago=9.1, label="5", tank="First rinse", level="10 L")
    held = [{"metal": "Zn", "amount": "10 g/L"}, {"metal": "alkali", "amount": "3 mol/L"}]
    shop.record("opening", days_ago=9, label="6", vessel="Zinc", volume="15 L", held=held, complete=True)
    return list(shop.entries.values())


class Line:
    """To the program in which people act, and die."""

    def __init__(self, line: "Connection[Sequence[Act], list[Answer | None]]", data: Path) -> None:
        self._line = line
        self.data = data
        """The data folder of those people."""

    def act(self, *acts: Act) -> list[Answer | None]:
        """Let people act at once; None for who was killed."""
        self._line.send(acts)
        return self._line.recv()


@contextmanager
def line_to_people(data: Path) -> Iterator[Line]:
    """Start the program on the test's database; it does not outlive the test."""
    ours, theirs = Pipe()
    command = [sys.executable, "-c", PROGRAM, str(theirs.fileno())]
    program = Popen(command, cwd=ROOT, env=environment(data), pass_fds=[theirs.fileno()], start_new_session=True)
    theirs.close()
    try:
        assert ours.recv() == "ready"
        yield Line(ours, data)
    finally:
        kill(program)
        ours.close()
