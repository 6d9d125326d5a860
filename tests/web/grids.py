"""What tests of the grids share: the names of their fields, and what was recorded."""

import re

from django_scopes import scope

from chemicals.books.events import DaySheet
from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_event
from tests.web.conftest import Line, Visitor


def loads(line: Line, before: str = "") -> str:
    """Return the name of the field for the line's loads."""
    return f"{before}loads-{line.route.uuid}-{line.rack.uuid}"


def charge(line: Line, before: str = "") -> str:
    """Return the name of the field for the bath's ampere-hours."""
    return f"{before}charge-{line.bath.uuid}"


def entries(visit: Visitor, kind: str) -> list[Entry]:
    """Return what was recorded of a kind, in order."""
    with scope(workshop=visit.member.workshop):
        return list(Entry.objects.filter(kind=kind).order_by("sequence"))


def sheet(entry: Entry) -> DaySheet:
    """Return what a day sheet says."""
    event = read_event(entry)
    assert isinstance(event, DaySheet)
    return event


def field(page: str, name: str) -> str:
    """Return the input of a page that has a name."""
    found = re.search(rf'<input[^>]*name="{re.escape(name)}"[^>]*>', page)
    assert found is not None, name
    return found[0]
