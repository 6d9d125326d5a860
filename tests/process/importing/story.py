"""What happened in a copper shop in January, as a file and as it is recorded one by one."""

from datetime import UTC, datetime, timedelta
from typing import Any
from uuid import uuid4

from django_scopes import scope

from chemicals.journal.models import Entry
from chemicals.ledger.periods import close_period
from chemicals.process.importing.files import add_import, find_map, read_table
from chemicals.process.models import Import
from chemicals.workshop.models import Membership, Role
from compliance.clearance.importing import record_import
from tests.process.importing.sheets import lines
from tests.process.shop import Shop

HEADINGS = (
    "Key,Date,Verb,Vessel,Tank,Source,Amount,Level,Volume,Route,Charge,"
    "ingredients 1 stock,ingredients 1 amount,Analysis,Metal,Result"
)
STORY = (
    HEADINGS,
    "r1,2026-01-05 09:00,receipt,Jar,,,5 kg,,,,,,,,,",
    "m1,2026-01-05 10:00,make-up,,Copper,,,20 L,,,,Jar,4 kg,,,",
    "m2,2026-01-05 10:05,make-up,,First rinse,,,10 L,,,,,,,,",
    "p1,2026-01-06 09:00,run,,,,,,,Plate,1.8 Ah,,,,,",
    "p2,2026-01-07 09:00,run,,,,,,,Plate,2.4 Ah,,,,,",
    "a1,2026-01-08,analysis,Copper,,,,,,,,,,,Cu,48 g/L",
    ",,acceptance,,,,,,,,,,,a1,,",
    "l1,2026-01-09 09:00,level-reading,Copper,,,,,19.2 L,,,,,,,",
    "t1,2026-01-09 09:30,top-up,,Copper,First rinse,,,0.5 L,,,,,,,",
)
FILE = lines(*STORY)


def upload(shop: Shop, data: bytes = FILE, name: str = "book.csv") -> Import:
    return add_import(actor=shop.member, now=shop.now, name=name, data=data)


def record(shop: Shop, data: bytes = FILE, **more: Any) -> Import:
    """Import a file as its headings say."""
    found = upload(shop, data)
    chosen = find_map(found, read_table(found))
    return record_import(**{"actor": shop.member, "now": shop.now, "upload": found, "chosen": chosen, **more})


def entries(shop: Shop) -> list[Entry]:
    with scope(workshop=shop.member.workshop):
        return list(Entry.objects.order_by("sequence"))


def tell_one_by_one(shop: Shop) -> None:
    """Record the story as if somebody had been there."""

    def at(day: int, hour: int, minute: int = 0) -> float:
        return (shop.now - datetime(2026, 1, day, hour, minute, tzinfo=UTC)) / timedelta(days=1)

    shop.record("receipt", days_ago=at(5, 8), vessel="Jar", amount="5 kg")
    made = [{"stock": "Jar", "amount": "4 kg"}]
    shop.record("make-up", days_ago=at(5, 9), tank="Copper", ingredients=made, level="20 L")
    shop.record("make-up", days_ago=at(5, 9, 5), tank="First rinse", level="10 L")
    shop.record("run", days_ago=at(6, 8), route="Plate", charge="1.8 Ah")
    shop.record("run", days_ago=at(7, 8), route="Plate", charge="2.4 Ah")
    shop.record("analysis", days_ago=at(8, 11), label="a1", vessel="Copper", metal="Cu", result="48 g/L")
    shop.record("acceptance", analysis="a1")
    shop.record("level-reading", days_ago=at(9, 8), vessel="Copper", volume="19.2 L")
    shop.record("top-up", days_ago=at(9, 8, 30), tank="Copper", source="First rinse", volume="0.5 L")


def close(shop: Shop) -> None:
    """Close the books until the first of February, Berlin time."""
    Membership.objects.filter(pk=shop.member.pk).update(role=Role.OWNER)
    shop.member.refresh_from_db()
    close_period(actor=shop.member, now=shop.now, key=uuid4(), until=datetime(2026, 1, 31, 23, tzinfo=UTC))
