"""The demo: an invented workshop whose weeks show the whole path, in books that close."""

from datetime import timedelta

import pytest
from django_scopes import scope

from chemicals.balance.selectors import BookBalance, get_book_balance, list_metals_for
from chemicals.books import events
from chemicals.books.fold.state import FINDINGS
from chemicals.journal import files
from chemicals.journal.models import Entry
from chemicals.journal.selectors import is_cancelled, read_event
from chemicals.ledger.models import VesselKind
from chemicals.ledger.selectors import list_findings_for, list_held, list_vessels_for
from chemicals.process.inputs import INPUTS
from chemicals.register.selectors import list_current_revisions_for
from chemicals.register.sheets import mark_of
from chemicals.workshop.models import Membership, Role, User
from compliance.documents.models import Paper, PaperKind
from compliance.documents.selectors import read_data, read_pdf
from compliance.dropoffs.models import DropOff, State
from compliance.ops.demo import DemoUser
from compliance.ops.demo_reader import read_amount, read_input
from compliance.ops.verify import find_loose_ends, verify_workshops
from compliance.premises.empties import list_empties_for
from tests.ops.conftest import LOADED_AT

G = 10**6
LEFT_OUT = (
    events.Move, events.Strip, events.Resin, events.Sludge, events.CleanOut, events.Treatment, events.Discharge,
    events.Correction, events.PeriodClosing, events.PeriodReopening,
)  # fmt: skip
"""Kinds that do not happen in every few weeks of a small workshop, or that need somebody's permission."""
pytestmark = pytest.mark.django_db


@pytest.fixture
def member(people: list[DemoUser]) -> Membership:
    return Membership.objects.select_related("workshop", "user").get(role=Role.OWNER)


def entries(member: Membership, kind: str = "") -> list[Entry]:
    with scope(workshop=member.workshop):
        rows = Entry.objects.order_by("sequence")
        return list(rows.filter(kind=kind) if kind else rows)


def balance(member: Membership, metal: str) -> BookBalance:
    return get_book_balance(member, metal, LOADED_AT - timedelta(days=90), LOADED_AT)


def test_three_people_can_sign_in_with_fresh_passwords(people: list[DemoUser]) -> None:
    assert [role for _, _, role in people] == ["owner", "worker", "observer"]
    for email, password, role in people:
        assert len(password) >= 16
        assert User.objects.get(email=email).check_password(password)
        assert Membership.objects.get(user__email=email).role == role
    assert len({password for _, password, _ in people}) == 3


def test_everything_says_that_it_is_invented(member: Membership) -> None:
    workshop = member.workshop
    assert workshop.invented
    assert "invented" in workshop.name
    with scope(workshop=workshop):
        revisions = list(list_current_revisions_for(member))
    for revision in revisions:
        assert revision.product.supplier.startswith("Invented")
        with scope(workshop=workshop):
            sources = [limit.source for limit in revision.limits.all()]
        typed = [*revision.statements, *sources, revision.gloves, revision.shipping_name]
        assert all("invented" in text for text in typed if text)
        if revision.statements:
            assert revision.safety_data_sheet is not None
            assert b"%PDF" in files.read(revision.safety_data_sheet.sha256)


def test_the_catalogue_shows_what_a_sheet_says(member: Membership) -> None:
    with scope(workshop=member.workshop):
        revisions = {row.product.name: row for row in list_current_revisions_for(member)}
        salt, acid = revisions["Copper sulfate crystals"], revisions["Sulfuric acid 96 %"]
        assert [limit.value for limit in salt.limits.all()] == ["1 mg/m3"]
        assert [line.typed for line in acid.lines.all()] == ["95-97 %"]
    assert (salt.un_number, salt.packing_group, salt.contradictions) == ("3077", "III", ())
    assert [each.code for each in acid.contradictions] == ["statement-missing"]
    assert [mark_of(row, LOADED_AT.date(), 3) for row in (salt, acid)] == ["old", ""]
    assert revisions["Gold sulfite solution"].ph_floor == 8500
    assert revisions["Copper anodes"].transport_unclassified


def test_one_empty_stays_a_waste_and_still_stands_there(member: Membership) -> None:
    (empty,) = list_empties_for(member)
    assert (empty.vessel.name, empty.stays_waste) == ("Jar of pickling paste", True)
    assert empty.very_toxic[-3:] == ["H300", "H310", "H330"]
    with scope(workshop=member.workshop):
        assert {row.name for row in list_vessels_for(member) if row.gone_at} == {"Canister 1"}


def test_every_kind_of_the_path_happened(member: Membership) -> None:
    kinds = {entry.kind for entry in entries(member)}
    assert {kind.KIND for kind in events.EVENTS} - kinds <= {kind.KIND for kind in LEFT_OUT}
    assert kinds >= {verb.replace("-", " ") for verb in ("level-reading", "drum-off", "day-sheet", "filter", "spill")}
    without_a_form = {events.Paper.KIND, events.PeriodClosing.KIND, events.PeriodReopening.KIND}
    assert set(INPUTS) == {kind.KIND.replace(" ", "-") for kind in events.EVENTS if kind.KIND not in without_a_form}


