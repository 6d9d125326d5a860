"""Loading the demo: into an empty database, whole or not at all, at any hour."""

import io
from datetime import UTC, datetime
from pathlib import Path

import pytest
from django.core.management import call_command
from django.core.management.base import CommandError
from django_scopes import scopes_disabled
from pytest_django import Settings

from chemicals.journal.models import Entry
from chemicals.workshop.models import Membership, User, Workshop
from compliance.dropoffs import services as dropoffs
from compliance.ops.demo import NotEmptyError, load_demo


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


@pytest.mark.django_db
@pytest.mark.parametrize("hour", [0, 23])
def test_nothing_lies_in_the_future_at_any_hour(hour: int) -> None:
    midnight = datetime(2026, 3, 29, hour, 30, tzinfo=UTC)  # summer time begins on this day in Berlin
    load_demo(now=midnight)
    with scopes_disabled():
        assert not Entry.objects.filter(recorded_at__gt=midnight).exists()
        assert not Entry.objects.filter(occurred_at__gt=midnight).exists()


def test_a_database_in_use_is_left_alone(owner: Membership, now: datetime) -> None:
    with pytest.raises(NotEmptyError, match="Name an empty folder in GRAMLEDGER_DATA"):
        load_demo(now=now)
    assert list(Workshop.objects.all()) == [owner.workshop]
    with pytest.raises(CommandError, match="Name an empty folder"):
        call_command("demo")


@pytest.mark.django_db
def test_a_failure_on_the_way_leaves_nothing(now: datetime, monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(*args: object, **kwargs: object) -> None:
        raise RuntimeError("the light went out")

    monkeypatch.setattr(dropoffs, "hand_over", fail)
    with pytest.raises(RuntimeError, match="light"):
        load_demo(now=now)
    assert not User.objects.exists()
    assert not Workshop.objects.exists()


@pytest.mark.django_db
def test_the_command_prints_who_can_sign_in() -> None:
    out = io.StringIO()
    call_command("demo", stdout=out)
    rows = [line.split("\t") for line in out.getvalue().splitlines()]
    assert [(email, role) for email, _, role in rows] == [
        ("ada@demo.example", "owner"),
        ("ben@demo.example", "worker"),
        ("cleo@demo.example", "observer"),
    ]
