"""A shop with a bath, for the ledger's own questions."""

from datetime import datetime
from pathlib import Path

import pytest
from pytest_django import Settings

from chemicals.workshop.models import Membership
from tests.ledger.closing import owner_of
from tests.process.shop import Shop


@pytest.fixture
def shop(worker: Membership, now: datetime, tmp_path: Path, settings: Settings) -> Shop:
    """Return a workshop with 20 L of copper bath, 50 g/L, and a rinse of water, opened ten days ago."""
    settings.ATTACHMENTS = tmp_path
    shop = Shop(worker, now)
    shop.product("Salt", {"CuSO4.5H2O": "99 %"}, reactivity=("acid",))
    bath = shop.tank("Copper", "20 L", kind="bath", metal="Cu", valence=2, anode_kind="inert")
    rinse = shop.tank("Rinse", "10 L")
    shop.route("Plate", shop.rack("Rack", "10 mL"), bath, rinse)
    held = [{"metal": "Cu", "amount": "50 g/L"}]
    shop.record("opening", days_ago=10, vessel="Copper", volume="20 L", held=held, product="Salt", complete=True)
    shop.record("make-up", days_ago=10, tank="Rinse", level="10 L")
    return shop


@pytest.fixture
def week(shop: Shop) -> Shop:
    """A shop that has plated from six days ago until yesterday."""
    owner_of(shop)
    for days in (6, 5, 4, 3, 2, 1):
        shop.record("run", days_ago=days, label=f"run {days}", route="Plate", charge="10 Ah")
    return shop
