"""The balance on its page: lines that add up, what may be said, the drawing."""

import re
from datetime import UTC, datetime
from uuid import uuid4

import pytest

from chemicals.balance.selectors import Amount, BookBalance, Flow, VesselRow
from chemicals.ledger.models import Vessel, VesselKind
from compliance.web.picture import LAST_COLUMN, draw_narrow, draw_wide
from compliance.web.statement import lines_of, verdict_of
from tests.web.conftest import GRAM, Line, Visitor, text_of

START, END = datetime(2026, 1, 1, tzinfo=UTC), datetime(2026, 4, 1, tzinfo=UTC)


TUB, BATH = Vessel(name="Tub", kind=VesselKind.STOCK), Vessel(name="Bath", kind=VesselKind.BATH)


def row(vessel: Vessel, closing: Amount) -> VesselRow:
    return VesselRow(vessel, Amount(0, 0), 0, 0, closing)


def balance(boundaries: dict[str, Amount], closing: Amount, *flows: Flow) -> BookBalance:
    return BookBalance(
        component="Cu",
        start=START,
        end=END,
        opening=Amount(0, 0),
        closing=closing,
        boundaries=boundaries,
        vessels=(row(TUB, closing), row(BATH, Amount(0, 0))),
        flows=flows,
    )


def grams(value: float, sd: float = 0) -> Amount:
    return Amount(round(value * GRAM), round(sd * GRAM))


def test_the_lines_add_up_from_the_beginning_to_the_end() -> None:
    found = lines_of(balance({"supplier": grams(10), "parts": grams(-4), "unaccounted": grams(-1, 0.8)}, grams(5)))
    assert [line.key for line in found] == [
        "held at the beginning",
        "supplier",
        "parts",
        "unaccounted",
        "held at the end",
    ]
    assert sum(line.value or 0 for line in found[:-1]) == found[-1].value


def test_little_is_never_called_no_loss() -> None:
    said = verdict_of(balance({"unaccounted": grams(-1, 0.8)}, grams(5, 0.5)))
    assert said == ("Nothing shown to be missing; up to 2.6 g could be. A loss under 1 g could not have been seen.")


def test_more_than_the_readings_can_explain_is_missing_or_found() -> None:
    assert verdict_of(balance({"unaccounted": grams(-3, 1)}, grams(5))).startswith("3 g missing")
    assert verdict_of(balance({"unaccounted": grams(3, 1)}, grams(5))).startswith("3 g found")


def test_without_a_measurement_nothing_is_claimed() -> None:
    assert "no loss could have shown" in verdict_of(balance({"supplier": grams(5)}, grams(5)))


def test_an_unknown_names_its_vessel() -> None:
    said = verdict_of(balance({"unaccounted": grams(-1, 1)}, Amount(None, 0)))
    assert said.startswith("Unknown, so nothing can be said about losses: Tub.")


def test_the_picture_draws_by_amount_and_unknown_as_a_broken_line() -> None:
    drawn = balance(
        {},
        grams(5),
        Flow("supplier", TUB, grams(10)),
        Flow(TUB, BATH, grams(5)),
        Flow(BATH, "parts", Amount(None, 0)),
        Flow(TUB, "parts", grams(1)),
    )
    for picture in (draw_wide(drawn), draw_narrow(drawn)):
        widths = [float(line.width) for line in picture.lines]
        assert widths[0] == 2 * widths[1] > widths[3] > 0
        assert [line.unknown for line in picture.lines] == [False, False, True, False]
        assert [line.says for line in picture.lines][2] == "Bath → parts: unknown"
        assert [(box.node.name, box.node.is_boundary) for box in picture.boxes] == [
            ("supplier", True), ("Tub", False), ("Bath", False), ("parts", True),
        ]  # fmt: skip
    wide = draw_wide(drawn)
    assert wide.boxes[-1].node.column == LAST_COLUMN
    lowest_box = max(box.y + box.height for box in wide.boxes)
    assert max(float(y) for y in re.findall(r" ([\d.]+)", wide.lines[3].path)) > lowest_box


def test_a_long_name_stands_in_two_lines_of_its_box() -> None:
    long = Vessel(name="Bottle of gold sulfite from the old workshop", kind=VesselKind.STOCK)
    (box,) = (box for box in draw_wide(balance({}, grams(5), Flow(long, "parts", grams(2)))).boxes if box.x == 0)
    assert [text for _, text in box.label] == ["Bottle of gold", "sulfite from the…"]
    assert all(box.y < height < box.y + box.height for height, _ in box.label)


def test_a_vessel_called_like_a_boundary_is_drawn_as_a_vessel() -> None:
    trap = Vessel(name="parts", kind=VesselKind.RINSE)
    drawn = draw_wide(balance({}, grams(5), Flow(TUB, trap, grams(2)), Flow(trap, "parts", grams(1))))
    assert [(box.node.name, box.node.is_boundary) for box in drawn.boxes] == [
        ("Tub", False), ("parts", False), ("parts", True),
    ]  # fmt: skip


@pytest.mark.parametrize("kind", VesselKind)
def test_every_kind_of_vessel_has_its_place_in_the_picture(kind: VesselKind) -> None:
    end = Vessel(name="The end", kind=kind)
    drawing = draw_wide(balance({}, grams(1), Flow(BATH, end, grams(1))))
    inside = {box.node.name for box in drawing.boxes if 0 < box.node.column < LAST_COLUMN}
    assert inside == {"Bath", "The end"}


def test_an_empty_period_draws_nothing() -> None:
    assert draw_wide(balance({}, grams(0))).boxes == ()


def test_the_page_shows_where_the_metal_went(visit: Visitor, filled: Line) -> None:
    visit.post("record", "run", key=uuid4(), route=filled.route.uuid, current="1 A", time="1 h", step="save")
    page = visit.get("balance")
    text = text_of(page)
    assert 'Where the copper went, <time datetime="2026-01-01">2026-01-01</time> to' in text
    assert "received from suppliers" in text
    assert 'role="img"' in text
    assert "Copper bath → parts" in text
    assert re.search(r">Copper bath</td> <td[^>]*>parts</td> <td[^>]*>1\.18\d ± 0\.\d+ g</td>", text)


def test_a_period_turned_round_is_refused(visit: Visitor, filled: Line) -> None:
    page = visit.get("balance", query="?since=2026-03-01&until=2026-02-01")
    assert page.status_code == 400
    assert "ends before it begins" in text_of(page)
    assert visit.get("balance", query="?metal=Xx").status_code == 400


def test_the_last_day_counts_to_its_end(visit: Visitor, filled: Line) -> None:
    text = text_of(visit.get("balance", query="?metal=Cu&since=2026-03-02&until=2026-03-02"))
    assert "+1.27" in text


def test_without_a_metal_the_page_says_what_to_do(visit: Visitor) -> None:
    assert "No metal is in the books yet." in text_of(visit.get("balance"))
