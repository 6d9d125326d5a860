"""Kill -9 before each write of an act, and before its answer: it is done wholly or not at all, and once."""

from collections import Counter
from collections.abc import Callable, Mapping
from datetime import timedelta
from itertools import count
from typing import Any
from uuid import UUID

import pytest
from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.journal.models import Attachment, Entry
from chemicals.journal.services import add_attachment
from chemicals.journal.verify import verify_files
from chemicals.ledger.models import Books, Vessel
from chemicals.ledger.periods import close_period, reopen_period
from chemicals.register.models import Product
from chemicals.science.quantity import parse
from compliance.clearance import together
from compliance.clearance.receiving import JarInput, NewProductInput, receive_containers
from compliance.clearance.services import record
from tests.ledger.closing import BEGUN
from tests.process.machine.acting import Act
from tests.process.machine.books import all_rows
from tests.process.machine.office import Office, Said
from tests.process.machine.people import Line

pytestmark = pytest.mark.django_db(transaction=True)
KEY = UUID(int=1)


def said(office: Office, verb: str, *, days_ago: float = 0, key: UUID = KEY, **words: Any) -> Said:
    """Return what the worker sets out to record."""
    occurred = Occurred(office.now - timedelta(days=days_ago)) if days_ago else None
    return Said(office.worker, key, office.shop.read(verb, **words), occurred, already_happened=True)


def a_move(office: Office, days_ago: float = 0, key: UUID = KEY) -> Said:
    return said(office, "move", days_ago=days_ago, key=key, source="Copper", target="First rinse", volume="1 L")


def do(office: Office, what: Said) -> Entry:
    """Record something that nobody is killed over."""
    entry = office.record(what)
    assert entry is not None
    return entry


def plate(office: Office) -> None:
    """Plate six times, eight to three days ago."""
    for days in range(8, 2, -1):
        do(office, said(office, "run", days_ago=days, key=UUID(int=days * 100), route="Copper line", charge="10 Ah"))


def kill_everywhere(office: Office, service: Callable[..., object], arguments: Mapping[str, Any]) -> int:
    """Do an act again and again, killed before its first write, its second... until it lives; return its deaths.

    All that anybody ever sees is how it was before, and how it is when all is done; then it changes nothing more.
    """
    states = [all_rows(office.workshop)]
    for death in count(1):
        (answer,) = office.line.act(Act(service, arguments, death, office.limits))
        rows = all_rows(office.workshop)
        if rows != states[-1]:
            states.append(rows)
        if answer is not None:
            assert answer.refusal == ""
            assert len(states) == 2
            return death - 1
    raise AssertionError


def kill_record(office: Office, what: Said) -> int:
    """Kill a record everywhere; return its deaths."""
    deaths = kill_everywhere(office, record, what.arguments(office.now))
    office.books.doubtful.add(what.key)
    office.books.prove()
    assert what.key in office.books.entries
    return deaths


def test_the_first_record_of_a_workshop(line: Line, transactional_db: None) -> None:
    office = Office(line, {}, Counter())
    deaths = kill_record(office, said(office, "receipt", vessel="Salt", amount="5 kg"))
    assert deaths > 10  # head, books and components are there for the first time
    assert list(office.books.rows) == ["1"]


def test_a_record_at_the_end_of_time(office: Office) -> None:
    assert kill_record(office, a_move(office)) > 5


def test_a_late_record_and_its_cancellation(office: Office) -> None:
    plate(office)
    assert kill_record(office, a_move(office, days_ago=7.5)) > 10
    assert kill_record(office, said(office, "cancellation", key=UUID(int=2), entry="13", reason="a mistake")) > 10


def test_an_analysis_is_accepted(office: Office) -> None:
    do(office, said(office, "analysis", days_ago=1, vessel="Copper", metal="Cu", result="49 g/L"))
    assert kill_record(office, said(office, "acceptance", key=UUID(int=2), analysis="7")) > 5


def test_a_late_record_that_is_left_to_the_job(busy: Office) -> None:
    plate(busy)
    assert kill_record(busy, a_move(busy, days_ago=7.5)) > 5
    assert not busy.stands
    busy.finish()
    busy.books.prove()


