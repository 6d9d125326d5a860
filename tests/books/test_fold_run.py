"""A load goes through its route: metal onto parts, metal from anodes, liquid dragged from tank to tank."""

from fractions import Fraction

import pytest

from chemicals.books.events import (
    ASSUMED,
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    PARTS,
    VOLUME,
    Deposit,
    Measured,
    Run,
)
from chemicals.books.fold.state import NEGATIVE_CONTENT, UNKNOWN_AMOUNT, UNKNOWN_LEVEL, WEIGHT_LOST, Finding
from tests.books.words import (
    DENSE,
    ML,
    Books,
    G,
    L,
    Step,
    amperes,
    bases,
    codes,
    copper_deposit,
    coulombs,
    grams,
    litres,
    moved,
    opening,
    plating,
    seconds,
    step,
)


def load(
    *route: Step,
    deposit: Deposit | None = None,
    anode: str | None = None,
    charge: Measured | None = None,
    current: Measured | None = None,
    time: Measured | None = None,
    before: Measured | None = None,
    after: Measured | None = None,
) -> Run:
    """Return a run; by default one step in the bath without drag-out."""
    steps = route or (step("bath", 0),)
    tanks, drags = tuple(one.tank for one in steps), tuple(one.drag_out for one in steps)
    figures = None if deposit is None else plating(deposit, anode)
    return Run("brass knobs", tanks, charge, current, time, before, after, figures, "rack", drags)


def a_bath() -> Books:
    """Return 10 L with a kilogram of copper, and an anode set of 2 kg."""
    return Books(
        opening("bath", litres(10), Cu=grams(1000), density=DENSE, poured=("salt/1",)),
        opening("anodes", mass=grams(2000), Cu=grams(2000)),
    )


def test_weighed_before_and_after() -> None:
    """7.7 g - 5.6 g = 2.1 g, +- sqrt(0.03^2 + 0.04^2) = 0.05 g; it leaves the bath as mass, not as volume."""
    books = a_bath()
    folded = books.record(load(deposit=copper_deposit(), before=grams("5.6", "0.03"), after=grams("7.7", "0.04")))
    assert moved(folded, "Cu") == [("bath", PARTS, 2_100_000)]
    assert moved(folded, GROSS_MASS) == [("bath", PARTS, 2_100_000)]
    assert moved(folded, VOLUME) == []
    assert folded.transfers[0].sd == 50_000
    assert bases(folded, "Cu") == {OBSERVED}
    assert books.holds("bath", "Cu") == 997_900_000


def test_by_the_charge() -> None:
    """63.546 g/mol x 3600 C / (2 x 96485.33212 C/mol) = 1.1854942 g; at 98 % 1.1617843 g."""
    books = a_bath()
    folded = books.record(load(deposit=copper_deposit(), charge=coulombs(3600)))
    assert moved(folded, "Cu") == [("bath", PARTS, 1_185_494)]
    assert bases(folded, "Cu") == {COMPUTED}
    folded = books.record(load(deposit=copper_deposit(980_000), charge=coulombs(3600)))
    assert moved(folded, "Cu") == [("bath", PARTS, 1_161_784)]


def test_the_uncertainty_of_charge_and_efficiency() -> None:
    """1.161784 g: 3 % of it by the charge and 4 % (0.0392 of 0.98) by the efficiency make 5 %: 0.0580892 g."""
    books = a_bath()
    folded = books.record(load(deposit=copper_deposit(980_000, 39_200), charge=coulombs(3600, 108)))
    assert abs(folded.transfers[0].sd - 58_089) <= 1


def test_by_current_and_time() -> None:
    """0.44 A x 14 400 s = 6336 C: 2.0864698 g, as much as by the charge."""
    by_time = a_bath().record(load(deposit=copper_deposit(), current=amperes("0.44"), time=seconds(14_400)))
    by_charge = a_bath().record(load(deposit=copper_deposit(), charge=coulombs(6336)))
    assert by_time == by_charge
    assert moved(by_time, "Cu") == [("bath", PARTS, 2_086_470)]


def test_weights_are_believed_more_than_charge() -> None:
    folded = a_bath().record(
        load(deposit=copper_deposit(), charge=coulombs(3600), before=grams(5), after=grams(6))
    )  # fmt: skip
    assert moved(folded, "Cu") == [("bath", PARTS, 1 * G)]


