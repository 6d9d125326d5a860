"""The demo workshop: an invented scenario (``fixtures/demo.toml``), recorded through the same services as real use."""

import secrets
import tomllib
from collections.abc import Callable, Mapping
from dataclasses import replace
from datetime import datetime, time, timedelta
from pathlib import Path
from typing import Any
from uuid import UUID, uuid4
from zoneinfo import ZoneInfo

from django.conf import settings
from django.db import transaction
from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.journal.services import add_attachment
from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.models import VesselKind
from chemicals.ledger.periods import close_period
from chemicals.ledger.services import create_vessel
from chemicals.process import setup
from chemicals.process.counting.services import note_line, start_count
from chemicals.process.importing.files import add_import, choose_columns, find_map, read_table
from chemicals.process.inputs import INPUTS
from chemicals.process.instruments import InstrumentInput, create_instrument
from chemicals.process.levels import MarkInput, set_level_table
from chemicals.register.services import LimitInput, LineInput, RevisionInput, create_product, create_substance
from chemicals.science.quantity import parse
from chemicals.workshop.errors import ConflictError
from chemicals.workshop.models import Membership, Role, User, Workshop
from chemicals.workshop.services import (
    NumberInput,
    create_place,
    create_user,
    create_workshop,
    invite_member,
    set_emergency_numbers,
)
from compliance.clearance.counting import finish_count
from compliance.clearance.services import record
from compliance.dropoffs import services as dropoffs
from compliance.dropoffs.models import DropOff
from compliance.ops.demo_reader import read_input, read_seen
from compliance.ops.demo_sheet import draw_sheet
from compliance.premises import lines
from compliance.premises import services as premises
from compliance.waste import services as waste

SCENARIO = Path(settings.BASE_DIR) / "fixtures" / "demo.toml"
Row = Mapping[str, Any]
DemoUser = tuple[str, str, str]
"""E-mail address, password, role."""


class NotEmptyError(ConflictError):
    """There are people or workshops already; the demo has a database of its own."""


def load_demo(*, now: datetime) -> list[DemoUser]:
    """Record the demo's weeks up to yesterday; return who can sign in, with fresh random passwords.

    Raises NotEmptyError in a database that anybody uses. All or nothing.
    """
    if User.objects.exists() or Workshop.objects.exists():
        raise NotEmptyError(
            "There are people or a workshop here. Name an empty folder in GRAMLEDGER_DATA for the demo."
        )
    scenario = tomllib.loads(SCENARIO.read_text())
    with transaction.atomic():
        return Demo(scenario, now).load()


