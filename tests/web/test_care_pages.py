"""Care on the pages: what is known of a container, what changes of one or of many, what runs out."""

import re
from collections.abc import Callable
from datetime import date, timedelta
from typing import Any
from uuid import uuid4

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext

from chemicals.ledger.care import CareInput, change_vessels
from chemicals.ledger.models import Vessel, VesselChange
from chemicals.process.inputs import CountInput, ReceiptInput
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from chemicals.workshop.services import create_place
from compliance.clearance.receiving import JarInput, receive_containers
from compliance.premises.expiry import list_running_out
from tests.web.conftest import Line, Say, Visitor, text_of
from tests.web.test_lists import rows_of

TODAY = date(2026, 3, 2)


def fresh(vessel: Vessel) -> Vessel:
    return Vessel._base_manager.select_related("place").get(pk=vessel.pk)


def test_the_page_of_a_container_says_what_is_known(visit: Visitor, line: Line, say: Say) -> None:
    page = text_of(visit.get("vessel", line.acid.uuid))
    assert "hazards not entered" in page
    assert "<dt>keeps until</dt> <dd>not noted</dd>" in page
    say(ReceiptInput(vessel=line.tub.uuid, amount=parse("5 kg", "mass"), lot="A 7"))
    visit.post("care", line.tub.uuid, name="Salt tub", place="", opened_on="2026-03-01", expires_on="2026-02-28")
    page = text_of(visit.get("vessel", line.tub.uuid))
    assert '<p class="signal">Danger</p>' in page
    assert "Blue salt</a>, revision 1" in page
    assert re.search(r'<dt>received</dt> <dd> <time datetime="2026-03-02">2026-03-02</time>, lot A 7', page)
    assert re.search(r"<dt>opened</dt> <dd><time[^>]*>2026-03-01", page)
    assert re.search(r'<dt>keeps until</dt> <dd> <time[^>]*>2026-02-28</time> <span class="mark stop">passed', page)


def test_name_place_and_days_change_and_it_is_told_who_did(visit: Visitor, line: Line) -> None:
    shelf = create_place(actor=visit.member, name="Shelf <1>")
    said = {"name": "Tub of salt", "place": shelf.uuid, "opened_on": "2026-03-01", "expires_on": "2027-01-01"}
    assert visit.post("care", line.tub.uuid, **said).headers["Location"] == visit.address("vessel", line.tub.uuid)
    tub = fresh(line.tub)
    assert (tub.name, tub.place, tub.opened_on, tub.expires_on) == (
        "Tub of salt", shelf, date(2026, 3, 1), date(2027, 1, 1),
    )  # fmt: skip
    page = text_of(visit.get("vessel", tub.uuid))
    assert "Name: Salt tub, now Tub of salt" in page
    assert "Place: Shelf &lt;1&gt;" in page
    visit.post("care", line.tub.uuid, name="Tub of salt", place="", opened_on="", expires_on="2027-01-01")
    assert "Opened: 2026-03-01, now nothing" in text_of(visit.get("vessel", tub.uuid))
    rows = rows_of(visit.get("vessel", tub.uuid, query="?list=changes&as=csv"))
    assert len(rows) == VesselChange._base_manager.count() == 6
    assert {row["by"] for row in rows} == {str(visit.member.user)}
    assert {"what": "name", "before": "Salt tub", "after": "Tub of salt"}.items() <= rows[-1].items() or any(
        row["what"] == "name" and row["after"] == "Tub of salt" for row in rows
    )


def test_what_is_saved_as_it_was_is_no_change(visit: Visitor, line: Line) -> None:
    visit.post("care", line.tub.uuid, name="Salt tub", place="", opened_on="", expires_on="")
    assert not VesselChange._base_manager.exists()


