"""Species react away: what is missing or found of them goes to reaction, of a metal never."""

from uuid import UUID

import pytest

from chemicals.books.events import (
    FREE_CYANIDE,
    REACTION,
    SPECIES,
    UNACCOUNTED,
    Acceptance,
    DrumOff,
    Figure,
    Receipt,
    Recipe,
    Share,
    is_metal,
)
from chemicals.books.fold.folding import difference_end
from chemicals.books.fold.state import WAS_UNKNOWN, Finding
from tests.books.words import MMOL, SALT, Books, G, grams, kilograms, litres, millimoles, moved, opening

ANALYSIS = UUID("00000000-0000-4000-8000-00000000000b")


def a_bath() -> Books:
    """Return 10 L with 500 g of copper and 400 mmol of free cyanide."""
    return Books(opening("bath", litres(10), Cu=grams(500), free_cyanide=millimoles(400)), opening("drum"))


def found(component: str, per_litre: int) -> Acceptance:
    return Acceptance(ANALYSIS, "bath", component, Figure(per_litre, 0, "titration"))


def test_metals_are_named_by_their_symbol_and_solutes_by_their_formula() -> None:
    assert [name for name in ("Cu", "U", "NaCl", "Na2SO4", "volume", *SPECIES) if is_metal(name)] == ["Cu", "U"]


@pytest.mark.parametrize("component", ["Cu", "NaCl", "volume", "gross mass"])
def test_only_species_react_away(component: str) -> None:
    assert difference_end(component) == UNACCOUNTED
    assert {difference_end(species) for species in SPECIES} == {REACTION}


def test_a_product_brings_its_species() -> None:
    """Potassium cyanide, 65.12 g/mol: 15.356 mol in a kilogram."""
    shares = (Share(FREE_CYANIDE, 15_356_000_000, 0, "kg"),)
    recipe = Recipe(SALT, 1, "potassium cyanide", solid=True, complete=True, shares=shares, density=None)
    books = Books(Receipt("jar", kilograms("0.5"), None, "lot 1", recipe))
    assert books.holds("jar", FREE_CYANIDE) == 7_678 * MMOL


def test_a_species_goes_along_with_the_liquid() -> None:
    books = a_bath()
    folded = books.record(DrumOff("bath", "drum", litres(1)))
    assert moved(folded, FREE_CYANIDE) == [("bath", "drum", 40 * MMOL)]


def test_an_accepted_analysis_says_what_reacted() -> None:
    """35 mmol/L in 10 L: 50 mmol have gone; of copper 49 g/L: 10 g are missing."""
    books = a_bath()
    assert moved(books.record(found(FREE_CYANIDE, 35 * MMOL)), FREE_CYANIDE) == [("bath", REACTION, 50 * MMOL)]
    assert moved(books.record(found("Cu", 49 * G)), "Cu") == [("bath", UNACCOUNTED, 10 * G)]


def test_a_species_that_was_unknown_is_found_from_its_reaction() -> None:
    books = Books(opening("bath", litres(10), complete=False))
    folded = books.record(found(FREE_CYANIDE, 35 * MMOL))
    assert moved(folded, FREE_CYANIDE) == [(REACTION, "bath", 350 * MMOL)]
    assert folded.findings == (Finding(WAS_UNKNOWN, FREE_CYANIDE, "bath", REACTION),)


def test_opened_anew_a_bath_has_lost_its_species_to_reaction_and_its_metal_to_nobody_knows_what() -> None:
    books = a_bath()
    folded = books.record(opening("bath", litres(10), Cu=grams(490), free_cyanide=millimoles(300)))
    assert moved(folded, FREE_CYANIDE) == [("bath", REACTION, 100 * MMOL)]
    assert moved(folded, "Cu") == [("bath", UNACCOUNTED, 10 * G)]


def test_a_species_below_nothing_turns_out_to_be_made_by_a_reaction() -> None:
    books = a_bath()
    books.state.put("bath", FREE_CYANIDE, books.holding("bath", FREE_CYANIDE).rebooked(-5 * MMOL, 0))
    books.posted["bath", FREE_CYANIDE] = -5 * MMOL
    folded = books.record(DrumOff("bath", "drum"))
    assert moved(folded, FREE_CYANIDE) == [(REACTION, "bath", 5 * MMOL)]
