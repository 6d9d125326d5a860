"""Lists: as many queries for three rows as for one, and every list as a file."""

import csv
import io
import json
import re
from collections.abc import Callable
from datetime import datetime
from decimal import Decimal
from typing import Any
from uuid import uuid4

import pytest
from django.test import RequestFactory
from openpyxl import load_workbook

from chemicals.ledger.models import VesselKind
from chemicals.process.inputs import AnalysisInput, LevelInput
from chemicals.process.setup import TankInput, create_holder, create_rack_type, create_route, create_tank
from chemicals.register.services import LineInput, RevisionInput, create_product, create_substance
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership, Place, Role
from chemicals.workshop.services import NumberInput, create_place, create_token, set_emergency_numbers
from compliance.dropoffs.services import create_drop_off, create_receiver
from compliance.premises.services import choose_rule
from compliance.waste.services import StreamInput, close_container, create_container, create_stream
from compliance.web.export import Column, wanted_file
from tests.conftest import make_member
from tests.web.conftest import LITRE, Line, Say, Visitor

COUNTS = {
    "today": 32,
    "register": 12,
    "containers": 15,
    "substances": 4,
    "tanks": 10,
    "entries": 11,
    "balance": 14,
    "waste": 9,
    "drop-offs": 6,
    "workshop": 8,
    "emergency": 15,
    "chemicals": 17,
}
"""Queries of each list page: two for the session and the person, one for the membership, the rest for the list."""


@pytest.fixture
def grow(owner: Membership, now: datetime, filled: Line, say: Say) -> Callable[[str], None]:
    """Return a function that adds one more row to every list."""
    numbers: list[NumberInput] = []
    choose_rule(actor=owner, now=now, rule="de-gefstoffv-6-12", checked_on=now.date())

    def add(name: str) -> None:
        make: dict[str, Any] = {"actor": owner, "now": now}
        numbers.append(NumberInput(f"Neighbour {name}", "000 1"))
        set_emergency_numbers(**make, numbers=numbers)
        place = create_place(actor=owner, name=f"Place {name}")
        substance = create_substance(actor=owner, name=f"Substance {name}")
        revision = RevisionInput(form="solid", lines=(LineInput(substance, "50 %"),), pictograms=("GHS07",))
        product = create_product(**make, name=f"Product {name}", supplier="", revision=revision).product
        create_holder(**make, kind=VesselKind.STOCK, name=f"Tub {name}", product=product, place=place)
        tank = TankInput(kind="rinse", name=f"Rinse {name}", place=place)
        rinse = create_tank(**make, tank=tank).vessel
        rack = create_rack_type(actor=owner, name=f"Rack {name}", drag_out=10**7)
        create_route(actor=owner, name=f"Route {name}", rack=rack, vessels=[filled.bath, rinse])
        stream = create_stream(actor=owner, stream=StreamInput(name=f"Stream {name}", origin="rinsing"))
        create_container(**make, name=f"Open {name}", stream=stream, place=place, capacity=LITRE)
        drum = create_container(**make, name=f"Drum {name}", stream=stream, place=place, capacity=LITRE)
        closed = close_container(**make, container=drum, gross=10**9)
        receiver = create_receiver(actor=owner, name=f"Receiver {name}")
        create_drop_off(**make, receiver=receiver, mode="brought", planned_for=now.date(), containers=[closed])
        make_member(owner.workshop, Role.WORKER, f"{name}@alder.example")
        create_token(**make, name=f"Token {name}")
        say(LevelInput(vessel=filled.bath.uuid, volume=parse("14 L", "volume")))
        say(AnalysisInput(vessel=filled.bath.uuid, metal="Cu", result=parse("50 g/L", "concentration")))

    return add


@pytest.mark.parametrize("name", COUNTS)
def test_a_list_asks_as_often_for_three_rows_as_for_one(
    name: str, visit: Visitor, grow: Callable[[str], None], django_assert_num_queries: Any
) -> None:
    grow("one")
    with django_assert_num_queries(COUNTS[name]):
        visit.get(name)
    grow("two")
    grow("three")
    with django_assert_num_queries(COUNTS[name]):
        page = visit.get(name)
    assert page.status_code == 200


XLSX = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet"


def rows_of(response: Any) -> list[dict[str, str]]:
    text = response.getvalue().decode("utf-8-sig")
    return list(csv.DictReader(io.StringIO(text)))


def lines_of(response: Any) -> list[Any]:
    """Return the objects of a file of JSON lines."""
    assert response.headers["Content-Type"] == "application/jsonl"
    text = response.getvalue().decode()
    assert text.endswith("\n") or not text
    return [json.loads(line) for line in text.split("\n")[:-1]]


def sheet_of(response: Any) -> list[dict[str, Any]]:
    """Return the rows of an XLSX file, formulas as they would be stored."""
    assert response.headers["Content-Type"] == XLSX
    headings, *rows = load_workbook(io.BytesIO(response.getvalue())).worksheets[0].iter_rows()
    return [{str(head.value): cell for head, cell in zip(headings, row, strict=True)} for row in rows]


