"""Entries are looked for: every condition stands in the address, the files follow it, and what is wrong is said."""

import re
from html import unescape
from typing import Any
from uuid import uuid4

import pytest

from chemicals.journal.models import Entry
from chemicals.process.inputs import AnalysisInput, LevelInput, RunInput
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from tests.web.conftest import Line, Say, Visitor, text_of
from tests.web.test_lists import rows_of


@pytest.fixture
def told(visit: Visitor, filled: Line, say: Say) -> Line:
    """Return the line after a named run, a waiting analysis, and a level that was read by mistake."""
    say(RunInput(route=filled.route.uuid, charge=parse("2 Ah", "charge"), parts="door handles"))
    say(AnalysisInput(vessel=filled.rinse.uuid, metal="Ni", result=parse("1 mg/L", "concentration")))
    level = say(LevelInput(vessel=filled.bath.uuid, volume=parse("14 L", "volume")))
    visit.post("record", "cancellation", key=uuid4(), entry=level.uuid, reason="the wrong tank", step="save")
    return filled


def found(visit: Visitor, query: str) -> list[str]:
    """Return the kinds of the entries on the page, newest first."""
    page = visit.get("entries", query=query)
    assert page.status_code == 200
    return re.findall(r'<span class="lead">([^<]+)</span>', page.content.decode())


ALL = ["cancellation", "level reading", "analysis", "run", "drum off", "make-up", "make-up", "receipt"]


@pytest.mark.parametrize(
    ("query", "kinds"),
    [
        ("", ALL),
        ("?kind=run", ["run"]),
        ("?component=Cu", ["run", "drum off", "make-up", "receipt"]),
        ("?text=HANDLES", ["run"]),
        ("?text=wrong+tank", ["cancellation"]),
        ("?cancelled=on", ["level reading"]),
        ("?findings=on", []),
        ("?verdict=incident", []),
        ("?verdict=allowed&kind=make-up", ["make-up", "make-up"]),
        ("?since=2026-03-02&until=2026-03-02&by=recorded", ALL),
        ("?until=2026-03-01&by=recorded", []),
        ("?kind=&vessel=&component=&text=&page=&unheard-of=1", ALL),
    ],
)
def test_entries_are_found_by_what_the_address_says(visit: Visitor, told: Line, query: str, kinds: list[str]) -> None:
    assert found(visit, query) == kinds
    file = [row["kind"] for row in rows_of(visit.get("entries", query=f"{query or '?'}&as=csv"))]
    assert file == kinds


def test_entries_are_found_by_vessel_and_by_person(
    visit: Visitor, told: Line, owner: Membership, worker: Membership
) -> None:
    assert found(visit, f"?vessel={told.rinse.uuid}") == ["analysis", "run", "make-up"]
    assert found(visit, f"?person={owner.uuid}") == ALL
    assert found(visit, f"?person={worker.uuid}") == []


def test_the_form_keeps_what_was_chosen_and_shows_the_fold_where_it_is_used(visit: Visitor, told: Line) -> None:
    page = text_of(visit.get("entries", query="?kind=run&since=2026-03-01"))
    assert '<option value="run" selected>' in page
    assert 'value="2026-03-01"' in page
    assert "<details> <summary>Look for more" in page
    page = text_of(visit.get("entries", query="?text=handles&cancelled=on"))
    assert "<details open> <summary>Look for more" in page
    assert 'value="handles"' in page
    assert 'name="cancelled" id="id_cancelled" checked' in page


def test_the_links_of_the_list_keep_the_conditions(visit: Visitor, told: Line, say: Say) -> None:
    for number in range(51):
        say(LevelInput(vessel=told.bath.uuid, volume=parse(f"{13_000 - number} mL", "volume")))
    page = visit.get("entries", query="?kind=level+reading&text=&page=1").content.decode()
    links = [unescape(link) for link in re.findall(r'href="([^"]*)"', page)]
    assert "?kind=level+reading&page=2" in links
    assert "?kind=level+reading&as=csv" in links
    assert "?kind=level+reading&as=jsonl" in links
    assert visit.address("export") + "?kind=level+reading" in links
    assert found(visit, "?kind=level+reading&page=2") == ["level reading", "level reading"]
    assert len(rows_of(visit.get("entries", query="?kind=level+reading&as=csv"))) == 52


@pytest.mark.parametrize(
    ("query", "message"),
    [
        ("?since=yesterday", "Write the date like 2026-03-02."),
        ("?since=0001-01-01", "Write a day between 1900-01-01 and 2999-12-31."),
        ("?since=2026-03-02&until=2026-03-01", "The period ends before it begins."),
        ("?kind=alchemy", "Choose one from the list."),
        ("?vessel=nonsense", "Choose one from the list."),
        ("?component=Xx", "Choose one from the list."),
        ("?person=1", "Choose one from the list."),
        ("?text=a%00b", "cannot be recorded"),
    ],
)
def test_what_cannot_be_read_is_said_and_makes_no_file(visit: Visitor, told: Line, query: str, message: str) -> None:
    for ending in ("", "&as=csv"):
        page = visit.get("entries", query=query + ending)
        assert page.status_code == 400
        assert page.headers["Content-Type"].startswith("text/html")
        assert message in text_of(page)


def test_an_empty_answer_says_what_to_do(visit: Visitor, told: Line) -> None:
    page = text_of(visit.get("entries", query="?text=nowhere"))
    assert "No entry fits." in page
    assert "show all" in page
    assert "Download" not in page


def test_entries_of_other_workshops_cannot_be_chosen(stranger: Membership, told: Line) -> None:
    page = Visitor(stranger).get("entries", query=f"?vessel={told.bath.uuid}")
    assert page.status_code == 400
    assert "Copper bath" not in page.content.decode()


@pytest.mark.parametrize(
    "query", ["?component=Cu", "?text=a", "?findings=on", "?cancelled=on", "?by=recorded&since=2026-03-01"]
)
def test_each_condition_costs_no_query_of_its_own(
    visit: Visitor, told: Line, query: str, django_assert_num_queries: Any
) -> None:
    visit.get("entries")
    count = 11 if found(visit, query) else 8  # no page to read, no vessels, nothing cancelled
    with django_assert_num_queries(count):
        visit.get("entries", query=query)


def test_a_long_file_of_entries_is_read_in_parts(
    visit: Visitor, told: Line, monkeypatch: pytest.MonkeyPatch, django_assert_num_queries: Any
) -> None:
    monkeypatch.setattr("compliance.web.views.entries.BATCH", 3)
    assert [row["kind"] for row in rows_of(visit.get("entries", query="?as=csv"))] == ALL
    assert Entry._base_manager.count() == len(ALL)
