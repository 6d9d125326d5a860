"""A day's racks and ampere-hours in one entry: the same as if each load had been recorded, in fewer movements."""

import time
from collections import Counter
from collections.abc import Iterable
from fractions import Fraction
from math import comb

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.books.events import (
    ASSUMED,
    COMPUTED,
    GROSS_MASS,
    PARTS,
    REACTION,
    VOLUME,
    BathCharge,
    DaySheet,
    Event,
    Figure,
    Plating,
    Racks,
    Run,
)
from chemicals.books.fold import fold_event
from chemicals.books.fold.dips import merged
from chemicals.books.fold.state import (
    LIMIT,
    NEGATIVE_CONTENT,
    TOO_MUCH,
    UNKNOWN_CONTENTS,
    UNKNOWN_LEVEL,
    State,
    Transfer,
    root,
)
from chemicals.science.rinse import static_concentration
from tests.books.words import (
    DENSE,
    ML,
    Books,
    G,
    L,
    Step,
    codes,
    copper_deposit,
    coulombs,
    grams,
    litres,
    made,
    moved,
    opening,
    plating,
    step,
)

Row = tuple[int, list[Step]]
"""So many loads and their route."""


def sheet(*rows: Row, charges: Iterable[tuple[str, int, Plating]] = ()) -> DaySheet:
    """Return a day sheet of racks, and of the coulombs of each bath."""
    racks = tuple(Racks(tuple(one.tank for one in route), "rack", loads) for loads, route in rows)
    drags = tuple(tuple(one.drag_out for one in route) for _, route in rows)
    baths = tuple(BathCharge(bath, coulombs(charge)) for bath, charge, _ in charges)
    return DaySheet(racks, baths, drags, tuple(figures for *_, figures in charges))


def dips(row: Row) -> list[Event]:
    """Return the loads of a row as runs without current."""
    loads, route = row
    tanks, drags = tuple(one.tank for one in route), tuple(one.drag_out for one in route)
    return [Run("knobs", tanks, None, None, None, None, None, None, "rack", drags)] * loads


def a_line() -> Books:
    """Return a bath of 10 L with a kilogram of copper, two rinses of 1 L of water, and an anode set of 2 kg."""
    return Books(
        opening("bath", litres(10), Cu=grams(1000), density=DENSE, poured=("salt/1",)),
        opening("first", litres(1)),
        opening("second", litres(1)),
        opening("anodes", mass=grams(2000), Cu=grams(2000)),
        opening("racks"),
    )


ROUTE = [step("bath", 10), step("first", 10), step("second", 10)]


def test_two_loads_by_hand() -> None:
    """10 mL of the bath carry 1 g. Load 1: 9900 ug out of the first rinse, 98 ug out of the second.

    Load 2: 19 703 ug and 292 ug (see the two loads by hand among the runs). One movement between two tanks for both.
    """
    books = a_line()
    folded = books.record(sheet((2, ROUTE)))
    assert moved(folded, "Cu") == [("bath", "first", 2 * G), ("first", "second", 29_603), ("second", PARTS, 390)]
    assert moved(folded, VOLUME) == [
        ("bath", "first", 20 * ML), ("first", "second", 20 * ML), ("second", PARTS, 20 * ML),
    ]  # fmt: skip
    assert {transfer.basis for transfer in folded.transfers} == {ASSUMED}
    assert (books.holds("first", "Cu"), books.holds("second", "Cu")) == (1_970_397, 29_213)
    assert books.remembers("second") == {"salt/1"}


def test_the_charge_of_the_day_plates_before_the_racks_are_dipped() -> None:
    """7200 C: 2.370988 g of copper, 3 % of it on racks; at an inert anode 74.62274 mmol of acid.

    Then 10 of 10 000 mL of what is left: (1 000 000 000 - 2 370 988) / 1000 = 997 629 ug, with 74 622 nmol of acid.
    """
    figures = plating(copper_deposit(), on_racks=(30_000, 0), conversions=(made("acid", 10_364_270),))
    books = a_line()
    folded = books.record(sheet((1, [ROUTE[0], step("first", 0)]), charges=[("bath", 7200, figures)]))
    assert moved(folded, "Cu") == [
        ("bath", PARTS, 2_299_859), ("bath", "racks", 71_129), ("bath", "first", 997_629),
    ]  # fmt: skip
    assert moved(folded, "acid") == [(REACTION, "bath", 74_622_744), ("bath", "first", 74_622)]
    assert books.holds("racks", GROSS_MASS) == 71_129


