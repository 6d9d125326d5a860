"""Liquid is added from a named source: an amount, or up to the mark."""

from chemicals.books.events import AIR, COMPUTED, GROSS_MASS, OBSERVED, VOLUME, WATER_SUPPLY, Figure, Measured, TopUp
from chemicals.books.fold.state import UNKNOWN_AMOUNT, UNKNOWN_LEVEL
from tests.books.words import (
    DENSE,
    KG,
    WATER,
    Books,
    G,
    L,
    bases,
    codes,
    grams,
    kilograms,
    litres,
    moved,
    opening,
)


def topped_up(source: str, *, volume: Measured | None = None, level: Measured | None = None) -> TopUp:
    return TopUp("bath", source, volume, level, WATER)


def a_bath_and_its_drag_out_tank(held: str = "8") -> Books:
    """Return a bath with 500 g of copper, and a drag-out tank of 5 L with 10 g of it and some cyanide once."""
    return Books(
        opening("bath", litres(held), Cu=grams(500), density=DENSE, poured=("salt/1",)),
        opening("drag-out", litres(5), Cu=grams(10), poured=("cyanide/1",)),
    )


def test_two_litres_of_water() -> None:
    books = a_bath_and_its_drag_out_tank()
    folded = books.record(topped_up(WATER_SUPPLY, volume=litres(2)))
    assert moved(folded, VOLUME) == [(WATER_SUPPLY, "bath", 2 * L)]
    assert moved(folded, GROSS_MASS) == [(WATER_SUPPLY, "bath", 2 * KG)]
    assert (bases(folded, VOLUME), bases(folded, GROSS_MASS)) == ({OBSERVED}, {COMPUTED})
    assert books.holds("bath", "Cu") == 500 * G


def test_water_to_the_mark_is_what_was_missing() -> None:
    """8.0 +- 0.3 L in the books, 10.0 +- 0.4 L at the mark: 2.0 +- 0.5 L came."""
    books = Books(opening("bath", litres(8, "0.3")))
    folded = books.record(topped_up(WATER_SUPPLY, level=litres(10, "0.4")))
    assert moved(folded, VOLUME) == [(WATER_SUPPLY, "bath", 2 * L)]
    assert folded.transfers[0].sd == 500_000_000
    assert books.holding("bath", VOLUME).variance == 400_000_000**2  # as sure as the reading, not as the sum
    assert bases(folded, VOLUME) == {COMPUTED}


def test_the_mass_of_water_is_as_uncertain_as_volume_and_density() -> None:
    """2.0 +- 0.3 L of 1.0 +- 0.2 kg/L: (0.3 x 1)^2 + (2 x 0.2)^2 = 0.25 kg^2."""
    books = Books(opening("bath", litres(8)))
    density = Figure(1_000_000, 200_000, "a bad hydrometer")
    folded = books.record(TopUp("bath", WATER_SUPPLY, litres(2, "0.3"), None, density))
    assert folded.transfers[1].sd == 500_000_000


def test_a_bath_at_the_mark_needed_nothing() -> None:
    books = a_bath_and_its_drag_out_tank("10")
    assert books.record(topped_up(WATER_SUPPLY, level=litres(10))).transfers == ()


def test_topped_up_to_less_than_the_books_hold_water_went_to_air_before() -> None:
    books = a_bath_and_its_drag_out_tank("10")
    folded = books.record(topped_up(WATER_SUPPLY, level=litres("9.5")))
    assert moved(folded, VOLUME) == [("bath", AIR, L // 2)]
    assert moved(folded, GROSS_MASS) == [("bath", AIR, KG // 2)]
    assert books.holds("bath", "Cu") == 500 * G


def test_a_litre_from_the_drag_out_tank_brings_its_share_and_its_past() -> None:
    """1 L of 5 L with 10 g: 2 g."""
    books = a_bath_and_its_drag_out_tank()
    folded = books.record(topped_up("drag-out", volume=litres(1)))
    assert moved(folded, "Cu") == [("drag-out", "bath", 2 * G)]
    assert books.holds("drag-out", VOLUME) == 4 * L
    assert books.remembers("bath") == {"salt/1", "cyanide/1"}


def test_to_the_mark_from_the_drag_out_tank() -> None:
    books = a_bath_and_its_drag_out_tank("9")
    folded = books.record(topped_up("drag-out", level=litres(10)))
    assert moved(folded, VOLUME) == [("drag-out", "bath", 1 * L)]
    assert books.holds("bath", "Cu") == 502 * G


def test_amount_and_level_together_tell_what_evaporated() -> None:
    """10 L in the books, 1 L added, 10 L read: 1 L of water had gone to the air."""
    books = a_bath_and_its_drag_out_tank("10")
    folded = books.record(topped_up("drag-out", volume=litres(1), level=litres(10)))
    assert moved(folded, VOLUME) == [("drag-out", "bath", 1 * L), ("bath", AIR, 1 * L)]
    assert moved(folded, GROSS_MASS) == [("drag-out", "bath", 1 * KG), ("bath", AIR, 1 * KG)]
    assert books.holds("bath", "Cu") == 502 * G


def test_to_a_mark_that_the_books_had_reached_nobody_knows_how_much_came() -> None:
    books = a_bath_and_its_drag_out_tank("10")
    folded = books.record(topped_up("drag-out", level=litres(10)))
    assert moved(folded, "Cu") == []
    assert books.holds("bath", "Cu") is None
    assert books.holds("drag-out", "Cu") is None
    assert books.holds("drag-out", VOLUME) is None
    assert books.holds("bath", VOLUME) == 10 * L
    assert UNKNOWN_AMOUNT in codes(folded)
    assert books.remembers("bath") == {"salt/1", "cyanide/1"}


def test_into_a_bath_of_unknown_level_the_past_comes_along_all_the_same() -> None:
    books = Books(
        opening("bath", complete=False, mass=kilograms(9), Cu=grams(500)),
        opening("drag-out", litres(5), Cu=grams(10), poured=("cyanide/1",)),
    )
    folded = books.record(topped_up("drag-out", level=litres(10)))
    assert books.remembers("bath") == {"unknown/bath", "cyanide/1"}
    assert books.holds("bath", "Cu") is None
    assert books.holds("drag-out", VOLUME) is None  # how much left it is unknown too
    assert books.holds("bath", VOLUME) == 10 * L
    assert UNKNOWN_LEVEL in codes(folded)


def test_neither_amount_nor_level() -> None:
    books = a_bath_and_its_drag_out_tank()
    books.record(topped_up(WATER_SUPPLY))
    assert books.holds("bath", VOLUME) is None
    assert books.holds("bath", "Cu") == 500 * G
    books.record(topped_up("drag-out"))
    assert books.holds("bath", "Cu") is None
    assert books.holds("drag-out", VOLUME) is None


def test_topping_up_from_itself_changes_nothing() -> None:
    books = Books(opening("bath", litres(8), complete=False, Cu=grams(500)))
    before = dict(books.state.holdings)
    for event in (topped_up("bath", volume=litres(1)), topped_up("bath")):
        folded = books.record(event)
        assert (folded.transfers, folded.findings) == ((), ())
        assert dict(books.state.holdings) == before
