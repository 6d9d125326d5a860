"""A vessel's ledger on its page and in its file: lines that add up, words where nothing is known, a plot."""

import re
from datetime import UTC, date, datetime, timedelta
from decimal import Decimal
from typing import Any
from uuid import uuid4

import pytest
from django.utils import timezone

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.running import Point, Running, VesselLedger
from chemicals.process.inputs import AcceptanceInput, AnalysisInput, HeldRow, LevelInput, MoveInput, OpeningInput
from chemicals.science.quantity import parse
from compliance.clearance.services import record
from compliance.web.axes import Scale, date_marks
from compliance.web.forms.period import neighbours
from compliance.web.plot import Plot, draw_plot
from tests.web.conftest import GRAM, LITRE, Line, Say, Visitor, text_of
from tests.web.test_lists import rows_of

START, END = datetime(2026, 1, 1, tzinfo=UTC), datetime(2026, 2, 1, tzinfo=UTC)


def held(grams: float | None, sd: float = 0) -> Running:
    """Return a content in grams; None is unknown."""
    return Running("Cu", None if grams is None else round(grams * GRAM), round(sd * GRAM), 0)


def ledger(*after: tuple[int, Running], opening: Running | None = None) -> VesselLedger:
    """Return a ledger of January by (day, what was held from its noon on)."""
    first = opening or held(0)
    points = [Point(START + timedelta(days=day - 1, hours=12), content, measured=False) for day, content in after]
    last = points[-1].held if points else first
    ends = {"opening": first, "closing": last, "before": first, "after": last}
    vessel = Vessel(name="Copper bath", kind=VesselKind.BATH)
    return VesselLedger(
        vessel, "Cu", START, END, **ends, came=0, went=0, points=tuple(points), lines=(), page=1, pages=1
    )


def plot(found: VesselLedger, now: datetime = END, width: int = 720) -> Plot:
    drawn = draw_plot(found, now, width=width, height=300)
    assert drawn is not None
    return drawn


def numbers(path: str) -> list[float]:
    return [float(number) for number in re.findall(r"-?\d+\.?\d*", path)]


def test_the_line_steps_at_each_entry_and_lasts_until_the_end() -> None:
    drawn = plot(ledger((11, held(10)), (21, held(5))))
    assert re.fullmatch(r"M[\d.]+ [\d.]+(V[\d.]+H[\d.]+){3}", drawn.line)
    levels = [float(level) for level in re.findall(r"V([\d.]+)", drawn.line)]
    assert levels[0] == drawn.bottom
    assert levels[1] == drawn.top
    assert levels[2] == (drawn.top + drawn.bottom) / 2
    assert drawn.line.endswith(f"H{drawn.right}.0")
    field = drawn.right - drawn.left
    assert numbers(drawn.line)[3] == pytest.approx(drawn.left + field * 10.5 / 31, abs=0.1)


def test_the_future_has_no_line() -> None:
    drawn = plot(ledger((11, held(10))), now=START + timedelta(days=15.5))
    assert drawn.line.endswith(f"H{(drawn.left + drawn.right) / 2:.1f}")
    assert draw_plot(ledger(), START - timedelta(days=1), width=720, height=300) is None


def test_the_band_reaches_two_standard_uncertainties_but_not_below_nothing() -> None:
    drawn = plot(ledger(opening=held(10, sd=2)))
    high, low = numbers(drawn.band)[1], numbers(drawn.band)[4]
    assert (low - high) / (drawn.bottom - drawn.top) == pytest.approx(8 / 15, abs=0.01)  # 6 to 14 g on an axis to 15
    wide = plot(ledger(opening=held(1, sd=2)))
    assert numbers(wide.band)[4] == wide.bottom


def test_where_nobody_knows_there_is_a_gap_and_a_word() -> None:
    drawn = plot(ledger((8, held(None)), (22, held(8)), opening=held(10)))
    assert drawn.line.count("M") == drawn.band.count("M") == 2
    (gap,) = drawn.gaps
    assert float(gap.width) == pytest.approx(14 / 31 * (drawn.right - drawn.left), abs=0.1)
    assert gap.has_room
    assert "For a time the content was unknown: there is no line." in drawn.says
    nothing = plot(ledger(opening=held(None)))
    assert (nothing.line, len(nothing.gaps)) == ("", 1)


def test_measured_contents_are_marked() -> None:
    measured = Point(START + timedelta(days=15.5), held(10, 0.5), measured=True)
    found = ledger(opening=held(10))
    drawn = plot(VesselLedger(**{**vars(found), "points": (measured,)}))
    assert [mark.says for mark in drawn.marks] == ["measured 2026-01-16 12:00: 10.00 ± 0.50 g"]
    assert numbers(drawn.marks[0].path)[0] == pytest.approx((drawn.left + drawn.right) / 2, abs=0.1)