@pytest.mark.parametrize(
    "run",
    [
        load(deposit=copper_deposit()),
        load(deposit=copper_deposit(), before=grams(5)),
        load(deposit=copper_deposit(), current=amperes(1)),
        load(deposit=copper_deposit(), time=seconds(1)),
    ],
)
def test_neither_weights_nor_charge_leave_the_bath_unknown(run: Run) -> None:
    books = a_bath()
    folded = books.record(run)
    assert folded.transfers == ()
    assert books.holds("bath", "Cu") is None
    assert books.holds("bath", VOLUME) == 10 * L
    assert folded.findings == (
        Finding(UNKNOWN_AMOUNT, "Cu", "bath", PARTS),
        Finding(UNKNOWN_AMOUNT, GROSS_MASS, "bath", PARTS),
    )


def test_an_inert_anode_gives_nothing() -> None:
    books = a_bath()
    books.record(load(deposit=copper_deposit(), charge=coulombs(3600)))
    assert books.holds("anodes", "Cu") == 2000 * G
    assert books.holds("bath", "Cu") == 1000 * G - 1_185_494


def test_a_soluble_anode_dissolves_with_all_the_charge() -> None:
    """At 98 % the bath grows richer: 1.185494 g dissolve, 1.161784 g plate."""
    books = a_bath()
    folded = books.record(load(deposit=copper_deposit(980_000), anode="anodes", charge=coulombs(3600)))
    assert moved(folded, "Cu") == [("bath", PARTS, 1_161_784), ("anodes", "bath", 1_185_494)]
    assert books.holds("bath", "Cu") == 1000 * G + 1_185_494 - 1_161_784
    assert books.holds("anodes", GROSS_MASS) == 2000 * G - 1_185_494


def test_a_soluble_anode_without_charge_loses_what_the_weight_tells() -> None:
    """2.1 g plated at 98 %: 2.142857 g dissolved."""
    books = a_bath()
    folded = books.record(
        load(deposit=copper_deposit(980_000), anode="anodes", before=grams("5.6"), after=grams("7.7"))
    )
    assert moved(folded, "Cu")[1] == ("anodes", "bath", 2_142_857)
    assert bases(folded, "Cu") == {OBSERVED, ASSUMED}


