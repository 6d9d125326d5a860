"""A workshop without a register, and one beside it."""

from datetime import datetime

import pytest

from chemicals.workshop.models import Membership
from tests.process.importing.register.shelf import Shelf


@pytest.fixture
def shelf(worker: Membership, now: datetime) -> Shelf:
    return Shelf(worker, now)


@pytest.fixture
def other_shelf(stranger: Membership, now: datetime) -> Shelf:
    return Shelf(stranger, now)