def test_ten_thousand_entries_are_drawn_with_their_extremes_in_a_few_strokes() -> None:
    points = tuple(
        Point(START + timedelta(minutes=4 * n), held(900 if n == 5_000 else 100 + n % 7), measured=False)
        for n in range(10_000)
    )
    drawn = plot(VesselLedger(**{**vars(ledger()), "points": points, "closing": points[-1].held}))
    assert drawn.line.count("V") < 4 * 720
    highest = min(float(level) for level in re.findall(r"V([\d.]+)", drawn.line))
    assert highest == pytest.approx(drawn.top + (drawn.bottom - drawn.top) * 0.1, abs=0.1)  # 900 g of 1000


def test_no_text_stands_beyond_the_edges() -> None:
    """A date is ten figures wide, most of nine pixels."""
    for width in (350, 1060):
        drawn = plot(ledger(opening=held(10)), width=width)
        assert all(40 <= float(tick.text_at) <= width - 40 for tick in drawn.dates)
        assert drawn.dates[0].text == "2026-01-01"


def test_what_was_never_held_is_not_drawn() -> None:
    assert draw_plot(ledger(), END, width=720, height=300) is None


@pytest.mark.parametrize(
    ("low", "high", "component", "marks", "unit"),
    [
        (0, 20 * LITRE, "volume", ["0", "5", "10", "15", "20"], "L"),
        (19 * LITRE, 20 * LITRE, "volume", ["19", "19.2", "19.4", "19.6", "19.8", "20"], "L"),
        (763 * GRAM, 1_020 * GRAM, "gross mass", ["0.7", "0.8", "0.9", "1", "1.1"], "kg"),
        (0, 830_000, "Cu", ["0", "0.2", "0.4", "0.6", "0.8", "1"], "g"),
        (-GRAM, 3 * GRAM, "Cu", ["−1", "0", "1", "2", "3"], "g"),
        (5 * GRAM, 5 * GRAM, "Cu", ["0", "1", "2", "3", "4", "5"], "g"),
        (0, 0, "Cu", ["0", "1"], "g"),
        (0, 250 * 10**6, "free cyanide", ["0", "50", "100", "150", "200", "250"], "mmol"),
    ],
)
def test_an_axis_has_round_marks_in_a_unit_that_suits(
    low: int, high: int, component: str, marks: list[str], unit: str
) -> None:
    scale = Scale.around(low, high, component)
    assert [text for _at, text in scale.marks()] == marks
    assert scale.unit == unit
    assert scale.low <= low <= high <= scale.high


@pytest.mark.parametrize(
    ("first", "last", "most", "marks"),
    [
        ("2026-03-02", "2026-03-02", 3, ["2026-03-02"]),
        ("2026-03-01", "2026-03-09", 5, ["2026-03-01", "2026-03-03", "2026-03-05", "2026-03-07", "2026-03-09"]),
        ("2026-01-01", "2026-03-31", 3, ["2026-01", "2026-02", "2026-03"]),
        ("2025-11-20", "2026-06-10", 3, ["2026-01", "2026-04"]),
        ("2024-02-01", "2026-03-31", 3, ["2025", "2026"]),
        ("1990-01-01", "2026-03-31", 4, ["1990", "2000", "2010", "2020"]),
    ],
)
def test_days_months_or_years_are_marked_as_there_is_room(first: str, last: str, most: int, marks: list[str]) -> None:
    with timezone.override("Europe/Berlin"):
        start, end = (timezone.make_aware(datetime.fromisoformat(day)) for day in (first, last))
        assert [text for _at, text in date_marks(start, end + timedelta(hours=23), most)] == marks


@pytest.mark.parametrize(
    ("since", "until", "before", "after"),
    [
        ("2026-03-01", "2026-03-31", ("2026-02-01", "2026-02-28"), ("2026-04-01", "2026-04-30")),
        ("2025-01-01", "2025-12-31", ("2024-01-01", "2024-12-31"), ("2026-01-01", "2026-12-31")),
        ("2026-03-02", "2026-03-08", ("2026-02-23", "2026-03-01"), ("2026-03-09", "2026-03-15")),
        ("2026-03-02", "2026-03-02", ("2026-03-01", "2026-03-01"), ("2026-03-03", "2026-03-03")),
    ],
)
def test_the_next_period_is_as_long_and_begins_where_this_one_ends(
    since: str, until: str, before: tuple[str, str], after: tuple[str, str]
) -> None:
    found = neighbours(date.fromisoformat(since), date.fromisoformat(until))
    assert [(str(one), str(other)) for one, other in found] == [before, after]


