"""A count day is finished: what differs from the books becomes entries, all of them or none."""

from collections.abc import Iterator
from datetime import datetime, timedelta

import pytest
from django_scopes import scope

from chemicals.journal.models import Entry
from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.models import Content, Holding, Vessel
from chemicals.ledger.periods import close_period
from chemicals.process.counting.selectors import (
    AGREES,
    DIFFERS,
    WAS_UNKNOWN,
    WITHIN,
    find_last_seen,
    get_count_day_for,
    list_lines_of,
    reckon_count,
)
from chemicals.process.counting.services import SeenInput, abandon_count, note_line, start_count, take_line_back
from chemicals.process.fields import AmountField, read_amount
from chemicals.process.models import CountDay, Seen
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from compliance.clearance.counting import finish_count
from tests.process.shop import KG, L, Shop

EITHER = AmountField("", dimensions=("mass", "volume"))
pytestmark = pytest.mark.django_db


class Walk:
    """Somebody who counts in the shop, a minute after the other."""

    def __init__(self, shop: Shop) -> None:
        self.shop, self.member, self.clock = shop, shop.member, shop.now
        self.day = start_count(actor=self.member, now=self.clock, note="December")

    def tick(self) -> datetime:
        """Let a minute pass."""
        self.clock += timedelta(minutes=1)
        self.shop.now = self.clock
        return self.clock

    def vessel(self, name: str) -> Vessel:
        """Return a container by its name."""
        with scope(workshop=self.member.workshop):
            return Vessel.objects.select_related("place").get(name=name)

    def see(self, name: str, said: str, sd: str = "") -> None:
        """Note what was seen: an amount, or one of the words."""
        words = {word.value: word for word in Seen}
        amount = None if said in words else read_amount(EITHER, said)
        doubt = read_amount(EITHER, sd) if sd else None
        seen = SeenInput(said=words.get(said, Seen.AMOUNT), amount=amount, sd=doubt)
        note_line(actor=self.member, now=self.tick(), day=self.day, vessel=self.vessel(name), seen=seen)

    def verdicts(self) -> dict[str, str]:
        """Return what the preview says, by container."""
        return {row.line.vessel.name: row.verdict for row in reckon_count(self.member, self.day).rows}

    def finish(self) -> CountDay:
        """Finish the count."""
        return finish_count(actor=self.member, now=self.tick(), day=self.day)

    def entries(self) -> list[Entry]:
        """Return the counts that were recorded, in order."""
        with scope(workshop=self.member.workshop):
            return list(Entry.objects.filter(kind="count").order_by("sequence"))


@pytest.fixture
def walk(shop: Shop) -> Iterator[Walk]:
    with scope(workshop=shop.member.workshop):
        yield Walk(shop)


def test_what_differs_becomes_an_entry_dated_when_it_was_seen(walk: Walk, shop: Shop) -> None:
    walk.see("Acid", "17 L")
    walk.see("Cyanide", "agrees")
    walk.see("Bleach", "missing")
    walk.see("Lye", "20 L")
    assert walk.verdicts() == {"Acid": DIFFERS, "Cyanide": AGREES, "Bleach": DIFFERS, "Lye": AGREES}
    walk.finish()
    made = walk.entries()
    assert [entry.occurred_at for entry in made] == [shop.now - timedelta(minutes=4), shop.now - timedelta(minutes=2)]
    assert shop.went(made[0], "volume") == {"Acid": -1 * L, "unaccounted": L}
    assert shop.went(made[1], "volume") == {"Bleach": -20 * L, "unaccounted": 20 * L}
    assert shop.holds(walk.vessel("Bleach"))["gross mass"] == 0
    assert shop.is_proved()


def test_a_pour_between_counting_and_finishing_stays_right(walk: Walk, shop: Shop) -> None:
    walk.see("Lye", "19 L")
    walk.tick()
    shop.record("drum-off", source="Lye", target="Sour drum", volume="4 L", happened=True)
    assert walk.verdicts() == {"Lye": DIFFERS}
    walk.finish()
    assert shop.holds(walk.vessel("Lye"))["volume"] == 15 * L
    assert shop.went(walk.entries()[0], "volume") == {"Lye": -1 * L, "unaccounted": L}
    assert shop.is_proved()


