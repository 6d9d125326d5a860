"""A short journal: entries that name no rows of other rooms."""

from collections.abc import Callable
from datetime import datetime
from pathlib import Path
from uuid import UUID, uuid4

import pytest
from pytest_django import Settings

from chemicals.books import events
from chemicals.books.clearance import Clearance
from chemicals.books.occurred import Occurred
from chemicals.journal.services import Appended, append
from chemicals.workshop.models import Membership

ALLOWED = Clearance("allowed")
Note = Callable[..., Appended]


def hand_over(receiver: str = "The yard") -> events.HandOver:
    """Return an event of one line."""
    return events.HandOver(container="11111111-1111-4111-8111-111111111111", receiver=receiver, gross=None)


@pytest.fixture
def note(worker: Membership, now: datetime) -> Note:
    """Return a function that appends an entry, by the worker and now unless said otherwise."""

    def write(
        event: events.Event | None = None,
        *,
        key: UUID | None = None,
        occurred: Occurred | None = None,
        attachments: tuple[str, ...] = (),
        actor: Membership | None = None,
    ) -> Appended:
        return append(
            actor=actor or worker,
            now=now,
            key=key or uuid4(),
            event=event or hand_over(),
            occurred=occurred,
            clearance=ALLOWED,
            attachments=attachments,
        )

    return write


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> Path:
    """Keep the files of each test apart."""
    settings.ATTACHMENTS = tmp_path / "attachments"
    return tmp_path / "attachments"
