"""Level tables: a height or a mark in place of a volume."""

import pytest
from django_scopes import scope

from chemicals.ledger.models import Vessel
from chemicals.process.instruments import InstrumentInput, create_instrument
from chemicals.process.levels import MarkInput, list_level_marks, set_level_table
from chemicals.science.quantity import parse
from chemicals.workshop.errors import InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from tests.process.shop import L, Shop

CM = 10_000_000
Row = tuple[str, str] | tuple[str, str, bool]
COLD: list[Row] = [("10 cm", "5 L"), ("30 cm", "17 L"), ("400 mm", "23.5 L"), ("upper mark", "20 L")]


def enter(shop: Shop, rows: list[Row], name: str = "Copper") -> None:
    marks = [MarkInput(mark=row[0], volume=parse(row[1], "volume").base, hot=row[2:] == (True,)) for row in rows]
    set_level_table(actor=shop.member, now=shop.now, vessel=find(shop, name), marks=marks)


def find(shop: Shop, name: str) -> Vessel:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.get(name=name)


def test_a_height_between_two_rows_lies_on_the_line_between_them(shop: Shop) -> None:
    """From 30 to 40 cm it is 6.5 L: 0.65 L for each centimetre, of which half is the doubt of whole centimetres."""
    enter(shop, COLD)
    event = shop.event("level-reading", vessel="Copper", mark="32 cm")
    assert (event.volume.typed, event.volume.base, event.volume.sd) == ("32 cm", 18_300_000_000, 325_000_000)
    assert [(mark.mark, mark.height) for mark in event.marks] == [("30 cm", 30 * CM), ("400 mm", 40 * CM)]
    finer = shop.event("level-reading", vessel="Copper", mark="320 mm")
    assert (finer.volume.base, finer.volume.sd) == (18_300_000_000, 32_500_000)
    assert shop.event("level-reading", vessel="Copper", mark="12 in").volume.base == pytest.approx(
        17 * L + 0.48 * 0.65 * L, abs=1
    )


def test_a_row_that_is_met_stands_alone(shop: Shop) -> None:
    enter(shop, COLD)
    event = shop.event("level-reading", vessel="Copper", mark="30 cm")
    assert (event.volume.base, [mark.mark for mark in event.marks]) == (17 * L, ["30 cm"])


def test_a_mark_is_known_by_its_name(shop: Shop) -> None:
    """A hundredth of the 20 L is assumed as its doubt."""
    enter(shop, COLD)
    event = shop.event("level-reading", vessel="Copper", mark=" Upper  MARK ")
    assert (event.volume.base, event.volume.sd) == (20 * L, L // 5)
    assert [(mark.mark, mark.height) for mark in event.marks] == [("upper mark", None)]


def test_the_books_follow_the_mark(shop: Shop) -> None:
    enter(shop, COLD)
    entry = shop.record("level-reading", vessel="Copper", mark="32 cm")
    assert shop.went(entry, "volume")["air"] > 0
    assert shop.holds(find(shop, "Copper"))["volume"] == 18_300_000_000


def test_hot_liquid_has_a_table_of_its_own_and_else_the_cold_one(shop: Shop) -> None:
    enter(shop, [*COLD, ("10 cm", "4.9 L", True), ("40 cm", "22.9 L", True)])
    assert shop.event("level-reading", vessel="Copper", mark="25 cm", hot=True).volume.base == 13_900_000_000
    assert shop.event("level-reading", vessel="Copper", mark="25 cm").volume.base == 14 * L
    enter(shop, COLD)
    event = shop.event("level-reading", vessel="Copper", mark="25 cm", hot=True)
    assert (event.volume.base, event.hot) == (14 * L, True)


def test_the_gauge_and_the_division_add_up_in_squares(shop: Shop) -> None:
    enter(shop, COLD)
    rod = InstrumentInput(name="Rod", measures="level", sd="0.325 L")
    create_instrument(actor=shop.member, now=shop.now, instrument=rod)
    event = shop.event("level-reading", vessel="Copper", mark="32 cm", instrument="Rod")
    assert event.volume.sd == pytest.approx(0.325 * 2**0.5 * L, abs=1)
    assert shop.event("level-reading", vessel="Copper", mark="32 cm", instrument="Rod", sd="0.1 L").volume.sd == L // 10


@pytest.mark.parametrize(
    ("said", "field", "told"),
    [
        ({"mark": "45 cm"}, "mark", "45 cm lies outside the level table, which goes from 10 cm to 400 mm"),
        ({"mark": "9.9 cm"}, "mark", "add rows to the table"),
        ({"mark": "lower mark"}, "mark", "no such mark. Write one of 10 cm, 30 cm, upper mark, 400 mm"),
        ({"mark": "32"}, "mark", "or a height such as 32 cm"),
        ({}, "volume", "one of the two"),
        ({"mark": "32 cm", "volume": "18 L"}, "volume", "one of the two"),
        ({"mark": "32 cm", "vessel": "First rinse"}, "mark", "has no level table"),
    ],
)
def test_what_the_table_cannot_tell_is_refused_with_a_remedy(
    shop: Shop, said: dict[str, str], field: str, told: str
) -> None:
    enter(shop, COLD)
    found = shop.wrong("level-reading", **{"vessel": "Copper", **said})
    assert set(found) == {field}
    assert told in found[field]


@pytest.mark.parametrize(
    ("rows", "field", "told"),
    [
        ([("10 cm", "5 L"), ("20 cm", "5 L")], "marks.1.volume", "holds more than the one below it"),
        ([("20 cm", "4 L"), ("10 cm", "5 L")], "marks.0.volume", "holds more than the one below it"),
        ([("10 cm", "5 L"), ("100 mm", "6 L")], "marks.1.mark", "twice"),
        ([("Top", "5 L"), ("top", "6 L")], "marks.1.mark", "twice"),
        ([("12", "5 L")], "marks.0.mark", "a height with its unit"),
        ([("", "5 L")], "marks.0.mark", "a name with letters"),
        ([("m" * 41, "5 L")], "marks.0.mark", "at most 40 characters"),
    ],
)
def test_a_table_that_contradicts_itself_is_refused(shop: Shop, rows: list[Row], field: str, told: str) -> None:
    enter(shop, COLD)
    with pytest.raises(InvalidInputError) as caught:
        enter(shop, rows)
    found = {error.field: error.message for error in caught.value.errors}
    assert set(found) == {field}
    assert told in found[field]
    assert len(list_level_marks(find(shop, "Copper"))) == len(COLD)


def test_a_table_is_replaced_as_a_whole_and_is_told_from_the_bottom_up(shop: Shop) -> None:
    enter(shop, COLD)
    told = list_level_marks(find(shop, "Copper"))
    assert [mark.mark for mark in told] == ["10 cm", "30 cm", "upper mark", "400 mm"]
    assert {(mark.entered_at, mark.entered_by) for mark in told} == {(shop.now, shop.member)}
    enter(shop, [])
    assert list_level_marks(find(shop, "Copper")) == []


def test_only_tanks_have_a_table_and_only_in_their_own_workshop(shop: Shop, stranger: Membership) -> None:
    with pytest.raises(InvalidInputError, match="Only a bath or a rinse"):
        enter(shop, COLD, "Jar")
    with pytest.raises(NotPermittedError, match="another workshop"):
        set_level_table(actor=stranger, now=shop.now, vessel=find(shop, "Copper"), marks=[])