def test_the_steps_of_the_job(busy: Office) -> None:
    plate(busy)
    do(busy, a_move(busy, days_ago=7.5))
    death, steps = 1, Counter[object]()
    while not busy.stands:
        with scope(workshop=busy.workshop):
            before = Books.objects.get().position
        busy.work(death)
        busy.books.prove()
        with scope(workshop=busy.workshop):
            after = Books.objects.get().position
        steps[after] += 1
        death = death + 1 if before == after else 1
    assert len(steps) == 3
    assert busy.done["killed"] > 15


def test_a_period_is_closed_and_opened_again(office: Office) -> None:
    plate(office)
    closing, reopening = UUID(int=2), UUID(int=3)
    office.books.doubtful |= {closing, reopening}
    closed: dict[str, Any] = {"actor": office.owner, "now": office.now, "key": closing, "until": BEGUN}
    assert kill_everywhere(office, close_period, closed) > 5
    office.books.prove()
    assert office.books.closed_until == BEGUN
    period = close_period(**closed)
    opened = {"actor": office.owner, "now": office.now, "key": reopening, "period": period, "reason": "forgotten"}
    assert kill_everywhere(office, reopen_period, opened) > 3
    office.books.prove()
    assert office.books.closed_until is None


def test_jars_come_in_with_a_new_product(office: Office) -> None:
    new = NewProductInput(name="Brightener", form="liquid")
    jar = JarInput(new_product=new, count=2, amount=parse("500 mL", "volume"), expires_on=BEGUN.date())
    came = {"actor": office.worker, "now": office.now, "key": KEY, "jar": jar}
    assert kill_everywhere(office, receive_containers, came) > 5
    with scope(workshop=office.workshop):
        office.books.doubtful |= {entry.uuid for entry in Entry.objects.order_by("-sequence")[:2]}
        office.books.prove()
        assert Vessel.objects.filter(product__name="Brightener").count() == 2
        assert Product.objects.filter(name="Brightener").count() == 1


def test_several_records_are_one_act(office: Office) -> None:
    plate(office)
    moves = (a_move(office, days_ago=7.5), a_move(office))
    both = [together.Said(data=move.data, occurred=move.occurred, already_happened=True) for move in moves]
    acts = {"actor": office.worker, "now": office.now, "key": KEY, "said": both}
    assert kill_everywhere(office, together.record_all, acts) > 10
    with scope(workshop=office.workshop):
        office.books.doubtful |= {entry.uuid for entry in Entry.objects.order_by("-sequence")[:2]}
        office.books.prove()
        assert Entry.objects.filter(kind="move").count() == 2


def test_a_file_is_kept(office: Office) -> None:
    photo = {"actor": office.worker, "now": office.now, "name": "gauge.png", "data": b"\x89PNG\r\n\x1a\n of the gauge"}
    assert kill_everywhere(office, add_attachment, photo) > 1
    assert verify_files(office.workshop) == []
    with scope(workshop=office.workshop):
        assert Attachment.objects.count() == 1


@pytest.mark.parametrize("days_ago", [0, 7.5], ids=["on time", "late"])
def test_who_records_beside_somebody_who_is_killed_is_answered(office: Office, days_ago: float) -> None:
    plate(office)
    office.books.doubtful.add(KEY)
    for death in count(1, 4):
        other = a_move(office, days_ago, UUID(int=1000 + death))
        acts = [Act(record, a_move(office, 7.5).arguments(office.now), death), Act(record, other.arguments(office.now))]
        mine, theirs = office.line.act(*acts)
        assert theirs is not None
        office.books.add(theirs.value.entry)
        office.books.prove()
        if mine is not None:
            assert KEY in office.books.entries
            break
    assert death > 10


def test_one_button_pressed_by_two_of_whom_one_is_killed_makes_one_entry(office: Office) -> None:
    for number in range(1, 8):
        what = a_move(office, key=UUID(int=number))
        arguments = what.arguments(office.now)
        _, theirs = office.line.act(Act(record, arguments, killed_at=number), Act(record, arguments))
        assert theirs is not None
        office.books.add(theirs.value.entry)
        office.books.prove()
    assert len(office.books.rows) == 6 + 7
