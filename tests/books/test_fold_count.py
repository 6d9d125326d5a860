"""What is there was counted: weighed, or measured. The difference is unaccounted, and what it held with it."""

import pytest

from chemicals.books.events import (
    ASSUMED,
    COMPUTED,
    FREE_CYANIDE,
    GROSS_MASS,
    REACTION,
    UNACCOUNTED,
    UNKNOWN_LIQUID,
    VOLUME,
    Count,
    Ingredient,
    MakeUp,
    Measured,
    Move,
    Receipt,
)
from chemicals.books.fold import Folded
from chemicals.books.fold.state import (
    EVERY,
    NEGATIVE_CONTENT,
    TOO_MUCH,
    UNKNOWN_AMOUNT,
    UNKNOWN_CONTENTS,
    UNKNOWN_LEVEL,
    UNKNOWN_MASS,
    WAS_UNKNOWN,
    Finding,
)
from tests.books.words import (
    KG,
    MMOL,
    NO_ROOM,
    WATER,
    Books,
    G,
    L,
    acid,
    bases,
    codes,
    grams,
    kilograms,
    litres,
    millimoles,
    moved,
    opening,
    salt,
)


def weighed(mass: Measured, vessel: str = "bag") -> Count:
    return Count(vessel, None, mass)


def measured(volume: Measured, vessel: str = "can") -> Count:
    return Count(vessel, volume, None)


def a_store() -> Books:
    """Return 25 kg of copper sulfate (6362.5 g of copper) and 5 L of concentrate (6 kg, 100 g Na, 6 g Fe)."""
    return Books(Receipt("bag", kilograms(25), None, "lot 7", salt()), Receipt("can", None, litres(5), "lot 8", acid()))


def test_what_is_missing_of_a_salt_took_its_metal_along() -> None:
    """20 of 25 kg are left: a fifth is missing, 5 kg with 1272.5 g of copper."""
    books = a_store()
    folded = books.record(weighed(kilograms(20)))
    assert moved(folded, GROSS_MASS) == [("bag", UNACCOUNTED, 5 * KG)]
    assert moved(folded, "Cu") == [("bag", UNACCOUNTED, 1_272_500_000)]
    assert books.holds("bag", "Cu") == 5_090 * G
    assert (bases(folded, GROSS_MASS), bases(folded, "Cu")) == ({COMPUTED}, {COMPUTED})
    assert codes(folded) == set()


def test_what_was_found_of_a_salt_is_taken_to_be_the_same_salt() -> None:
    """26 instead of 25 kg: a twenty-fifth more, 254.5 g of copper."""
    books = a_store()
    folded = books.record(weighed(kilograms(26)))
    assert moved(folded, GROSS_MASS) == [(UNACCOUNTED, "bag", 1 * KG)]
    assert moved(folded, "Cu") == [(UNACCOUNTED, "bag", 254_500_000)]
    assert (bases(folded, GROSS_MASS), bases(folded, "Cu")) == ({COMPUTED}, {ASSUMED})


def test_a_liquid_is_counted_by_its_volume() -> None:
    """4 of 5 L: 1 L is missing, 1.2 kg, 20 g of sodium, 1.2 g of iron."""
    books = a_store()
    folded = books.record(measured(litres(4)))
    assert moved(folded, VOLUME) == [("can", UNACCOUNTED, 1 * L)]
    assert moved(folded, GROSS_MASS) == [("can", UNACCOUNTED, 1_200_000_000)]
    assert moved(folded, "Na") == [("can", UNACCOUNTED, 20 * G)]
    assert moved(folded, "Fe") == [("can", UNACCOUNTED, 1_200_000)]


def test_a_liquid_may_be_weighed() -> None:
    """4.8 of 6 kg: a fifth is missing, 1 L."""
    books = a_store()
    folded = books.record(weighed(kilograms("4.8"), "can"))
    assert moved(folded, VOLUME) == [("can", UNACCOUNTED, 1 * L)]
    assert books.holds("can", "Na") == 80 * G


