"""Pages of a count day: what is scanned, said, compared and finished, and what is told of what is wrong."""

import csv
import io
from collections.abc import Callable
from datetime import timedelta
from typing import Any

import pytest
from django.utils import timezone
from django_scopes import scope
from pytest_django import DjangoAssertNumQueries as Num

from chemicals.journal.models import Entry
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.counting.selectors import get_count_day_for, list_lines_of
from chemicals.process.counting.services import start_count
from chemicals.process.inputs import ReceiptInput
from chemicals.process.models import CountDay
from chemicals.process.setup import create_holder
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from chemicals.workshop.services import create_place
from tests.web.conftest import Line, Say, Visitor, text_of

pytestmark = pytest.mark.django_db


@pytest.fixture
def day(visit: Visitor, filled: Line) -> CountDay:
    """Return an open count of everything; 1 kg of salt is in the tub."""
    with scope(workshop=visit.member.workshop):
        return start_count(actor=visit.member, now=timezone.now(), note="December")


@pytest.fixture
def grow(visit: Visitor, day: CountDay, filled: Line, say: Say) -> Callable[[int], None]:
    """Return a function that counts one more jar, and leaves one more uncounted, with a count of their own place."""

    def add(number: int) -> None:
        make: dict[str, Any] = {"actor": visit.member, "now": timezone.now()}
        with scope(workshop=visit.member.workshop):
            place = create_place(actor=visit.member, name=f"Place {number}")
            make |= {"kind": VesselKind.STOCK, "product": filled.salt, "place": place}
            jar, _ = (create_holder(**make, name=f"{name} {number}") for name in ("Jar", "Spare jar"))
            start_count(actor=visit.member, now=timezone.now(), place=place)
        say(ReceiptInput(vessel=jar.uuid, amount=parse("1 kg", "mass")))
        note(visit, day, jar, amount="900 g")

    return add


def note(visit: Visitor, day: CountDay, vessel: Vessel, do: str = "amount", **said: object) -> Any:
    """Press a button on the page of a container."""
    return visit.post("count", day.uuid, code=vessel.code, do=do, **said)


def standing(visit: Visitor, day: CountDay) -> list[str]:
    """Return what was said and stands."""
    with scope(workshop=visit.member.workshop):
        lines = list_lines_of(visit.member, day).filter(taken_back_at=None).order_by("pk")
        return [f"{line.vessel} {line.typed or line.said}" for line in lines]


def test_a_count_is_started_and_gone_on_with(visit: Visitor, filled: Line) -> None:
    started = visit.post("counts", note="shelf by shelf")
    assert started.status_code == 302
    assert "0 of 2 seen" in text_of(visit.client.get(started.headers["Location"]))
    again = visit.post("counts")
    assert again.status_code == 409
    assert "Go on with that count" in text_of(again)
    index, today = text_of(visit.get("counts")), text_of(visit.get("today"))
    assert "shelf by shelf" in index
    assert "Counts that are open" in today
    assert "0 of 2 seen" in today


def test_what_the_books_say_is_folded_away_until_somebody_looks(visit: Visitor, day: CountDay, filled: Line) -> None:
    page = text_of(visit.get("count", day.uuid, query=f"?code={filled.tub.code}"))
    folded = page.partition("<summary>What the books say</summary>")
    assert "1 kg" not in folded[0]
    assert "1 kg" in folded[2]
    assert "autofocus" in folded[0]


@pytest.mark.parametrize("name", ["bath", "drum"])
def test_a_tank_or_a_waste_container_is_answered_with_a_remedy(
    visit: Visitor, day: CountDay, filled: Line, name: str
) -> None:
    vessel = filled.bath if name == "bath" else filled.drum.vessel
    response = visit.get("count", day.uuid, query=f"?code={vessel.code}")
    assert response.status_code == 400
    assert "own page" in text_of(response)


def test_a_line_is_saved_at_once_and_said_anew_or_taken_back(visit: Visitor, day: CountDay, filled: Line) -> None:
    saved = note(visit, day, filled.tub, amount="990 g", sd="2 g", remark="lid was loose")
    assert saved.headers["Location"] == visit.address("count", day.uuid)
    note(visit, day, filled.acid, "agrees", amount="what was begun")
    note(visit, day, filled.tub, amount="980 g")
    assert standing(visit, day) == ["Acid bottle agrees", "Salt tub 980 g"]
    page = text_of(visit.get("count", day.uuid))
    assert "Salt tub: 990 g ± 2 g" in page.partition("Taken back, or said anew")[2]
    with scope(workshop=visit.member.workshop):
        line = list_lines_of(visit.member, day)[0]
    visit.post("take-line-back", day.uuid, line.uuid)
    assert standing(visit, day) == ["Acid bottle agrees"]


def test_what_is_wrong_stands_beside_what_was_typed(visit: Visitor, day: CountDay, filled: Line) -> None:
    for said, told in {
        "": "Write what is there",
        "12": "no unit",
        "1,5 kg": "1.5",
        "2 L": "by its weight",
        "five handfuls": "five handfuls",
    }.items():
        response = note(visit, day, filled.tub, amount=said, remark="kept")
        assert response.status_code == 400, said
        assert told in text_of(response)
        assert 'value="kept"' in text_of(response)
    assert note(visit, day, filled.tub, amount="1 kg", remark="x" * 201).status_code == 400
    assert visit.post("count", day.uuid, code="NOSUCH", do="amount").status_code == 400
    assert standing(visit, day) == []


