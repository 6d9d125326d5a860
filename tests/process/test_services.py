"""Records through the one door: late ones, cancelled ones, repeated ones, impossible ones."""

import random
from datetime import timedelta
from typing import Any
from uuid import uuid4

import pytest
from django_scopes import scope

from chemicals.books import events
from chemicals.books.clearance import Clearance, not_asked
from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_body
from chemicals.ledger.models import Posting
from chemicals.process.build import build
from chemicals.process.models import Tank
from chemicals.process.services import record_matter
from chemicals.workshop.errors import ConflictError, InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership
from compliance.clearance.selectors import preview
from compliance.clearance.services import record
from tests.process.shop import Shop

Step = tuple[str, float, dict[str, Any]]
WEEK: list[Step] = [
    ("run", 7.0, {"route": "Plate", "charge": "1.8 Ah"}),
    ("level-reading", 6.0, {"vessel": "Copper", "volume": "19.4 L", "sd": "0.1 L"}),
    ("top-up", 5.9, {"tank": "Copper", "source": "First rinse", "volume": "0.3 L"}),
    ("top-up", 5.8, {"tank": "Copper"}),
    ("run", 5.0, {"route": "Plate", "weight_before": "5.6 g", "weight_after": "7.7 g", "weight_sd": "0.01 g"}),
    ("move", 4.0, {"source": "First rinse", "target": "Second rinse", "volume": "1 L"}),
    ("drum-off", 3.0, {"source": "First rinse", "target": "Drum", "volume": "2 L"}),
    ("run", 2.0, {"route": "Plate", "charge": "0.9 Ah"}),
    ("level-reading", 1.0, {"vessel": "First rinse", "volume": "7 L", "spilled": True}),
]


def test_a_late_entry_equals_one_in_order(shop: Shop, twin: Shop) -> None:
    for verb, days_ago, said in WEEK:
        shop.record(verb, days_ago=days_ago, **said)
    for verb, days_ago, said in [*WEEK[:2], *WEEK[3:], WEEK[2]]:
        twin.record(verb, days_ago=days_ago, **said)
    assert twin.ledger() == shop.ledger()
    assert shop.is_proved()
    assert twin.is_proved()


@pytest.mark.parametrize("seed", range(3))
def test_whatever_the_order_of_recording_the_books_are_the_same(shop: Shop, twin: Shop, seed: int) -> None:
    shuffled = random.Random(seed).sample(WEEK, len(WEEK))  # noqa: S311  (an order, no secret)
    for verb, days_ago, said in WEEK:
        shop.record(verb, days_ago=days_ago, **said)
    for verb, days_ago, said in shuffled:
        twin.record(verb, days_ago=days_ago, **said)
    assert twin.ledger() == shop.ledger()
    assert twin.is_proved()


def test_a_late_entry_touches_only_what_follows_from_it(shop: Shop) -> None:
    """Rows of entries before it keep their numbers: nothing was written that did not differ."""
    for verb, days_ago, said in WEEK:
        shop.record(verb, days_ago=days_ago, **said)
    with scope(workshop=shop.member.workshop):
        early = Posting.objects.filter(occurred_at__lt=shop.now - timedelta(days=6.5))
        before = set(early.values_list("pk", flat=True))
        shop.record("run", days_ago=6.4, route="Plate", charge="1 Ah")
        assert set(early.values_list("pk", flat=True)) == before


@pytest.mark.parametrize("number", [0, 4, 6, 8])
def test_a_cancelled_entry_is_as_if_it_had_not_been(shop: Shop, twin: Shop, number: int) -> None:
    for position, (verb, days_ago, said) in enumerate(WEEK):
        shop.record(verb, days_ago=days_ago, label="mistake" if position == number else "", **said)
        if position != number:
            twin.record(verb, days_ago=days_ago, **said)
    shop.record("cancellation", entry="mistake", reason="Never happened.")
    assert shop.ledger() == twin.ledger()
    assert shop.is_proved()


def test_cancelling_the_last_entry_restores_what_was_held(shop: Shop) -> None:
    before = shop.ledger()
    shop.record("run", label="mistake", route="Plate", charge="1.8 Ah")
    assert shop.ledger() != before
    shop.record("cancellation", entry="mistake", reason="Never happened.")
    assert shop.ledger() == before


def test_a_cancelled_receipt_leaves_the_bath_below_zero_and_says_so(shop: Shop) -> None:
    with scope(workshop=shop.member.workshop):
        shop.entries["receipt"] = Entry.objects.get(sequence=1)
    shop.record("cancellation", entry="receipt", reason="Another workshop's jar.")
    assert {"negative-content", "unknown-mass"} & set(shop.findings())
    assert shop.is_proved()


def test_accepting_and_cancelling_the_acceptance_restores_the_books(shop: Shop) -> None:
    before = shop.ledger()
    shop.record("analysis", days_ago=3, label="analysis", vessel="Copper", metal="Cu", result="48 g/L")
    assert shop.ledger() == before
    shop.record("acceptance", label="acceptance", analysis="analysis")
    accepted = shop.ledger()
    assert accepted != before
    shop.record("cancellation", entry="acceptance", reason="The laboratory sent another figure.")
    assert shop.ledger() == before
    shop.record("acceptance", analysis="analysis")
    assert [row[1:] for row in shop.ledger()["postings"]] == [row[1:] for row in accepted["postings"]]


