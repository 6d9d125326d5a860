"""A bath is made up: stock goes into the tank, water fills it to a level."""

from chemicals.books.events import (
    ASSUMED,
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    REACTION,
    UNACCOUNTED,
    VOLUME,
    WATER_SUPPLY,
    Figure,
    Ingredient,
    MakeUp,
    Measured,
    Receipt,
)
from chemicals.books.fold.state import (
    NEGATIVE_CONTENT,
    UNKNOWN_AMOUNT,
    UNKNOWN_CONTENTS,
    UNKNOWN_LEVEL,
    UNKNOWN_MASS,
    WAS_UNKNOWN,
    Finding,
)
from tests.books.words import (
    KG,
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
    moved,
    opening,
    salt,
)


def a_workshop_with_stock(*, complete: bool = True) -> Books:
    """Return 25 kg of copper sulfate (6362.5 g of copper) and 5 L of concentrate (6 kg, 100 g Na, 6 g Fe)."""
    return Books(
        Receipt("bag", kilograms(25), None, "lot 7", salt(complete=complete)),
        Receipt("can", None, litres(5), "lot 8", acid()),
    )


def made_up(
    *ingredients: Ingredient, level: Measured | None = None, tank: str = "bath", room: Figure = NO_ROOM
) -> MakeUp:
    return MakeUp(tank, ingredients, level, WATER, (room,) * len(ingredients))


TWO_KILOGRAMS = Ingredient("bag", kilograms(2), None)
ONE_LITRE = Ingredient("can", None, litres(1))


def test_salt_acid_and_water_up_to_the_level() -> None:
    """2/25 of the bag: 509 g Cu. 1/5 of the can: 20 g Na, 1.2 g Fe, 1.2 kg. Water: 10 - 1 = 9 L. 2 + 1.2 + 9 kg."""
    books = a_workshop_with_stock()
    folded = books.record(made_up(TWO_KILOGRAMS, ONE_LITRE, level=litres(10)))
    assert books.holds("bath", "Cu") == 509 * G
    assert books.holds("bath", "Na") == 20 * G
    assert books.holds("bath", "Fe") == 1_200_000
    assert books.holds("bath", VOLUME) == 10 * L
    assert books.holds("bath", GROSS_MASS) == 12_200_000_000
    assert books.holds("bag", "Cu") == 5_853_500_000
    assert books.holds("can", VOLUME) == 4 * L
    assert (WATER_SUPPLY, "bath", 9 * L) in moved(folded, VOLUME)
    assert books.remembers("bath") == {salt().key, acid().key}
    assert codes(folded) == set()


