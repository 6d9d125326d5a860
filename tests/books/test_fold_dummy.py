"""Metal out of a bath onto a dummy sheet or a recovery cell's cathode, and stripped back into a tank."""

from collections.abc import Callable

import pytest

from chemicals.books.canonical import CanonicalError
from chemicals.books.events import (
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    PARTS,
    UNACCOUNTED,
    VOLUME,
    Dummy,
    Event,
    Measured,
    Plating,
    Strip,
)
from chemicals.books.fold.state import NEGATIVE_CONTENT, UNKNOWN_AMOUNT, WEIGHT_GAINED, WEIGHT_LOST, Finding
from tests.books.words import (
    KG,
    Books,
    G,
    L,
    amperes,
    bases,
    codes,
    copper_deposit,
    coulombs,
    grams,
    litres,
    made,
    moved,
    opening,
    plating,
    seconds,
)

BARE = plating(copper_deposit())


def dummied(
    target: str = "cell",
    figures: Plating = BARE,
    *,
    charge: Measured | None = None,
    current: Measured | None = None,
    time: Measured | None = None,
    before: Measured | None = None,
    after: Measured | None = None,
) -> Dummy:
    return Dummy("bath", target, charge, current, time, before, after, figures)


def stripped(before: Measured | None = None, after: Measured | None = None, source: str = "racks") -> Strip:
    return Strip(source, "bath", "Cu", before, after)


def a_shop() -> Books:
    """Return 10 L with 500 g of copper, an empty recovery cell, and racks with 30 g of copper and 4 g of nickel."""
    return Books(
        opening("bath", litres(10), Cu=grams(500)),
        opening("cell"),
        opening("racks", mass=grams(34), Cu=grams(30, 3), Ni=grams(4)),
    )


def test_a_recovery_cell_takes_metal_out_by_the_charge() -> None:
    """2 A x 1800 s = 3600 C: 1.185494 g of copper at full efficiency, 0.592747 g at 50 %."""
    books = a_shop()
    folded = books.record(dummied(figures=plating(copper_deposit(500_000)), current=amperes(2), time=seconds(1800)))
    assert moved(folded, "Cu") == [("bath", "cell", 592_747)]
    assert moved(folded, GROSS_MASS) == [("bath", "cell", 592_747)]
    assert moved(folded, VOLUME) == []
    assert bases(folded, "Cu") == {COMPUTED}
    assert (books.holds("cell", "Cu"), books.holds("cell", GROSS_MASS)) == (592_747, 592_747)


def test_a_dummy_sheet_that_was_weighed() -> None:
    """The sheet gained 8.0 g; its copper is on no part that anybody sells, but out of the workshop's tanks."""
    books = a_shop()
    folded = books.record(dummied(PARTS, charge=coulombs(3600), before=grams(210), after=grams(218)))
    assert moved(folded, "Cu") == [("bath", PARTS, 8 * G)]
    assert bases(folded, "Cu") == {OBSERVED}
    assert books.holds("bath", "Cu") == 492 * G


def test_a_recovery_cell_has_an_inert_anode_and_makes_acid() -> None:
    """Faraday's law: 3600 C / 96485.33212 C/mol = 37.3114 mmol of H+."""
    books = a_shop()
    books.record(
        dummied(figures=plating(copper_deposit(), conversions=(made("acid", 10_364_270),)), charge=coulombs(3600))
    )
    assert books.holds("bath", "acid") == 37_311_372


def test_a_dummy_with_the_bath_s_own_anodes() -> None:
    books = a_shop()
    books.record(opening("anodes", mass=grams(100), Cu=grams(100)))
    folded = books.record(dummied(figures=plating(copper_deposit(980_000), "anodes"), charge=coulombs(3600)))
    assert moved(folded, "Cu") == [("bath", "cell", 1_161_784), ("anodes", "bath", 1_185_494)]


def test_a_dummy_of_which_nobody_knows_the_charge() -> None:
    books = a_shop()
    folded = books.record(dummied())
    assert folded.findings == (
        Finding(UNKNOWN_AMOUNT, "Cu", "bath", "cell"),
        Finding(UNKNOWN_AMOUNT, GROSS_MASS, "bath", "cell"),
    )
    assert (books.holds("bath", "Cu"), books.holds("cell", "Cu")) == (None, None)


def test_a_cathode_that_lost_weight_is_told() -> None:
    books = a_shop()
    folded = books.record(dummied(before=grams(211), after=grams(210)))
    assert moved(folded, "Cu") == [("cell", "bath", 1 * G)]
    assert codes(folded) == {WEIGHT_LOST, NEGATIVE_CONTENT}


def test_more_than_the_bath_held_is_told() -> None:
    books = a_shop()
    folded = books.record(dummied(before=grams(0), after=grams(501)))
    assert books.holds("bath", "Cu") == -1 * G
    assert folded.findings == (Finding(NEGATIVE_CONTENT, "Cu", "bath", "bath"),)


