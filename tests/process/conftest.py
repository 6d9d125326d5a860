"""Two copper shops: one as it stands on the first day, one that has plated for a while."""

from datetime import datetime
from pathlib import Path

import pytest
from pytest_django import Settings

from chemicals.workshop.models import Membership
from tests.process.shop import Shop


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


def furnish(shop: Shop) -> Shop:
    """Put up an acid copper line: stock, soluble anodes, bath, two rinses, one drum."""
    salt = shop.product("Salt", {"CuSO4.5H2O": "99 %"}, reactivity=("acid",))
    acid = shop.product("Acid", {"H2SO4": "96 %"}, form="liquid", density="1.84 g/mL", reactivity=("acid",))
    shop.holder("Jar", salt)
    shop.holder("Bottle", acid)
    anodes = shop.holder(
        "Anodes", shop.product("Anode copper", {"Cu": "99.9 %"}, reactivity=("nothing",)), kind="anode"
    )
    bath = shop.tank("Copper", "20 L", kind="bath", metal="Cu", valence=2, anode_kind="soluble", anode=anodes)
    rinses = [shop.tank("First rinse", "10 L"), shop.tank("Second rinse", "10 L")]
    rack = shop.rack("Small part", "1 mL", "44 cm2")
    shop.route("Plate", rack, bath, *rinses)
    shop.drum("Drum")
    return shop


def make_up(shop: Shop) -> Shop:
    """Buy, and make the bath and its rinses up, ten days ago."""
    shop.record("receipt", days_ago=10.5, vessel="Jar", amount="5 kg")
    shop.record("receipt", days_ago=10.4, vessel="Bottle", amount="2.5 L")
    shop.record("receipt", days_ago=10.3, vessel="Anodes", amount="2 kg")
    shop.record(
        "make-up",
        days_ago=10,
        tank="Copper",
        ingredients=[{"stock": "Jar", "amount": "4 kg"}, {"stock": "Bottle", "amount": "0.6 L"}],
        level="20 L",
    )
    shop.record("make-up", days_ago=9.9, tank="First rinse", level="10 L")
    shop.record("make-up", days_ago=9.8, tank="Second rinse", level="10 L")
    return shop


@pytest.fixture
def empty_shop(worker: Membership, now: datetime) -> Shop:
    return furnish(Shop(worker, now))


@pytest.fixture
def shop(empty_shop: Shop) -> Shop:
    return make_up(empty_shop)


@pytest.fixture
def twin(stranger: Membership, now: datetime) -> Shop:
    """The same shop in another workshop."""
    return make_up(furnish(Shop(stranger, now)))
