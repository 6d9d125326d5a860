"""Late entries and cancellations fold in their place: what comes later is folded again, what differs is written."""

from collections.abc import Callable
from datetime import timedelta
from typing import Any

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scope

from chemicals.books.fold import rebuild
from chemicals.journal.models import Entry
from chemicals.journal.selectors import iterate_fold_entries
from chemicals.ledger import recompute
from chemicals.ledger.models import Content, Holding, Memory, Posting, Vessel
from chemicals.ledger.projection import load_state, load_state_before
from chemicals.ledger.selectors import read_memory
from chemicals.ledger.services import refold
from tests.process.shop import ML, L, Shop


def vessel(shop: Shop, name: str) -> Vessel:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.get(name=name)


def rows_of(shop: Shop, *entries: Entry) -> set[tuple[type, int]]:
    """Return the numbers of the rows that are kept of entries: a row that was written anew has another."""
    with scope(workshop=shop.member.workshop):
        return {
            (table, pk)
            for table in (Posting, Content)
            for pk in table.objects.filter(entry__in=entries).values_list("pk", flat=True)
        }


def is_as_rebuilt(shop: Shop) -> bool:
    """Say whether the ledger is, to the row, what folding everything from the beginning makes of the journal."""
    with scope(workshop=shop.member.workshop):
        state, _ = rebuild(iterate_fold_entries(shop.member.workshop))
        return load_state(shop.member.workshop) == state and shop.is_proved()


def plate_a_week(shop: Shop) -> list[Entry]:
    """Plate four times: six, five, three and two days ago."""
    return [shop.record("run", days_ago=days, route="Plate", charge="10 Ah") for days in (6, 5, 3, 2)]


def test_the_state_at_any_moment_is_read_from_the_tables(shop: Shop) -> None:
    plate_a_week(shop)
    shop.record("level-reading", days_ago=4, vessel="Copper", volume="19 L")
    shop.record("opening", days_ago=4, vessel="Rinse", volume="9 L")  # whatever is in it now, nobody knows
    with scope(workshop=shop.member.workshop):
        told = sorted(iterate_fold_entries(shop.member.workshop), key=lambda entry: entry.order)
        for number, entry in enumerate(told):
            before, _ = rebuild(told[:number])
            assert load_state_before(entry.order) == before
        everything, _ = rebuild(told)
        assert load_state_before((shop.now + timedelta(days=1), 0)) == everything
        bath = str(vessel(shop, "Copper").uuid)
        assert load_state_before(told[-1].order, [bath]).holdings.keys() == {
            key for key in everything.holdings if key[0] == bath
        }


def test_a_late_entry_folds_as_if_it_had_been_recorded_in_time(shop: Shop) -> None:
    plate_a_week(shop)
    shop.record("level-reading", days_ago=4, vessel="Copper", volume="19 L", sd="0.1 L")
    late = shop.ledger()
    assert is_as_rebuilt(shop)
    refold(shop.member.workshop)
    assert shop.ledger() == late


def test_what_happened_before_a_late_entry_is_not_written_again(shop: Shop) -> None:
    runs = plate_a_week(shop)
    earlier, later = rows_of(shop, *runs[:2]), rows_of(shop, *runs[2:])
    shop.record("level-reading", days_ago=4, vessel="Copper", volume="19 L")
    assert rows_of(shop, *runs[:2]) == earlier
    assert not rows_of(shop, *runs[2:]) & later


def test_what_a_late_entry_does_not_concern_is_not_written_again(shop: Shop) -> None:
    shop.tank("Nickel", "20 L", kind="bath", metal="Ni", valence=2, anode_kind="inert")
    shop.record("opening", days_ago=9, vessel="Nickel", volume="20 L", held=[{"metal": "Ni", "amount": "60 g/L"}])
    elsewhere = [shop.record("level-reading", days_ago=days, vessel="Nickel", volume="19 L") for days in (3, 2)]
    kept = rows_of(shop, *elsewhere)
    shop.record("level-reading", days_ago=4, vessel="Copper", volume="19 L")
    assert rows_of(shop, *elsewhere) == kept
    assert is_as_rebuilt(shop)


def test_cancelling_restores_to_the_row_what_stood_before(shop: Shop) -> None:
    plate_a_week(shop)
    before = shop.ledger()
    shop.record("move", days_ago=4, label="wrong", source="Copper", target="Rinse", volume="1 L")
    assert shop.ledger() != before
    shop.record("cancellation", entry="wrong", reason="the other tank")
    assert shop.ledger() == before
    assert is_as_rebuilt(shop)


def test_cancelling_the_last_entry_folds_nothing_again(shop: Shop) -> None:
    runs = plate_a_week(shop)
    kept = rows_of(shop, *runs)
    shop.record("level-reading", label="wrong", vessel="Copper", volume="9 L")
    shop.record("cancellation", entry="wrong", reason="misread")
    assert rows_of(shop, *runs) == kept
    assert rows_of(shop, shop.entries["wrong"]) == set()
    assert is_as_rebuilt(shop)