class Demo:
    """The loading of one scenario; things are known by the names that the scenario gives them."""

    def __init__(self, scenario: Row, now: datetime) -> None:
        self.scenario = scenario
        self.now = now
        self.zone = ZoneInfo(scenario["workshop"]["time_zone"])
        self.begins = self.moment(scenario["begins"])
        self.members: dict[str, Membership] = {}
        self.things: dict[str, dict[str, Any]] = {}
        """Table of the scenario -> name -> row of the database."""

    def load(self) -> list[DemoUser]:
        """Set up people and things, then let everything happen."""
        users = self.create_people()
        with scope(workshop=self.owner.workshop):
            numbers = [NumberInput(**row) for row in self.scenario["emergency_numbers"]]
            set_emergency_numbers(actor=self.owner, now=self.begins, numbers=numbers)
            checked_on = self.begins.date()
            premises.choose_rule(actor=self.owner, now=self.begins, checked_on=checked_on, **self.scenario["list_rule"])
            for table, create in self.creators().items():
                self.things[table] = {row["name"]: create(row) for row in self.scenario[table]}
            self.enter_lines()
            self.things["entries"] = {}
            for row in sorted(self.scenario["history"], key=lambda row: self.moment(row.get("recorded", row["when"]))):
                self.happen(row)
            for row in self.scenario["imports"]:
                self.upload(row)
        return users

    def enter_lines(self) -> None:
        """Enter the workshop's own lines: limits of places, and what is kept apart."""
        checked_on = self.begins.date()
        for row in self.scenario["limits"]:
            said = {**row, "amount": parse(row["amount"], "volume")}
            place, limit = self.find("places", said.pop("place")), lines.LimitInput(checked_on=checked_on, **said)
            lines.add_limit(actor=self.owner, now=self.begins, place=place, limit=limit)
        for row in self.scenario["keep_apart"]:
            line = lines.KeepApartInput(checked_on=checked_on, **row)
            lines.add_keep_apart(actor=self.owner, now=self.begins, line=line)

    @property
    def owner(self) -> Membership:
        """Return who sets everything up."""
        return next(member for member in self.members.values() if member.role == Role.OWNER)

    def moment(self, when: str) -> datetime:
        """Return the moment that "34 09:10" means: days before the loading, local time."""
        days, clock = when.split()
        day = self.now.astimezone(self.zone).date() - timedelta(days=int(days))
        return datetime.combine(day, time.fromisoformat(clock), self.zone)

    def create_people(self) -> list[DemoUser]:
        """Create the workshop and its people; the first one is its owner."""
        users: list[DemoUser] = []
        for row in self.scenario["people"]:
            password = secrets.token_urlsafe(12)
            user = create_user(email=row["email"], password=password, name=row["name"])
            if not self.members:
                workshop = self.scenario["workshop"]
                member = create_workshop(now=self.begins, owner=user, invented=True, **workshop)
            else:
                member = invite_member(actor=self.owner, email=row["email"], name=row["name"], role=row["role"])
            self.members[row["email"]] = member
            users.append((row["email"], password, row["role"]))
        return users

    def creators(self) -> Mapping[str, Callable[[Row], Any]]:
        """Return how each table of the scenario is set up, in order."""
        owner = self.owner
        return {
            "places": lambda row: create_place(actor=owner, **row),
            "substances": lambda row: create_substance(actor=owner, **row),
            "products": self.create_product,
            "vessels": self.create_vessel,
            "tanks": self.create_tank,
            "instruments": self.create_instrument,
            "rack_types": self.create_rack_type,
            "routes": self.create_route,
            "streams": lambda row: waste.create_stream(actor=owner, stream=waste.StreamInput(**_tuples(row))),
            "containers": self.create_container,
            "receivers": lambda row: dropoffs.create_receiver(actor=owner, **row),
        }

    def find(self, table: str, name: str | None) -> Any:
        """Return a thing by its name; no name, no thing."""
        return None if name is None else self.things[table][name]

    def find_vessel(self, name: str) -> Any:
        """Return a vessel by its name: a stock container, a tank or a waste container."""
        for table in ("tanks", "containers"):
            if name in self.things.get(table, {}):
                return self.things[table][name].vessel
        return self.things["vessels"][name]

    def find_uuid(self, table: str, name: str) -> UUID:
        """Return what a form would send for a name."""
        found = self.find_vessel(name) if table == "vessels" else self.things[table][name]
        uuid: UUID = found.uuid
        return uuid

    def create_product(self, row: Row) -> Any:
        """Create a product with its invented sheet."""
        row = _tuples(row)
        sheet = None
        if row.pop("sheet", False):
            data = draw_sheet(row["name"], row["supplier"], row["statements"])
            sheet = add_attachment(actor=self.owner, now=self.begins, name=f"{row['name']}.pdf", data=data)
        sheet_days = row.pop("sheet_days", None)
        name, supplier, lines, limits = row.pop("name"), row.pop("supplier"), row.pop("lines"), row.pop("limits", ())
        revision = RevisionInput(
            lines=tuple(LineInput(self.find("substances", substance), text) for substance, text in lines.items()),
            limits=tuple(
                LimitInput(**{**said, "substance": self.find("substances", said.get("substance"))}) for said in limits
            ),
            safety_data_sheet=sheet,
            sheet_date=None if sheet_days is None else self.moment(f"{sheet_days} 00:00").date(),
            **row,
        )
        made = create_product(actor=self.owner, now=self.begins, name=name, supplier=supplier, revision=revision)
        return made.product

    def create_vessel(self, row: Row) -> Any:
        """Create a stock container, an anode set, or what stands for solids."""
        keeps_days = row.get("keeps_days")
        return create_vessel(
            actor=self.owner,
            now=self.begins,
            kind=VesselKind(row["kind"]),
            name=row["name"],
            place=self.find("places", row.get("place")),
            product=self.find("products", row.get("product")),
            capacity=_base(row, "capacity", "volume"),
            expires_on=None if keeps_days is None else self.moment(f"{-keeps_days} 00:00").date(),
        )

    def create_tank(self, row: Row) -> Any:
        """Create a bath or a rinse."""
        known = {
            **row,
            "place": self.find("places", row["place"]),
            "anode": self.find("vessels", row.get("anode")),
            "racks": self.find("vessels", row.get("racks")),
            "capacity": _base(row, "capacity", "volume"),
            "mark": _base(row, "mark", "volume"),
        }
        shares = ("efficiency", "efficiency_sd", "rack_share")
        known |= {name: _base(row, name, "fraction") for name in shares if name in row}
        marks = [MarkInput(mark=mark, volume=parse(text, "volume").base) for mark, text in known.pop("levels", ())]
        tank = setup.create_tank(actor=self.owner, now=self.begins, tank=setup.TankInput(**known))
        set_level_table(actor=self.owner, now=self.begins, vessel=tank.vessel, marks=marks)
        return tank

    def create_instrument(self, row: Row) -> Any:
        """Enter an instrument with its calibration."""
        known = dict(row)
        days = {"calibrated": "calibrated_on", "valid": "valid_until"}
        dates: dict[str, Any] = {
            days[name]: self.moment(f"{known.pop(name)} 00:00").date() for name in days if name in row
        }
        return create_instrument(actor=self.owner, now=self.begins, instrument=InstrumentInput(**{**known, **dates}))

    def create_rack_type(self, row: Row) -> Any:
        """Create a rack type."""
        drag_out, area = parse(row["drag_out"], "volume").base, _base(row, "area", "area")
        return setup.create_rack_type(actor=self.owner, name=row["name"], area=area, drag_out=drag_out)

    def create_route(self, row: Row) -> Any:
        """Create a route."""
        vessels = [self.find_vessel(name) for name in row["vessels"]]
        rack = self.find("rack_types", row["rack"])
        return setup.create_route(actor=self.owner, name=row["name"], rack=rack, vessels=vessels)

    def create_container(self, row: Row) -> Any:
        """Put up a waste container."""
        known = {
            **row,
            "stream": self.find("streams", row["stream"]),
            "place": self.find("places", row["place"]),
            "capacity": _base(row, "capacity", "volume"),
            "tare": _base(row, "tare", "mass"),
        }
        return waste.create_container(actor=self.owner, now=self.begins, **known)

    def upload(self, row: Row) -> None:
        """Leave a file of past records ready to be imported."""
        file, actor = SCENARIO.parent / row["file"], self.members[row["by"]]
        upload = add_import(actor=actor, now=self.now, name=file.name, data=file.read_bytes())
        chosen = replace(find_map(upload, read_table(upload)), verb=row["verb"])
        choose_columns(actor=actor, now=self.now, upload=upload, chosen=chosen)

    def happen(self, row: Row) -> None:
        """Let one row of the history happen: a record of matter, or a step with waste and papers."""
        said = dict(row)
        actor, happened = self.members[said.pop("by")], self.moment(said.pop("when"))
        now = self.moment(said.pop("recorded")) if "recorded" in said else happened
        verb, label = said.pop("do"), said.pop("label", None)
        if verb in INPUTS:
            data = read_input(INPUTS[verb], said, self.find_uuid)
            occurred = Occurred(happened) if now != happened else None
            done = record(actor=actor, now=now, key=uuid4(), data=data, occurred=occurred)
            self.things["entries"][label or str(done.entry.uuid)] = done.entry
        else:
            steps = {
                "open containers": self.open_containers,
                "count day": self.count,
                "close container": self.close_container,
                "label container": self.label_container,
                "pack drop-off": self.pack_drop_off,
                "hand over drop-off": self.hand_over,
                "label vessels": self.label_vessels,
                "label decanted": self.label_decanted,
                "issue emergency sheet": self.issue_emergency_sheet,
                "issue chemical list": self.issue_chemical_list,
                "close period": self.close_period,
            }
            steps[verb](actor, now, said)

    def open_containers(self, actor: Membership, now: datetime, said: Row) -> None:
        """Note that containers were opened that day."""
        vessels = [self.find_vessel(name) for name in said["vessels"]]
        care = CareInput(opened_on=now.astimezone(self.zone).date())
        change_vessels(actor=actor, now=now, vessels=vessels, care=care)

    def count(self, actor: Membership, now: datetime, said: Row) -> None:
        """Walk along the shelves, a container a minute; finish, or leave the count open."""
        day = start_count(actor=actor, now=now, place=self.find("places", said.get("place")), note=said.get("note", ""))
        for row in said["lines"]:
            now += timedelta(minutes=1)
            vessel = self.find_vessel(row["vessel"])
            note_line(actor=actor, now=now, day=day, vessel=vessel, seen=read_seen(row))
        if said.get("finished", False):
            finish_count(actor=actor, now=now + timedelta(minutes=1), day=day)

    def close_container(self, actor: Membership, now: datetime, said: Row) -> None:
        """Close a container with its gross weight."""
        container, gross = self.find("containers", said["container"]), parse(said["gross"], "mass").base
        waste.close_container(actor=actor, now=now, container=container, gross=gross)
        container.refresh_from_db()

    def label_container(self, actor: Membership, now: datetime, said: Row) -> None:
        """Issue the label of a container."""
        waste.issue_label(actor=actor, now=now, key=uuid4(), container=self.find("containers", said["container"]))

    def label_vessels(self, actor: Membership, now: datetime, said: Row) -> None:
        """Issue labels of vessels on one sheet."""
        vessels = [self.find_vessel(name) for name in said["vessels"]]
        premises.issue_labels(actor=actor, now=now, key=uuid4(), vessels=vessels, stock=said["stock"])

    def label_decanted(self, actor: Membership, now: datetime, said: Row) -> None:
        """Issue the label of a small container that was filled from a vessel."""
        vessel, rest = self.find_vessel(said["vessel"]), {name: said[name] for name in ("note", "stock", "start")}
        premises.issue_decanted_label(actor=actor, now=now, key=uuid4(), vessel=vessel, **rest)

    def issue_emergency_sheet(self, actor: Membership, now: datetime, said: Row) -> None:
        """Issue the sheet for the fire brigade."""
        premises.issue_emergency_sheet(actor=actor, now=now, key=uuid4(), **said)

    def issue_chemical_list(self, actor: Membership, now: datetime, said: Row) -> None:
        """Issue the list of chemicals."""
        premises.issue_chemical_list(actor=actor, now=now, key=uuid4(), **said)

    def pack_drop_off(self, actor: Membership, now: datetime, said: Row) -> None:
        """Draft a drop-off and pack it at once."""
        drop_off = dropoffs.create_drop_off(
            actor=actor,
            now=now,
            receiver=self.find("receivers", said["receiver"]),
            mode=said["mode"],
            planned_for=self.moment(f"{said['planned_for']} 00:00").date(),
            containers=[self.find("containers", name) for name in said["containers"]],
        )
        dropoffs.pack_drop_off(actor=actor, now=now, drop_off=drop_off)

    def hand_over(self, actor: Membership, now: datetime, said: Row) -> None:
        """Hand the receiver's latest drop-off over."""
        drop_off = DropOff.objects.filter(receiver=self.find("receivers", said["receiver"])).latest("pk")
        dropoffs.hand_over(actor=actor, now=now, drop_off=drop_off)

    def close_period(self, actor: Membership, now: datetime, said: Row) -> None:
        """Close the books through a day."""
        close_period(actor=actor, now=now, key=uuid4(), until=self.moment(f"{said['through'] - 1} 00:00"))


def _tuples(row: Row) -> dict[str, Any]:
    return {name: tuple(value) if isinstance(value, list) else value for name, value in row.items()}


def _base(row: Row, name: str, dimension: str) -> int | None:
    return None if name not in row else parse(row[name], dimension).base
