"""Solids are taken out of a tank; a tank is emptied and washed."""

from chemicals.books.events import (
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    VOLUME,
    WATER_SUPPLY,
    CleanOut,
    Held,
    Measured,
    Sludge,
)
from chemicals.books.fold.state import (
    NEGATIVE_CONTENT,
    UNKNOWN_AMOUNT,
    UNKNOWN_CONTENTS,
    UNKNOWN_MASS,
)
from tests.books.words import KG, WATER, Books, G, L, bases, codes, grams, kilograms, litres, moved, opening


def dug_out(mass: Measured, *held: Held) -> Sludge:
    return Sludge("tank", "sludge", mass, held)


def washed(water: Measured | None) -> CleanOut:
    return CleanOut("tank", "drum", water, WATER)


def a_tank() -> Books:
    """Return 40 L, 40 kg, with 80 g of copper and 4 g of silver, an empty sludge box and a drum with 5 L of water."""
    return Books(
        opening("tank", litres(40), poured=("salt/1",), Cu=grams(80), Ag=grams(4)),
        opening("sludge"),
        opening("drum", litres(5)),
    )


def test_solids_go_in_proportion_to_their_mass() -> None:
    """2 of 40 kg: 2 L, 4 g of copper, 0.2 g of silver."""
    books = a_tank()
    folded = books.record(dug_out(kilograms(2)))
    assert moved(folded, GROSS_MASS) == [("tank", "sludge", 2 * KG)]
    assert moved(folded, VOLUME) == [("tank", "sludge", 2 * L)]
    assert moved(folded, "Cu") == [("tank", "sludge", 4 * G)]
    assert (bases(folded, GROSS_MASS), bases(folded, "Cu")) == ({OBSERVED}, {COMPUTED})
    assert books.remembers("sludge") == {"salt/1"}


def test_analysed_metal_goes_as_analysed() -> None:
    """Copper settled: 30 +- 2 g in 2 kg. Silver was not looked for: in proportion."""
    books = a_tank()
    folded = books.record(dug_out(kilograms(2), Held("Cu", grams(30, 2))))
    assert moved(folded, "Cu") == [("tank", "sludge", 30 * G)]
    assert moved(folded, "Ag") == [("tank", "sludge", 200_000)]
    assert bases(folded, "Cu") == {OBSERVED}
    assert books.holding("sludge", "Cu").variance == (2 * G) ** 2
    assert books.holds("tank", "Cu") == 50 * G
    assert moved(folded, GROSS_MASS) == [("tank", "sludge", 2 * KG)]  # the metal is in the weighed mass


def test_more_metal_in_the_sludge_than_in_the_books_is_told() -> None:
    folded = a_tank().record(dug_out(kilograms(2), Held("Cu", grams(90))))
    assert codes(folded) == {NEGATIVE_CONTENT}


def test_out_of_a_tank_of_unknown_mass_only_the_analysed_metal_is_known() -> None:
    books = Books(opening("tank", litres(40), complete=False, density=None, Cu=grams(80)), opening("sludge"))
    folded = books.record(dug_out(kilograms(2), Held("Cu", grams(30))))
    assert books.holds("sludge", GROSS_MASS) == 2 * KG
    assert books.holds("sludge", "Cu") == 30 * G
    assert books.holds("tank", "Cu") == 50 * G
    assert books.holds("sludge", "Ag") is None
    assert codes(folded) == {UNKNOWN_MASS, UNKNOWN_AMOUNT, UNKNOWN_CONTENTS}


def test_analysed_metal_in_sludge_out_of_an_empty_tank_is_known_all_the_same() -> None:
    books = Books(opening("tank"), opening("sludge"))
    folded = books.record(dug_out(kilograms(2), Held("Cu", grams(30))))
    assert books.holds("sludge", "Cu") == 30 * G
    assert books.holds("sludge", "Ag") is None
    assert {UNKNOWN_MASS, NEGATIVE_CONTENT, UNKNOWN_CONTENTS} <= codes(folded)


def test_a_tank_is_emptied_and_its_wash_water_goes_after() -> None:
    """40 L with all the metal, then 2 L of water, into a drum with 5 L."""
    books = a_tank()
    folded = books.record(washed(litres(2)))
    assert moved(folded, VOLUME) == [("tank", "drum", 40 * L), (WATER_SUPPLY, "drum", 2 * L)]
    assert moved(folded, "Cu") == [("tank", "drum", 80 * G)]
    assert books.holds("drum", GROSS_MASS) == 47 * KG
    assert [books.holds("tank", component) for component in ("Cu", VOLUME, GROSS_MASS)] == [0, 0, 0]
    assert (books.remembers("tank"), books.remembers("drum")) == (set(), {"salt/1"})
    assert codes(folded) == set()


def test_wash_water_is_as_uncertain_as_it_was_measured() -> None:
    books = a_tank()
    books.record(washed(litres(2, "0.5")))
    assert books.holding("drum", VOLUME).variance == (L // 2) ** 2
    assert books.holding("drum", GROSS_MASS).variance == (KG // 2) ** 2


def test_nobody_said_how_much_water_washed_the_tank() -> None:
    books = a_tank()
    folded = books.record(washed(None))
    assert (books.holds("drum", VOLUME), books.holds("drum", GROSS_MASS)) == (None, None)
    assert books.holds("drum", "Cu") == 80 * G
    assert books.holds("tank", VOLUME) == 0
    assert codes(folded) == {UNKNOWN_AMOUNT}


def test_an_unknown_tank_is_known_to_be_empty_afterwards() -> None:
    books = Books(opening("tank", complete=False), opening("drum"))
    folded = books.record(washed(litres(2)))
    assert (books.holds("tank", VOLUME), books.is_complete("tank")) == (0, True)
    assert (books.holds("drum", "Cu"), books.is_complete("drum")) == (None, False)
    assert codes(folded) == {UNKNOWN_AMOUNT, UNKNOWN_CONTENTS}