def test_what_cannot_be_twice(shop: Shop) -> None:
    shop.record("analysis", label="analysis", vessel="Copper", metal="Cu", result="48 g/L")
    shop.record("acceptance", label="acceptance", analysis="analysis")
    with pytest.raises(ConflictError, match="accepted already"):
        shop.record("acceptance", analysis="analysis")
    with pytest.raises(ConflictError, match="Cancel its acceptance first"):
        shop.record("cancellation", entry="analysis", reason="wrong bath")
    shop.record("cancellation", label="undo", entry="acceptance", reason="wrong bath")
    shop.record("cancellation", entry="analysis", reason="wrong bath")
    with pytest.raises(ConflictError, match="cancelled already"):
        shop.record("cancellation", entry="analysis", reason="again")
    with pytest.raises(ConflictError, match="cancelled already"):
        shop.record("acceptance", analysis="analysis")
    with pytest.raises(InvalidInputError, match="Record what is right as a new entry"):
        shop.record("cancellation", entry="undo", reason="changed my mind")
    assert shop.is_proved()


def test_a_refused_record_leaves_neither_entry_nor_gap(shop: Shop) -> None:
    shop.record("analysis", label="analysis", vessel="Copper", metal="Cu", result="48 g/L")
    shop.record("acceptance", analysis="analysis")
    with pytest.raises(ConflictError):
        shop.record("acceptance", analysis="analysis")
    last = shop.record("run", route="Plate", charge="1 Ah")
    with scope(workshop=shop.member.workshop):
        assert last.sequence == Entry.objects.count()


def test_sending_twice_records_once(shop: Shop) -> None:
    key = uuid4()
    first = shop.record("run", key=key, route="Plate", charge="1.8 Ah")
    before = shop.ledger()
    assert shop.record("run", key=key, route="Plate", charge="1.8 Ah") == first
    assert shop.ledger() == before
    with pytest.raises(ConflictError, match="fresh form"):
        shop.record("run", key=key, route="Plate", charge="1.9 Ah")


@pytest.mark.parametrize(
    ("verb", "said"),
    [
        ("cancellation", {"entry": "run", "reason": "Never happened."}),
        ("acceptance", {"analysis": "analysis"}),
    ],
)
def test_sending_a_cancellation_or_acceptance_twice_records_once(shop: Shop, verb: str, said: dict[str, Any]) -> None:
    """The second try meets what the first one did, and must not take it for somebody else's."""
    shop.record("run", label="run", route="Plate", charge="1.8 Ah")
    shop.record("analysis", label="analysis", vessel="Copper", metal="Cu", result="48 g/L")
    key = uuid4()
    assert shop.record(verb, key=key, **said) == shop.record(verb, key=key, **said)


def test_figures_used_may_change_between_two_tries(shop: Shop) -> None:
    """The efficiency was corrected meanwhile: what was observed is the same, so it is the same record."""
    key = uuid4()
    first = shop.record("run", key=key, route="Plate", charge="1.8 Ah")
    with scope(workshop=shop.member.workshop):
        Tank.objects.filter(vessel__name="Copper").update(efficiency=980_000)
    assert shop.record("run", key=key, route="Plate", charge="1.8 Ah") == first


def test_a_preview_says_what_recording_does_and_writes_nothing(shop: Shop) -> None:
    data, before = shop.read("run", route="Plate", charge="1.8 Ah"), shop.ledger()
    seen = preview(shop.member, shop.now, data, None)
    assert seen.answer.allowed
    assert shop.ledger() == before
    entry = record(actor=shop.member, now=shop.now, key=uuid4(), data=data).entry
    with scope(workshop=shop.member.workshop):
        written = Posting.objects.filter(entry=entry, amount__gt=0).order_by("transfer")
        amounts = list(written.values_list("component__code", "amount", "sd", "basis"))
    assert amounts == [(t.component, t.amount, t.sd, t.basis) for t in seen.trial.folded.transfers]


def test_observers_record_nothing(shop: Shop, observer: Membership) -> None:
    data = shop.read("run", route="Plate", charge="1.8 Ah")
    with pytest.raises(NotPermittedError):
        record(actor=observer, now=shop.now, key=uuid4(), data=data)
    with pytest.raises(NotPermittedError), scope(workshop=observer.workshop):
        record_matter(
            actor=observer,
            now=shop.now,
            key=uuid4(),
            built=build(shop.member, shop.now, data, None),
            clearance=not_asked("a test"),
        )
    assert shop.is_proved()