def test_as_much_as_the_books_say_moves_nothing() -> None:
    books = a_store()
    folded = books.record(weighed(kilograms(25, "0.01")))
    assert (folded.transfers, folded.findings) == ((), ())
    assert books.holding("bag", GROSS_MASS).variance == (KG // 100) ** 2


def test_an_empty_bag_lost_every_unit_but_is_not_forgotten() -> None:
    books = a_store()
    folded = books.record(weighed(kilograms(0)))
    assert moved(folded, "Cu") == [("bag", UNACCOUNTED, 6_362_500_000)]
    assert (books.holds("bag", "Cu"), books.holds("bag", GROSS_MASS)) == (0, 0)
    assert books.remembers("bag") == {salt().key}


def test_parts_of_a_microgram_are_missing_rather_than_there() -> None:
    """100 ug in 3 kg, of which 2 kg are left: 66 ug."""
    books = Books(opening("bag", mass=kilograms(3), Cu=Measured("100", "ug", 100)))
    books.record(weighed(kilograms(2)))
    assert books.holds("bag", "Cu") == 66


def test_what_is_left_is_as_uncertain_as_the_count_and_the_books() -> None:
    """1000 +- 30 g of copper in 10.0 +- 0.2 kg; counted 8.0 +- 0.1 kg.

    Left: 800 g, (30 x 0.8)^2 + (1000 x 0.1/10)^2 + (1000 x 0.8 x 0.2/10)^2 = 576 + 100 + 256 g^2.
    Missing: 200 g, (30 x 0.2)^2 + 100 + 256 = 392 g^2; 2.0 kg, 0.2^2 + 0.1^2 kg^2.
    """
    books = Books(opening("bag", mass=kilograms(10, "0.2"), Cu=grams(1000, 30)))
    folded = books.record(weighed(kilograms(8, "0.1")))
    assert books.holding("bag", "Cu").variance == 932 * G**2
    assert books.holding("bag", GROSS_MASS).variance == (KG // 10) ** 2
    assert doubts(folded) == {"Cu": 19_798_990, GROSS_MASS: 223_606_798}


def test_the_doubt_about_a_count_is_never_more_than_everything() -> None:
    """8 +- 50 of 10 kg with 500 g of copper: 500 g of doubt, not 2500."""
    books = Books(opening("bag", mass=kilograms(10), Cu=grams(500)))
    books.record(weighed(kilograms(8, 50)))
    assert books.holding("bag", "Cu").variance == (500 * G) ** 2


def test_the_doubt_about_what_was_found_is_never_more_than_all_that_is_there_now() -> None:
    """20 +- 50 kg where the books have 10 kg with 500 g of copper: 1000 g, give or take as much."""
    books = Books(opening("bag", mass=kilograms(10), Cu=grams(500)))
    books.record(weighed(kilograms(20, 50)))
    assert books.holding("bag", "Cu").variance == (1000 * G) ** 2


def test_the_doubt_about_the_books_is_never_more_than_everything() -> None:
    """5 kg where the books have 10 +- 30 kg with 500 g of copper: 250 g, give or take as much."""
    books = Books(opening("bag", mass=kilograms(10, 30), Cu=grams(500)))
    books.record(weighed(kilograms(5)))
    assert books.holding("bag", "Cu").variance == (250 * G) ** 2


def doubts(folded: Folded) -> dict[str, int]:
    """Return the standard uncertainty of what moved, by component."""
    return {transfer.component: transfer.sd for transfer in folded.transfers}


def test_a_species_that_is_missing_has_reacted_away_and_one_that_was_found_came_of_a_reaction() -> None:
    """A tenth of 500 mmol with 1 kg, a tenth more with 11 kg."""
    for mass, expected in ((kilograms(9), ("bath", REACTION)), (kilograms(11), (REACTION, "bath"))):
        books = Books(opening("bath", litres(10), Cu=grams(100), free_cyanide=millimoles(500)))
        folded = books.record(weighed(mass, "bath"))
        assert moved(folded, FREE_CYANIDE) == [(*expected, 50 * MMOL)]
        assert UNACCOUNTED in moved(folded, "Cu")[0]


def test_from_an_unknown_mass_the_count_is_known_and_the_difference_is_not() -> None:
    """Nobody knows what the bag weighed: how much copper is missing, or was found, nobody knows either."""
    books = a_store()
    books.record(MakeUp("bath", (Ingredient("bag", None, None),), None, WATER, (NO_ROOM,)))
    folded = books.record(weighed(kilograms(20)))
    assert books.holds("bag", GROSS_MASS) == 20 * KG
    assert books.holds("bag", "Cu") is None
    assert books.holds("bag", "Ag") == 0  # a complete list had none, and none was found
    assert codes(folded) == {UNKNOWN_MASS, UNKNOWN_AMOUNT, WAS_UNKNOWN}
    assert moved(folded, "Cu") == []
    assert books.is_complete("bag")


def test_if_nothing_is_missing_nothing_unknown_is_missing() -> None:
    books = Books(opening("bag", mass=kilograms(10), complete=False), opening("box", mass=kilograms(1), Cu=grams(1)))
    books.record(Move("bag", "box", mass=kilograms(1)))
    assert books.holds("box", "Cu") is None
    folded = books.record(weighed(kilograms(2), "box"))
    assert (folded.transfers, folded.findings) == ((), ())


def test_a_known_whole_with_an_unknown_part_keeps_the_part_unknown() -> None:
    books = Books(opening("bag", mass=kilograms(10), complete=False))
    folded = books.record(weighed(kilograms(8)))
    assert books.holds("bag", GROSS_MASS) == 8 * KG
    assert books.holds("bag", "Cu") is None
    assert Finding(UNKNOWN_AMOUNT, VOLUME, "bag", UNACCOUNTED) not in folded.findings  # no volume is listed


@pytest.mark.parametrize(("count", "by", "code"), [
    (weighed(kilograms(2), "shelf"), GROSS_MASS, UNKNOWN_MASS),
    (measured(litres(2), "shelf"), VOLUME, UNKNOWN_LEVEL),
])  # fmt: skip
def test_what_stands_where_the_books_have_nothing_can_be_anything(count: Count, by: str, code: str) -> None:
    books = Books(opening("shelf"))
    folded = books.record(count)
    assert moved(folded, by) == [(UNACCOUNTED, "shelf", 2 * KG)]
    assert books.holds("shelf", "Cu") is None
    assert not books.is_complete("shelf")
    assert books.remembers("shelf") == {UNKNOWN_LIQUID + "shelf"}
    assert Finding(code, by, "shelf", UNACCOUNTED) in folded.findings
    assert Finding(UNKNOWN_CONTENTS, EVERY, UNACCOUNTED, "shelf") in folded.findings


def test_nothing_where_the_books_have_nothing_is_nothing() -> None:
    books = Books(opening("shelf"))
    folded = books.record(weighed(kilograms(0), "shelf"))
    assert (folded.transfers, folded.findings) == ((), ())
    assert books.is_complete("shelf")


def test_less_than_nothing_in_the_books_was_an_error_that_the_count_ends() -> None:
    """7 of 5 L were poured: the books hold -2 L. Somebody sees that the can is empty."""
    books = a_store()
    books.record(MakeUp("bath", (Ingredient("can", None, litres(7)),), None, WATER, (NO_ROOM,)))
    folded = books.record(measured(litres(0)))
    assert moved(folded, VOLUME) == [(UNACCOUNTED, "can", 2 * L)]
    assert books.holds("can", VOLUME) == 0
    assert books.is_complete("can")


def test_a_component_below_nothing_stays_there_and_is_told() -> None:
    books = a_store()
    books.state.put("bag", "Cu", books.holding("bag", "Cu").rebooked(-5 * G, 0))
    books.posted["bag", "Cu"] = -5 * G
    folded = books.record(weighed(kilograms(20)))
    assert books.holds("bag", "Cu") == -5 * G
    assert codes(folded) == {NEGATIVE_CONTENT}


def test_a_count_in_the_wrong_unit_is_told() -> None:
    """25 kg typed as 25 thousand tonnes."""
    books = a_store()
    folded = books.record(weighed(kilograms(25_000_000)))
    assert TOO_MUCH in codes(folded)
    assert books.holds("bag", GROSS_MASS) is None
