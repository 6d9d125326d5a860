"""Matter leaves by weight, as a sample, a spill or a discharge."""

import pytest

from chemicals.books.events import (
    COMPUTED,
    FREE_CYANIDE,
    GROSS_MASS,
    OBSERVED,
    SAMPLE,
    SEWER,
    SPILL,
    UNACCOUNTED,
    VOLUME,
    Discharge,
    DrumOff,
    Move,
    Sample,
    Spill,
)
from chemicals.books.fold.state import (
    EVERY,
    NEGATIVE_CONTENT,
    UNKNOWN_AMOUNT,
    UNKNOWN_CONTENTS,
    UNKNOWN_LEVEL,
    UNKNOWN_MASS,
    Finding,
)
from tests.books.words import (
    DENSE,
    KG,
    MMOL,
    Books,
    G,
    L,
    bases,
    codes,
    grams,
    kilograms,
    litres,
    millimoles,
    moved,
    opening,
)


def a_bath() -> Books:
    """Return 10 L, 12 kg, with 600 g of copper and 500 mmol of free cyanide."""
    return Books(
        opening("bath", litres(10), density=DENSE, poured=("salt/1",), Cu=grams(600), free_cyanide=millimoles(500)),
        opening("drum"),
    )


def test_a_weighed_part_goes_in_proportion_to_the_mass() -> None:
    """3 of 12 kg: 2.5 L, 150 g of copper, 125 mmol of cyanide."""
    books = a_bath()
    folded = books.record(DrumOff("bath", "drum", mass=kilograms(3)))
    assert moved(folded, GROSS_MASS) == [("bath", "drum", 3 * KG)]
    assert moved(folded, VOLUME) == [("bath", "drum", 2_500_000_000)]
    assert moved(folded, "Cu") == [("bath", "drum", 150 * G)]
    assert moved(folded, FREE_CYANIDE) == [("bath", "drum", 125 * MMOL)]
    assert (bases(folded, GROSS_MASS), bases(folded, "Cu")) == ({OBSERVED}, {COMPUTED})
    assert books.remembers("drum") == {"salt/1"}


def test_a_move_by_weight_is_one_of_drumming_off() -> None:
    assert a_bath().record(Move("bath", "drum", mass=kilograms(3))) == a_bath().record(
        DrumOff("bath", "drum", mass=kilograms(3))
    )


def test_the_metal_is_as_uncertain_as_the_scales() -> None:
    """3.0 +- 0.1 of 12 kg with 600 g: 5 g."""
    books = a_bath()
    books.record(DrumOff("bath", "drum", mass=kilograms(3, "0.1")))
    assert books.holding("drum", "Cu").variance == (5 * G) ** 2
    assert books.holding("drum", GROSS_MASS).variance == (KG // 10) ** 2


def test_more_than_there_is_by_weight_takes_all_metal_and_says_so() -> None:
    books = a_bath()
    folded = books.record(DrumOff("bath", "drum", mass=kilograms(13)))
    assert books.holds("drum", "Cu") == 600 * G
    assert books.holds("bath", GROSS_MASS) == -1 * KG
    assert codes(folded) == {NEGATIVE_CONTENT}


def test_out_of_an_unknown_mass_the_weight_is_known_and_its_content_is_not() -> None:
    books = Books(opening("bath", litres(10), complete=False, density=None, Cu=grams(600)), opening("drum"))
    folded = books.record(DrumOff("bath", "drum", mass=kilograms(3)))
    assert books.holds("drum", GROSS_MASS) == 3 * KG
    assert books.holds("drum", "Cu") is None
    assert {UNKNOWN_MASS, UNKNOWN_AMOUNT, UNKNOWN_CONTENTS} == codes(folded)


def test_by_weight_into_itself_changes_nothing() -> None:
    books = a_bath()
    assert books.record(Move("bath", "bath", mass=kilograms(3))).transfers == ()


def test_a_sample_is_gone() -> None:
    """20 mL of 10 L: 1.2 g of copper, 1 mmol of cyanide, 24 g."""
    books = a_bath()
    folded = books.record(Sample("bath", SAMPLE, litres("0.02")))
    assert moved(folded, "Cu") == [("bath", SAMPLE, 1_200_000)]
    assert moved(folded, FREE_CYANIDE) == [("bath", SAMPLE, 1 * MMOL)]
    assert moved(folded, GROSS_MASS) == [("bath", SAMPLE, 24 * G)]
    assert books.went_to(SAMPLE, VOLUME) == L // 50
    assert books.remembers("bath") == {"salt/1"}


def test_a_spill_that_nobody_picked_up_is_lost() -> None:
    books = a_bath()
    folded = books.record(Spill("bath", SPILL, litres(1, "0.5")))
    assert moved(folded, "Cu") == [("bath", SPILL, 60 * G)]
    assert folded.transfers[0].sd == 30 * G  # of Cu: a litre give or take half of it


def test_a_spill_that_was_picked_up_is_in_the_drum_with_its_memory() -> None:
    books = a_bath()
    folded = books.record(Spill("bath", "drum", litres(1)))
    assert moved(folded, "Cu") == [("bath", "drum", 60 * G)]
    assert books.remembers("drum") == {"salt/1"}


def test_what_ran_out_altogether_leaves_an_empty_vessel() -> None:
    books = a_bath()
    folded = books.record(Spill("bath", SPILL))
    assert books.went_to(SPILL, "Cu") == 600 * G
    assert books.holds("bath", VOLUME) == 0
    assert books.remembers("bath") == set()
    assert codes(folded) == set()


def test_what_went_to_the_sewer_is_named() -> None:
    books = a_bath()
    folded = books.record(Discharge("bath", SEWER, litres(2)))
    assert moved(folded, "Cu") == [("bath", SEWER, 120 * G)]
    assert moved(folded, VOLUME) == [("bath", SEWER, 2 * L)]


@pytest.mark.parametrize(
    "event", [Sample("bath", SAMPLE, litres(1)), Spill("bath", SPILL, litres(1)), Discharge("bath", SEWER, litres(1))]
)
def test_of_unknown_liquid_the_volume_is_known_and_the_metal_is_not(event: Move) -> None:
    books = Books(opening("bath", litres(10), complete=False))
    folded = books.record(event)
    assert books.went_to(event.target, VOLUME) == 1 * L
    assert Finding(UNKNOWN_CONTENTS, EVERY, "bath", event.target) in folded.findings
    assert books.holds("bath", VOLUME) == 9 * L


def test_a_discharge_out_of_an_empty_tank_shows_that_an_entry_is_missing() -> None:
    books = Books(opening("bath"))
    folded = books.record(Discharge("bath", SEWER, litres(1)))
    assert {UNKNOWN_LEVEL, NEGATIVE_CONTENT, UNKNOWN_CONTENTS} <= codes(folded)
    assert books.holds("bath", VOLUME) == -1 * L
    assert not books.is_complete("bath")


def test_less_than_nothing_does_not_go_to_the_sewer() -> None:
    books = a_bath()
    books.record(DrumOff("bath", "drum", litres(12)))
    folded = books.record(Discharge("bath", SEWER))
    assert moved(folded, VOLUME) == [(UNACCOUNTED, "bath", 2 * L)]
    assert books.went_to(SEWER, VOLUME) == 0