def test_each_bath_has_its_charge_and_its_anodes() -> None:
    books = a_line()
    books.record(opening("strike", litres(5), Cu=grams(50)))
    by_charge = [
        ("bath", 3600, plating(copper_deposit(980_000), "anodes")),
        ("strike", 1800, plating(copper_deposit())),
    ]
    folded = books.record(sheet(charges=by_charge))
    assert moved(folded, "Cu") == [
        ("bath", PARTS, 1_161_784), ("anodes", "bath", 1_185_494), ("strike", PARTS, 592_747),
    ]  # fmt: skip
    assert {transfer.basis for transfer in folded.transfers} == {COMPUTED}


def followed(books: Books, *entries: Event) -> Counter[tuple[str, str, str, str]]:
    """Record entries and return what moved, by (component, from, to, basis)."""
    sums: Counter[tuple[str, str, str, str]] = Counter()
    for event in entries:
        for one in books.record(event).transfers:
            sums[one.component, one.source, one.target, one.basis] += one.amount
    return sums


def test_two_hundred_loads_are_two_hundred_runs_to_the_unit() -> None:
    row = (200, ROUTE)
    together, one_by_one = a_line(), a_line()
    assert followed(together, sheet(row)) == followed(one_by_one, *dips(row))
    assert together.state == one_by_one.state


tanks = st.sampled_from(["bath", "first", "second", "empty", "unlisted", "unread"])
drags = st.builds(Figure, st.integers(0, 3 * L), st.just(0), st.just("entered"))
routes = st.lists(st.builds(Step, tanks, drags), max_size=4)
rows = st.lists(st.tuples(st.integers(1, 6), routes), max_size=3)


@given(rows)
def test_any_day_sheet_is_its_runs_to_the_unit(rows: list[Row]) -> None:
    """Whatever the route, drained, unlisted or never read: the same contents, doubts, memory, findings."""
    found = []
    for entries in [sheet(*rows)], [run for row in rows for run in dips(row)]:
        books = a_line()
        books.record(opening("unlisted", litres(2), complete=False, Cu=grams(1)))
        books.record(opening("unread", complete=False))
        results = [books.record(event) for event in entries]
        sums = Counter[tuple[str, str, str, str]]()
        for one in (one for folded in results for one in folded.transfers):
            sums[one.component, one.source, one.target, one.basis] += one.amount
        found.append((books.state, sums, {finding for folded in results for finding in folded.findings}))
    assert found[0] == found[1]


@given(rows)
def test_one_movement_between_two_ends(rows: list[Row]) -> None:
    transfers = a_line().record(sheet(*rows, *rows)).transfers
    ends = [(one.component, one.source, one.target, one.basis) for one in transfers]
    assert len(ends) == len(set(ends))


def test_a_series_of_counted_loads_against_the_static_rinse() -> None:
    """The first rinse: C = C0 (1 - s^n), s = V/(V + D), as the calculation page has it.

    The second: C0 (1 - s)^2 sum of p s^(p-1) over p loads (J. Met. Finish. Soc. Japan 28(7), 1977, abstract, read).
    C0 100 g/L, V 1 L, D 10 mL, n 200: 86.3 g and 59.2 g.
    """
    books, loads, stays = a_line(), 200, Fraction(1000, 1010)
    books.record(sheet((loads, ROUTE)))
    first, second = books.holds("first", "Cu"), books.holds("second", "Cu")
    assert first is not None
    assert second is not None
    assert first / G == pytest.approx(static_concentration(1, 0.01, loads, 100), rel=1e-5)
    series = sum(comb(p, 1) * stays ** (p - 1) for p in range(1, loads + 1))
    assert second / G == pytest.approx(float(100 * (1 - stays) ** 2 * series), rel=1e-5)
    assert 0 <= first - 100 * G * (1 - stays**loads) <= loads  # each load leaves a part of a microgram behind