def test_the_page_tells_each_line_with_its_other_end(visit: Visitor, filled: Line) -> None:
    visit.post("record", "run", key=uuid4(), route=filled.route.uuid, current="1 A", time="1 h", step="save")
    text = text_of(visit.get("ledger", filled.bath.uuid))
    assert 'Copper in it, <time datetime="2026-01-01">2026-01-01</time> to' in text
    assert re.search(r"<strong>\+1\.018 kg</strong> from Salt tub, \w+", text)
    assert re.search(r"<strong>−254\.5[\d.]* g</strong> to Drum 7, computed", text)
    assert re.search(r"<strong>−1\.18\d ± [\d.]+ g</strong> to parts, computed", text)
    assert 'role="img"' in text
    assert "Copper in Copper bath over time</title>" in text
    assert "g/L" in text


def test_a_vessel_links_its_ledger(visit: Visitor, filled: Line) -> None:
    address = visit.address("ledger", filled.bath.uuid)
    assert address in visit.get("vessel", filled.bath.uuid).content.decode()
    drum = filled.drum.vessel.uuid
    assert visit.address("ledger", drum) in visit.get("waste-container", drum).content.decode()


def test_anything_that_was_held_can_be_chosen(visit: Visitor, filled: Line) -> None:
    page = visit.get("ledger", filled.bath.uuid, query="?component=volume")
    text = text_of(page)
    assert "Liquid in it" in text
    assert "from water supply" in text
    options = re.findall(r'<option value="([^"]*)"', page.content.decode())
    assert options == ["Cu", "gross mass", "volume"]
    assert visit.get("ledger", filled.bath.uuid, query="?component=Au").status_code == 400
    assert visit.get("ledger", filled.bath.uuid, query="?since=2026-03-02&until=2026-03-01").status_code == 400
    assert visit.get("ledger", filled.bath.uuid, query="?until=9999-12-31").status_code == 400


def test_the_lines_of_the_file_add_up_to_the_last_digit(visit: Visitor, filled: Line, say: Say) -> None:
    visit.post("record", "run", key=uuid4(), route=filled.route.uuid, current="1 A", time="1 h", step="save")
    analysis = say(AnalysisInput(vessel=filled.bath.uuid, metal="Cu", result=parse("49 g/L", "concentration")))
    say(AcceptanceInput(analysis=analysis.uuid))
    rows = rows_of(visit.get("ledger", filled.bath.uuid, query="?as=csv"))
    assert (rows[0]["what"], rows[-1]["what"]) == ("held at the beginning", "held at the end")
    moved = sum((Decimal(row["came or went (g)"] or 0) for row in rows), Decimal(0))
    assert Decimal(rows[0]["held afterwards (g)"]) + moved == Decimal(rows[-1]["held afterwards (g)"])
    assert {row["other end"] for row in rows} >= {"Salt tub", "Drum 7", "parts", "Rinse", "unaccounted"}
    assert [row["held per litre (g/L)"] for row in rows if row["what"] == "acceptance"] == ["49"]


def test_unknown_is_a_word_beside_what_was_recorded(visit: Visitor, line: Line, say: Say, now: datetime) -> None:
    """Nobody knows what the rinse holds; a litre of bath comes into it, with an acid's strength of copper."""
    say(OpeningInput(vessel=line.rinse.uuid, volume=parse("5 L", "volume")))
    known = HeldRow(metal="Cu", amount=parse("50 g/L", "concentration"))
    say(OpeningInput(vessel=line.bath.uuid, volume=parse("20 L", "volume"), held=(known,), complete=True))
    moved = MoveInput(source=line.bath.uuid, target=line.rinse.uuid, volume=parse("1 L", "volume"))
    record(actor=visit.member, now=now, key=uuid4(), data=moved, already_happened=True)
    text = text_of(visit.get("ledger", line.rinse.uuid))
    assert "nothing that is known" in text
    assert re.search(r"unknown <span[^>]*> recorded: 50 g", text)
    assert "<dt>at the end</dt> <dd>unknown</dd>" in text
    rows = rows_of(visit.get("ledger", line.rinse.uuid, query="?as=csv"))
    assert [row["held afterwards (g)"] for row in rows] == ["0", "", "", ""]
    assert [row["recorded in all (g)"] for row in rows] == ["0", "0", "50", "50"]


def test_a_vessel_in_which_nothing_was_ever_recorded_says_so(visit: Visitor, line: Line) -> None:
    assert "Nothing was ever recorded in it." in text_of(visit.get("ledger", line.bath.uuid))


def test_the_page_asks_as_often_for_three_lines_as_for_one(
    visit: Visitor, filled: Line, say: Say, django_assert_num_queries: Any
) -> None:
    for litres in (14, 13, 12):
        with django_assert_num_queries(17):
            assert visit.get("ledger", filled.bath.uuid, query="?component=volume").status_code == 200
        say(LevelInput(vessel=filled.bath.uuid, volume=parse(f"{litres} L", "volume")))
