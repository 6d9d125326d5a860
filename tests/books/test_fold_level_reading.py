"""Somebody looked at the level: less is evaporation or a spill, more is a gain that nobody explained."""

from chemicals.books.events import (
    AIR,
    ASSUMED,
    COMPUTED,
    GROSS_MASS,
    SPILL,
    UNACCOUNTED,
    VOLUME,
    LevelReading,
    Measured,
)
from chemicals.books.fold.state import NEGATIVE_CONTENT, UNKNOWN_AMOUNT, WAS_UNKNOWN
from tests.books.words import DENSE, KG, WATER, Books, G, L, bases, codes, grams, litres, moved, opening


def read(volume: Measured, lost_to: str = AIR) -> LevelReading:
    return LevelReading("bath", volume, lost_to, WATER)


def a_bath() -> Books:
    """Return 10 L of 1.2 kg/L with 500 g of copper."""
    return Books(opening("bath", litres(10), Cu=grams(500), density=DENSE, poured=("salt/1",)))


def test_less_is_water_to_the_air_and_all_metal_stays() -> None:
    """10 - 9 = 1 L, 1 kg of water: 11 kg are left in 9 L."""
    books = a_bath()
    folded = books.record(read(litres(9)))
    assert moved(folded, VOLUME) == [("bath", AIR, 1 * L)]
    assert moved(folded, GROSS_MASS) == [("bath", AIR, 1 * KG)]
    assert books.holds("bath", "Cu") == 500 * G
    assert books.holds("bath", GROSS_MASS) == 11 * KG
    assert (bases(folded, VOLUME), bases(folded, GROSS_MASS)) == ({COMPUTED}, {COMPUTED})
    assert codes(folded) == set()


def test_less_is_solution_where_a_spill_is_said() -> None:
    """A tenth: 50 g of copper, 1.2 kg."""
    books = a_bath()
    folded = books.record(read(litres(9), SPILL))
    assert moved(folded, VOLUME) == [("bath", SPILL, 1 * L)]
    assert moved(folded, "Cu") == [("bath", SPILL, 50 * G)]
    assert moved(folded, GROSS_MASS) == [("bath", SPILL, 1_200_000_000)]
    assert books.holds("bath", VOLUME) == 9 * L


def test_everything_spilled() -> None:
    books = a_bath()
    books.record(read(litres(0), SPILL))
    assert (books.holds("bath", "Cu"), books.holds("bath", GROSS_MASS)) == (0, 0)
    assert books.remembers("bath") == {"salt/1"}  # spilled out is not rinsed out


def test_more_is_unaccounted_and_taken_to_be_as_dense_as_the_rest() -> None:
    books = a_bath()
    folded = books.record(read(litres(11)))
    assert moved(folded, VOLUME) == [(UNACCOUNTED, "bath", 1 * L)]
    assert moved(folded, GROSS_MASS) == [(UNACCOUNTED, "bath", 1_200_000_000)]
    assert bases(folded, GROSS_MASS) == {ASSUMED}
    assert books.holds("bath", "Cu") == 500 * G


def test_the_same_level_moves_nothing_and_makes_the_volume_as_sure_as_the_reading() -> None:
    books = a_bath()
    assert books.record(read(litres(10, "0.1"))).transfers == ()
    assert books.holding("bath", VOLUME).variance == (L // 10) ** 2


def test_the_loss_is_as_uncertain_as_the_books_and_the_reading() -> None:
    """10.0 +- 0.3 L less 9.0 +- 0.4 L: 1.0 +- 0.5 L of water, 1.0 +- 0.5 kg; as a spill 50 g +- 25 g and more."""
    books = Books(opening("bath", litres(10, "0.3"), Cu=grams(500)))
    folded = books.record(read(litres(9, "0.4")))
    assert [transfer.sd for transfer in folded.transfers] == [KG // 2, L // 2]
    books = Books(opening("bath", litres(10, "0.3"), Cu=grams(500)))
    folded = books.record(read(litres(9, "0.4"), SPILL))
    sd = {transfer.component: transfer.sd for transfer in folded.transfers}
    assert sd[VOLUME] == L // 2
    # (500 x 0.5/10)^2 + (500 x 1/10 x 0.3/10)^2 = 625 + 2.25 g^2
    assert sd["Cu"] == 25_044_960


def test_an_unknown_level_becomes_known_without_a_loss_or_a_gain() -> None:
    books = Books(opening("bath", complete=False, Cu=grams(500)))
    folded = books.record(read(litres(10)))
    assert books.holds("bath", VOLUME) == 10 * L
    assert codes(folded) == {WAS_UNKNOWN}
    assert moved(folded, VOLUME) == [(UNACCOUNTED, "bath", 10 * L)]
    assert moved(folded, GROSS_MASS) == []


def test_a_gain_in_an_empty_vessel_has_an_unknown_mass() -> None:
    books = Books(opening("bath"))
    folded = books.record(read(litres(1)))
    assert books.holds("bath", VOLUME) == 1 * L
    assert books.holds("bath", GROSS_MASS) is None
    assert codes(folded) == {UNKNOWN_AMOUNT}


def test_a_gain_on_top_of_a_mass_that_cannot_be_has_an_unknown_mass() -> None:
    books = Books(opening("bath", litres(10), mass=grams(0)))
    books.record(read(litres(11)))
    assert books.holds("bath", GROSS_MASS) is None


def test_more_water_than_the_vessel_weighs_is_told() -> None:
    """3 kg in 10 L (a weighing was wrong), and 5 L evaporate."""
    books = Books(opening("bath", litres(10), mass=grams(3000)))
    folded = books.record(read(litres(5)))
    assert books.holds("bath", GROSS_MASS) == -2 * KG
    assert codes(folded) == {NEGATIVE_CONTENT}