def test_what_uncertainty_explains_is_told_from_what_it_does_not(walk: Walk, shop: Shop) -> None:
    walk.see("Lye", "19.9 L", sd="0.1 L")
    assert walk.verdicts() == {"Lye": WITHIN}
    row = reckon_count(walk.member, walk.day).rows[0]
    assert (row.difference, row.difference_sd) == (-L // 10, L // 10)
    walk.see("Lye", "19.8 L", sd="0.1 L")
    assert walk.verdicts() == {"Lye": DIFFERS}
    walk.finish()
    assert [entry.kind for entry in walk.entries()] == ["count"]


def test_what_the_books_do_not_know_is_an_entry_in_any_case(walk: Walk, shop: Shop) -> None:
    shop.record("opening", vessel="Filter", mass="1 kg")
    unknown = {"vessel": walk.vessel("Filter"), "component__code": "gross mass"}
    Holding.objects.filter(**unknown).update(amount=None)
    Content.objects.filter(**unknown).update(amount=None)
    with pytest.raises(InvalidInputError) as caught:
        walk.see("Filter", "agrees")
    assert "do not know how much" in caught.value.errors[0].message
    walk.see("Filter", "2 kg")
    assert walk.verdicts() == {"Filter": WAS_UNKNOWN}
    walk.finish()
    assert shop.holds(walk.vessel("Filter"))["gross mass"] == 2 * KG


def test_finishing_twice_records_once_and_the_first_lines_are_kept(walk: Walk, shop: Shop) -> None:
    walk.see("Lye", "15 L")
    walk.see("Lye", "19 L")
    first = walk.finish()
    assert walk.finish().finished_at == first.finished_at
    assert len(walk.entries()) == 1
    lines = list(list_lines_of(walk.member, walk.day))
    assert [(line.typed, line.taken_back_at is None) for line in lines] == [("19 L", True), ("15 L", False)]
    assert lines[0].entry == walk.entries()[0]
    rows = reckon_count(walk.member, get_count_day_for(walk.member, walk.day.uuid)).rows
    assert [(row.books.amount, row.difference) for row in rows] == [(20 * L, -1 * L)], "its own entry is left out"
    assert "Acid" in " ".join(first.unseen)


def test_all_errors_come_at_once_by_container_and_nothing_is_recorded(walk: Walk, shop: Shop) -> None:
    walk.see("Acid", "17 L")
    walk.see("Lye", "19 L")
    with scope(workshop=walk.member.workshop):
        Vessel.objects.filter(name__in=("Acid", "Lye")).update(gone_at=shop.now - timedelta(days=1))
    with pytest.raises(InvalidInputError) as caught:
        walk.finish()
    codes = {f"lines.{walk.vessel(name).code}" for name in ("Acid", "Lye")}
    assert {error.field for error in caught.value.errors} == codes
    assert walk.entries() == []
    assert get_count_day_for(walk.member, walk.day.uuid).finished_at is None


def test_a_line_of_a_period_that_is_closed_by_now_is_refused_by_name(walk: Walk, shop: Shop, owner: Membership) -> None:
    walk.see("Lye", "19 L")
    later = walk.clock + timedelta(days=3)
    midnight = (walk.clock + timedelta(days=1)).astimezone(walk.member.workshop.zone).replace(hour=0, minute=0)
    close_period(actor=owner, now=later, key=walk.day.uuid, until=midnight)
    with pytest.raises(InvalidInputError) as caught:
        finish_count(actor=walk.member, now=later, day=walk.day)
    assert [error.message for error in caught.value.errors] == [
        "Lye: the period is closed by now. Look at it once more."
    ]


def test_two_people_count_at_once_and_the_last_word_on_a_container_holds(
    walk: Walk, shop: Shop, owner: Membership
) -> None:
    walk.see("Lye", "19 L")
    seen = SeenInput(said=Seen.AMOUNT, amount=read_amount(EITHER, "18 L"))
    note_line(actor=owner, now=walk.tick(), day=walk.day, vessel=walk.vessel("Lye"), seen=seen)
    walk.see("Acid", "agrees")
    rows = reckon_count(walk.member, walk.day).rows
    assert [(row.line.vessel.name, row.line.seen_by) for row in rows] == [("Acid", walk.member), ("Lye", owner)]
    with pytest.raises(ConflictError):
        start_count(actor=owner, now=walk.clock)


def test_what_is_taken_back_or_abandoned_records_nothing(walk: Walk, shop: Shop) -> None:
    walk.see("Lye", "19 L")
    line = list_lines_of(walk.member, walk.day)[0]
    take_line_back(actor=walk.member, now=walk.tick(), line=line)
    assert walk.verdicts() == {}
    walk.see("Acid", "3 L")
    abandon_count(actor=walk.member, now=walk.tick(), day=walk.day)
    assert find_last_seen(walk.member, walk.vessel("Acid")) is None
    with pytest.raises(ConflictError):
        walk.finish()
    with pytest.raises(ConflictError):
        walk.see("Acid", "4 L")
    assert walk.entries() == []


def test_last_seen_is_when_somebody_saw_it_not_when_it_was_missing(walk: Walk, shop: Shop) -> None:
    walk.see("Lye", "agrees")
    walk.see("Acid", "missing")
    walk.finish()
    found = find_last_seen(walk.member, walk.vessel("Lye"))
    assert found is not None
    assert (found.seen_by, found.seen_at) == (walk.member, walk.day.started_at + timedelta(minutes=1))
    assert find_last_seen(walk.member, walk.vessel("Acid")) is None


def test_an_empty_container_that_was_put_away_and_is_not_there_agrees(walk: Walk, shop: Shop) -> None:
    empty = shop.holder("Old jar")
    change_vessels(actor=walk.member, now=walk.clock, vessels=[empty], care=CareInput(gone=True))
    walk.see("Old jar", "missing")
    walk.finish()
    assert walk.entries() == []


def test_observers_and_strangers_finish_nothing(
    walk: Walk, observer: Membership, stranger: Membership, shop: Shop
) -> None:
    walk.see("Lye", "19 L")
    for member in (observer, stranger):
        with pytest.raises(NotPermittedError):
            finish_count(actor=member, now=walk.clock, day=walk.day)
    assert walk.entries() == []
