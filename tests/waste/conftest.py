"""A rinse line with something to drum off."""

from datetime import datetime
from pathlib import Path

import pytest
from pytest_django import Settings

from chemicals.workshop.models import Membership
from tests.process.shop import Shop


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


@pytest.fixture
def shop(worker: Membership, now: datetime) -> Shop:
    """Return a workshop with 10 L of rinse water that holds 5 g of copper."""
    shop = Shop(worker, now)
    shop.tank("Rinse", "10 L")
    held = [{"metal": "Cu", "amount": "5 g"}]
    shop.product("Salt", {"CuSO4.5H2O": "99 %"}, reactivity=("acid",))
    shop.record("opening", days_ago=5, vessel="Rinse", volume="10 L", held=held, product="Salt", complete=True)
    return shop
