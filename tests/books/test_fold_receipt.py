"""Bought matter arrives: by weight or by volume, solid or liquid, with or without a known density."""

from dataclasses import replace

import pytest

from chemicals.books.events import COMPUTED, GROSS_MASS, OBSERVED, SUPPLIER, VOLUME, Figure, Measured, Receipt, Recipe
from chemicals.books.fold.state import UNKNOWN_AMOUNT
from tests.books.words import KG, Books, G, L, acid, bases, codes, grams, kilograms, litres, moved, opening, salt


def received(vessel: str, recipe: Recipe, *, mass: Measured | None = None, volume: Measured | None = None) -> Receipt:
    return Receipt(vessel, mass, volume, "lot 7", recipe)


def test_a_bag_of_salt_holds_its_copper_and_no_liquid() -> None:
    """25 kg x 254.5 g/kg = 6362.5 g."""
    books = Books()
    folded = books.record(received("bag", salt(), mass=kilograms(25)))
    assert moved(folded, "Cu") == [(SUPPLIER, "bag", 6_362_500_000)]
    assert moved(folded, GROSS_MASS) == [(SUPPLIER, "bag", 25 * KG)]
    assert books.holds("bag", VOLUME) == 0
    assert books.remembers("bag") == {salt().key}
    assert (bases(folded, GROSS_MASS), bases(folded, "Cu")) == ({OBSERVED}, {COMPUTED})
    assert codes(folded) == set()


def test_a_liquid_by_the_litre_gets_its_weight_from_the_density() -> None:
    """5 L x 1.2 kg/L = 6 kg; 5 L x 20 g/L = 100 g of sodium; 6 kg x 1 g/kg = 6 g of iron."""
    books = Books()
    folded = books.record(received("can", acid(), volume=litres(5)))
    assert books.holds("can", VOLUME) == 5 * L
    assert books.holds("can", GROSS_MASS) == 6 * KG
    assert books.holds("can", "Na") == 100 * G
    assert books.holds("can", "Fe") == 6 * G
    assert (bases(folded, VOLUME), bases(folded, GROSS_MASS)) == ({OBSERVED}, {COMPUTED})


def test_a_liquid_by_the_kilogram_gets_its_volume_from_the_density() -> None:
    """6 kg / 1.2 kg/L = 5 L."""
    books = Books(received("can", acid(), mass=kilograms(6)))
    assert books.holds("can", VOLUME) == 5 * L
    assert books.holds("can", "Na") == 100 * G


@pytest.mark.parametrize("density", [None, Figure(0, 0, "not yet measured")])
def test_without_a_density_the_other_measure_is_unknown_and_what_hangs_on_it(density: Figure | None) -> None:
    books = Books()
    folded = books.record(received("can", acid(density=density), mass=kilograms(6)))
    assert books.holds("can", GROSS_MASS) == 6 * KG
    assert books.holds("can", "Fe") == 6 * G  # per kilogram
    assert books.holds("can", VOLUME) is None
    assert books.holds("can", "Na") is None  # per litre
    assert codes(folded) == {UNKNOWN_AMOUNT}


def test_nobody_looked_how_much_came() -> None:
    books = Books(received("bag", salt()))
    assert books.holds("bag", "Cu") is None
    assert books.holds("bag", GROSS_MASS) is None
    assert books.holds("bag", "Ag") == 0


def test_an_incomplete_composition_vouches_for_what_it_lists_only() -> None:
    books = Books(received("bag", salt(complete=False), mass=kilograms(1)))
    assert books.holds("bag", "Cu") == 254_500_000
    assert books.holds("bag", "Ag") is None
    assert not books.is_complete("bag")


def test_an_incomplete_product_on_top_of_a_known_one_makes_the_rest_unknown() -> None:
    books = Books(opening("can", litres(1), Ag=grams(5)), received("can", acid(complete=False), volume=litres(1)))
    assert books.holds("can", "Ag") is None
    assert books.holds("can", "Na") == 20 * G
    assert books.holds("can", VOLUME) == 2 * L


def test_a_second_receipt_adds_to_the_first() -> None:
    books = Books(received("bag", salt(), mass=kilograms(25)), received("bag", salt(), mass=kilograms(5)))
    assert books.holds("bag", "Cu") == 7_635_000_000  # 30 kg x 254.5 g/kg
    assert books.holds("bag", GROSS_MASS) == 30 * KG


def test_the_copper_is_as_uncertain_as_scales_and_composition() -> None:
    """25.0 +- 0.1 kg x 254.5 +- 1 g/kg: (0.1 x 254.5)^2 + (25 x 1)^2 = 1272.7025 g^2, so 35.674957 g."""
    recipe = salt()
    share = replace(recipe.shares[0], sd=1 * G)
    books = Books(received("bag", replace(recipe, shares=(share,)), mass=kilograms(25, "0.1")))
    assert books.holding("bag", "Cu").variance == 35_674_957**2


def test_the_other_measure_is_as_uncertain_as_the_first_and_the_density() -> None:
    """6.0 +- 0.3 kg of 1.20 +- 0.08 kg/L: 5 L, (0.3/1.2)^2 + (6 x 0.08/1.2^2)^2 = 0.0625 + 0.1111 L^2: 0.416667 L.

    5.0 +- 0.3 L of it: 6 kg, (0.3 x 1.2)^2 + (5 x 0.08)^2 = 0.1296 + 0.16 kg^2: 0.538145 kg.
    """
    density = Figure(1_200_000, 80_000, "hydrometer")
    by_mass = Books().record(received("can", acid(density=density), mass=kilograms(6, "0.3")))
    assert [(t.sd, t.basis) for t in by_mass.transfers if t.component == VOLUME] == [(416_666_667, COMPUTED)]
    by_volume = Books().record(received("can", acid(density=density), volume=litres(5, "0.3")))
    assert [t.sd for t in by_volume.transfers if t.component == GROSS_MASS] == [538_144_962]
    assert [t.sd for t in by_volume.transfers if t.component == VOLUME] == [300_000_000]
