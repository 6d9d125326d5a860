"""A shop with an acid copper line and a cyanide silver line, drums of each, and something to keep solids in."""

from datetime import datetime
from pathlib import Path

import pytest
from pytest_django import Settings

from chemicals.workshop.models import Membership
from tests.process.shop import L, Shop


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


@pytest.fixture
def shop(worker: Membership, now: datetime) -> Shop:
    """Return the shop after a first make-up of both lines."""
    shop = Shop(worker, now)
    liquid: dict[str, str] = {"form": "liquid", "density": "1 g/mL"}
    for name, reacts_as in {"Acid": "acid", "Cyanide": "cyanide", "Bleach": "hypochlorite", "Lye": "nothing"}.items():
        shop.holder(name, shop.product(f"{name} as bought", {}, reactivity=(reacts_as,), **liquid))
        shop.record("receipt", days_ago=9, vessel=name, amount="20 L")
    sour, silver = shop.tank("Copper", kind="bath", metal="Cu", valence=2), shop.tank("Silver", kind="bath")
    rinses = [shop.tank("Copper rinse"), shop.tank("Silver rinse")]
    made_from = {"Copper": "Acid", "Silver": "Cyanide", "Copper rinse": "Acid", "Silver rinse": "Cyanide"}
    for tank, stock in made_from.items():
        ingredients = [{"stock": stock, "amount": "1 L"}]
        shop.record("make-up", days_ago=8, tank=tank, ingredients=ingredients, level="10 L")
    rack = shop.rack("Rack", "1 mL")
    shop.route("Copper line", rack, sour, rinses[0])
    shop.route("Astray", rack, sour, silver)
    shop.drum("Sour drum", reactivity=("acid",), capacity=20 * L)
    shop.drum("Cyanide drum", reactivity=("cyanide",), capacity=20 * L)
    for kind in ("filter", "sludge", "racks", "recovery cell"):
        shop.holder(kind.title(), kind=kind)
    return shop
