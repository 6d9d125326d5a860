"""Random histories of a small workshop: all kinds of entries, late ones, cancelled ones, absurd amounts."""

from datetime import UTC, datetime, timedelta
from typing import Any
from uuid import UUID

from hypothesis import strategies as st

from chemicals.books.events import (
    AIR,
    FREE_CYANIDE,
    PARTS,
    SAMPLE,
    SEWER,
    SPILL,
    WATER_SUPPLY,
    Acceptance,
    Analysis,
    BathCharge,
    Cancellation,
    Carbon,
    Change,
    CleanOut,
    Conversion,
    Correction,
    Count,
    DaySheet,
    DensityReading,
    Discharge,
    Dissolved,
    DrumOff,
    Dummy,
    Event,
    Figure,
    Filter,
    HandOver,
    Held,
    Ingredient,
    LevelReading,
    MakeUp,
    Measured,
    Move,
    Opening,
    Paper,
    PeriodClosing,
    PeriodReopening,
    Plating,
    Racks,
    Reading,
    Receipt,
    Recipe,
    Resin,
    Result,
    Run,
    Sample,
    Share,
    Sludge,
    Spill,
    Strip,
    TopUp,
    Treatment,
    Uptake,
    WeightReading,
)
from chemicals.books.fold import Entry
from tests.books.words import (
    DENSE,
    MMOL,
    SALT,
    WATER,
    G,
    L,
    acid,
    copper_deposit,
    grams,
    litres,
    millimoles,
    opening,
    salt,
)

METALS = ("Ag", "Cu")
BALANCED = (*METALS, "NaCl", FREE_CYANIDE)
VESSELS = ("anodes", "bag", "bath", "can", "drum", "first", "second")
MIDNIGHT = datetime(2026, 3, 2, tzinfo=UTC)