def test_holdings_and_memories_that_nothing_speaks_of_any_more_vanish(shop: Shop) -> None:
    spare = shop.tank("Spare", "10 L")
    shop.record("move", days_ago=5, label="wrong", source="Copper", target="Spare", volume="1 L")
    assert shop.holds(spare) != {}
    assert read_memory(spare)[1] != frozenset()
    shop.record("cancellation", entry="wrong", reason="it went elsewhere")
    with scope(workshop=shop.member.workshop):
        assert not Holding.objects.filter(vessel=spare).exists()
        assert not Memory.objects.filter(vessel=spare).exists()
    assert is_as_rebuilt(shop)


def test_a_late_pour_is_remembered_by_everything_it_reached(shop: Shop) -> None:
    """The marks of what was poured in follow the liquid, also when it is recorded too late."""
    spare = shop.tank("Spare", "10 L")
    shop.record("move", days_ago=3, source="Rinse", target="Spare", volume="1 L", happened=True)
    assert read_memory(spare)[1] == frozenset()
    shop.record("move", days_ago=4, source="Copper", target="Rinse", volume="1 L", happened=True)
    assert read_memory(spare)[1] == read_memory(vessel(shop, "Copper"))[1] != frozenset()
    assert is_as_rebuilt(shop)


def test_a_late_analysis_is_accepted_in_its_place(shop: Shop) -> None:
    plate_a_week(shop)
    shop.record("analysis", days_ago=4, label="a", vessel="Copper", metal="Cu", result="45 g/L")
    shop.record("acceptance", analysis="a", label="accepted")
    assert is_as_rebuilt(shop)
    accepted = shop.ledger()
    shop.record("cancellation", entry="accepted", reason="the wrong bottle")
    assert is_as_rebuilt(shop)
    shop.record("acceptance", analysis="a")
    assert shop.ledger() == accepted


def test_an_acceptance_of_what_was_cancelled_changes_nothing(shop: Shop) -> None:
    shop.record("analysis", days_ago=4, label="a", vessel="Copper", metal="Cu", result="45 g/L")
    shop.record("acceptance", analysis="a", label="accepted")
    shop.record("cancellation", entry="accepted", reason="the wrong bottle")
    assert is_as_rebuilt(shop)
    assert shop.went(shop.entries["accepted"], "Cu") == {}


def test_within_a_minute_what_was_recorded_first_counts_first(shop: Shop) -> None:
    """Two runs of one minute and a level reading between them: the order of recording tells them apart."""
    shop.record("run", days_ago=2, route="Plate", charge="10 Ah")
    reading = shop.record("level-reading", days_ago=2, vessel="Rinse", volume="10 L")
    last = shop.record("run", days_ago=2, route="Plate", charge="10 Ah")
    assert shop.went(reading, "volume") == {}  # the first run brought as much as it took away
    earlier = shop.record("level-reading", days_ago=2, label="reading", vessel="Copper", volume="19.5 L")
    assert shop.went(earlier, "volume")["Copper"] == -(500 * ML - 2 * 10 * ML)
    with scope(workshop=shop.member.workshop):
        assert (
            Content.objects.get(entry=last, vessel__name="Copper", component__code="volume").amount == 20 * L - 20 * ML
        )
    assert is_as_rebuilt(shop)
    shop.record("cancellation", entry="reading", reason="misread")
    assert is_as_rebuilt(shop)


def count(act: Callable[[], Any]) -> int:
    with CaptureQueriesContext(connection) as captured:
        act()
    return len(captured)


def test_a_late_entry_asks_as_often_behind_ten_entries_as_behind_a_hundred(shop: Shop) -> None:
    """What lies before its place does not matter, how much it is."""
    plate_a_week(shop)

    def late() -> None:
        shop.record("level-reading", days_ago=2.5, vessel="Rinse", volume="10 L")

    late()
    few = count(late)
    for number in range(90):
        shop.record("level-reading", days_ago=8 - number / 1000, vessel="Copper", volume="20 L")
    assert count(late) == few


@pytest.mark.parametrize("stretch", [1, 2, 3])
def test_however_long_a_stretch_is_the_books_say_the_same(
    shop: Shop, monkeypatch: pytest.MonkeyPatch, stretch: int
) -> None:
    monkeypatch.setattr(recompute, "STRETCH", stretch)
    plate_a_week(shop)
    shop.record("move", days_ago=4, label="wrong", source="Copper", target="Rinse", volume="1 L")
    shop.record("level-reading", days_ago=5.5, vessel="Copper", volume="19 L")
    shop.record("cancellation", entry="wrong", reason="the other tank")
    assert is_as_rebuilt(shop)
    kept = shop.ledger()
    refold(shop.member.workshop)
    assert shop.ledger() == kept


def test_a_record_at_the_end_of_time_asks_as_often_behind_many_as_behind_few(shop: Shop) -> None:
    few = count(lambda: shop.record("level-reading", vessel="Copper", volume="19 L"))
    plate_a_week(shop)
    assert count(lambda: shop.record("level-reading", vessel="Copper", volume="18.9 L")) == few