@pytest.mark.parametrize("name", [name for name in COUNTS if name != "today"])
def test_every_list_is_a_file_too(name: str, visit: Visitor, grow: Callable[[str], None]) -> None:
    grow("one")
    linked = set(re.findall(r'href="(\?[^"]*as=csv)"', visit.get(name).content.decode()))
    assert linked
    for query in linked:
        response = visit.get(name, query=query.replace("&amp;", "&"))
        assert response.headers["Content-Type"] == "text/csv; charset=utf-8"
        assert response.headers["Content-Disposition"].startswith("attachment; ")
        rows = rows_of(response)
        assert rows, query
        sheet = sheet_of(visit.get(name, query=query.replace("&amp;", "&").replace("as=csv", "as=xlsx")))
        assert [[_as_text(cell.value) for cell in row.values()] for row in sheet] == [
            list(row.values()) for row in rows
        ]
        lines = lines_of(visit.get(name, query=query.replace("&amp;", "&").replace("as=csv", "as=jsonl")))
        assert [[_as_text(value) for value in line.values()] for line in lines] == [list(row.values()) for row in rows]


def _as_text(value: object) -> str:
    """Return a cell of a sheet as CSV has it: numbers of a sheet are floats of at most 15 digits."""
    if isinstance(value, float):
        return f"{Decimal(repr(value)):f}"
    return "" if value is None else str(value)


def test_each_list_links_every_kind_of_file(visit: Visitor, grow: Callable[[str], None]) -> None:
    grow("one")
    for name in [name for name in COUNTS if name != "today"]:
        page = visit.get(name).content.decode()
        kinds = [set(re.findall(rf'href="(\?[^"]*)as={kind}"', page)) for kind in ("csv", "xlsx", "jsonl")]
        assert kinds[0] == kinds[1] == kinds[2]


def test_what_people_type_never_becomes_a_formula(visit: Visitor, owner: Membership) -> None:
    typed = ['=HYPERLINK("http://x")', "+1", "-1", "@SUM(A1)", "\tTab", "#N/A"]
    for name in typed:
        Place.objects.create(workshop=owner.workshop, name=name)
    guarded = {row["place"] for row in rows_of(visit.get("workshop", query="?list=places&as=csv"))}
    assert guarded >= {name if name == "#N/A" else f"'{name}" for name in typed}
    cells = [row["place"] for row in sheet_of(visit.get("workshop", query="?list=places&as=xlsx"))]
    assert {cell.value for cell in cells} >= set(typed)
    assert {cell.data_type for cell in cells} == {"s"}


def test_numbers_are_numbers_where_a_sheet_holds_them_exactly(rf: RequestFactory) -> None:
    typed = [0, Decimal("-0.5"), Decimal("763.53849"), Decimal("123456789012.345678"), None, "bell\x07"]
    column = Column("amount", lambda row: row)
    file = wanted_file(rf.get("/?as=xlsx"), amounts=([column], lambda: typed))
    assert [row["amount"].value for row in sheet_of(file)] == [0, -0.5, 763.53849, "123456789012.345678", None, "bell"]
    assert wanted_file(rf.get("/?as=pdf"), amounts=([column], lambda: typed)) is None


def test_every_list_of_a_page_has_its_own_file(visit: Visitor, grow: Callable[[str], None]) -> None:
    grow("one")
    for name, first in (("stock", "vessel"), ("rack_types", "rack type"), ("routes", "route"), ("places", "place")):
        page = {"stock": "containers", "places": "workshop"}.get(name, "tanks")
        assert first in rows_of(visit.get(page, query=f"?list={name}&as=csv"))[0]
    assert visit.get("tanks", query="?list=secrets&as=csv").status_code == 404


def test_the_file_of_tanks_has_one_line_for_each_content_in_plain_units(visit: Visitor, filled: Line) -> None:
    rows = [row for row in rows_of(visit.get("tanks", query="?as=csv")) if row["vessel"] == "Copper bath"]
    assert [(row["component"], row["amount"], row["unit"]) for row in rows if row["component"] != "gross mass"] == [
        ("volume", "15", "L"),
        ("Cu", "763.53849", "g"),
    ]


def test_the_file_of_entries_is_what_the_filter_shows(visit: Visitor, filled: Line) -> None:
    rows = rows_of(visit.get("entries", query="?kind=make-up&as=csv"))
    assert [row["kind"] for row in rows] == ["make-up", "make-up"]
    assert len(rows_of(visit.get("entries", query=f"?vessel={filled.drum.vessel.uuid}&as=csv"))) == 1
    assert rows_of(visit.get("entries", query="?since=2026-03-03&as=csv")) == []
    assert len(rows_of(visit.get("entries", query="?since=2026-03-02&until=2026-03-02&as=csv"))) == 4


def test_a_filter_that_cannot_be_read_says_so(visit: Visitor, filled: Line) -> None:
    page = visit.get("entries", query="?since=yesterday").content.decode()
    assert "Write the date like 2026-03-02." in page


def test_fifty_entries_to_a_page(visit: Visitor, filled: Line, say: Say) -> None:
    for number in range(48):
        say(LevelInput(vessel=filled.bath.uuid, volume=parse(f"{15_000 - number} mL", "volume")))
    first = visit.get("entries").content.decode()
    assert "52 entries" in first
    assert "page=2" in first
    assert visit.get("entries", query="?page=2").content.decode().count('<a class="line"') == 2
    assert str(uuid4()) not in first