def test_a_figure_for_drag_out_is_wrong_by_as_much_at_every_load() -> None:
    """100 loads x 10 +- 3 mL = 1000 +- 300 mL, not +- 30; of 100 g/L: 100 +- 30 g came into the rinse.

    Of the copper there is a little more doubt: the volume of the bath grew less certain while the loads went through.
    """
    books = a_line()
    folded = books.record(sheet((100, [step("bath", 10, 3), step("first", 0)])))
    came = {one.component: one for one in folded.transfers}
    assert (came[VOLUME].amount, came[VOLUME].sd) == (1000 * ML, 300 * ML)
    assert came["Cu"].amount == 100 * G
    assert 30 * G <= came["Cu"].sd < 30_010_000
    assert books.holding("first", VOLUME).variance == (300 * ML) ** 2
    assert 30 * G <= root(books.holding("first", "Cu").variance) <= came["Cu"].sd


def test_two_rows_of_racks_are_two_figures() -> None:
    """Rows of 30 and 40 loads, each of 10 +- 1 mL: 30 and 40 mL of doubt, together 50 (squared they add up)."""
    route = [step("bath", 10, 1), step("first", 0)]
    folded = a_line().record(sheet((30, route), (40, route)))
    (volume,) = (one for one in folded.transfers if one.component == VOLUME)
    assert volume.amount == 700 * ML
    assert 50 * ML <= volume.sd <= 50 * ML + 70  # rounded up at each load


def test_a_bath_that_ran_dry_is_told() -> None:
    """Eleven loads of a litre out of 10 L: the last one takes what the books do not have."""
    books = a_line()
    folded = books.record(sheet((11, [step("bath", 1000), step("first", 0)])))
    assert books.holds("bath", VOLUME) == -1 * L
    assert {NEGATIVE_CONTENT, UNKNOWN_LEVEL, UNKNOWN_CONTENTS} <= codes(folded)
    assert not books.is_complete("first")


def test_a_rinse_that_nobody_read_makes_the_next_one_unknown() -> None:
    books = Books(opening("bath", litres(10), Cu=grams(1000)), opening("first", complete=False), opening("second"))
    folded = books.record(sheet((3, ROUTE)))
    assert moved(folded, "Cu") == [("bath", "first", 3 * G)]
    assert (books.holds("first", "Cu"), books.holds("second", "Cu")) == (None, None)
    assert UNKNOWN_LEVEL in codes(folded)


def test_an_empty_sheet_posts_nothing() -> None:
    assert a_line().record(sheet()).transfers == ()


def test_no_posting_holds_more_than_the_books_can() -> None:
    """A thousand loads that pass a thousand tonnes on: the movements are split, none is beyond the limit."""
    some = Transfer("Cu", "a", "b", LIMIT // 2, 3, ASSUMED)
    assert merged([some] * 3) == [
        Transfer("Cu", "a", "b", 2 * (LIMIT // 2), 5, ASSUMED), Transfer("Cu", "a", "b", LIMIT // 2, 3, ASSUMED),
    ]  # fmt: skip
    books = a_line()
    folded = books.record(sheet((1000, [step("bath", 10**9, 10**9), step("first", 10**9)])))
    assert all(0 < one.amount <= LIMIT and one.sd <= LIMIT for one in folded.transfers)
    assert TOO_MUCH in codes(folded)


def test_a_busy_day_folds_while_one_types() -> None:
    """200 loads through 4 tanks of 6 components are 4800 portions: 0.03 s of work measured, half a second is tested."""
    state = State()
    bath = opening("bath", litres(100, 1), density=DENSE, Cu=grams(5000), Na=grams(300), Fe=grams(900), Cl=grams(600))
    for event in bath, *(opening(tank, litres(20)) for tank in ("first", "second", "third")):
        fold_event(state, event)
    route = [step(tank, 10, 3) for tank in ("bath", "first", "second", "third")]
    begun = time.process_time()
    folded = fold_event(state, sheet((200, route)))
    assert time.process_time() - begun < 0.5
    assert len(folded.transfers) == 4 * 6
