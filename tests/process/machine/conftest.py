"""One program in which people act and die, for all tests of this folder."""

from collections import Counter
from collections.abc import Iterator

import pytest
from pytest_django import Settings

from tests.process.machine.machine import BUSY
from tests.process.machine.office import Office
from tests.process.machine.people import Line, begin, line_to_people


@pytest.fixture(scope="session")
def line(django_db_setup: None, tmp_path_factory: pytest.TempPathFactory) -> Iterator[Line]:
    """Give a line to people on the tests' database."""
    with line_to_people(tmp_path_factory.mktemp("people")) as line:
        yield line


@pytest.fixture
def office(line: Line, transactional_db: None, settings: Settings) -> Office:
    """Give a workshop in use, with a copper line made up nine days ago."""
    settings.ATTACHMENTS = line.data / "attachments"
    office = Office(line, {}, Counter())
    for entry in begin(office.shop):
        office.books.add(entry)
    return office


@pytest.fixture
def busy(office: Office, monkeypatch: pytest.MonkeyPatch) -> Office:
    """Give such a workshop in which everything late is left to the job, three entries a step."""
    office.limits = BUSY
    for name, limit in BUSY.items():
        monkeypatch.setattr(name, limit)
    return office
