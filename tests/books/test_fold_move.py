"""Liquid moves from one vessel to another: a part of it, or all."""

import pytest

from chemicals.books.events import ASSUMED, COMPUTED, GROSS_MASS, OBSERVED, UNACCOUNTED, VOLUME, Measured, Move, Run
from chemicals.books.fold.state import (
    EVERY,
    NEGATIVE_CONTENT,
    TOO_MUCH,
    UNKNOWN_AMOUNT,
    UNKNOWN_CONTENTS,
    UNKNOWN_LEVEL,
    WAS_UNKNOWN,
    Finding,
)
from tests.books.words import (
    DENSE,
    KG,
    Books,
    G,
    L,
    bases,
    codes,
    copper_deposit,
    grams,
    kilograms,
    litres,
    moved,
    opening,
    plating,
    step,
)


def poured(source: str, target: str, volume: Measured | None = None) -> Move:
    return Move(source, target, volume)


def two_tanks() -> Books:
    return Books(
        opening("a", litres(10), Cu=grams(500), density=DENSE, poured=("salt/1",)),
        opening("b", litres(1), Ni=grams(3), poured=("nickel/1",)),
    )


def test_a_part_takes_every_component_in_proportion() -> None:
    """A quarter of 10 L: 125 g of copper and 3 kg."""
    books = two_tanks()
    folded = books.record(poured("a", "b", litres("2.5")))
    assert moved(folded, "Cu") == [("a", "b", 125 * G)]
    assert moved(folded, GROSS_MASS) == [("a", "b", 3 * KG)]
    assert books.holds("a", "Cu") == 375 * G
    assert books.holds("b", VOLUME) == 3_500_000_000
    assert books.remembers("b") == {"salt/1", "nickel/1"}
    assert books.remembers("a") == {"salt/1"}
    assert (bases(folded, VOLUME), bases(folded, "Cu")) == ({OBSERVED}, {COMPUTED})


def test_parts_of_a_microgram_stay_behind() -> None:
    """100 ug in 3 L: a litre takes 33, the next one of the 67 left in 2 L takes 33, the last one 34."""
    books = Books(opening("a", litres(3), Cu=Measured("100", "ug", 100)))
    taken = [moved(books.record(poured("a", "b", litres(1))), "Cu")[0][2] for _ in range(3)]
    assert taken == [33, 33, 34]


def test_all_of_it_leaves_nothing_and_no_memory() -> None:
    books = two_tanks()
    books.record(poured("a", "b"))
    assert [books.holds("a", component) for component in ("Cu", VOLUME, GROSS_MASS)] == [0, 0, 0]
    assert books.remembers("a") == set()
    assert books.holds("b", "Cu") == 500 * G
    assert books.holds("b", GROSS_MASS) == 13 * KG


def test_a_volume_that_equals_the_books_takes_every_unit_but_does_not_say_empty() -> None:
    books = two_tanks()
    books.record(poured("a", "b", litres(10)))
    assert [books.holds("a", component) for component in ("Cu", VOLUME, GROSS_MASS)] == [0, 0, 0]
    assert books.remembers("a") == {"salt/1"}


def test_uncertainties_of_a_part_and_of_what_is_left() -> None:
    """1000 +- 30 g in 10.0 +- 0.2 L, of which 2.50 +- 0.05 L go.

    Gone: 250 g, (30 x 1/4)^2 + (1000 x 0.05/10)^2 + (1000 x 2.5/10 x 0.2/10)^2 = 56.25 + 25 + 25 g^2.
    Left: 750 g, (30 x 3/4)^2 + 25 + 25 = 556.25 g^2. Volume: 0.05^2 gone, 0.2^2 + 0.05^2 left.
    """
    books = Books(opening("a", litres(10, "0.2"), Cu=grams(1000, 30)))
    books.record(poured("a", "b", litres("2.5", "0.05")))
    assert books.holding("b", "Cu").variance == 10_625 * G**2 // 100
    assert books.holding("a", "Cu").variance == 55_625 * G**2 // 100
    assert books.holding("b", VOLUME).variance == 25 * L**2 // 10**4
    assert books.holding("a", VOLUME).variance == 425 * L**2 // 10**4


def test_the_doubt_about_a_part_is_never_more_than_everything() -> None:
    """1 L +- 50 L out of 10 L with 500 g: 500 g of doubt, not 2500."""
    books = two_tanks()
    books.record(poured("a", "b", litres(1, 50)))
    assert books.holding("b", "Cu").variance == (500 * G) ** 2