def test_a_strip_by_weights() -> None:
    """85.0 +- 0.3 g before, 80.2 +- 0.4 g after: 4.8 +- 0.5 g went back into the bath."""
    books = a_shop()
    folded = books.record(stripped(grams("85.0", "0.3"), grams("80.2", "0.4")))
    assert moved(folded, "Cu") == [("racks", "bath", 4_800_000)]
    assert moved(folded, GROSS_MASS) == [("racks", "bath", 4_800_000)]
    assert folded.transfers[0].sd == 500_000
    assert bases(folded, "Cu") == {OBSERVED}
    assert books.holds("racks", "Cu") == 25_200_000
    assert books.holds("racks", GROSS_MASS) == 29_200_000
    assert (books.holds("bath", GROSS_MASS), books.holds("bath", VOLUME)) == (10 * KG + 4_800_000, 10 * L)


def test_a_strip_without_weights_takes_all_that_the_books_have_of_the_metal() -> None:
    """30 +- 3 g of copper; the nickel stays on the racks."""
    books = a_shop()
    folded = books.record(stripped())
    assert moved(folded, "Cu") == [("racks", "bath", 30 * G)]
    assert moved(folded, GROSS_MASS) == [("racks", "bath", 30 * G)]
    assert [transfer.sd for transfer in folded.transfers] == [3 * G, 3 * G]
    assert bases(folded, "Cu") == {COMPUTED}
    assert (books.holds("racks", "Cu"), books.holds("racks", "Ni")) == (0, 4 * G)
    assert books.holds("racks", GROSS_MASS) == 4 * G
    assert books.holding("racks", "Cu").variance == 0


def test_parts_are_stripped_by_their_weights() -> None:
    books = a_shop()
    assert moved(books.record(stripped(grams(120), grams(118), PARTS)), "Cu") == [(PARTS, "bath", 2 * G)]
    assert books.went_to(PARTS, "Cu") == -2 * G


def test_bare_racks_give_nothing() -> None:
    books = a_shop()
    books.record(stripped())
    assert books.record(stripped()).transfers == ()
    assert books.holds("bath", "Cu") == 530 * G


def test_racks_of_which_nobody_knows_how_much_is_on_them() -> None:
    """All of it came off: afterwards none is left, and how much is in the bath is unknown."""
    books = Books(opening("bath", litres(10), Cu=grams(500)), opening("racks", complete=False))
    folded = books.record(stripped())
    assert Finding(UNKNOWN_AMOUNT, "Cu", "racks", "bath") in folded.findings
    assert (books.holds("bath", "Cu"), books.holds("racks", "Cu")) == (None, 0)
    assert (books.holds("bath", GROSS_MASS), books.holds("racks", GROSS_MASS)) == (None, None)


def test_what_was_stripped_and_weighs_more_is_told() -> None:
    folded = a_shop().record(stripped(grams(80), grams(81)))
    assert moved(folded, "Cu") == [("bath", "racks", 1 * G)]
    assert folded.findings == (Finding(WEIGHT_GAINED, "Cu", "racks", "bath"),)


def test_more_stripped_than_had_grown_is_told() -> None:
    books = a_shop()
    folded = books.record(stripped(grams(80), grams(45)))
    assert (books.holds("racks", "Cu"), books.holds("bath", "Cu")) == (-5 * G, 535 * G)
    assert Finding(NEGATIVE_CONTENT, "Cu", "racks", "racks") in folded.findings


def test_all_of_less_than_nothing_is_unaccounted() -> None:
    books = a_shop()
    books.record(stripped(grams(80), grams(45)))
    folded = books.record(stripped())
    assert moved(folded, "Cu") == [(UNACCOUNTED, "racks", 5 * G)]
    assert books.holds("racks", "Cu") == 0


@pytest.mark.parametrize(
    ("wrong", "field"),
    [
        (lambda: dummied("reaction"), r"Dummy\.target"),
        (lambda: Dummy("sewer", "cell", None, None, None, None, None, BARE), r"Dummy\.tank"),
        (lambda: stripped(grams(2), grams(1), "opening"), r"Strip\.source"),
        (lambda: Strip("racks", PARTS, "Cu", None, None), r"Strip\.tank"),
        (lambda: stripped(source=PARTS), r"Strip\.weight_before"),
    ],
)
def test_metal_goes_from_a_tank_onto_a_vessel_or_parts_and_back(wrong: Callable[[], Event], field: str) -> None:
    with pytest.raises(CanonicalError, match=field):
        wrong()


@pytest.mark.parametrize("event", [dummied("bath", charge=coulombs(3600)), Strip("bath", "bath", "Cu", None, None)])
def test_from_a_bath_into_itself_nothing_moves(event: Dummy | Strip) -> None:
    books = a_shop()
    assert books.record(event).transfers == ()
    assert books.holds("bath", "Cu") == 500 * G