def test_what_a_weight_tells_of_an_anode_is_as_uncertain_as_weight_and_efficiency() -> None:
    """1.00 +- 0.03 g at 50 +- 2 %: 2 g, +- sqrt((0.03/0.5)^2 + (1 x 0.02/0.5^2)^2) = sqrt(0.0036 + 0.0064) = 0.1 g."""
    weighed = load(
        deposit=copper_deposit(500_000, 20_000), anode="anodes", before=grams(5, "0.03"), after=grams(6, 0)
    )  # fmt: skip
    folded = a_bath().record(weighed)
    dissolved = next(transfer for transfer in folded.transfers if transfer.source == "anodes")
    assert (dissolved.amount, dissolved.sd) == (2 * G, G // 10)


def test_a_soluble_anode_of_which_nothing_tells_is_unknown() -> None:
    books = a_bath()
    books.record(load(deposit=copper_deposit(), anode="anodes"))
    assert (books.holds("bath", "Cu"), books.holds("anodes", "Cu")) == (None, None)


def test_an_efficiency_of_nothing_plates_nothing() -> None:
    books = a_bath()
    assert books.record(load(deposit=copper_deposit(0), charge=coulombs(3600))).transfers == ()
    books.record(load(deposit=copper_deposit(0), anode="anodes", before=grams(5), after=grams(6)))
    assert books.holds("anodes", "Cu") is None


def test_a_load_that_lost_weight_is_told() -> None:
    folded = a_bath().record(load(deposit=copper_deposit(), before=grams(6), after=grams(5)))
    assert moved(folded, "Cu") == [(PARTS, "bath", 1 * G)]
    assert codes(folded) == {WEIGHT_LOST}


def test_more_metal_than_there_was_is_told_not_refused() -> None:
    books = a_bath()
    folded = books.record(load(deposit=copper_deposit(), before=grams(0), after=grams(1001)))
    assert books.holds("bath", "Cu") == -1 * G
    assert codes(folded) == {NEGATIVE_CONTENT}


def a_line() -> Books:
    """Return a bath of 10 L with a kilogram of copper, and two rinses of 1 L of water."""
    return Books(
        opening("bath", litres(10), Cu=grams(1000), poured=("salt/1",)),
        opening("first", litres(1)),
        opening("second", litres(1)),
    )


DIP = load(step("bath", 10), step("first", 10), step("second", 10))
"""10 mL dragged out of each tank."""


def test_two_loads_through_two_rinses_by_hand() -> None:
    """10 mL carry 10/10 000 of the bath: 1 g. What leaves a rinse has its concentration after mixing: 10/1010 of it.

    Load 1: 1 g in, 9900.99 ug out of the first, 98.02 ug out of the second.
    Load 2: 990 100 + 1 000 000 = 1 990 100 ug in the first, 19 703.96 out; 9802 + 19 703 = 29 505 ug, 292.13 out.
    """
    books = a_line()
    folded = books.record(DIP)
    assert moved(folded, "Cu") == [("bath", "first", 1 * G), ("first", "second", 9900), ("second", PARTS, 98)]
    assert bases(folded, "Cu") == {ASSUMED}
    folded = books.record(DIP)
    assert moved(folded, "Cu") == [("bath", "first", 1 * G), ("first", "second", 19_703), ("second", PARTS, 292)]
    assert books.holds("first", "Cu") == 1_970_397
    assert books.holds("second", "Cu") == 29_213
    assert books.went_to(PARTS, "Cu") == 390
    assert books.holds("first", VOLUME) == 1 * L
    assert books.holds("bath", VOLUME) == 9980 * ML


def test_two_hundred_loads_follow_the_static_rinse_series() -> None:
    """Rinse 1 after n loads: c V (1 - (V/(V + D))^n), c = 100 g/L; rinse 2 by the same recursion, in fractions."""
    books, loads = a_line(), 200
    share = Fraction(10, 1010)
    first = second = Fraction(0)
    for _ in range(loads):
        books.record(DIP)
        first += 1 * G
        second += first * share
        first, second = first * (1 - share), second * (1 - share)
    closed = 100 * G * (1 - (1 - share) ** loads)
    held = books.holds("first", "Cu"), books.holds("second", "Cu")
    assert held[0] is not None
    assert held[1] is not None
    assert abs(first - closed) < 1
    assert 0 <= held[0] - closed <= loads  # each pour leaves a part of a microgram behind
    assert abs(held[1] - second) <= 2 * loads


def test_the_past_of_a_bath_is_carried_along_the_route() -> None:
    books = a_line()
    books.record(DIP)
    assert books.remembers("second") == {"salt/1"}


def test_the_doubt_of_the_drag_out_reaches_the_rinse() -> None:
    """10 +- 3 mL of 100 g/L: 1.0 +- 0.3 g."""
    books = a_line()
    books.record(load(step("bath", 10, 3), step("first", 0)))
    assert books.holding("first", "Cu").variance == (3 * G // 10) ** 2


def test_an_empty_rinse_passes_everything_on() -> None:
    books = Books(opening("bath", litres(10), Cu=grams(1000), poured=("salt/1",)), opening("first"))
    books.record(load(step("bath", 10), step("first", 10)))
    assert books.holds("first", "Cu") == 0
    assert books.went_to(PARTS, "Cu") == 1 * G
    assert books.remembers("first") == {"salt/1"}


def test_a_rinse_of_unknown_level_makes_the_next_one_unknown() -> None:
    books = Books(
        opening("bath", litres(10), Cu=grams(1000)),
        opening("first", complete=False),
        opening("second", litres(1)),
    )
    folded = books.record(DIP)
    assert books.holds("bath", "Cu") == 999 * G
    assert books.holds("first", "Cu") is None
    assert books.holds("second", "Cu") is None
    assert books.holds("second", VOLUME) == 1 * L
    assert UNKNOWN_LEVEL in codes(folded)


def test_a_dip_only_and_twice_into_the_same_tank() -> None:
    books = a_line()
    folded = books.record(load(step("bath", 10), step("bath", 10), step("first", 0)))
    assert moved(folded, "Cu") == [("bath", "first", 1 * G)]


def test_a_bath_that_is_its_own_anode_gives_itself_nothing() -> None:
    books = a_bath()
    books.record(load(deposit=copper_deposit(0), anode="bath", before=grams(5), after=grams(6)))
    folded = books.record(load(deposit=copper_deposit(0), anode="bath", charge=coulombs(3600)))
    assert books.holds("bath", "Cu") == 999 * G
    assert folded.transfers == ()


def test_a_run_through_no_tank_is_nothing() -> None:
    run = Run("knobs", (), coulombs(3600), None, None, None, None, plating(copper_deposit()), "rack", ())
    assert a_line().record(run).transfers == ()
