"""A day's work in grids: the morning's readings, the sheet of a day, the sheets of a week."""

import re
from collections.abc import Callable
from datetime import datetime, timedelta
from typing import Any
from uuid import uuid4

import pytest
from pytest_django import DjangoAssertNumQueries as Num

from chemicals.books.events import LevelReading
from chemicals.journal.selectors import read_event
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.inputs import DaySheetInput, IngredientRow, MakeUpInput, RacksRow, ReceiptInput
from chemicals.process.levels import MarkInput, set_level_table
from chemicals.process.models import Route
from chemicals.process.setup import TankInput, create_holder, create_rack_type, create_route, create_tank
from chemicals.register.services import RevisionInput, create_product
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from compliance.clearance.services import record
from compliance.web.forms.grid import complete
from tests.web.conftest import LITRE, Line, Say, Visitor, text_of
from tests.web.grids import charge, entries, field, loads, sheet

pytestmark = pytest.mark.django_db


class TestDaySheet:
    """The sheet of a day."""

    def post(self, visit: Visitor, now: datetime, /, **said: object) -> Any:
        start = {"key": uuid4(), "day": now.date().isoformat()}
        return visit.post("day-sheet", **{**start, **said})

    def test_it_is_previewed_and_saved_and_says_what_the_verb_says(
        self, visit: Visitor, filled: Line, now: datetime
    ) -> None:
        said = {"key": uuid4(), loads(filled): "4", charge(filled): "8"}
        page = text_of(self.post(visit, now, **said, step="preview"))
        assert "8 Ah" in page
        assert re.search(r"9\.48 ± 0\.\d+ g copper", page)
        assert entries(visit, "day sheet") == []
        saved = self.post(visit, now, **said, step="save")
        assert saved.status_code == 302
        (entry,) = entries(visit, "day sheet")
        assert (sheet(entry).racks[0].loads, sheet(entry).charges[0].charge.typed) == (4, "8 Ah")
        assert entry.precision == "minute"
        assert self.post(visit, now, **said, step="save").headers["Location"] == saved.headers["Location"]
        assert len(entries(visit, "day sheet")) == 1

    @pytest.mark.parametrize(("name", "days_ago"), [("day", 1), ("other_day", 9)])
    def test_yesterday_is_one_press_and_any_day_can_be_written(
        self, visit: Visitor, filled: Line, now: datetime, name: str, days_ago: int
    ) -> None:
        day = (now.date() - timedelta(days=days_ago)).isoformat()
        said = {loads(filled): "4", name: day}
        assert self.post(visit, now, **said, step="save").status_code == 302
        (entry,) = entries(visit, "day sheet")
        assert (entry.precision, entry.occurred_at.date().isoformat()) == ("day", day)

    def test_same_as_last_time_fills_the_numbers_and_what_was_cancelled_is_not_last_time(
        self, visit: Visitor, filled: Line, now: datetime
    ) -> None:
        assert "Same as last time" not in text_of(visit.get("day-sheet"))
        self.post(visit, now, **{loads(filled): "4", charge(filled): "8.5"}, step="save")
        self.post(visit, now, **{loads(filled): "7"}, step="save")
        last = entries(visit, "day sheet")[-1]
        visit.post("record", "cancellation", key=uuid4(), entry=last.uuid, reason="Twice", step="save")
        page = text_of(visit.get("day-sheet", query="?again=1"))
        assert 'value="4"' in field(page, loads(filled))
        assert 'value="8.5 Ah"' in field(page, charge(filled))
        assert "value" not in field(text_of(visit.get("day-sheet")), loads(filled))

    def test_everything_that_is_wrong_is_told_and_nothing_typed_is_lost(
        self, visit: Visitor, filled: Line, now: datetime
    ) -> None:
        response = self.post(visit, now, **{loads(filled): "a few", charge(filled): "1,500", "other_day": "soon"})
        page = text_of(response)
        assert response.status_code == 400
        targets = set(re.findall(r'<a href="#id_([a-z0-9_-]+)"', page))
        assert targets == {loads(filled), charge(filled), "other_day"}
        assert "write 1500 or 1.5" in page
        for name, typed in ((loads(filled), "a few"), (charge(filled), "1,500"), ("other_day", "soon")):
            assert f'value="{typed}"' in field(page, name)

    @pytest.mark.parametrize("typed", ["5 L", "-3", "many", "0x10", "1e40"])
    def test_ampere_hours_that_are_none_are_refused(
        self, visit: Visitor, filled: Line, now: datetime, typed: str
    ) -> None:
        response = self.post(visit, now, **{charge(filled): typed}, step="save")
        assert response.status_code == 400
        assert f'<a href="#id_{charge(filled)}">' in text_of(response)
        assert entries(visit, "day sheet") == []

    def test_an_error_of_the_domain_finds_its_field(self, visit: Visitor, filled: Line, now: datetime) -> None:
        tomorrow = (now.date() + timedelta(days=2)).isoformat()
        response = self.post(visit, now, **{loads(filled): "4", "other_day": tomorrow}, step="save")
        assert response.status_code == 400
        assert '<a href="#id_other_day">' in text_of(response)

    @pytest.mark.parametrize("nothing", ["", "0", " "])
    def test_an_empty_sheet_is_none(self, visit: Visitor, filled: Line, now: datetime, nothing: str) -> None:
        response = self.post(visit, now, **{loads(filled): nothing})
        assert response.status_code == 400
        assert "Nothing is written yet" in text_of(response)

    def test_a_row_that_is_gone_meanwhile_is_not_dropped(self, visit: Visitor, filled: Line, now: datetime) -> None:
        page = text_of(self.post(visit, now, **{loads(filled): "4", f"loads-{uuid4()}-{uuid4()}": "9"}, step="save"))
        assert "9 stood in it" in page
        assert entries(visit, "day sheet") == []

    def test_back_to_the_form_keeps_what_was_typed(self, visit: Visitor, filled: Line, now: datetime) -> None:
        preview = self.post(visit, now, **{loads(filled): "4", charge(filled): "8"}, step="preview")
        pairs = dict(re.findall(r'<input type="hidden" name="([^"]+)" value="([^"]*)">', text_of(preview)))
        page = text_of(visit.post("day-sheet", **pairs, step="back"))
        assert 'value="4"' in field(page, loads(filled))
        assert "wrong" not in page.split("<main")[1]

    def test_a_second_sheet_of_a_day_is_warned_of(self, visit: Visitor, filled: Line, now: datetime) -> None:
        said = {loads(filled): "4"}
        assert "comes on top" not in text_of(self.post(visit, now, **said, step="preview"))
        self.post(visit, now, **said, step="save")
        assert "comes on top" in text_of(self.post(visit, now, **said, step="preview"))

    def test_a_rack_type_that_went_through_lately_has_a_row_of_its_own(
        self, visit: Visitor, filled: Line, owner: Membership, say: Say
    ) -> None:
        rack = create_rack_type(actor=owner, name="Hooks", drag_out=LITRE // 1000, area=900)
        name = f"loads-{filled.route.uuid}-{rack.uuid}"
        assert name not in text_of(visit.get("day-sheet"))
        say(DaySheetInput(racks=(RacksRow(route=filled.route.uuid, rack=rack.uuid, loads=2),)))
        assert 'value="2"' in field(text_of(visit.get("day-sheet", query="?again=1")), name)

    def test_what_must_never_meet_is_refused_until_it_has_happened(
        self, visit: Visitor, filled: Line, owner: Membership, now: datetime, poisoned: Route
    ) -> None:
        name = f"loads-{poisoned.uuid}-{filled.rack.uuid}"
        refused = self.post(visit, now, **{name: "1"}, step="save")
        assert refused.status_code == 409
        assert "must never meet" in text_of(refused)
        assert "Record the incident" in text_of(refused)
        assert self.post(visit, now, **{name: "1"}, step="incident").status_code == 302
        assert entries(visit, "day sheet")[0].verdict == "incident"


@pytest.fixture
def grow(owner: Membership, now: datetime, filled: Line, say: Say) -> Callable[[int], None]:
    """Return a function that adds a bath, a rack type and their route, and a day sheet of them."""

    def add(number: int) -> None:
        tank = TankInput(kind="bath", name=f"Bath {number}", metal="Ni", valence=2, anode_kind="inert")
        bath = create_tank(actor=owner, now=now, tank=tank).vessel
        rack = create_rack_type(actor=owner, name=f"Rack {number}", drag_out=LITRE // 1000, area=900)
        route = create_route(actor=owner, name=f"Route {number}", rack=rack, vessels=[bath])
        set_level_table(actor=owner, now=now, vessel=bath, marks=[MarkInput(mark="10 cm", volume=LITRE)])
        say(DaySheetInput(racks=(RacksRow(route=route.uuid, rack=filled.rack.uuid, loads=2),)))

    return add


@pytest.mark.parametrize(
    ("name", "queries"), [("day-sheet", 8), ("morning", 7), ("week-sheet", 9), ("week-paper", 8), ("bench", 6)]
)
def test_the_queries_do_not_grow_with_routes_baths_and_sheets(
    visit: Visitor, grow: Callable[[int], None], django_assert_num_queries: Num, name: str, queries: int
) -> None:
    grow(1)
    with django_assert_num_queries(queries):
        visit.get(name)
    grow(2)
    grow(3)
    with django_assert_num_queries(queries):
        visit.get(name)


@pytest.fixture
def poisoned(owner: Membership, now: datetime, filled: Line, say: Say) -> Route:
    """Return a route from the acid bath into a tank that holds cyanide."""
    make: dict[str, Any] = {"actor": owner, "now": now}
    poison = RevisionInput(form="liquid", density="1.1 g/mL", reactivity=("cyanide",))
    product = create_product(**make, name="Silver concentrate", supplier="", revision=poison).product
    can = create_holder(**make, kind=VesselKind.STOCK, name="Silver can", product=product)
    tank = create_tank(**make, tank=TankInput(kind="rinse", name="Silver rinse")).vessel
    say(ReceiptInput(vessel=can.uuid, amount=parse("2 L", "volume")))
    ingredients = (IngredientRow(stock=can.uuid, amount=parse("1 L", "volume")),)
    say(MakeUpInput(tank=tank.uuid, ingredients=ingredients, level=parse("5 L", "volume")))
    return create_route(actor=owner, name="Astray", rack=filled.rack, vessels=[filled.bath, tank])


class TestMorning:
    """What is read at the tanks."""

    def post(self, visit: Visitor, /, **said: object) -> Any:
        return visit.post("morning", **{"key": uuid4(), **said})

    def test_each_number_becomes_a_reading_in_the_unit_beside_it(self, visit: Visitor, filled: Line) -> None:
        said = {
            "key": uuid4(),
            f"level-{filled.bath.uuid}": "14.5",
            f"temperature-{filled.bath.uuid}": "24,5",
            f"ph-{filled.bath.uuid}": "1.2",
            f"level-{filled.rinse.uuid}": "9500 mL",
        }
        page = text_of(self.post(visit, **said, step="preview"))
        assert "14.5 L" in page
        assert "9500 mL = 9.5 L" in page
        saved = self.post(visit, **said, step="save")
        assert saved.headers["Location"] == visit.address("bench")
        levels = [read_event(entry) for entry in entries(visit, "level reading")]
        assert [event.volume.base for event in levels if isinstance(event, LevelReading)] == [145 * 10**8, 95 * 10**8]
        assert len(entries(visit, "reading")) == 2
        self.post(visit, **said, step="save")
        assert len(entries(visit, "level reading")) == 2

    def test_a_tank_with_a_level_table_is_asked_in_its_unit(
        self, visit: Visitor, filled: Line, owner: Membership, now: datetime
    ) -> None:
        marks = [MarkInput(mark="10 cm", volume=5 * LITRE), MarkInput(mark="40 cm", volume=20 * LITRE)]
        set_level_table(actor=owner, now=now, vessel=filled.bath, marks=[*marks, MarkInput(mark="rim", volume=LITRE)])
        name = f"level-{filled.bath.uuid}"
        assert '<span class="unit">cm</span>' in text_of(visit.get("morning"))
        for typed, volume in (("30", 15), ("rim", 1), ("14 L", 14)):
            assert self.post(visit, **{name: typed}, step="save").status_code == 302
            event = read_event(entries(visit, "level reading")[-1])
            assert isinstance(event, LevelReading)
            assert event.volume.base == volume * LITRE
        outside = self.post(visit, **{name: "90"}, step="save")
        assert outside.status_code == 400
        assert f'<a href="#id_{name}">' in text_of(outside)

    def test_all_or_none_and_every_error_under_its_field(self, visit: Visitor, filled: Line) -> None:
        names = [f"level-{filled.bath.uuid}", f"temperature-{filled.bath.uuid}", f"level-{filled.rinse.uuid}"]
        said = dict(zip(names, ["30 cm", "warm", "9"], strict=True))
        first = self.post(visit, **said, step="save")
        assert first.status_code == 400
        assert f'<a href="#id_{names[0]}">' in text_of(first)
        second = self.post(visit, **{**said, names[0]: "14"}, step="save")
        assert f'<a href="#id_{names[1]}">' in text_of(second)
        assert 'value="warm"' in field(text_of(second), names[1])
        assert entries(visit, "level reading") == []

    def test_the_level_by_the_books_stands_beside_the_field(self, visit: Visitor, filled: Line) -> None:
        assert "by the books 15 L" in text_of(visit.get("morning"))

    def test_a_tank_that_is_gone_is_not_asked(self, visit: Visitor, filled: Line, now: datetime) -> None:
        Vessel._base_manager.filter(pk=filled.rinse.pk).update(gone_at=now)
        assert str(filled.rinse.uuid) not in text_of(visit.get("morning"))


def test_the_bench_leads_to_what_is_done_every_day(visit: Visitor, filled: Line) -> None:
    for page in ("today", "tanks"):
        assert visit.address("bench") in text_of(visit.get(page))
    bench = text_of(visit.get("bench"))
    for name in ("morning", "day-sheet", "week-sheet", "week-paper", "counts"):
        assert visit.address(name) in bench
    assert visit.address("record", "spill") in bench
    assert visit.address("day-sheet") in text_of(visit.get("record", "day-sheet"))
    assert visit.address("record", "day-sheet") in text_of(visit.get("day-sheet"))


def test_the_last_run_can_be_said_again_from_the_bench(visit: Visitor, filled: Line) -> None:
    assert "Run, same as last time" not in text_of(visit.get("bench"))
    visit.post("record", "run", key=uuid4(), route=filled.route.uuid, charge="2 Ah", step="save")
    (run,) = entries(visit, "run")
    assert f"?again={run.uuid}" in text_of(visit.get("bench"))


@pytest.mark.parametrize(
    ("typed", "understood"),
    [
        ("31.5", "31.5 Ah"), ("31,5", "31.5 Ah"), ("31,5 Ah", "31.5 Ah"), ("0,125", "0.125 Ah"), ("8 Ah", "8 Ah"),
        ("1,500", "1,500"), ("1 500", "1 500"), ("many", "many"), ("5 L", "5 L"), ("", ""),
    ],
)  # fmt: skip
def test_a_comma_is_a_decimal_sign_where_it_can_be_nothing_else(typed: str, understood: str) -> None:
    assert complete(typed, "charge", "Ah") == understood


def test_record_is_the_only_door(visit: Visitor, filled: Line, owner: Membership, now: datetime) -> None:
    """The same sheet by the verb and by the grid says the same in the books."""
    data = DaySheetInput(racks=(RacksRow(route=filled.route.uuid, rack=filled.rack.uuid, loads=4),))
    by_verb = record(actor=owner, now=now, key=uuid4(), data=data).entry
    visit.post("day-sheet", key=uuid4(), day=now.date().isoformat(), **{loads(filled): "4"}, step="save")
    assert read_event(entries(visit, "day sheet")[-1]) == read_event(by_verb)
