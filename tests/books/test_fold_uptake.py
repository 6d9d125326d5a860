"""A filter came out of the bath, carbon treated it, resin took metal up: what they keep goes with them."""

import pytest

from chemicals.books.events import (
    ASSUMED,
    COMPUTED,
    FREE_CYANIDE,
    GROSS_MASS,
    OBSERVED,
    SUPPLIER,
    VOLUME,
    Carbon,
    Figure,
    Filter,
    Held,
    Measured,
    Move,
    Resin,
)
from chemicals.books.fold.state import (
    EVERY,
    NEGATIVE_CONTENT,
    UNKNOWN_AMOUNT,
    UNKNOWN_CONTENTS,
    UNKNOWN_LEVEL,
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
    litres,
    millimoles,
    moved,
    opening,
)


def keeps(millilitres: int, sd: int = 0) -> Figure:
    return Figure(millilitres * 10**6, sd * 10**6, "assumed")


def takes_up(ppm: int, sd: int = 0) -> Figure:
    return Figure(ppm, sd, "as the supplier says")


DRAINED, NOTHING = keeps(0), takes_up(0)


def filtered(solution: Figure = DRAINED, *taken: Held) -> Filter:
    return Filter("bath", "filter", None, None, taken, solution, NOTHING)


def through_resin(passed: Measured | None, uptake: Figure, *taken: Held) -> Resin:
    return Resin("bath", "resin", None, passed, taken, DRAINED, uptake)


def a_bath() -> Books:
    """Return 10 L, 12 kg, with 600 g of copper and 500 mmol of free cyanide."""
    return Books(
        opening("bath", litres(10), density=DENSE, poured=("salt/1",), Cu=grams(600), free_cyanide=millimoles(500)),
        opening("filter"),
        opening("resin"),
    )


