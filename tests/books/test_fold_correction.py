"""An error of a closed period is set right by an entry of today, against what is unaccounted."""

from uuid import UUID

from chemicals.books.events import (
    FREE_CYANIDE,
    GROSS_MASS,
    OBSERVED,
    REACTION,
    UNACCOUNTED,
    VOLUME,
    Change,
    Correction,
)
from chemicals.books.fold.state import NEGATIVE_CONTENT, UNKNOWN_AMOUNT
from tests.books.words import KG, MMOL, Books, G, bases, codes, grams, kilograms, litres, millimoles, moved, opening

OLD = UUID("00000000-0000-4000-8000-00000000000a")


def corrected(*changes: Change) -> Correction:
    return Correction(OLD, "bath", changes, "a receipt was written twice")


def a_bath() -> Books:
    """Return 10 L with 500 +- 3 g of copper and 400 mmol of free cyanide."""
    return Books(
        opening("bath", litres(10), poured=("salt/1",), Cu=grams(500, 3), free_cyanide=millimoles(400)),
    )


def test_what_is_not_there_was_never_accounted_for() -> None:
    books = a_bath()
    folded = books.record(corrected(Change("Cu", grams(12), found=False)))
    assert moved(folded, "Cu") == [("bath", UNACCOUNTED, 12 * G)]
    assert bases(folded, "Cu") == {OBSERVED}
    assert books.holds("bath", "Cu") == 488 * G
    assert codes(folded) == set()


def test_what_was_found_comes_from_the_unaccounted() -> None:
    books = a_bath()
    folded = books.record(corrected(Change("Cu", grams(12), found=True), Change(GROSS_MASS, kilograms(1), found=True)))
    assert moved(folded, "Cu") == [(UNACCOUNTED, "bath", 12 * G)]
    assert books.holds("bath", GROSS_MASS) == 11 * KG
    assert moved(folded, VOLUME) == []


def test_the_correction_adds_its_own_doubt() -> None:
    """3 g of doubt and 4 g: 5 g."""
    books = a_bath()
    books.record(corrected(Change("Cu", grams(12, 4), found=False)))
    assert books.holding("bath", "Cu").variance == (5 * G) ** 2


def test_a_species_is_corrected_against_its_reaction() -> None:
    books = a_bath()
    folded = books.record(corrected(Change(FREE_CYANIDE, millimoles(40), found=False)))
    assert moved(folded, FREE_CYANIDE) == [("bath", REACTION, 40 * MMOL)]


def test_more_than_there_is_cannot_be_missing() -> None:
    folded = a_bath().record(corrected(Change("Cu", grams(501), found=False)))
    assert codes(folded) == {NEGATIVE_CONTENT}


def test_a_correction_of_an_unknown_content_does_not_make_it_known() -> None:
    books = Books(opening("bath", litres(10), complete=False))
    folded = books.record(corrected(Change("Cu", grams(12), found=True)))
    assert books.holds("bath", "Cu") is None
    assert books.holding("bath", "Cu").known_part == 12 * G
    assert UNKNOWN_AMOUNT not in codes(folded)
    assert not books.is_complete("bath")


def test_nothing_to_correct_changes_nothing() -> None:
    folded = a_bath().record(corrected())
    assert (folded.transfers, folded.findings, folded.contents) == ((), (), ())