FOUR_TENTHS = Figure(4 * L // 10, L // 10, "assumed: 0.4 +- 0.1 L for each kilogram")


def test_a_salt_swells_the_liquid_and_less_water_is_needed() -> None:
    """2 kg need 0.8 L: 9.2 L of water fill up to 10 L, and 11.2 kg are there."""
    books = a_workshop_with_stock()
    folded = books.record(made_up(TWO_KILOGRAMS, level=litres(10), room=FOUR_TENTHS))
    assert moved(folded, VOLUME) == [(REACTION, "bath", 8 * L // 10), (WATER_SUPPLY, "bath", 92 * L // 10)]
    assert bases(folded, VOLUME) == {ASSUMED, COMPUTED}
    assert books.holds("bath", VOLUME) == 10 * L
    assert books.holds("bath", GROSS_MASS) == 11_200_000_000
    assert codes(folded) == set()


def test_the_water_is_as_uncertain_as_the_room_that_the_salt_needs() -> None:
    """2 kg x 0.1 L/kg = 0.2 L; the level itself is sure."""
    books = a_workshop_with_stock()
    folded = books.record(made_up(TWO_KILOGRAMS, level=litres(10), room=FOUR_TENTHS))
    assert [transfer.sd for transfer in folded.transfers if transfer.component == VOLUME] == [L // 5, L // 5]
    assert books.holding("bath", VOLUME).variance == 0


def test_without_a_level_the_liquid_is_as_much_more_as_dissolved() -> None:
    """1 kg into 5 L: 5.4 L."""
    books = a_workshop_with_stock()
    books.record(opening("bath", litres(5)))
    books.record(made_up(Ingredient("bag", kilograms(1), None), room=FOUR_TENTHS))
    assert books.holds("bath", VOLUME) == 54 * L // 10
    assert books.holding("bath", VOLUME).variance == (L // 10) ** 2


def test_a_tank_that_is_its_own_ingredient_does_not_swell() -> None:
    books = a_workshop_with_stock()
    folded = books.record(made_up(TWO_KILOGRAMS, tank="bag", room=FOUR_TENTHS))
    assert folded.transfers == ()


def test_what_is_measured_by_volume_brings_its_own_room() -> None:
    books = a_workshop_with_stock()
    folded = books.record(made_up(ONE_LITRE, room=FOUR_TENTHS))
    assert moved(folded, VOLUME) == [("can", "bath", 1 * L)]


def test_what_is_taken_is_observed_and_what_goes_along_is_computed() -> None:
    books = a_workshop_with_stock()
    folded = books.record(made_up(TWO_KILOGRAMS))
    assert bases(folded, GROSS_MASS) == {OBSERVED}
    assert bases(folded, "Cu") == {COMPUTED}


def test_the_copper_is_as_uncertain_as_the_scales() -> None:
    """2.00 +- 0.02 kg out of 25 kg with 6362.5 g: 6362.5 x 0.02 / 25 = 5.09 g, in the bath and in the bag alike."""
    books = a_workshop_with_stock()
    books.record(made_up(Ingredient("bag", kilograms(2, "0.02"), None)))
    assert books.holding("bath", "Cu").variance == 5_090_000**2
    assert books.holding("bag", "Cu").variance == 5_090_000**2


def test_what_is_poured_is_as_uncertain_as_the_measure_and_the_volume_as_the_level() -> None:
    """1.0 +- 0.1 L out of 5 L with 100 g of sodium: 100 x 0.1 / 5 = 2 g."""
    books = a_workshop_with_stock()
    books.record(made_up(Ingredient("can", None, litres(1, "0.1")), level=litres(10, "0.2")))
    assert books.holding("bath", "Na").variance == (2 * G) ** 2
    assert books.holding("bath", VOLUME).variance == (L // 5) ** 2


def test_taking_as_much_as_there_is_takes_every_unit() -> None:
    books = a_workshop_with_stock()
    books.record(made_up(Ingredient("bag", kilograms(25), None)))
    assert books.holds("bath", "Cu") == 6_362_500_000
    assert books.holds("bag", "Cu") == 0
    assert books.remembers("bag") == {salt().key}  # only "all of it" says that a vessel is empty


def test_a_liquid_that_shrinks_on_mixing_loses_volume_but_no_mass() -> None:
    books = a_workshop_with_stock()
    folded = books.record(made_up(Ingredient("can", None, litres(4)), level=litres("3.9")))
    assert moved(folded, VOLUME)[-1] == ("bath", UNACCOUNTED, L // 10)
    assert books.holds("bath", GROSS_MASS) == 4_800_000_000  # 4 L x 1.2 kg/L


def test_a_liquid_may_be_weighed_out() -> None:
    """1.2 kg of 6 kg: a fifth, 1 L."""
    books = a_workshop_with_stock()
    books.record(made_up(Ingredient("can", kilograms("1.2"), None)))
    assert books.holds("bath", VOLUME) == 1 * L
    assert books.holds("bath", "Na") == 20 * G


def test_an_ingredient_without_an_amount_leaves_both_ends_unknown() -> None:
    books = a_workshop_with_stock()
    folded = books.record(made_up(Ingredient("bag", None, None), level=litres(10)))
    assert moved(folded, "Cu") == []
    assert Finding(UNKNOWN_AMOUNT, "Cu", "bag", "bath") in folded.findings
    assert books.holds("bag", "Cu") is None
    assert books.holds("bath", "Cu") is None
    assert books.holds("bath", "Ag") == 0  # the salt's list is complete: it brought no silver
    assert books.holds("bath", VOLUME) == 10 * L
    assert UNKNOWN_AMOUNT in codes(folded)
    assert books.remembers("bath") == {salt().key}


def test_an_incomplete_product_makes_the_bath_incomplete() -> None:
    books = a_workshop_with_stock(complete=False)
    books.record(opening("bath", litres(5), Ag=grams(1)))
    folded = books.record(made_up(TWO_KILOGRAMS))
    assert books.holds("bath", "Cu") == 509 * G  # listed, hence known
    assert books.holds("bath", "Ag") is None  # not listed: the salt may have brought some
    assert UNKNOWN_CONTENTS in codes(folded)


def test_a_stock_that_never_arrived_can_be_anything() -> None:
    """The books hold no such bag. What was weighed out of it is 2 kg of who knows what."""
    books = Books(opening("bath", litres(10), Ag=grams(1)))
    folded = books.record(made_up(Ingredient("unknown bag", kilograms(2), None)))
    assert books.holds("bath", GROSS_MASS) == 12 * KG
    assert books.holds("unknown bag", GROSS_MASS) == -2 * KG
    assert books.holds("bath", "Ag") is None
    assert books.holds("bath", "Cu") is None
    assert not books.is_complete("bath")
    assert {UNKNOWN_MASS, UNKNOWN_CONTENTS, NEGATIVE_CONTENT} <= codes(folded)


def test_water_into_a_tank_of_unknown_level_makes_its_mass_unknown_and_its_volume_known() -> None:
    books = Books(opening("bath", complete=False, mass=kilograms(5), Cu=grams(500)))
    folded = books.record(made_up(level=litres(10)))
    assert books.holds("bath", VOLUME) == 10 * L
    assert books.holds("bath", GROSS_MASS) is None
    assert books.holds("bath", "Cu") == 500 * G  # water brings no copper
    assert {UNKNOWN_LEVEL, WAS_UNKNOWN} <= codes(folded)
