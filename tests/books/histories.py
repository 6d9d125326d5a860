"""Random histories of a small workshop: all kinds of entries, late ones, cancelled ones, absurd amounts."""

from datetime import UTC, datetime, timedelta
from typing import Any
from uuid import UUID

from hypothesis import strategies as st

from chemicals.books.events import (
    AIR,
    SPILL,
    WATER_SUPPLY,
    Acceptance,
    Analysis,
    Cancellation,
    DrumOff,
    Event,
    Figure,
    HandOver,
    Held,
    Ingredient,
    LevelReading,
    MakeUp,
    Measured,
    Move,
    Opening,
    Paper,
    Receipt,
    Recipe,
    Run,
    Share,
    TopUp,
)
from chemicals.books.fold import Entry
from tests.books.words import (
    DENSE,
    NO_ROOM,
    SALT,
    WATER,
    G,
    L,
    acid,
    copper_deposit,
    grams,
    litres,
    opening,
    plating,
    salt,
)

METALS = ("Ag", "Cu")
VESSELS = ("anodes", "bag", "bath", "can", "drum", "first", "second")
MIDNIGHT = datetime(2026, 3, 2, tzinfo=UTC)

IN_USE = (
    opening("bath", litres(10, "0.1"), Cu=grams(500, 5), density=DENSE, poured=("salt/1",)),
    opening("first", litres(5)),
    opening("second", litres(5)),
    opening("anodes", mass=grams(2000), Cu=grams(2000)),
    Receipt("bag", grams(5000, 5), None, "lot", salt()),
    Receipt("can", None, litres(5), "lot", acid()),
)
"""A workshop in which everything is known; half of the histories begin with it."""


def _measured(most: int) -> st.SearchStrategy[Measured]:
    bases = st.integers(0, most) | st.integers(0, most) | st.integers(0, 10**15)
    return st.builds(Measured, st.just("typed"), st.just("unit"), bases, st.none() | st.integers(0, most))


vessels = st.sampled_from(VESSELS)
volumes, masses = _measured(12 * L), _measured(1000 * G)
charges = _measured(10**4 * 10**6)
figures = st.builds(Figure, st.integers(0, 2 * 10**6), st.integers(0, 10**5), st.just("as entered"))
shares = st.builds(Share, st.sampled_from(METALS), st.integers(0, 10**9), st.just(10**5), st.sampled_from(["kg", "L"]))
recipes = st.builds(
    Recipe,
    st.just(SALT),
    st.integers(1, 3),
    st.just("product"),
    st.booleans(),
    st.booleans(),
    st.lists(shares, max_size=2).map(tuple),
    st.none() | figures,
)
drags = st.builds(Figure, st.integers(0, L), st.integers(0, L), st.just("entered"))
steps = st.lists(st.tuples(vessels, drags), max_size=3)
ingredients = st.builds(Ingredient, vessels, st.none() | masses, st.none() | volumes)
held_lists = st.lists(
    st.builds(Held, st.sampled_from(METALS), masses), max_size=2, unique_by=lambda held: held.component
).map(tuple)
names = st.integers(1, 20).map(lambda number: UUID(int=number))
concentrations = st.builds(Figure, st.integers(0, 300 * G) | st.integers(0, 10**15), st.just(G), st.just("titration"))


def run_through(steps: list[tuple[str, Figure]], **figures: Any) -> Run:
    """Return a run through the tanks, dragging out of each what stands beside it."""
    tanks, drag_out = tuple(tank for tank, _ in steps), tuple(drags for _, drags in steps)
    return Run(parts="parts", route=tanks, drag_out=drag_out, rack="rack", **figures)


def made_up(tank: str, ingredients: list[Ingredient], level: Measured | None) -> MakeUp:
    """Return a make-up in which what dissolves needs no room."""
    return MakeUp(tank, tuple(ingredients), level, WATER, (NO_ROOM,) * len(ingredients))


EVENTS: dict[type[Event], st.SearchStrategy[Event]] = {
    Opening: st.builds(
        Opening,
        vessels,
        st.booleans(),
        st.none() | volumes,
        st.none() | masses,
        held_lists,
        st.none() | figures,
        st.lists(st.sampled_from(["old/1", "old/2"]), max_size=2).map(tuple),
    ),
    Receipt: st.builds(Receipt, vessels, st.none() | masses, st.none() | volumes, st.just("lot"), recipes),
    MakeUp: st.builds(made_up, vessels, st.lists(ingredients, max_size=2), st.none() | volumes),
    TopUp: st.builds(
        TopUp, vessels, vessels | st.just(WATER_SUPPLY), st.none() | volumes, st.none() | volumes, st.just(WATER)
    ),
    Run: st.builds(
        run_through,
        steps,
        charge=st.none() | charges,
        current=st.none() | charges,
        time=st.none() | charges,
        weight_before=st.none() | masses,
        weight_after=st.none() | masses,
        plating=st.none() | st.builds(plating, st.just(copper_deposit(980_000, 10_000)), st.none() | vessels),
    ),
    Move: st.builds(Move, vessels, vessels, st.none() | volumes),
    DrumOff: st.builds(DrumOff, vessels, vessels, st.none() | volumes),
    LevelReading: st.builds(LevelReading, vessels, volumes, st.sampled_from([AIR, SPILL]), st.just(WATER)),
    Analysis: st.builds(
        Analysis, vessels, st.sampled_from(METALS), volumes, st.just("Cu"), st.just(MIDNIGHT), concentrations
    ),
    Acceptance: st.builds(Acceptance, names, vessels, st.sampled_from(METALS), concentrations),
    HandOver: st.builds(HandOver, vessels, st.just("receiver"), st.none()),
    Cancellation: st.builds(Cancellation, names, st.just("a mistake")),
    Paper: st.just(Paper("manifest", 1, "", "")),
}
"""Every kind, with vessels that are confused, amounts left out and units mistaken."""

events = st.one_of(*EVENTS.values())


def entries_of(dated: "Dated") -> list[Entry]:
    """Return entries in the order of recording, each at its minute of the day; number n is named UUID(int=n)."""
    return [
        Entry(UUID(int=number), MIDNIGHT + timedelta(minutes=minute), number, event)
        for number, (event, minute) in enumerate(dated, start=1)
    ]


Dated = list[tuple[Event, int]]
nothing: Dated = []
in_use: Dated = [(event, minute) for minute, event in enumerate(IN_USE)]
starts = st.sampled_from([in_use, nothing])
dated_events = st.lists(st.tuples(events, st.integers(0, 30)), min_size=1, max_size=12)
histories = st.builds(lambda start, rest: entries_of(start + rest), starts, dated_events)
"""Entries recorded in any order of time."""

orderly_events = st.lists(st.tuples(events, st.integers(10, 60)), max_size=12, unique_by=lambda dated: dated[1])
orderly_histories = st.builds(lambda start, rest: entries_of(start + rest), starts, orderly_events)
"""Entries of which no two happened at the same minute."""