IN_USE = (
    opening(
        "bath",
        litres(10, "0.1"),
        density=DENSE,
        poured=("salt/1",),
        Cu=grams(500, 5),
        NaCl=grams(100, 2),
        free_cyanide=millimoles(300, 9),
    ),
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
balanced = st.sampled_from(BALANCED)
shares = st.builds(Share, balanced, st.integers(0, 10**9), st.just(10**5), st.sampled_from(["kg", "L"]))
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
held_lists = st.lists(st.builds(Held, balanced, masses), max_size=2, unique_by=lambda held: held.component).map(tuple)
names = st.integers(1, 20).map(lambda number: UUID(int=number))
concentrations = st.builds(Figure, st.integers(0, 300 * G) | st.integers(0, 10**15), st.just(G), st.just("titration"))
"""Also of species, in nmol/L: 300 mol/L at most, give or take 1."""
shares_in_ppm = st.builds(Figure, st.integers(0, 1_200_000), st.integers(0, 10**5), st.just("as entered"))
rooms = st.builds(Figure, st.integers(0, L), st.integers(0, L // 10), st.just("assumed"))
conversions = st.builds(
    Conversion,
    st.just(FREE_CYANIDE),
    st.builds(Figure, st.integers(0, 20 * MMOL), st.integers(0, MMOL), st.just("assumed")),
    st.booleans(),
)
on_parts_alone = {"racks": st.none(), "rack_share": st.none()}
on_racks_too = {"racks": vessels, "rack_share": shares_in_ppm}
platings = st.one_of([
    st.builds(
        Plating,
        deposit=st.just(copper_deposit(980_000, 10_000)),
        anode=st.none() | vessels,
        conversions=st.lists(conversions, max_size=1).map(tuple),
        **where,
    )
    for where in (on_parts_alone, on_racks_too)
])  # fmt: skip
weighings: dict[str, Any] = {"weight_before": st.none() | masses, "weight_after": st.none() | masses}
currents: dict[str, Any] = dict.fromkeys(("charge", "current", "time"), st.none() | charges)
amounts: dict[str, Any] = {"volume": st.none(), "mass": st.none()}


def by_any_measure(kind: type[Event], **fields: Any) -> st.SearchStrategy[Event]:
    """Return events of a volume, of a mass, or of all there is."""
    ways = [{}, {"volume": volumes}, {"mass": masses}]
    return st.one_of([st.builds(kind, **(fields | amounts | way)) for way in ways])


def run_through(steps: list[tuple[str, Figure]], **figures: Any) -> Run:
    """Return a run through the tanks, dragging out of each what stands beside it."""
    tanks, drag_out = tuple(tank for tank, _ in steps), tuple(drags for _, drags in steps)
    return Run(parts="parts", route=tanks, drag_out=drag_out, rack="rack", **figures)


def made_up(tank: str, ingredients: list[tuple[Ingredient, Figure]], level: Measured | None) -> MakeUp:
    """Return a make-up of ingredients, each with the room that a kilogram of it needs."""
    return MakeUp(tank, tuple(i for i, _ in ingredients), level, WATER, tuple(room for _, room in ingredients))


def a_day(rows: list[tuple[list[tuple[str, Figure]], int]], charges: dict[str, tuple[Measured, Plating]]) -> DaySheet:
    """Return a day sheet of loads through their routes, and of charges by bath."""
    return DaySheet(
        tuple(Racks(tuple(tank for tank, _ in steps), "rack", loads) for steps, loads in rows),
        tuple(BathCharge(bath, charge) for bath, (charge, _) in charges.items()),
        tuple(tuple(drags for _, drags in steps) for steps, _ in rows),
        tuple(plating for _, plating in charges.values()),
    )


def taken_up(kind: type[Uptake]) -> st.SearchStrategy[Event]:
    """Return filters, carbons or resins."""
    return st.builds(kind, vessels, vessels, st.none() | masses, st.none() | volumes, held_lists, drags, shares_in_ppm)


def treated(ends: list[str], **fields: Any) -> Treatment:
    """Return a treatment of the first vessel; the last one takes the sludge, if there is one."""
    vessel, filtrate, *sludge = ends
    return Treatment(vessel=vessel, filtrate=filtrate, sludge=sludge[0] if sludge else None, **fields)


ends_of_treatment = st.one_of(
    st.lists(vessels, min_size=3, max_size=3, unique=True),
    st.lists(vessels, min_size=2, max_size=2),
    st.lists(vessels, min_size=2, max_size=2, unique=True).map(lambda ends: [ends[0], ends[0], ends[1]]),
    st.lists(vessels, min_size=2, max_size=2, unique=True).map(lambda ends: [ends[0], SEWER, ends[1]]),
)

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
    Count: st.builds(Count, vessels, volumes, st.none()) | st.builds(Count, vessels, st.none(), masses),
    MakeUp: st.builds(made_up, vessels, st.lists(st.tuples(ingredients, rooms), max_size=2), st.none() | volumes),
    TopUp: st.builds(
        TopUp, vessels, vessels | st.just(WATER_SUPPLY), st.none() | volumes, st.none() | volumes, st.just(WATER)
    ),
    Run: st.builds(run_through, steps, plating=st.none() | platings, **currents, **weighings),
    DaySheet: st.builds(
        a_day,
        st.lists(st.tuples(steps, st.integers(1, 5)), max_size=2),
        st.dictionaries(vessels, st.tuples(charges, platings), max_size=2),
    ),
    Dummy: st.builds(Dummy, tank=vessels, target=vessels | st.just(PARTS), plating=platings, **currents, **weighings),
    Strip: st.builds(Strip, vessels, vessels, st.sampled_from(METALS), st.none(), st.none())
    | st.builds(Strip, vessels | st.just(PARTS), vessels, st.sampled_from(METALS), masses, masses),
    Move: by_any_measure(Move, source=vessels, target=vessels),
    DrumOff: by_any_measure(DrumOff, source=vessels, target=vessels),
    Sample: by_any_measure(Sample, source=vessels, target=st.just(SAMPLE)),
    Spill: by_any_measure(Spill, source=vessels, target=vessels | st.just(SPILL)),
    Discharge: by_any_measure(Discharge, source=vessels, target=st.just(SEWER)),
    LevelReading: st.builds(LevelReading, vessels, volumes, st.sampled_from([AIR, SPILL]), st.just(WATER)),
    WeightReading: st.builds(WeightReading, vessels, masses),
    DensityReading: st.builds(DensityReading, vessels, _measured(2 * 10**6)),
    Reading: st.builds(Reading, vessels, st.just("pH"), st.just(""), st.just(Result("4.2", "pH", 4200, 4200, None))),
    Analysis: st.builds(Analysis, vessels, balanced, volumes, st.just("Cu"), st.just(MIDNIGHT), concentrations),
    Acceptance: st.builds(Acceptance, names, vessels, balanced, concentrations),
    Filter: taken_up(Filter),
    Carbon: taken_up(Carbon),
    Resin: taken_up(Resin),
    Sludge: st.builds(Sludge, vessels, vessels, masses, held_lists),
    CleanOut: st.builds(CleanOut, vessels, vessels, st.none() | volumes, st.just(WATER)),
    Treatment: st.builds(
        treated,
        ends_of_treatment,
        reagents=st.lists(ingredients, max_size=1).map(tuple),
        filtrate_volume=st.none() | volumes,
        sludge_mass=st.none() | masses,
        dissolved=st.lists(
            st.builds(Dissolved, balanced, _measured(100 * G)), max_size=2, unique_by=lambda row: row.component
        ).map(tuple),
        consumed=st.sampled_from([(), (FREE_CYANIDE,)]),
    ),
    HandOver: st.builds(HandOver, vessels, st.just("receiver"), st.none()),
    Cancellation: st.builds(Cancellation, names, st.just("a mistake")),
    Correction: st.builds(
        Correction,
        names,
        vessels,
        st.lists(
            st.builds(Change, balanced, masses, st.booleans()), max_size=2, unique_by=lambda change: change.component
        ).map(tuple),
        st.just("a receipt was written twice"),
    ),
    PeriodClosing: st.just(PeriodClosing(None, MIDNIGHT, 1, 2, "", "")),
    PeriodReopening: st.builds(PeriodReopening, names, st.just("the meter was read wrongly")),
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