@pytest.mark.parametrize(
    ("verb", "said", "fields"),
    [
        ("run", {"route": "Plate", "charge": "1 Ah"}, {"route"}),
        ("level-reading", {"vessel": "Copper", "volume": "19 L"}, {"vessel"}),
        ("top-up", {"tank": "Copper", "source": "First rinse", "volume": "1 L"}, {"tank", "source"}),
        ("drum-off", {"source": "First rinse", "target": "Drum"}, {"source", "target"}),
        (
            "make-up",
            {"tank": "Copper", "ingredients": [{"stock": "Jar", "amount": "1 kg"}]},
            {"tank", "ingredients.0.stock"},
        ),
        ("opening", {"vessel": "Copper", "volume": "1 L", "product": "Salt"}, {"vessel", "product"}),
    ],
)
def test_things_of_another_workshop_are_unknown_here(
    shop: Shop, twin: Shop, verb: str, said: dict[str, Any], fields: set[str]
) -> None:
    data = twin.read(verb, **said)
    with pytest.raises(InvalidInputError) as caught:
        record(actor=shop.member, now=shop.now, key=uuid4(), data=data)
    assert {error.field for error in caught.value.errors} == fields


def test_entries_of_another_workshop_are_unknown_here(shop: Shop, twin: Shop) -> None:
    twin.record("analysis", label="theirs", vessel="Copper", metal="Cu", result="48 g/L")
    shop.entries["theirs"] = twin.entries["theirs"]
    for verb, said in (("acceptance", {"analysis": "theirs"}), ("cancellation", {"entry": "theirs", "reason": "x"})):
        with pytest.raises(InvalidInputError, match="no such thing in this workshop"):
            shop.record(verb, **said)  # type: ignore[arg-type]
    assert twin.is_proved()


Refusal = tuple[str, dict[str, Any], str, str]
REFUSALS: list[Refusal] = [
    ("opening", {"vessel": "Copper"}, "volume", "Write the volume, or the mass"),
    (
        "opening",
        {"vessel": "Copper", "volume": "1 L", "held": [{"metal": "Cu", "amount": "1 g"}] * 2},
        "held",
        "stands twice",
    ),
    (
        "opening",
        {"vessel": "Jar", "mass": "1 kg", "held": [{"metal": "Cu", "amount": "1 g/L"}]},
        "held.0.amount",
        "needs",
    ),
    (
        "opening",
        {"vessel": "Copper", "volume": "1 L", "held": [{"metal": "O", "amount": "1 g"}]},
        "held.0.metal",
        "list",
    ),
    ("make-up", {"tank": "Copper"}, "ingredients", "at least one ingredient"),
    ("top-up", {"tank": "First rinse", "source": "First rinse", "volume": "1 L"}, "source", "from itself"),
    ("move", {"source": "Copper", "target": "Copper"}, "target", "same vessel"),
    ("run", {"route": "Plate"}, "charge", "Write the ampere-hours"),
    ("run", {"route": "Plate", "charge": "1 Ah", "current": "1 A", "time": "1 h"}, "charge", "not both"),
    ("run", {"route": "Plate", "current": "1 A"}, "time", "how long"),
    ("run", {"route": "Plate", "weight_before": "1 g"}, "weight_after", "One weight alone"),
    (
        "run",
        {"route": "Plate", "current": "1 A", "current_density": "1 A/dm2", "time": "1 h"},
        "current_density",
        "both",
    ),
    (
        "analysis",
        {"vessel": "Copper", "metal": "Au", "result": "1 g/L", "expressed_as": "CuSO4"},
        "expressed_as",
        "no Au",
    ),
    (
        "analysis",
        {"vessel": "Copper", "metal": "Cu", "result": "1 g/L", "expressed_as": "Xx"},
        "expressed_as",
        "element",
    ),
    ("analysis", {"vessel": "Copper", "metal": "O", "result": "1 g/L", "expressed_as": "CuSO4"}, "metal", "list"),
    ("cancellation", {"entry": "first", "reason": "  "}, "reason", "why this entry"),
    ("acceptance", {"analysis": "first"}, "analysis", "This is no analysis"),
]


@pytest.mark.parametrize(("verb", "said", "field", "sentence"), REFUSALS)
def test_what_makes_no_sense_is_refused_by_field(
    shop: Shop, verb: str, said: dict[str, Any], field: str, sentence: str
) -> None:
    with scope(workshop=shop.member.workshop):
        shop.entries["first"] = Entry.objects.get(sequence=1)
    before = shop.ledger()
    with pytest.raises(InvalidInputError) as caught:
        shop.record(verb, **said)
    assert [(error.field, sentence in error.message) for error in caught.value.errors] == [(field, True)], caught.value
    assert shop.ledger() == before


def test_a_weight_lost_is_a_finding_and_never_a_refusal(shop: Shop) -> None:
    shop.record("run", route="Plate", charge="1 Ah", weight_before="7.7 g", weight_after="5.6 g")
    assert shop.findings() == ["weight-lost"]


def test_the_answer_to_may_this_be_done_stands_in_the_entry(shop: Shop) -> None:
    entry = shop.record("run", route="Plate", charge="1 Ah")
    assert (entry.kind, entry.verdict) == (events.Run.KIND, "allowed")
    assert read_body(entry).clearance == Clearance("allowed")
