"""A vessel's ledger: every line adds up with the one before, over any period, on any page, whatever is known."""

from datetime import timedelta
from itertools import pairwise
from typing import Any
from uuid import uuid4

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scope

from chemicals.journal.models import Entry
from chemicals.ledger import running
from chemicals.ledger.models import Component, Content, Vessel
from chemicals.ledger.running import Running, VesselLedger, get_vessel_ledger, list_components_of
from chemicals.workshop.errors import NotFoundError
from tests.process.shop import G, L, Shop


def vessel(shop: Shop, name: str) -> Vessel:
    with scope(workshop=shop.member.workshop):
        return Vessel.objects.get(name=name)


def ledger(
    shop: Shop, name: str, component: str = "Cu", *, since: float = 20, until: float = -1, page: int | None = 1
) -> VesselLedger:
    """Return the ledger of a vessel from some days ago until some days ago."""
    start, end = shop.now - timedelta(days=since), shop.now - timedelta(days=until)
    return get_vessel_ledger(vessel(shop, name), component, start, end, page=page)


def check_sums(found: VesselLedger) -> None:
    """Fail unless each line is the one before and what came and went, and the period is the sum of its lines."""
    held = [found.before, *(line.held for line in found.lines)]
    for line, (before, after) in zip(found.lines, pairwise(held), strict=True):
        assert before.booked + sum(movement.amount for movement in line.movements) == after.booked
        assert after.amount in (None, after.booked)
    assert (held[-1].amount, held[-1].sd, held[-1].booked) == (found.after.amount, found.after.sd, found.after.booked)
    assert found.opening.booked + found.came - found.went == found.closing.booked


def run_a_week(shop: Shop) -> None:
    shop.record("run", days_ago=9, route="Plate", charge="10 Ah")
    shop.record("level-reading", days_ago=8, vessel="Copper", volume="19 L", sd="0.1 L")
    shop.record("analysis", days_ago=7, label="first", vessel="Copper", metal="Cu", result="48 g/L", sd="0.5 g/L")
    shop.record("acceptance", analysis="first")
    shop.record("run", days_ago=6, route="Plate", charge="10 Ah")


def test_each_line_is_the_one_before_and_what_came_and_went(shop: Shop) -> None:
    run_a_week(shop)
    for name, component in (("Copper", "Cu"), ("Copper", "volume"), ("Copper", "gross mass"), ("Rinse", "Cu")):
        found = ledger(shop, name, component)
        check_sums(found)
        assert found.lines


def test_a_line_says_which_entry_with_which_other_end_and_on_what_it_rests(shop: Shop) -> None:
    """10 Ah plate 11.855 g (1.1855 g/Ah), the load takes 10 mL of 50 g/L along, a half gram."""
    shop.record("run", days_ago=9, route="Plate", charge="10 Ah")
    opening, run = ledger(shop, "Copper").lines
    assert [(move.amount, move.basis, move.end) for move in opening.movements] == [(1000 * G, "observed", "opening")]
    assert (opening.held.amount, opening.held.concentration) == (1000 * G, 50 * G)
    assert run.entry.kind == "run"
    onto_parts, dragged = run.movements
    assert (onto_parts.end, onto_parts.basis) == ("parts", "computed")
    assert onto_parts.amount == pytest.approx(-11.855 * G, rel=1e-3)
    assert (dragged.end, dragged.basis) == (str(vessel(shop, "Rinse").uuid), "assumed")
    assert dragged.amount == pytest.approx(-0.494 * G, rel=1e-2)
    assert 0 < onto_parts.sd < -onto_parts.amount


def test_any_two_periods_meet(shop: Shop) -> None:
    run_a_week(shop)
    whole = ledger(shop, "Copper")
    for cut in (9.5, 8.5, 7, 6.5, 3):
        first, second = ledger(shop, "Copper", until=cut), ledger(shop, "Copper", since=cut)
        check_sums(first)
        check_sums(second)
        assert first.closing == second.opening
        assert (first.opening, second.closing) == (whole.opening, whole.closing)
        assert first.came + second.came == whole.came
        assert first.lines + second.lines == whole.lines


