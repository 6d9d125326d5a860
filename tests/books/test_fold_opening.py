"""Counting begins: what a vessel holds is written down as found."""

from chemicals.books.events import ASSUMED, GROSS_MASS, OBSERVED, OPENING, UNACCOUNTED, VOLUME, Figure
from chemicals.books.fold.state import UNKNOWN_CONTENTS, WAS_UNKNOWN
from tests.books.words import DENSE, KG, Books, G, L, bases, codes, grams, kilograms, litres, moved, opening


def test_a_complete_list_says_what_is_there_and_that_nothing_else_is() -> None:
    books = Books()
    folded = books.record(opening("bath", litres(10), Cu=grams(500), density=DENSE))
    assert moved(folded, "Cu") == [(OPENING, "bath", 500 * G)]
    assert moved(folded, VOLUME) == [(OPENING, "bath", 10 * L)]
    assert moved(folded, GROSS_MASS) == [(OPENING, "bath", 12 * KG)]  # 10 L x 1.2 kg/L
    assert (bases(folded, "Cu"), bases(folded, GROSS_MASS)) == ({OBSERVED}, {ASSUMED})
    assert books.holds("bath", "Ag") == 0
    assert books.is_complete("bath")
    assert codes(folded) == set()


def test_an_incomplete_list_leaves_everything_else_unknown() -> None:
    books = Books()
    folded = books.record(opening("bath", litres(10), complete=False, Cu=grams(500), poured=("cyanide/1",)))
    assert books.holds("bath", "Cu") == 500 * G
    assert books.holds("bath", "Ag") is None
    assert not books.is_complete("bath")
    assert books.remembers("bath") == {"cyanide/1"}
    assert moved(folded, "Ag") == []


def test_an_incomplete_list_without_a_level_leaves_the_volume_unknown() -> None:
    books = Books(opening("bath", complete=False, Cu=grams(500)))
    assert books.holds("bath", VOLUME) is None
    assert books.holds("bath", GROSS_MASS) is None


def test_a_weighed_anode_set_holds_no_liquid() -> None:
    books = Books(opening("anodes", mass=kilograms(2), Cu=kilograms(2)))
    assert books.holds("anodes", GROSS_MASS) == 2 * KG
    assert books.holds("anodes", VOLUME) == 0


def test_the_gross_mass_is_unknown_without_scales_and_density() -> None:
    books = Books(opening("bath", litres(10), density=None), opening("anodes", Cu=kilograms(2)))
    assert books.holds("bath", GROSS_MASS) is None
    assert books.holds("anodes", GROSS_MASS) is None


def test_an_empty_vessel_weighs_nothing() -> None:
    books = Books()
    assert books.record(opening("drum")).transfers == ()
    assert books.holds("drum", GROSS_MASS) == 0


def test_the_mass_by_density_is_as_uncertain_as_both_figures() -> None:
    """10.0 +- 0.1 L of 1.20 +- 0.01 kg/L: (0.1 x 1.2)^2 + (10 x 0.01)^2 = 0.0244 kg^2, so 0.1562050 kg."""
    books = Books(opening("bath", litres(10, "0.1"), density=Figure(1_200_000, 10_000, "hydrometer")))
    assert books.holding("bath", GROSS_MASS).variance == 156_204_994**2


def test_opened_anew_the_difference_is_unaccounted_and_not_opened_twice() -> None:
    books = Books(opening("bath", litres(10), Cu=grams(500), Ni=grams(7), poured=("old/1",)))
    folded = books.record(opening("bath", litres(9), Cu=grams(520), Zn=grams(1), poured=("new/1",)))
    assert moved(folded, "Cu") == [(UNACCOUNTED, "bath", 20 * G)]
    assert moved(folded, "Ni") == [("bath", UNACCOUNTED, 7 * G)]  # not on the new, complete list
    assert moved(folded, "Zn") == [(OPENING, "bath", 1 * G)]
    assert moved(folded, VOLUME) == [("bath", UNACCOUNTED, 1 * L)]
    assert books.remembers("bath") == {"old/1", "new/1"}  # to open is not to empty


def test_opened_anew_with_an_incomplete_list_forgets_what_is_not_listed() -> None:
    books = Books(opening("bath", litres(10), Cu=grams(500), Ni=grams(7)))
    books.record(opening("bath", litres(10), complete=False, Cu=grams(500)))
    assert books.holds("bath", "Ni") is None
    assert books.holds("bath", "Cu") == 500 * G


def test_opened_anew_nothing_of_the_old_weight_stays() -> None:
    books = Books(opening("drum", litres(10)))
    books.record(opening("drum"))
    assert books.holds("drum", GROSS_MASS) == 0
    assert books.holds("drum", VOLUME) == 0


def test_what_was_unknown_is_known_once_it_is_opened_anew() -> None:
    books = Books(opening("bath", litres(10), complete=False, Cu=grams(500)))
    books.record(opening("bath", litres(10), complete=False))  # now nobody vouches for the copper either
    assert books.holds("bath", "Cu") is None
    folded = books.record(opening("bath", litres(10), Cu=grams(450)))
    assert WAS_UNKNOWN in codes(folded)
    assert UNKNOWN_CONTENTS not in codes(folded)
    assert books.holds("bath", "Cu") == 450 * G
    assert books.holds("bath", "Ag") == 0
