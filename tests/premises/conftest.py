"""An invented workshop with cyanide, acid, a copper bath and a waste canister, all of it made up."""

from datetime import datetime
from pathlib import Path

import pytest
from django_scopes import scope
from pytest_django import Settings

from chemicals.register.models import Product
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.services import create_place
from tests.process.shop import Shop

CYANIDE = {
    "form": "solid",
    "reactivity": ("cyanide",),
    "hazard_classes": ("Acute Tox. 1 oral", "Aquatic Acute 1"),
    "signal_word": "Danger",
    "pictograms": ("GHS06", "GHS09"),
    "statements": ("H300 Fatal if swallowed.", "EUH032 Contact with acids liberates very toxic gas.", "P280 Gloves."),
    "un_number": "1680",
    "transport_class": "6.1",
    "packing_group": "I",
}
ACID = {
    "form": "liquid",
    "density": "1.84 g/mL",
    "reactivity": ("acid",),
    "hazard_classes": ("Skin Corr. 1A",),
    "signal_word": "Danger",
    "pictograms": ("GHS05",),
    "statements": ("H314 Causes severe skin burns and eye damage.", "EUH014 Reacts violently with water.", "P280"),
    "gloves": "Butyl rubber\n0.7 mm",
    "un_number": "1830",
    "supplier_telephone": "+49 000 222",
    "transport_class": "8",
    "packing_group": "II",
}
SALT = {
    "form": "solid",
    "reactivity": ("acid",),
    "signal_word": "Warning",
    "pictograms": ("GHS07", "GHS09"),
    "statements": ("H302", "H411 Toxic to aquatic life with long lasting effects."),
}


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path
    settings.PUBLIC_URL = "http://bench.local:8000"


@pytest.fixture
def shop(owner: Membership, now: datetime) -> Shop:
    """Return a workshop with a bottle of acid, a jar of salt, a jar of cyanide, a copper bath and its rinse.

    Acid and cyanide stand in two places over one bund.
    """
    shop = Shop(owner, now)
    shelf, bench = place(shop, "Shelf", bund="tray"), place(shop, "Bench", bund="tray", exhaust_duct="hood")
    acid = shop.product("Sulfuric acid", {"H2SO4": "96 %"}, **ACID)
    salt = shop.product("Copper salt", {"CuSO4.5H2O": "99 %"}, **SALT)
    cyanide = shop.product("Potassium cyanide", {"KCN": "98 %"}, **CYANIDE)
    for name, product, where in (("Acid bottle", acid, bench), ("Salt jar", salt, shelf), ("Jar 3", cyanide, shelf)):
        vessel = shop.holder(name, product)
        vessel.place = where
        vessel.save()
    shop.tank("Copper bath", "20 L", kind="bath", metal="Cu", valence=2, bath_type="acid copper", place=bench)
    shop.tank("Rinse", "10 L", place=bench)
    return shop


def place(shop: Shop, name: str, **shared: str) -> Place:
    """Create a place."""
    return create_place(actor=shop.member, name=name, **shared)


def product_of(shop: Shop, name: str) -> Product:
    """Return a product of the shop."""
    with scope(workshop=shop.member.workshop):
        return Product.objects.get(name=name)


@pytest.fixture
def filled(shop: Shop) -> Shop:
    """Return the workshop after a purchase and a make-up: 1 L of acid and 4 kg of salt in 20 L of bath."""
    shop.record("receipt", days_ago=9, vessel="Acid bottle", amount="2.5 L")
    shop.record("receipt", days_ago=9, vessel="Salt jar", amount="5 kg")
    shop.record("receipt", days_ago=9, vessel="Jar 3", amount="250 g")
    shop.record(
        "make-up",
        days_ago=8,
        tank="Copper bath",
        ingredients=[{"stock": "Salt jar", "amount": "4 kg"}, {"stock": "Acid bottle", "amount": "1 L"}],
        level="20 L",
    )
    return shop
