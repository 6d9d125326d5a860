"""A second shop of the same make, to compare with."""

from datetime import datetime

import pytest

from chemicals.workshop.models import Membership
from tests.process.conftest import furnish
from tests.process.shop import Shop


@pytest.fixture
def other_shop(stranger: Membership, now: datetime) -> Shop:
    """The same shop in another workshop, of the same zone."""
    stranger.workshop.time_zone = "Europe/Berlin"
    stranger.workshop.save()
    return furnish(Shop(stranger, now))
