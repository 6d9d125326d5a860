"""Spent liquid goes into a waste container, and the container to a receiver."""

from chemicals.books.events import GROSS_MASS, RECEIVER, VOLUME, DrumOff, HandOver, Measured, Move
from chemicals.books.fold.state import UNKNOWN_AMOUNT, UNKNOWN_CONTENTS
from tests.books.words import KG, Books, G, L, codes, grams, kilograms, litres, moved, opening


def drummed(volume: Measured | None = None) -> DrumOff:
    return DrumOff("rinse", "drum", volume)


HANDED_OVER = HandOver("drum", "the collection point", kilograms(41))


def a_spent_rinse() -> Books:
    """Return 40 L of rinse water with 8 g of copper that once took cyanide, and a drum."""
    return Books(opening("rinse", litres(40), Cu=grams(8), poured=("cyanide/1",)), opening("drum"))


def test_a_part_goes_in_proportion() -> None:
    books = a_spent_rinse()
    folded = books.record(drummed(litres(10)))
    assert moved(folded, "Cu") == [("rinse", "drum", 2 * G)]
    assert books.holds("drum", VOLUME) == 10 * L
    assert books.remembers("drum") == {"cyanide/1"}
    assert books.remembers("rinse") == {"cyanide/1"}


def test_all_of_it_empties_the_tank() -> None:
    books = a_spent_rinse()
    books.record(drummed())
    assert [books.holds("rinse", component) for component in ("Cu", VOLUME, GROSS_MASS)] == [0, 0, 0]
    assert books.remembers("rinse") == set()
    assert books.holds("drum", "Cu") == 8 * G


def test_drumming_off_is_a_move_with_another_name() -> None:
    assert a_spent_rinse().record(drummed()) == a_spent_rinse().record(Move("rinse", "drum", None))


def test_handed_over_everything_leaves_and_the_drum_can_be_filled_anew() -> None:
    books = a_spent_rinse()
    books.record(drummed())
    folded = books.record(HANDED_OVER)
    assert moved(folded, "Cu") == [("drum", RECEIVER, 8 * G)]
    assert moved(folded, VOLUME) == [("drum", RECEIVER, 40 * L)]
    assert moved(folded, GROSS_MASS) == [("drum", RECEIVER, 40 * KG)]
    assert books.holds("drum", "Cu") == 0
    assert books.remembers("drum") == set()
    assert codes(folded) == set()


def test_handed_over_unknown_the_receiver_got_an_unknown_amount_and_the_drum_is_empty() -> None:
    books = Books(opening("rinse", litres(40), complete=False), opening("drum", litres(1), Cu=grams(3)))
    books.record(drummed(litres(1)))
    assert books.holds("drum", "Cu") is None
    folded = books.record(HANDED_OVER)
    assert {UNKNOWN_AMOUNT, UNKNOWN_CONTENTS} == codes(folded)
    assert books.went_to(RECEIVER, "Cu") == 3 * G  # as much as the books know of
    assert books.holds("drum", "Cu") == 0
    assert books.is_complete("drum")
