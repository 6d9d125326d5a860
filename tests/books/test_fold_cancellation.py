"""A mistake is cancelled: the books fold as if it had not been."""

from datetime import UTC, datetime, timedelta
from uuid import UUID, uuid5

from chemicals.books.events import Acceptance, Analysis, Cancellation, Event, Figure, Measured, Move
from chemicals.books.fold import Entry, rebuild, standing
from tests.books.words import SALT, G, grams, litres, opening

MORNING = datetime(2026, 3, 2, 8, tzinfo=UTC)


def name(number: int) -> UUID:
    """Return the name of the entry recorded as number so and so."""
    return uuid5(SALT, str(number))


def recorded(*events: Event, hours: dict[int, int] | None = None) -> list[Entry]:
    """Return entries in the order of recording, an hour apart, or at the hour said."""
    at = hours or {}
    return [
        Entry(name(number), MORNING + timedelta(hours=at.get(number, number)), number, event)
        for number, event in enumerate(events, start=1)
    ]


BATH = opening("bath", litres(10), Cu=grams(500))
DRUMMED = Move("bath", "drum", litres(1))
MISTAKE = Move("bath", "drum", None)


def test_a_cancelled_move_never_was() -> None:
    with_mistake = recorded(BATH, MISTAKE, DRUMMED, Cancellation(name(2), "the wrong tank"))
    without = [entry for entry in recorded(BATH, MISTAKE, DRUMMED) if entry.event is not MISTAKE]
    state, followed = rebuild(with_mistake)
    expected, expected_followed = rebuild(without)
    assert state == expected
    assert state.holding("bath", "Cu").amount == 450 * G
    assert name(2) not in followed
    assert {uuid: folded for uuid, folded in followed.items() if folded.contents} == expected_followed


def test_a_cancellation_dated_before_its_mistake_cancels_it_all_the_same() -> None:
    state, _ = rebuild(recorded(BATH, MISTAKE, Cancellation(name(2), "the wrong tank"), hours={3: 0}))
    assert state.holding("bath", "Cu").amount == 500 * G


def test_a_cancellation_cannot_be_cancelled() -> None:
    entries = recorded(BATH, MISTAKE, Cancellation(name(2), "wrong"), Cancellation(name(3), "it was right"))
    state, _ = rebuild(entries)
    assert state.holding("bath", "Cu").amount == 500 * G


def test_cancelling_twice_is_cancelling_once() -> None:
    once = rebuild(recorded(BATH, MISTAKE, Cancellation(name(2), "wrong")))
    twice = rebuild(recorded(BATH, MISTAKE, Cancellation(name(2), "wrong"), Cancellation(name(2), "wrong")))
    assert once[0] == twice[0]


def test_a_cancelled_analysis_takes_its_acceptance_along() -> None:
    figure = Figure(45 * G, 0, "titration")
    analysis = Analysis("bath", "Cu", Measured("45", "g/L", 45 * G), "Cu", MORNING, figure)
    accepted = Acceptance(name(2), "bath", "Cu", figure)
    entries = recorded(BATH, analysis, accepted)
    assert rebuild(entries)[0].holding("bath", "Cu").amount == 450 * G
    entries = recorded(BATH, analysis, accepted, Cancellation(name(2), "the wrong sample"))
    assert rebuild(entries)[0].holding("bath", "Cu").amount == 500 * G
    assert [entry.sequence for entry in standing(entries)] == [1, 4]


def test_what_happened_earlier_folds_earlier_whenever_it_was_recorded() -> None:
    """The opening was recorded last but happened first."""
    late = recorded(DRUMMED, BATH, hours={1: 5, 2: 1})
    state, _ = rebuild(late)
    assert state.holding("drum", "Cu").amount == 50 * G


def test_at_the_same_hour_the_order_of_recording_decides() -> None:
    state, _ = rebuild(recorded(BATH, DRUMMED, hours={1: 1, 2: 1}))
    assert state.holding("drum", "Cu").amount == 50 * G