def test_more_than_there_is_takes_what_there_is_and_says_so() -> None:
    """12 L out of 10 L: the volume in the books was wrong. There was never more copper than 500 g."""
    books = two_tanks()
    folded = books.record(poured("a", "b", litres(12)))
    assert books.holds("a", VOLUME) == -2 * L
    assert books.holds("a", "Cu") == 0
    assert books.holds("b", VOLUME) == 13 * L
    assert books.holds("b", "Cu") == 500 * G
    assert codes(folded) == {NEGATIVE_CONTENT}


def test_a_drop_left_in_the_books_does_not_make_tonnes_of_metal() -> None:
    books = Books(opening("a", Measured("3", "nL", 3), Cu=grams(500)))
    books.record(poured("a", "b", litres(5)))
    assert books.holds("b", "Cu") == 500 * G


def test_what_comes_out_of_an_empty_vessel_can_be_anything() -> None:
    books = two_tanks()
    folded = books.record(poured("never opened", "b", litres(1)))
    assert books.holds("b", VOLUME) == 2 * L
    assert books.holds("b", "Ni") is None
    assert books.holds("b", GROSS_MASS) is None
    assert not books.is_complete("b")
    assert not books.is_complete("never opened")
    assert set(folded.findings) == {
        Finding(UNKNOWN_LEVEL, VOLUME, "never opened", "b"),
        Finding(NEGATIVE_CONTENT, VOLUME, "never opened", "never opened"),
        Finding(UNKNOWN_AMOUNT, GROSS_MASS, "never opened", "b"),
        Finding(UNKNOWN_CONTENTS, EVERY, "never opened", "b"),
    }


def test_from_a_vessel_of_unknown_level_the_volume_is_known_and_its_content_is_not() -> None:
    books = Books(
        opening("a", complete=False, mass=kilograms(9), Cu=grams(500), poured=("salt/1",)),
        opening("b", litres(1), Ni=grams(3)),
    )
    folded = books.record(poured("a", "b", litres(2)))
    assert books.holds("b", VOLUME) == 3 * L
    assert books.holds("a", VOLUME) is None
    assert (books.holds("a", "Cu"), books.holds("b", "Cu"), books.holds("b", "Ni")) == (None, None, None)
    assert books.remembers("b") == {"salt/1"}
    assert UNKNOWN_LEVEL in codes(folded)


def with_copper_unknown() -> Books:
    """Return the two tanks after a load took nobody knows how much copper out of the first."""
    books = two_tanks()
    drags = (step("a", 0).drag_out,)
    books.record(Run("knobs", ("a",), None, None, None, None, None, plating(copper_deposit()), "rack", drags))
    return books


@pytest.mark.parametrize("volume", [None, litres(1)])
def test_an_unknown_content_makes_the_target_unknown_but_only_of_that_component(volume: Measured | None) -> None:
    books = with_copper_unknown()
    folded = books.record(poured("a", "b", volume))
    assert books.holds("b", "Cu") is None
    assert books.holds("b", "Ni") == 3 * G
    assert books.holds("b", VOLUME) == (11 * L if volume is None else 2 * L)
    assert books.is_complete("b")
    assert Finding(UNKNOWN_AMOUNT, "Cu", "a", "b") in folded.findings


def test_an_incomplete_source_makes_everything_unknown_that_it_does_not_list() -> None:
    books = Books(opening("a", litres(10), complete=False, Ag=grams(10)), opening("b", litres(1), Ni=grams(3)))
    folded = books.record(poured("a", "b", litres(1)))
    assert books.holds("b", "Ag") == 1 * G
    assert books.holds("b", "Ni") is None
    assert books.holds("b", VOLUME) == 2 * L
    assert folded.findings == (Finding(UNKNOWN_CONTENTS, EVERY, "a", "b"),)


@pytest.mark.parametrize("volume", [None, litres(2), litres(10)])
def test_a_component_that_the_target_does_not_list_comes_along_known(volume: Measured | None) -> None:
    """However it is poured: the source lists copper, the target's list was complete and had none."""
    books = Books(opening("a", litres(10), complete=False, Cu=grams(500)), opening("b", litres(1)))
    books.record(poured("a", "b", volume))
    assert books.holds("b", "Cu") == (100 * G if volume == litres(2) else 500 * G)
    assert not books.is_complete("b")


