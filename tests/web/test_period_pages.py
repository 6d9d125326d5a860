"""Periods on their pages: closed by an owner, proved, opened again; and pages that say while the books are behind."""

import re
from datetime import date, datetime, timedelta
from typing import Any
from uuid import uuid4

import pytest
from django_scopes import scope

from chemicals.books.occurred import Occurred
from chemicals.jobs.models import Job, State
from chemicals.ledger import late
from chemicals.ledger.models import Period
from chemicals.process.inputs import HeldRow, LevelInput, OpeningInput
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from compliance.clearance.services import record
from tests.web.conftest import Line, Visitor, text_of
from tests.web.test_lists import rows_of


@pytest.fixture
def old(line: Line, owner: Membership, now: datetime) -> Line:
    """Return the line with a bath whose counting began in January, and whose level was read in February."""
    copper = HeldRow(metal="Cu", amount=parse("50 g/L", "concentration"))
    said = OpeningInput(vessel=line.bath.uuid, volume=parse("20 L", "volume"), held=(copper,), complete=True)
    read = LevelInput(vessel=line.bath.uuid, volume=parse("19 L", "volume"))
    for data, day in ((said, date(2026, 1, 10)), (read, date(2026, 2, 10))):
        at = Occurred.on_day(day, owner.workshop.zone)
        record(actor=owner, now=now, key=uuid4(), data=data, occurred=at)
    return line


def close(visit: Visitor, until: str, key: object = None) -> Any:
    return visit.post("close-period", key=key or uuid4(), until=until)


def only(visit: Visitor) -> Period:
    with scope(workshop=visit.member.workshop):
        return Period.objects.select_related("closing").get()


def test_an_owner_closes_a_period_and_sees_its_proof(visit: Visitor, old: Line) -> None:
    answer = close(visit, "2026-01-31")
    period = only(visit)
    assert answer.headers["Location"] == visit.address("period", period.closing.uuid)
    text = text_of(visit.get("period", period.closing.uuid))
    assert 'Everything through <time datetime="2026-01-31">' in text
    assert "Closed. What followed from its entries is proved by two hashes." in text
    for digest in (period.followed_sha256, period.holdings_sha256):
        assert " ".join(re.findall("....", digest)) in text
    assert re.search(r"Copper bath</a></td> <td>copper</td> <td[^>]*>1 kg", text)
    listed = text_of(visit.get("periods"))
    assert period.followed_sha256[:12] + "…" in listed
    assert "by Olga" in listed
    assert "fold version" in listed


def test_a_period_is_balanced_and_compared_from_its_first_day_on(visit: Visitor, old: Line) -> None:
    close(visit, "2026-01-31")
    close(visit, "2026-02-28")
    last, first = (period.closing.uuid for period in visit.get("periods").context["periods"])
    for uuid, days in (
        (first, "since=2026-01-10&amp;until=2026-01-31"),
        (last, "since=2026-02-01&amp;until=2026-02-28"),
    ):
        page = text_of(visit.get("period", uuid))
        assert f"{visit.address('balance')}?{days}" in page
        assert f"{visit.address('difference')}?{days}&amp;component=everything" in page


def test_the_second_press_of_the_button_closes_nothing_more(visit: Visitor, old: Line) -> None:
    key = uuid4()
    assert close(visit, "2026-01-31", key).headers["Location"] == close(visit, "2026-01-31", key).headers["Location"]
    assert only(visit).sequence == 2


@pytest.mark.parametrize(
    ("until", "says"),
    [
        ("2026-03-02", "This day is not over. Choose an earlier one."),
        ("2026-03-09", "This day is not over. Choose an earlier one."),
        ("2026-01-15", "The books are closed until 2026-02-01 00:00 already. Choose a later day."),
        ("soon", "Write the date like 2026-03-02."),
        ("", "This is needed."),
    ],
)
def test_a_day_that_cannot_end_a_period_is_refused_at_its_field(
    visit: Visitor, old: Line, until: str, says: str
) -> None:
    close(visit, "2026-01-31")
    answer = close(visit, until)
    assert answer.status_code == 400
    assert says in text_of(answer)


def test_what_happened_in_a_closed_period_is_refused_with_the_remedy(visit: Visitor, old: Line) -> None:
    close(visit, "2026-02-28")
    said = {"vessel": old.bath.uuid, "volume": "18 L", "occurred_date": "2026-02-20", "occurred_time": "10:00"}
    answer = visit.post("record", "level-reading", key=uuid4(), step="save", **said)
    assert answer.status_code == 400
    assert "The books are closed for everything before 2026-03-01 00:00." in text_of(answer)


