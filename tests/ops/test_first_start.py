"""The first start: whoever reads the terminal becomes the first owner, and nobody else does."""

from datetime import UTC, datetime
from pathlib import Path

import pytest
from pytest_django import Settings

from chemicals.workshop.errors import InvalidInputError
from chemicals.workshop.models import Membership, Role, User, Workshop
from compliance.ops.first_start import FirstStartOverError, complete_first_start, ensure_token, token_is_valid

NOW = datetime(2026, 3, 1, 9, 0, tzinfo=UTC)

pytestmark = pytest.mark.django_db


@pytest.fixture
def data(tmp_path: Path, settings: Settings) -> Path:
    settings.DATA = tmp_path
    return tmp_path


def complete(token: str, **changes: str) -> Membership:
    values = {
        "workshop_name": "Bench and bath",
        "time_zone": "Europe/Berlin",
        "name": "Ada",
        "email": "ada@example.org",
        "password": "quiet copper kettle",
    }
    return complete_first_start(token=token, now=NOW, **(values | changes))


def token_of(data: Path) -> str:
    token = ensure_token(data)
    assert token is not None
    return token


def test_the_first_start_makes_an_owner_and_uses_the_token_up(data: Path) -> None:
    token = token_of(data)
    member = complete(token)
    assert (member.role, member.user.email, member.workshop.name) == (Role.OWNER, "ada@example.org", "Bench and bath")
    assert not token_is_valid(token)
    assert ensure_token(data) is None
    with pytest.raises(FirstStartOverError):
        complete(token, email="eve@example.org")
    assert User.objects.count() == 1


def test_the_folder_keeps_no_token_that_could_be_read(data: Path) -> None:
    token = token_of(data)
    kept = data / "first-start-token"
    assert token not in kept.read_text()
    assert kept.stat().st_mode & 0o777 == 0o600


def test_only_the_token_printed_last_is_valid(data: Path) -> None:
    earlier, latest = token_of(data), token_of(data)
    assert (token_is_valid(earlier), token_is_valid(latest), token_is_valid("")) == (False, True, False)


def test_a_token_is_void_as_soon_as_there_is_a_user(data: Path) -> None:
    token = token_of(data)
    User.objects.create_user("somebody@example.org")
    assert not token_is_valid(token)


def test_all_errors_come_at_once_and_the_token_stays_good(data: Path) -> None:
    token = token_of(data)
    with pytest.raises(InvalidInputError) as caught:
        complete(token, workshop_name=" ", time_zone="Mars/Base", email="ada", password="short")
    assert {error.field for error in caught.value.errors} == {"workshop_name", "time_zone", "email", "password"}
    assert not User.objects.exists()
    assert not Workshop.objects.exists()
    assert complete(token).role == Role.OWNER
