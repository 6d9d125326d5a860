"""A small workshop with every kind of row that verify looks at, and somebody who writes past the program."""

import sqlite3
from collections.abc import Callable, Iterator
from contextlib import closing, contextmanager
from dataclasses import dataclass
from datetime import datetime, timedelta
from typing import Any
from uuid import uuid4

from django.db import connection

from chemicals.books.occurred import Occurred
from chemicals.journal import triggers
from chemicals.journal.services import add_attachment
from chemicals.ledger.models import Vessel
from chemicals.process.inputs import DrumOffInput, HeldRow, Input, LevelInput, OpeningInput
from chemicals.process.setup import TankInput, create_tank
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from compliance.clearance.services import record
from compliance.waste import services as waste

PHOTO = b"\x89PNG\r\n\x1a\n a photo of the gauge"


@dataclass(frozen=True)
class Books:
    """Six entries: opening, three level readings (the second one with a photo), drum off, label."""

    member: Membership
    bath: Vessel
    photo: str


def write_books(member: Membership, now: datetime) -> Books:
    """Record the six entries, a day apart."""
    bath = create_tank(actor=member, now=now, tank=TankInput(kind="bath", name="Copper", metal="Cu", valence=2)).vessel
    photo = add_attachment(actor=member, now=now, name="gauge.png", data=PHOTO).sha256
    stream = waste.create_stream(actor=member, stream=waste.StreamInput(name="Spent copper", origin="plating"))
    drum = waste.create_container(actor=member, now=now, name="Drum", stream=stream)
    held = (HeldRow(metal="Cu", amount=parse("50 g/L", "concentration")),)
    opening = OpeningInput(vessel=bath.uuid, volume=parse("20 L", "volume"), held=held, complete=True)
    steps: list[tuple[Input, tuple[str, ...]]] = [
        (opening, ()),
        *(
            (LevelInput(vessel=bath.uuid, volume=parse(level, "volume")), (photo,) if level == "19 L" else ())
            for level in ("19.5 L", "19 L", "18.5 L")
        ),
        (DrumOffInput(source=bath.uuid, target=drum.vessel.uuid, volume=parse("1 L", "volume")), ()),
    ]
    for number, (data, files) in enumerate(steps):
        happened = Occurred(now - timedelta(days=6 - number))
        record(
            actor=member, now=now, key=uuid4(), data=data, occurred=happened, attachments=files, already_happened=True
        )
    waste.issue_label(actor=member, now=now, key=uuid4(), container=drum)
    return Books(member, bath, photo)


Execute = Callable[..., Any]


@contextmanager
def intruder() -> Iterator[Execute]:
    """Open the database as another program would, with the triggers gone meanwhile."""
    if connection.vendor == "sqlite":
        connection.close()
        with closing(sqlite3.connect(connection.settings_dict["NAME"])) as database:
            for name in triggers.SQLITE:
                database.execute(f"DROP TRIGGER {name}")
            yield lambda sql, *values: database.execute(sql.replace("%s", "?"), values).fetchall()
            database.commit()
        triggers.install(connection)
        return
    with connection.cursor() as cursor:
        cursor.execute("ALTER TABLE journal_entry DISABLE TRIGGER USER")

        def execute(sql: str, *values: Any) -> Any:
            cursor.execute(sql, values)
            return cursor.fetchall() if cursor.description else []

        yield execute
        cursor.execute("ALTER TABLE journal_entry ENABLE TRIGGER USER")