def test_what_a_source_is_known_not_to_hold_the_target_does_not_get() -> None:
    """Of the drum nobody knows all, but that it has no silver."""
    books = Books(opening("a", litres(10), complete=False, Ag=grams(0)), opening("b", litres(1)))
    books.record(poured("a", "b"))
    assert (books.holds("b", "Ag"), books.holds("b", "Cu")) == (0, None)


def test_emptying_an_unknown_content_leaves_nothing_and_carries_what_was_known_of_it() -> None:
    """Of 500 g an unknown part went; the rest is carried along as a known part of an unknown amount."""
    books = with_copper_unknown()
    folded = books.record(poured("a", "b"))
    assert books.holds("a", "Cu") == 0
    assert books.holding("b", "Cu").known_part == 500 * G
    assert moved(folded, "Cu") == [("a", "b", 500 * G)]
    assert bases(folded, "Cu") == {ASSUMED}
    assert bases(folded, VOLUME) == {COMPUTED}  # all that the books held


def test_the_next_known_figure_is_posted_against_what_was_known() -> None:
    """500 g were known to be there when the content became unknown; found are 520 g: 20 g more."""
    books = with_copper_unknown()
    folded = books.record(opening("a", litres(10), Cu=grams(520)))
    assert moved(folded, "Cu") == [(UNACCOUNTED, "a", 20 * G)]
    assert WAS_UNKNOWN in codes(folded)


def test_less_than_nothing_is_not_poured_on() -> None:
    """The books lost 2 L too much. Emptying the vessel shows it: 2 L are found, none goes to the target."""
    books = two_tanks()
    books.record(poured("a", "c", litres(12)))
    folded = books.record(poured("a", "b"))
    assert moved(folded, VOLUME) == [(UNACCOUNTED, "a", 2 * L)]
    assert bases(folded, VOLUME) == {COMPUTED}
    assert books.holds("a", VOLUME) == 0
    assert books.holds("b", VOLUME) == 1 * L
    assert NEGATIVE_CONTENT in codes(folded)


def test_a_part_of_less_than_nothing_is_nothing() -> None:
    """Copper below zero (more plated than there was): a tenth of the liquid takes none of it."""
    books = Books(opening("a", litres(10)), opening("b", litres(1)))
    books.state.put("a", "Cu", books.holding("a", "Cu").rebooked(-5 * G, 0))
    books.posted["a", "Cu"] = -5 * G
    folded = books.record(poured("a", "b", litres(1)))
    assert moved(folded, "Cu") == []
    assert books.holds("a", "Cu") == -5 * G
    assert NEGATIVE_CONTENT in codes(folded)


def test_pouring_into_itself_changes_nothing() -> None:
    books = two_tanks()
    before = dict(books.state.holdings), dict(books.state.vessels)
    for volume in (litres(1), litres(10), litres(50), None):
        assert books.record(poured("a", "a", volume)).transfers == ()
        assert (dict(books.state.holdings), dict(books.state.vessels)) == before


def test_no_liquid_takes_nothing_along() -> None:
    books = two_tanks()
    folded = books.record(poured("a", "b", litres(0, 1)))
    assert (folded.transfers, folded.findings) == ((), ())
    assert books.remembers("b") == {"nickel/1"}


def test_emptying_an_empty_vessel_is_nothing() -> None:
    books = Books(opening("a"), opening("b", litres(1)))
    folded = books.record(poured("a", "b"))
    assert (folded.transfers, folded.findings) == ((), ())


def test_more_than_the_books_can_hold_becomes_unknown_and_is_told() -> None:
    """A million litres and a million litres: a unit was wrong somewhere."""
    books = Books(opening("a", litres(10**6)), opening("b", litres(10**6)))
    folded = books.record(poured("a", "b"))
    assert TOO_MUCH in codes(folded)
    assert books.holds("b", VOLUME) is None
    assert books.holds("a", VOLUME) == 0
    assert moved(folded, VOLUME) == [("a", UNACCOUNTED, 10**15)]


def test_more_than_the_books_can_hold_by_parts() -> None:
    books = Books(opening("a", litres(10**6)), opening("b", litres(10**6)))
    folded = books.record(poured("a", "b", litres(1)))
    assert Finding(TOO_MUCH, VOLUME, "a", "b") in folded.findings
    assert moved(folded, VOLUME) == []
    assert (books.holds("a", VOLUME), books.holds("b", VOLUME)) == (None, None)