def test_it_stands_here_now_and_it_is_here_again(visit: Visitor, filled: Line) -> None:
    with scope(workshop=visit.member.workshop):
        shelf = create_place(actor=visit.member, name="Shelf")
        day = start_count(actor=visit.member, now=timezone.now(), place=shelf)
        Vessel.objects.filter(pk=filled.acid.pk).update(gone_at=timezone.now() - timedelta(days=1))
    page = text_of(visit.get("count", day.uuid, query=f"?code={filled.acid.code}"))
    assert "The books say it is gone." in page
    assert "It stands here now" in page
    note(visit, day, filled.acid, "again")
    note(visit, day, filled.acid, "here")
    filled.acid.refresh_from_db()
    assert (filled.acid.gone_at, filled.acid.place) == (None, shelf)
    page = text_of(visit.get("count", day.uuid, query=f"?code={filled.acid.code}"))
    assert "is gone" not in page
    assert "It stands here now" not in page
    assert "0 of 1 seen" in page


def test_compare_finish_and_read_it_later(visit: Visitor, day: CountDay, filled: Line) -> None:
    note(visit, day, filled.tub, amount="900 g")
    preview = text_of(visit.get("count-preview", day.uuid))
    assert "differs" in preview
    assert "−100 g" in preview
    assert "Acid bottle" in preview.partition("Not seen yet")[2]
    note(visit, day, filled.acid, "missing", **{"from": "preview"})
    done = visit.post("count-preview", day.uuid)
    assert done.headers["Location"] == visit.address("count", day.uuid)
    assert visit.post("count-preview", day.uuid).status_code == 302, "a second press is harmless"
    with scope(workshop=visit.member.workshop):
        (entry,) = Entry.objects.filter(kind="count")
    page = text_of(visit.get("count", day.uuid))
    assert "1 entry followed." in page
    assert f"entry {entry.sequence}" in page
    rows = list(csv.reader(io.StringIO(b"".join(visit.get("count", day.uuid, query="?as=csv")).decode("utf-8-sig"))))
    tub = dict(zip(rows[0], rows[2], strict=True))
    assert (tub["container"], tub["unit"], tub["counted"], tub["books"]) == ("Salt tub", "g", "900", "1000")
    assert (tub["difference"], tub["verdict"], tub["entry"]) == ("-100", "differs", str(entry.sequence))
    assert "1 container seen" in text_of(visit.get("counts"))
    assert "Last seen" in text_of(visit.get("vessel", filled.tub.uuid))


def test_what_is_wrong_with_a_finish_is_told_and_nothing_is_recorded(
    visit: Visitor, day: CountDay, filled: Line
) -> None:
    note(visit, day, filled.tub, amount="900 g")
    with scope(workshop=visit.member.workshop):
        Vessel.objects.filter(pk=filled.tub.pk).update(gone_at=timezone.now() - timedelta(days=1))
    response = visit.post("count-preview", day.uuid)
    assert response.status_code == 400
    assert "Salt tub is gone since" in text_of(response)
    with scope(workshop=visit.member.workshop):
        assert not Entry.objects.filter(kind="count").exists()


def test_an_abandoned_count_is_read_but_records_nothing(visit: Visitor, day: CountDay, filled: Line) -> None:
    note(visit, day, filled.tub, amount="900 g")
    visit.post("abandon-count", day.uuid)
    assert "Abandoned: nothing of this was recorded." in text_of(visit.get("count", day.uuid))
    assert visit.get("count-preview", day.uuid).status_code == 302
    assert note(visit, day, filled.tub, amount="1 kg").status_code == 409
    assert visit.post("count-preview", day.uuid).status_code == 409


def test_while_a_count_is_open_a_container_offers_it(visit: Visitor, day: CountDay, filled: Line) -> None:
    assert "Count it" in text_of(visit.get("vessel", filled.tub.uuid))
    assert "Count it" not in text_of(visit.get("vessel", filled.bath.uuid))
    visit.post("abandon-count", day.uuid)
    assert "Count it" not in text_of(visit.get("vessel", filled.tub.uuid))


def test_an_observer_reads_and_notes_nothing(day: CountDay, observer: Membership, filled: Line) -> None:
    visitor = Visitor(observer)
    page = text_of(visitor.get("count", day.uuid, query=f"?code={filled.tub.code}"))
    assert "Save" not in page
    assert "Finish the count" not in text_of(visitor.get("count-preview", day.uuid))
    assert note(visitor, day, filled.tub, amount="1 kg").status_code == 403
    assert visitor.post("count-preview", day.uuid).status_code == 403


@pytest.mark.parametrize("more", [0, 2])
def test_the_pages_take_as_many_queries_for_one_row_as_for_three(
    visit: Visitor, day: CountDay, grow: Callable[[int], None], more: int, django_assert_num_queries: Num
) -> None:
    for number in range(1 + more):
        grow(number)
    for name, queries in {"counts": 9, "count": 8, "count-preview": 8}.items():
        args = () if name == "counts" else (day.uuid,)
        visit.get(name, *args)
        with django_assert_num_queries(queries):
            visit.get(name, *args)
    with scope(workshop=visit.member.workshop):
        assert get_count_day_for(visit.member, day.uuid).seen == 1 + more  # type: ignore[attr-defined]  # annotated