def test_a_filter_keeps_liquid_with_all_that_is_in_it() -> None:
    """A quarter of a litre: 15 g of copper, 12.5 mmol of cyanide, 300 g."""
    books = a_bath()
    folded = books.record(filtered(keeps(250)))
    assert moved(folded, VOLUME) == [("bath", "filter", L // 4)]
    assert moved(folded, "Cu") == [("bath", "filter", 15 * G)]
    assert moved(folded, FREE_CYANIDE) == [("bath", "filter", 12_500_000)]
    assert moved(folded, GROSS_MASS) == [("bath", "filter", 300 * G)]
    assert {transfer.basis for transfer in folded.transfers} == {ASSUMED}
    assert books.remembers("filter") == {"salt/1"}
    assert codes(folded) == set()


def test_the_kept_metal_is_as_uncertain_as_the_kept_liquid() -> None:
    """250 +- 125 mL: 15.0 +- 7.5 g."""
    books = a_bath()
    books.record(filtered(keeps(250, 125)))
    assert books.holding("filter", "Cu").variance == 7_500_000**2


def test_carbon_brings_its_own_mass() -> None:
    """60 g of carbon and 0.1 L of liquid, 120 g."""
    books = a_bath()
    folded = books.record(Carbon("bath", "filter", grams(60, 1), None, (), keeps(100), NOTHING))
    assert moved(folded, GROSS_MASS) == [(SUPPLIER, "filter", 60 * G), ("bath", "filter", 120 * G)]
    assert bases(folded, GROSS_MASS) == {OBSERVED, ASSUMED}
    assert books.holds("filter", GROSS_MASS) == 180 * G


def test_metal_that_was_weighed_in_a_drained_filter_takes_its_mass_along() -> None:
    """3.1 +- 0.4 g of copper: 596.9 g stay."""
    books = a_bath()
    folded = books.record(filtered(DRAINED, Held("Cu", grams("3.1", "0.4"))))
    assert moved(folded, "Cu") == [("bath", "filter", 3_100_000)]
    assert moved(folded, GROSS_MASS) == [("bath", "filter", 3_100_000)]
    assert (bases(folded, "Cu"), bases(folded, GROSS_MASS)) == ({OBSERVED}, {COMPUTED})
    assert books.holding("filter", "Cu").variance == 400_000**2
    assert books.holds("bath", "Cu") == 596_900_000
    assert moved(folded, VOLUME) == []
    assert books.remembers("filter") == {"salt/1"}  # drained, it was in the bath all the same


def test_an_analysis_of_what_came_out_counts_the_metal_in_the_kept_liquid() -> None:
    """20 g of copper were found in a filter that keeps 0.25 L: 15 g of them in the liquid, 5 g beside it.

    The liquid weighs 300 g; 5 g that left before it make it lighter: 0.25/10 x (12000 - 5) = 299.875 g.
    """
    books = a_bath()
    folded = books.record(filtered(keeps(250), Held("Cu", grams(20))))
    assert moved(folded, "Cu") == [("bath", "filter", 20 * G)]
    assert moved(folded, GROSS_MASS) == [("bath", "filter", 5 * G), ("bath", "filter", 299_875_000)]
    assert moved(folded, FREE_CYANIDE) == [("bath", "filter", 12_500_000)]


def test_less_metal_than_the_liquid_would_bring_is_believed() -> None:
    books = a_bath()
    folded = books.record(filtered(keeps(250), Held("Cu", grams(2))))
    assert moved(folded, "Cu") == [("bath", "filter", 2 * G)]
    assert moved(folded, GROSS_MASS) == [("bath", "filter", 300 * G)]


def test_a_species_found_in_a_medium_has_no_mass_of_its_own() -> None:
    books = a_bath()
    folded = books.record(filtered(DRAINED, Held(FREE_CYANIDE, millimoles(20))))
    assert moved(folded, FREE_CYANIDE) == [("bath", "filter", 20 * MMOL)]
    assert moved(folded, GROSS_MASS) == []


def test_resin_keeps_its_part_of_what_passed_through() -> None:
    """4 of 10 L hold 240 g, of which 99.0 +- 0.5 % stay: 237.6 +- 1.2 g; cyanide is no metal."""
    books = a_bath()
    folded = books.record(through_resin(litres(4), takes_up(990_000, 5_000)))
    assert moved(folded, "Cu") == [("bath", "resin", 237_600_000)]
    assert moved(folded, GROSS_MASS) == [("bath", "resin", 237_600_000)]
    assert bases(folded, "Cu") == {ASSUMED}
    assert books.holding("resin", "Cu").variance == 1_200_000**2
    assert books.holds("bath", FREE_CYANIDE) == 500 * MMOL
    assert books.holds("bath", VOLUME) == 10 * L


def test_liquid_that_goes_round_and_round_gives_no_more_than_there_is() -> None:
    """40 L through the resin out of a bath of 10 L: 600 g x 50 % by the first pass is all that the books assume."""
    books = a_bath()
    books.record(through_resin(litres(40), takes_up(500_000)))
    assert books.holds("resin", "Cu") == 300 * G
    books.record(through_resin(litres(40), takes_up(2_000_000)))
    assert (books.holds("bath", "Cu"), books.holds("resin", "Cu")) == (0, 600 * G)


def test_metal_that_was_analysed_is_not_assumed_as_well() -> None:
    books = a_bath()
    folded = books.record(through_resin(litres(4), takes_up(990_000), Held("Cu", grams(200))))
    assert moved(folded, "Cu") == [("bath", "resin", 200 * G)]


@pytest.mark.parametrize(
    ("passed", "uptake"), [(None, takes_up(990_000)), (litres(0), takes_up(990_000)), (litres(4), NOTHING)]
)
def test_resin_through_which_nothing_passed_takes_nothing(passed: Measured | None, uptake: Figure) -> None:
    folded = a_bath().record(through_resin(passed, uptake))
    assert (folded.transfers, folded.findings) == ((), ())


def test_of_an_unknown_content_an_unknown_part_is_taken_up() -> None:
    books = Books(opening("bath", litres(10), complete=False), opening("resin"))
    books.state.put("bath", "Cu", books.holding("bath", "Cu"))
    folded = books.record(through_resin(litres(4), takes_up(990_000)))
    assert Finding(UNKNOWN_AMOUNT, "Cu", "bath", "resin") in folded.findings
    assert Finding(UNKNOWN_CONTENTS, EVERY, "bath", "resin") in folded.findings
    assert books.holds("resin", "Cu") is None
    assert books.holds("resin", "Ag") is None  # the bath's list is not complete
    assert books.holds("resin", GROSS_MASS) is None


def test_from_an_unknown_level_the_metal_that_is_taken_up_is_unknown() -> None:
    books = Books(opening("bath", mass=grams(9000), complete=False, Cu=grams(600)), opening("resin"))
    books.record(through_resin(litres(4), takes_up(990_000)))
    assert books.holds("bath", "Cu") is None
    assert books.holds("resin", "Cu") is None


def test_metal_that_is_not_there_is_not_taken_up_whatever_the_level() -> None:
    books = Books(opening("bath", mass=grams(9000), complete=False, Ag=grams(0)), opening("resin"))
    folded = books.record(through_resin(litres(4), takes_up(990_000)))
    assert books.holds("resin", "Ag") == 0
    assert codes(folded) == {UNKNOWN_CONTENTS}


@pytest.mark.parametrize(("passed", "uptake"), [(litres(0), takes_up(990_000)), (litres(4), NOTHING)])
def test_resin_that_takes_nothing_leaves_what_was_unknown_alone(passed: Measured, uptake: Figure) -> None:
    """The bath's copper is unknown since a litre of nobody knows what went into it."""
    books = a_bath()
    books.record(opening("jug", litres(1), complete=False))
    books.record(Move("jug", "bath"))
    assert books.holds("bath", "Cu") is None
    assert codes(books.record(through_resin(passed, uptake))) == {UNKNOWN_CONTENTS}


def test_from_an_unknown_level_the_kept_liquid_is_known_and_what_is_in_it_is_not() -> None:
    books = Books(opening("bath", mass=grams(9000), complete=False, Cu=grams(600)), opening("filter"))
    folded = books.record(filtered(keeps(250)))
    assert books.holds("filter", VOLUME) == L // 4
    assert books.holds("filter", "Cu") is None
    assert UNKNOWN_LEVEL in codes(folded)


def test_what_was_found_in_a_medium_is_known_whatever_the_bath_holds() -> None:
    books = Books(opening("bath", mass=grams(9000), complete=False, Cu=grams(600)), opening("filter"))
    books.record(filtered(keeps(250), Held("Cu", grams(3))))
    assert books.holds("filter", "Cu") == 3 * G
    assert books.holds("bath", "Cu") == 597 * G
    assert books.holds("filter", "Ag") is None


def test_more_metal_than_the_bath_had_shows_that_the_books_are_wrong() -> None:
    books = a_bath()
    folded = books.record(filtered(DRAINED, Held("Cu", grams(700))))
    assert books.holds("bath", "Cu") == -100 * G
    assert codes(folded) == {NEGATIVE_CONTENT}


def test_a_filter_that_is_its_own_bath_changes_nothing_but_its_mass() -> None:
    books = a_bath()
    folded = books.record(
        Resin("bath", "bath", grams(60), litres(4), (Held("Cu", grams(3)),), keeps(250), takes_up(990_000))
    )
    assert [(t.component, t.source, t.target, t.amount) for t in folded.transfers] == [
        (GROSS_MASS, SUPPLIER, "bath", 60 * G)
    ]
    assert books.holds("bath", GROSS_MASS) == 12 * KG + 60 * G