def test_a_tank_has_a_name_and_a_place_and_no_days(visit: Visitor, line: Line) -> None:
    page = text_of(visit.get("care", line.bath.uuid))
    assert "Keeps until" not in page
    visit.post("care", line.bath.uuid, name="Old bath", place="", expires_on="2027-01-01")
    bath = fresh(line.bath)
    assert (bath.name, bath.place, bath.expires_on) == ("Old bath", None, None)
    page = text_of(visit.get("vessel", bath.uuid))
    assert "Name: Copper bath, now Old bath" in page
    assert "Opened today" not in page


def test_all_that_is_wrong_with_care_comes_at_once(visit: Visitor, line: Line) -> None:
    page = visit.post("care", line.tub.uuid, name="", place=uuid4(), opened_on="soon", expires_on="1.1.2027")
    assert page.status_code == 400
    assert set(re.findall(r'href="#(id_[a-z_]+)"', text_of(page))) == {
        "id_name", "id_place", "id_opened_on", "id_expires_on",
    }  # fmt: skip
    page = visit.post("care", line.tub.uuid, name="Acid bottle", opened_on="2026-03-03")
    assert set(re.findall(r'href="#(id_[a-z_]+)"', text_of(page))) == {"id_name", "id_opened_on"}
    assert fresh(line.tub).name == "Salt tub"


def test_opened_today_takes_one_press(visit: Visitor, line: Line) -> None:
    assert "Opened today" in text_of(visit.get("vessel", line.tub.uuid))
    for _press in range(2):
        assert visit.post("open-today", line.tub.uuid).status_code == 302
    assert fresh(line.tub).opened_on == TODAY
    assert VesselChange._base_manager.count() == 1
    assert "Opened today" not in text_of(visit.get("vessel", line.tub.uuid)).replace("Noted: opened today.", "")
    assert visit.post("open-today", line.bath.uuid).status_code == 400


def many(visit: Visitor, *vessels: Vessel, **said: object) -> Any:
    query = "&".join(f"code={vessel.code}" for vessel in vessels)
    return visit.client.post(f"{visit.address('change-containers')}?{query}", said)


def test_many_change_alike(visit: Visitor, line: Line) -> None:
    shelf = create_place(actor=visit.member, name="Shelf")
    query = f"?code={line.tub.code}&code={line.acid.code.lower()}&code={line.tub.code}"
    page = text_of(visit.get("change-containers", query=query))
    assert page.count("Salt tub") == 1
    assert "Acid bottle" in page
    visit.post("care", line.tub.uuid, name="Salt tub", opened_on="2026-03-01", expires_on="2026-04-01")
    done = many(visit, line.tub, line.acid, place=shelf.uuid, no_opened_on="on", expires_on="2027-01-01")
    assert done.status_code == 302
    for vessel in (fresh(line.tub), fresh(line.acid)):
        assert (vessel.place, vessel.opened_on, vessel.expires_on) == (shelf, None, date(2027, 1, 1))
    many(visit, line.tub, line.acid, no_place="on")
    assert (fresh(line.tub).place, fresh(line.tub).expires_on) == (None, date(2027, 1, 1))
    page = text_of(visit.client.get(done.headers["Location"]))
    assert "2 containers are changed." in page
    assert page.count("Salt tub") == page.count("Acid bottle") == 1


def test_all_of_many_change_or_none_and_who_is_wrong_is_named(visit: Visitor, line: Line) -> None:
    page = many(visit, line.tub, line.bath, expires_on="2027-01-01")
    assert page.status_code == 400
    assert "Copper bath holds nothing as bought." in text_of(page)
    assert fresh(line.tub).expires_on is None
    page = many(visit, line.tub, expires_on="2027-01-01", no_expires_on="on", opened_on="2026-03-03")
    assert set(re.findall(r'href="#(id_[a-z_]+)"', text_of(page))) == {"id_expires_on"}
    assert "Nothing is said." in text_of(many(visit, line.tub))
    assert many(visit, no_place="on").status_code == 400
    page = visit.get("change-containers", query="?code=NOSUCH&code=NEITHER")
    assert page.status_code == 400
    assert "NOSUCH, NEITHER" in text_of(page)


