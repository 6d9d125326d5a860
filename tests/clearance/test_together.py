"""Several records as one act: all of them or none, once, and everything that is wrong at once."""

from uuid import UUID, uuid4

import pytest
from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.journal.models import Entry
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from compliance.clearance.services import RefusedError
from compliance.clearance.together import MOST_TOGETHER, Said, preview_all, record_all
from tests.process.shop import L, Shop

pytestmark = pytest.mark.django_db


def sheet(shop: Shop, days_ago: int, loads: int = 2, route: str = "Copper line") -> Said:
    """Return a day sheet of some days ago."""
    day = shop.now.date().fromordinal(shop.now.date().toordinal() - days_ago)
    data = shop.read("day-sheet", racks=[{"route": route, "loads": loads}])
    return Said(data=data, occurred=Occurred.on_day(day, shop.member.workshop.zone))


def level(shop: Shop, vessel: str, volume: str) -> Said:
    """Return a level that is read now."""
    return Said(data=shop.read("level-reading", vessel=vessel, volume=volume))


def write(shop: Shop, *said: Said, key: UUID | None = None) -> list[Entry]:
    """Record all of it."""
    found = record_all(actor=shop.member, now=shop.now, key=key or uuid4(), said=said)
    return [appended.entry for appended in found]


def count(shop: Shop) -> int:
    """Return how many entries there are."""
    with scope(workshop=shop.member.workshop):
        return Entry.objects.count()


def test_a_week_of_day_sheets_is_one_act_and_each_is_dated_to_its_day(shop: Shop) -> None:
    entries = write(shop, sheet(shop, 3), sheet(shop, 2), sheet(shop, 1))
    assert [entry.kind for entry in entries] == ["day sheet"] * 3
    assert {entry.precision for entry in entries} == {"day"}
    assert [(shop.now.date() - entry.occurred_at.date()).days for entry in entries] == [3, 2, 1]
    assert shop.is_proved()


def test_each_finds_the_books_as_the_one_before_has_left_them(shop: Shop) -> None:
    first, second = write(shop, level(shop, "Copper", "9 L"), level(shop, "Copper", "8 L"))
    assert shop.went(first, "volume") == {"Copper": -1 * L, "air": L}
    assert shop.went(second, "volume") == {"Copper": -1 * L, "air": L}


def test_a_second_press_writes_nothing(shop: Shop) -> None:
    key, before = uuid4(), count(shop)
    said = [level(shop, "Copper", "9 L"), level(shop, "Silver", "9.5 L")]
    assert write(shop, *said, key=key) == write(shop, *said, key=key)
    assert count(shop) == before + 2


@pytest.mark.parametrize("others", [["9 L"], ["9 L", "9 L", "8 L"], ["9 L", "8 L"]])
def test_a_key_stands_for_its_records_alone(shop: Shop, others: list[str]) -> None:
    key = uuid4()
    write(shop, level(shop, "Copper", "9 L"), level(shop, "Copper", "9 L"), key=key)
    before = count(shop)
    with pytest.raises(ConflictError):
        write(shop, *(level(shop, "Copper", volume) for volume in others), key=key)
    assert count(shop) == before


def test_everything_that_is_wrong_is_said_at_once_and_nothing_is_written(shop: Shop) -> None:
    before = shop.ledger()
    said = [sheet(shop, -2), level(shop, "Copper", "9 L"), sheet(shop, 1, loads=2000)]
    with pytest.raises(InvalidInputError) as caught:
        write(shop, *said)
    assert {error.field for error in caught.value.errors} == {"records.0.occurred_at", "records.2.racks.0.loads"}
    with pytest.raises(InvalidInputError) as told:
        preview_all(shop.member, shop.now, said)
    assert {error.field for error in told.value.errors} == {"records.2.racks.0.loads"}
    assert shop.ledger() == before


def test_what_may_not_be_done_refuses_all_of_it_unless_it_has_happened(shop: Shop) -> None:
    before, said = shop.ledger(), [level(shop, "Copper", "9 L"), sheet(shop, 1, route="Astray")]
    with pytest.raises(RefusedError) as caught:
        write(shop, *said)
    assert "must never" in caught.value.reasons[0]
    assert shop.ledger() == before
    happened = [Said(data=each.data, occurred=each.occurred, already_happened=True) for each in said]
    assert [entry.verdict for entry in write(shop, *happened)] == ["allowed", "incident"]


def test_preview_answers_for_each_and_writes_nothing(shop: Shop) -> None:
    before = shop.ledger()
    found = preview_all(shop.member, shop.now, [level(shop, "Copper", "9 L"), sheet(shop, 1, route="Astray")])
    assert [each.answer.allowed for each in found] == [True, False]
    assert shop.ledger() == before


@pytest.mark.parametrize("many", [0, MOST_TOGETHER + 1])
def test_none_or_too_many_are_refused(shop: Shop, many: int) -> None:
    with pytest.raises(InvalidInputError) as caught:
        write(shop, *[level(shop, "Copper", "9 L")] * many)
    assert caught.value.errors[0].field == "records"


def test_an_observer_records_nothing(shop: Shop, observer: Membership) -> None:
    with pytest.raises(NotPermittedError):
        record_all(actor=observer, now=shop.now, key=uuid4(), said=[level(shop, "Copper", "9 L")])