def test_the_owner_opens_the_last_one_again_with_a_reason(visit: Visitor, old: Line) -> None:
    close(visit, "2026-01-31")
    uuid = only(visit).closing.uuid
    assert visit.address("reopen-period", uuid) in visit.get("period", uuid).content.decode()
    assert "This is needed." in text_of(visit.post("reopen-period", uuid, key=uuid4(), reason=""))
    answer = visit.post("reopen-period", uuid, key=uuid4(), reason="A drum was forgotten.")
    assert answer.status_code == 302
    text = text_of(visit.get("period", uuid))
    assert "superseded" in text
    assert "A drum was forgotten." in text
    assert visit.address("reopen-period", uuid) not in text
    assert "superseded" in text_of(visit.get("periods"))


def test_only_the_last_one_can_be_opened_again(visit: Visitor, old: Line) -> None:
    close(visit, "2026-01-31")
    first = only(visit).closing.uuid
    close(visit, "2026-02-28")
    assert visit.address("reopen-period", first) not in visit.get("period", first).content.decode()
    answer = visit.post("reopen-period", first, key=uuid4(), reason="Too soon.")
    assert answer.status_code == 400
    assert "Only the last closed period can be opened again." in text_of(answer)


def test_workers_read_periods_and_close_none(visit: Visitor, old: Line, worker: Membership) -> None:
    close(visit, "2026-01-31")
    wim = Visitor(worker)
    page = text_of(wim.get("periods"))
    assert "An owner closes periods" in page
    assert wim.address("close-period") not in page
    assert wim.get("close-period").status_code == 403
    assert close(wim, "2026-02-28").status_code == 403
    assert wim.post("reopen-period", only(visit).closing.uuid, key=uuid4(), reason="x").status_code == 403


def test_periods_and_what_was_held_are_files_too(visit: Visitor, old: Line) -> None:
    close(visit, "2026-01-31")
    close(visit, "2026-02-28")
    rows = rows_of(visit.get("periods", query="?as=csv"))
    assert [(row["from"], row["through"], row["state"]) for row in rows] == [
        ("2026-02-01", "2026-02-28", "closed"),
        ("", "2026-01-31", "closed"),
    ]
    uuid = visit.get("periods").context["periods"][0].closing.uuid
    held = {row["what"]: row["amount"] for row in rows_of(visit.get("period", uuid, query="?as=csv"))}
    assert (held["Cu"], held["volume"]) == ("1000", "19")


def test_the_pages_link_to_periods(visit: Visitor, old: Line) -> None:
    for name in ("balance", "workshop"):
        assert visit.address("periods") in visit.get(name).content.decode()


def test_the_list_asks_as_often_for_three_rows_as_for_one(
    visit: Visitor, old: Line, django_assert_num_queries: Any
) -> None:
    for until in ("2026-01-31", "2026-02-10", "2026-02-28"):
        close(visit, until)
        with django_assert_num_queries(5):
            assert visit.get("periods").status_code == 200


@pytest.fixture
def behind(visit: Visitor, old: Line, now: datetime, monkeypatch: pytest.MonkeyPatch) -> Job:
    """Let a late entry be too much for one request: two of its later ones wait for the job."""
    monkeypatch.setattr(late, "LATE_LIMIT", 0)
    read = LevelInput(vessel=old.bath.uuid, volume=parse("19.5 L", "volume"))
    at = Occurred.on_day(date(2026, 2, 1), visit.member.workshop.zone)
    record(actor=visit.member, now=now, key=uuid4(), data=read, occurred=at)
    return Job.objects.get()


PAGES = ("today", "balance", "difference", "periods", "tanks", "vessel", "ledger", "waste-container")


@pytest.mark.parametrize("name", PAGES)
def test_pages_say_up_to_when_the_books_stand(visit: Visitor, old: Line, behind: Job, name: str) -> None:
    of = {"vessel": [old.bath.uuid], "ledger": [old.bath.uuid], "waste-container": [old.drum.vessel.uuid]}.get(name, [])
    text = text_of(visit.get(name, *of))
    assert re.search(r"The books stand up to <time[^>]*>2026-02-01 12:00</time>", text)
    Job.objects.update(progress_done=1, progress_total=2)
    assert "1 of 2 entries are recomputed." in text_of(visit.get(name, *of))


def test_a_job_that_gave_up_is_said_so(visit: Visitor, behind: Job, now: datetime) -> None:
    Job.objects.update(state=State.FAILED, finished_at=now + timedelta(hours=1))
    assert "The recomputing has given up." in text_of(visit.get("today"))


def test_books_that_stand_say_nothing_of_it(visit: Visitor, old: Line) -> None:
    assert "The books stand" not in text_of(visit.get("today"))


def test_while_the_books_are_behind_nothing_is_closed(visit: Visitor, behind: Job) -> None:
    answer = close(visit, "2026-01-31")
    assert answer.status_code == 409
    assert "being recomputed" in text_of(answer)