def test_many_of_another_workshop_are_not_found(line: Line, stranger: Membership) -> None:
    page = many(Visitor(stranger), line.tub, no_place="on")
    assert page.status_code == 400
    assert "Salt tub" not in text_of(page)
    assert Visitor(stranger).get("care", line.tub.uuid).status_code == 404
    assert Visitor(stranger).post("open-today", line.tub.uuid).status_code == 404


Keep = Callable[[str, int], Vessel]


@pytest.fixture
def keep(owner: Membership, line: Line, visit: Visitor) -> Keep:
    """Return a function that lets a jar come in which keeps so many days from today."""

    def act(name: str, days: int) -> Vessel:
        amount, expires_on = parse("1 kg", "mass"), TODAY + timedelta(days=days)
        jar = JarInput(product=line.salt, name=name, amount=amount, expires_on=expires_on)
        now = line.tub.created_at
        return receive_containers(actor=owner, now=now, key=uuid4(), jar=jar).vessels[0]

    return act


def running_out(visit: Visitor) -> list[tuple[str, str]]:
    """Return the names under "What runs out" with what is marked there."""
    page = text_of(visit.get("today"))
    part = page.partition("<h2>What runs out</h2>")[2].partition("</section>")[0]
    return re.findall(r'<a class="line"[^>]*>([^<]*)</a>.*?<span class="mark (?:stop|note)"> ?([^<]*?) ?</span>', part)


def test_today_says_what_runs_out_and_what_is_over_first(visit: Visitor, keep: Keep) -> None:
    for name, days in {"Late": 31, "Soon": 30, "Tomorrow": 1, "Today": 0, "Over": -1, "Long over": -400}.items():
        keep(name, days)
    assert running_out(visit) == [
        ("Long over", "passed"),
        ("Over", "passed"),
        ("Today", "today"),
        ("Tomorrow", "in 1 day"),
        ("Soon", "in 30 days"),
    ]


def test_what_is_empty_or_gone_does_not_run_out(visit: Visitor, keep: Keep, owner: Membership, say: Say) -> None:
    empty, full = keep("Empty", -1), keep("Full", -1)
    say(CountInput(vessel=empty.uuid, amount=parse("0 kg", "mass")))
    assert [name for name, _ in running_out(visit)] == ["Full"]
    say(CountInput(vessel=full.uuid, amount=parse("0 kg", "mass")))
    change_vessels(actor=owner, now=full.created_at, vessels=[full], care=CareInput(gone=True))
    assert running_out(visit) == []
    assert "What runs out" not in text_of(visit.get("today"))


def test_what_nobody_measured_may_run_out(visit: Visitor, line: Line) -> None:
    visit.post("care", line.tub.uuid, name="Salt tub", expires_on="2026-03-01")
    assert running_out(visit) == [("Salt tub", "passed")]


def test_today_lists_ten_and_asks_once_whatever_runs_out(
    visit: Visitor, keep: Keep, django_assert_num_queries: Any
) -> None:
    keep("Jar", -1)
    visit.get("today")
    with CaptureQueriesContext(connection) as asked:
        visit.get("today")
    for number in range(11):
        keep(f"Jar {number}", number)
    with django_assert_num_queries(len(asked)):
        visit.get("today")
    assert len(running_out(visit)) == 10
    with django_assert_num_queries(1):
        assert len(list_running_out(visit.member, TODAY, 20)) == 12


def test_from_today_to_all_that_is_over_and_on_to_changing_them(visit: Visitor, keep: Keep) -> None:
    over, fresh_one = keep("Over", -1), keep("Fresh", 90)
    found = text_of(visit.get("containers", query="?keeps=passed"))
    assert f'href="{visit.address("containers")}?keeps=passed"' in text_of(visit.get("today"))
    assert f'value="{over.code}"' in found
    assert f'value="{fresh_one.code}"' not in found
    assert f'action="{visit.address("change-containers")}"' in found