def test_pages_meet_as_periods_do(shop: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    run_a_week(shop)
    whole = ledger(shop, "Copper", page=None)
    assert (len(whole.lines), whole.page, whole.pages) == (4, 1, 1)
    monkeypatch.setattr(running, "LINES", 3)
    first, second = ledger(shop, "Copper", page=1), ledger(shop, "Copper", page=2)
    assert [(found.page, found.pages, len(found.lines)) for found in (first, second)] == [(1, 2, 3), (2, 2, 1)]
    assert first.after == second.before
    assert (first.before, second.after) == (whole.opening, whole.closing)
    assert (first.closing, second.opening, first.points) == (whole.closing, whole.opening, second.points)
    check_sums(first)
    check_sums(second)
    assert ledger(shop, "Copper", page=9).page == 2


def test_without_an_entry_the_ledger_carries_over_what_was_held(shop: Shop) -> None:
    run_a_week(shop)
    quiet = ledger(shop, "Copper", since=3, until=2)
    assert (quiet.lines, quiet.points, quiet.came, quiet.went) == ((), (), 0, 0)
    assert quiet.opening == quiet.closing == ledger(shop, "Copper").closing
    assert ledger(shop, "Copper", since=20, until=15).closing == Running("Cu", 0, 0, 0)


def test_an_accepted_analysis_is_a_measured_point_and_a_level_reading_one_of_the_volume(shop: Shop) -> None:
    run_a_week(shop)
    measured = [point for point in ledger(shop, "Copper").points if point.measured]
    assert [point.held.amount for point in measured] == [48 * 19 * G]
    assert measured[0].at == shop.now - timedelta(days=7)
    assert [point.held.amount for point in ledger(shop, "Copper", "volume").points if point.measured] == [19 * L]


def test_what_nobody_knows_is_unknown_until_an_analysis_is_accepted(shop: Shop) -> None:
    """Some of an old rinse goes into the copper rinse: unknown, though what was recorded still adds up."""
    shop.record("run", days_ago=9, route="Plate", charge="10 Ah")
    shop.tank("Old rinse", "10 L")
    shop.record("opening", days_ago=8, vessel="Old rinse", volume="5 L")
    shop.record("move", days_ago=7, source="Old rinse", target="Rinse", volume="1 L", happened=True)
    shop.record("analysis", days_ago=6, label="first", vessel="Rinse", metal="Cu", result="1 g/L", sd="0.1 g/L")
    before = ledger(shop, "Rinse", until=6.5)
    assert (before.closing.amount, before.closing.concentration) == (None, None)
    assert before.closing.booked == before.lines[0].held.amount
    assert {finding.code for finding in before.lines[-1].findings} >= {"unknown-contents"}
    check_sums(before)
    shop.record("acceptance", analysis="first")
    after = ledger(shop, "Rinse")
    assert after.closing.amount is not None
    assert [finding.code for finding in after.lines[-1].findings] == ["was-unknown"]
    check_sums(after)


def test_an_incomplete_list_speaks_for_what_it_does_not_name(shop: Shop) -> None:
    """Nobody said what copper is in the old rinse: unknown from its opening, though copper came into it later."""
    shop.tank("Old rinse", "10 L")
    shop.record("opening", days_ago=8, vessel="Old rinse", volume="5 L")
    assert ledger(shop, "Old rinse", until=9).closing.amount == 0
    opened = ledger(shop, "Old rinse")
    assert [(line.movements, line.held.amount) for line in opened.lines] == [((), None)]
    shop.record("move", days_ago=7, source="Copper", target="Old rinse", volume="1 L", happened=True)
    shop.record("move", days_ago=6, source="Copper", target="Old rinse", volume="1 L", happened=True)
    found = ledger(shop, "Old rinse")
    assert [line.held.amount for line in found.lines] == [None, None, None]
    assert found.closing.booked == pytest.approx(100 * G, rel=1e-2)
    check_sums(found)
    assert ledger(shop, "Old rinse", since=7.5).opening.amount is None


def test_what_a_vessel_ever_held_begins_with_the_metal_it_holds_most_of(shop: Shop) -> None:
    assert [row.component for row in list_components_of(vessel(shop, "Copper"))] == ["Cu", "gross mass", "volume"]


def test_what_is_in_no_book_has_no_ledger(shop: Shop) -> None:
    with pytest.raises(NotFoundError):
        ledger(shop, "Copper", "Au")


def test_it_asks_as_often_for_three_lines_as_for_one(shop: Shop, django_assert_num_queries: Any) -> None:
    period = (shop.now - timedelta(days=9), shop.now)
    for _ in range(3):
        shop.record("run", days_ago=6, route="Plate", charge="1 Ah")
        bath = vessel(shop, "Copper")
        with django_assert_num_queries(10):
            assert get_vessel_ledger(bath, "Cu", *period).lines


def test_ten_thousand_rows_are_found_by_their_index(shop: Shop) -> None:
    bath = vessel(shop, "Copper")
    fill(shop, bath, 10_000)
    start, end = shop.now - timedelta(days=5), shop.now - timedelta(days=4)
    with CaptureQueriesContext(connection) as queries, scope(workshop=bath.workshop):
        connection.cursor().execute("ANALYZE")
        found = get_vessel_ledger(bath, "Cu", start, end)
        assert 700 < len(found.points) < 1_500
        plans = [plan_of(query["sql"]) for query in queries if '"ledger_content"."amount"' in query["sql"]]
    assert len(plans) == 4
    assert all("content_running" in plan for plan in plans), plans


def plan_of(sql: str) -> str:
    prefix = "EXPLAIN QUERY PLAN " if connection.vendor == "sqlite" else "EXPLAIN "
    with connection.cursor() as cursor:
        cursor.execute(prefix + sql.replace("%", "%%"))
        return " ".join(str(row) for row in cursor.fetchall())


def fill(shop: Shop, bath: Vessel, count: int) -> None:
    """Give the bath many rows of content: as if the copper in it had been measured every ninety seconds since."""
    last = shop.record("level-reading", days_ago=10, vessel="Copper", volume="20 L")
    with scope(workshop=bath.workshop):
        copper, volume = (Component.objects.get(code=code) for code in ("Cu", "volume"))
        moments = [last.occurred_at + timedelta(seconds=90 * number) for number in range(1, count + 1)]
        entries = Entry.objects.bulk_create(
            replica(last, sequence=last.sequence + number, occurred_at=at) for number, at in enumerate(moments, 1)
        )
        Content.objects.bulk_create(
            Content(
                workshop=bath.workshop, entry=entry, vessel=bath, component=component, amount=20 * G, variance=4,
                occurred_at=entry.occurred_at, sequence=entry.sequence,
            )
            for entry in entries
            for component in (copper, volume)
        )  # fmt: skip


def replica(entry: Entry, **other: Any) -> Entry:
    """Return an unsaved entry like this one; of a chain nothing is asked here."""
    fields = {field.attname: getattr(entry, field.attname) for field in Entry._meta.fields}
    return Entry(**{**fields, "id": None, "uuid": uuid4(), **other})
