"""Fixtures that every room shares: two workshops with their people, a fixed now, the journal's own flush."""

from collections.abc import Iterator
from datetime import UTC, datetime
from typing import Any

import pytest
from django.core.management.commands import flush
from django.db import connections
from hypothesis import settings

from chemicals.journal import triggers
from chemicals.workshop.models import Membership, Role, User, Workshop

settings.register_profile("suite", derandomize=True, deadline=None)  # the same cases on every machine, slow ones too
settings.load_profile("suite")

NOW = datetime(2026, 3, 2, 15, 0, tzinfo=UTC)


def pytest_make_parametrize_id(val: object, argname: str) -> str | None:
    """Name bytes by their argument: those of a file may differ between two processes that share the suite."""
    return argname if isinstance(val, bytes) else None


@pytest.fixture(scope="session", autouse=True)
def _flush_without_triggers() -> Iterator[None]:
    """Let the test suite's own flush empty the journal; product code has no such switch."""
    inner = flush.Command.handle

    def handle(self: flush.Command, **options: Any) -> Any:
        connection = connections[options["database"]]
        triggers.remove(connection)
        try:
            return inner(self, **options)
        finally:
            triggers.install(connection)

    patch = pytest.MonkeyPatch()
    patch.setattr(flush.Command, "handle", handle)
    yield
    patch.undo()


@pytest.fixture
def now() -> datetime:
    """Return a moment that tests agree on."""
    return NOW


def make_member(workshop: Workshop, role: Role, email: str) -> Membership:
    """Create a person with a role in a workshop; the password is the address."""
    user = User.objects.create_user(email, email, name=email.partition("@")[0].title())
    return Membership.objects.create(workshop=workshop, user=user, role=role)


@pytest.fixture
def workshop(db: None, now: datetime) -> Workshop:
    """Return a workshop in Berlin time."""
    return Workshop.objects.create(name="Alder Court", time_zone="Europe/Berlin", created_at=now)


@pytest.fixture
def owner(workshop: Workshop) -> Membership:
    """Return the owner of the workshop."""
    return make_member(workshop, Role.OWNER, "olga@alder.example")


@pytest.fixture
def worker(workshop: Workshop) -> Membership:
    """Return a worker of the workshop."""
    return make_member(workshop, Role.WORKER, "wim@alder.example")


@pytest.fixture
def observer(workshop: Workshop) -> Membership:
    """Return an observer of the workshop."""
    return make_member(workshop, Role.OBSERVER, "odd@alder.example")


@pytest.fixture
def stranger(db: None, now: datetime) -> Membership:
    """Return the owner of another workshop."""
    other = Workshop.objects.create(name="Birch Yard", time_zone="America/New_York", created_at=now)
    return make_member(other, Role.OWNER, "sten@birch.example")