def test_its_history_is_of_the_weeks_before_and_in_order(member: Membership) -> None:
    written = entries(member)
    recorded = [entry.recorded_at for entry in written]
    assert recorded == sorted(recorded)
    assert LOADED_AT - timedelta(days=36) < recorded[0] < LOADED_AT - timedelta(days=28)
    assert recorded[-1] < LOADED_AT
    assert member.workshop.created_at <= recorded[0]


def test_one_mistake_was_cancelled_and_one_entry_came_late(member: Membership) -> None:
    (cancellation,) = entries(member, "cancellation")
    assert cancellation.about is not None
    assert is_cancelled(cancellation.about)
    event = read_event(cancellation)
    assert isinstance(event, events.Cancellation)
    assert event.reason
    runs = entries(member, "run")
    assert [run for run in runs if run.recorded_at - run.occurred_at > timedelta(days=1)]


def test_one_analysis_is_accepted_and_one_is_left_to_accept(member: Membership) -> None:
    accepted, waiting = entries(member, "analysis")
    assert [entry.about for entry in entries(member, "acceptance")] == [accepted]
    assert accepted.occurred_at < accepted.recorded_at
    assert waiting.sequence > accepted.sequence


def test_the_first_drum_is_handed_over_and_the_second_half_full(member: Membership) -> None:
    held = {
        vessel.name: {row.component: row.amount for row in list_held(vessel)}
        for vessel in list_vessels_for(member, VesselKind.WASTE)
    }
    assert set(held["Canister 1"].values()) == {0}
    assert held["Canister 2"]["volume"] == 6 * 10**9
    assert (held["Canister 2"]["Cu"] or 0) > 0
    with scope(workshop=member.workshop):
        drop_off = DropOff.objects.get()
        papers = list(Paper.objects.order_by("number", "kind"))
    assert drop_off.state == State.HANDED_OVER
    assert {paper.kind for paper in papers} == set(PaperKind)
    for paper in papers:
        assert read_pdf(paper).startswith(b"%PDF")
        assert "invented" in read_data(paper)["workshop"]["name"]


def test_the_weight_of_the_drum_is_what_the_books_say(member: Membership) -> None:
    """Scale minus tare against the books' own mass of the liquid, as a receiver would compare."""
    (handed,) = entries(member, "hand-over")
    with scope(workshop=member.workshop):
        booked = handed.postings.get(component__code="gross mass", boundary="receiver").amount
    event = read_event(handed)
    assert isinstance(event, events.HandOver)
    assert event.gross is not None
    assert abs(event.gross.base - 550 * G - booked) < 30 * G


def test_the_copper_balance_closes_nearly(member: Membership) -> None:
    copper = balance(member, "Cu")
    outside = sum(amount.value or 0 for amount in copper.boundaries.values())
    assert (copper.opening.value or 0) + outside == copper.closing.value
    unaccounted, received = copper.unaccounted.value or 0, copper.boundaries["supplier"].value or 0
    assert 0 < abs(unaccounted) < received // 100
    assert copper.smallest_visible is not None
    assert abs(unaccounted) < copper.smallest_visible
    assert -275 * G < (copper.boundaries["parts"].value or 0) < -250 * G
    assert -10 * G < (copper.boundaries["receiver"].value or 0) < -3 * G


def test_the_gold_balance_closes(member: Membership) -> None:
    gold = balance(member, "Au")
    outside = sum(amount.value or 0 for amount in gold.boundaries.values())
    assert outside == gold.closing.value
    assert -G < (gold.boundaries["parts"].value or 0) < -G // 10
    assert list_metals_for(member) == ["Au", "Cu"]


def test_a_plater_finds_the_figures_sensible(member: Membership) -> None:
    """Acid copper: about 50 g/L of copper (common practice); no gold in copper nor copper in gold."""
    held = {
        vessel.name: {row.component: row.amount or 0 for row in list_held(vessel)}
        for vessel in list_vessels_for(member)
    }
    copper = held["Acid copper"]
    assert 45 < copper["Cu"] * 10**9 // copper["volume"] // G < 55
    rinse = held["Copper drag-out rinse"]
    assert rinse["Cu"] * 10**9 // rinse["volume"] < G  # under 1 g/L
    assert held["Copper second rinse"]["Cu"] * 20 < rinse["Cu"]
    assert "Cu" not in held["Gold sulfite"]
    assert "Au" not in copper


def test_its_books_are_proved_and_without_a_finding(member: Membership) -> None:
    (verdict,) = verify_workshops()
    assert verdict.problems == ()
    assert find_loose_ends() == []
    assert [finding.code for finding in list_findings_for(member)] == []
    assert FINDINGS


def test_an_amount_is_read_in_the_dimension_that_fits() -> None:
    assert read_amount("1 kg", ("mass", "volume")).dimension == "mass"
    assert read_amount("1 L", ("mass", "volume")).dimension == "volume"
    with pytest.raises(ValueError, match="volume"):
        read_amount("1 A", ("mass", "volume"))


def test_a_word_that_no_form_asks_for_is_an_error_of_the_scenario() -> None:
    with pytest.raises(KeyError, match="colour"):
        read_input(INPUTS["top-up"], {"colour": "blue"}, lambda table, name: pytest.fail(table))
