"""A batch of waste was treated: reagents went in, cyanide reacted away, copper settled as sludge."""

from collections.abc import Sequence

from chemicals.books.events import (
    ASSUMED,
    COMPUTED,
    FREE_CYANIDE,
    GROSS_MASS,
    OBSERVED,
    REACTION,
    SEWER,
    UNACCOUNTED,
    VOLUME,
    Dissolved,
    DrumOff,
    Ingredient,
    Measured,
    Receipt,
    Treatment,
)
from chemicals.books.fold.state import (
    EVERY,
    NEGATIVE_CONTENT,
    UNKNOWN_AMOUNT,
    UNKNOWN_CONTENTS,
    UNKNOWN_LEVEL,
    WAS_UNKNOWN,
    Finding,
)
from tests.books.words import (
    KG,
    MMOL,
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

EIGHTEEN = litres(18)
TWO_KILOGRAMS = kilograms(2)


def per_litre(component: str, milligrams: str, sd: str | None = None) -> Dissolved:
    grams_per_litre = grams(milligrams, sd)
    return Dissolved(
        component,
        Measured(
            milligrams,
            "mg/L",
            grams_per_litre.base // 1000,
            None if grams_per_litre.sd is None else grams_per_litre.sd // 1000,
        ),
    )


CLEAR = per_litre("Cu", "10")
"""What a filtrate holds of copper: 10 mg/L."""


def treated(
    *dissolved: Dissolved,
    sludge: str | None = "sludge",
    filtrate: str = "filtrate",
    volume: Measured | None = EIGHTEEN,
    mass: Measured | None = TWO_KILOGRAMS,
    reagents: Sequence[Ingredient] = (),
    consumed: Sequence[str] = (),
) -> Treatment:
    """Return a treatment of the drum; by default 18 L of filtrate and 2 kg of sludge came of it."""
    return Treatment("drum", tuple(reagents), filtrate, sludge, volume, mass, dissolved, tuple(consumed))


def a_drum() -> Books:
    """Return 20 L, 20 kg, with 50 g of copper, 100 g of salt and 400 mmol of free cyanide; bag and can for reagents."""
    cyanide = millimoles(400)
    return Books(
        opening("drum", litres(20), poured=("cyanide/1",), Cu=grams(50), NaCl=grams(100), free_cyanide=cyanide),
        opening("filtrate"),
        opening("sludge"),
        Receipt("bag", kilograms(25), None, "lot 7", salt()),
        Receipt("can", None, litres(5), "lot 8", acid()),
    )


def test_what_is_not_dissolved_has_settled() -> None:
    """10 mg/L in 18 L: 0.18 g of copper in the filtrate, 49.82 g in the sludge."""
    books = a_drum()
    folded = books.record(treated(CLEAR))
    assert moved(folded, "Cu") == [("drum", "sludge", 49_820_000), ("drum", "filtrate", 180_000)]
    assert bases(folded, "Cu") == {COMPUTED}
    assert (books.holds("filtrate", "Cu"), books.holds("sludge", "Cu")) == (180_000, 49_820_000)
    assert codes(folded) == set()


def test_liquid_that_did_not_run_off_is_in_the_sludge_with_what_is_dissolved_in_it() -> None:
    """18 of 20 L ran off: a tenth of the salt and of the cyanide stays in 2 L of wet sludge; of 20 kg it weighs 2."""
    books = a_drum()
    folded = books.record(treated(CLEAR))
    assert moved(folded, VOLUME) == [("drum", "sludge", 2 * L), ("drum", "filtrate", 18 * L)]
    assert moved(folded, "NaCl") == [("drum", "sludge", 10 * G), ("drum", "filtrate", 90 * G)]
    assert moved(folded, FREE_CYANIDE) == [("drum", "sludge", 40 * MMOL), ("drum", "filtrate", 360 * MMOL)]
    assert moved(folded, GROSS_MASS) == [("drum", "sludge", 2 * KG), ("drum", "filtrate", 18 * KG)]
    assert bases(folded, GROSS_MASS) == {OBSERVED, COMPUTED}


def test_the_treated_vessel_is_empty_and_its_memory_goes_both_ways() -> None:
    books = a_drum()
    books.record(treated(CLEAR, consumed=(FREE_CYANIDE,)))
    assert all(books.holds("drum", component) == 0 for component in ("Cu", "NaCl", FREE_CYANIDE, VOLUME, GROSS_MASS))
    assert books.remembers("drum") == set()
    assert books.remembers("filtrate") == books.remembers("sludge") == {"cyanide/1"}  # reacted away is not emptied out


def test_a_filtrate_that_stays_in_the_vessel_is_all_that_stays() -> None:
    books = a_drum()
    folded = books.record(treated(CLEAR, filtrate="drum"))
    assert moved(folded, "Cu") == [("drum", "sludge", 49_820_000)]
    assert books.holds("drum", "Cu") == 180_000
    assert (books.holds("drum", VOLUME), books.holds("drum", GROSS_MASS)) == (18 * L, 18 * KG)
    assert books.remembers("drum") == {"cyanide/1"}


def test_filtrate_and_sludge_are_as_uncertain_as_the_analysis_and_the_books() -> None:
    """50 +- 5 g; 10 +- 2 mg/L in 18.0 +- 1.8 L: 0.18 g.

    Filtrate: (18 x 0.002)^2 + (0.01 x 1.8)^2 = 0.00162 g^2, 40.2492 mg, rounded up. Sludge: 5 g besides.
    """
    books = Books(opening("drum", litres(20), Cu=grams(50, 5)))
    books.record(treated(per_litre("Cu", "10", "2"), volume=litres(18, "1.8")))
    assert books.holding("filtrate", "Cu").variance == 40_250**2
    assert books.holding("sludge", "Cu").variance == (5 * G) ** 2 + 40_250**2
    assert books.holding("filtrate", VOLUME).variance == (18 * L // 10) ** 2


def test_the_liquid_in_the_sludge_is_as_uncertain_as_the_two_volumes() -> None:
    """20.0 +- 0.3 L less 18.0 +- 0.4 L: 2.0 +- 0.5 L. Of 100 g of salt: (100 x 0.5/20)^2 + (10 x 0.3/20)^2 g^2."""
    books = Books(opening("drum", litres(20, "0.3"), NaCl=grams(100)))
    books.record(treated(volume=litres(18, "0.4")))
    assert books.holding("sludge", VOLUME).variance == (L // 2) ** 2
    assert books.holding("sludge", "NaCl").variance == 6_272_500 * G**2 // 10**6


def test_without_an_analysis_nobody_guesses_what_settled() -> None:
    books = a_drum()
    folded = books.record(treated())
    assert (books.holds("filtrate", "Cu"), books.holds("sludge", "Cu")) == (None, None)
    assert Finding(UNKNOWN_AMOUNT, "Cu", "drum", "sludge") in folded.findings
    assert Finding(UNKNOWN_AMOUNT, "Cu", "drum", "filtrate") in folded.findings
    assert moved(folded, "Cu") == [("drum", "sludge", 50 * G)]  # what the books know of stays in the house
    assert bases(folded, "Cu") == {ASSUMED}
    assert books.holds("drum", "Cu") == 0
    assert books.holds("filtrate", "Ag") == 0  # there was no silver


def test_without_an_analysis_no_metal_is_said_to_have_gone_to_the_sewer() -> None:
    books = a_drum()
    folded = books.record(treated(filtrate=SEWER))
    assert books.went_to(SEWER, "Cu") == 0
    assert Finding(UNKNOWN_AMOUNT, "Cu", "drum", SEWER) in folded.findings
    assert books.went_to(SEWER, VOLUME) == 18 * L


def test_a_metal_that_was_not_there_is_neither_dissolved_nor_settled() -> None:
    books = Books(opening("drum", litres(20), Cu=grams(50), Ag=grams(0)))
    folded = books.record(treated(CLEAR))
    assert (books.holds("filtrate", "Ag"), books.holds("sludge", "Ag")) == (0, 0)
    assert codes(folded) == set()


def test_unanalysed_metal_of_a_filtrate_that_stays_is_unknown_there() -> None:
    books = a_drum()
    books.record(treated(filtrate="drum"))
    assert (books.holds("drum", "Cu"), books.holds("sludge", "Cu")) == (None, None)


def test_without_a_sludge_everything_is_in_the_filtrate() -> None:
    books = a_drum()
    folded = books.record(treated(sludge=None, volume=None, mass=None))
    assert moved(folded, "Cu") == [("drum", "filtrate", 50 * G)]
    assert books.holds("filtrate", VOLUME) == 20 * L
    assert codes(folded) == set()


def test_a_measured_filtrate_without_a_sludge_sets_the_volume() -> None:
    books = a_drum()
    folded = books.record(treated(sludge=None, volume=litres(19), mass=None))
    assert moved(folded, VOLUME) == [("drum", UNACCOUNTED, 1 * L), ("drum", "filtrate", 19 * L)]
    assert books.holds("filtrate", "Cu") == 50 * G


def test_reagents_go_in_first() -> None:
    """1 L of concentrate with 20 g of sodium and 1.2 kg; 1 kg of a salt with 254.5 g of copper: 304.5 g in all."""
    books = a_drum()
    reagents = [Ingredient("can", None, litres(1)), Ingredient("bag", kilograms(1), None)]
    books.record(treated(CLEAR, per_litre("Na", "900"), reagents=reagents))
    assert books.holds("sludge", "Cu") == 304_500_000 - 180_000
    assert books.holds("filtrate", "Na") == 16_200_000
    assert books.holds("sludge", VOLUME) == 3 * L  # 20 + 1 - 18
    assert books.holds("filtrate", GROSS_MASS) == 20_200_000_000  # 20 + 1.2 + 1 - 2
    assert books.remembers("sludge") == {"cyanide/1", salt().key, acid().key}
    assert books.holds("bag", GROSS_MASS) == 24 * KG


def test_a_reagent_without_an_amount_leaves_volume_and_mass_unknown() -> None:
    books = a_drum()
    folded = books.record(treated(CLEAR, reagents=[Ingredient("can", None, None)]))
    assert books.holds("filtrate", VOLUME) == 18 * L  # it was measured
    assert books.holds("sludge", VOLUME) is None
    assert books.holds("filtrate", GROSS_MASS) is None
    assert books.holds("filtrate", "Cu") == 180_000  # the concentrate's list is complete: it brought no copper
    assert {UNKNOWN_AMOUNT, UNKNOWN_LEVEL, WAS_UNKNOWN} == codes(folded)


def test_what_is_consumed_has_reacted_away() -> None:
    books = a_drum()
    folded = books.record(treated(CLEAR, consumed=(FREE_CYANIDE,)))
    assert moved(folded, FREE_CYANIDE) == [("drum", REACTION, 400 * MMOL)]
    assert bases(folded, FREE_CYANIDE) == {COMPUTED}


def test_nobody_knows_how_much_of_an_unknown_species_reacted_but_none_is_left() -> None:
    books = Books(opening("drum", litres(20), complete=False), opening("filtrate"))
    folded = books.record(treated(sludge=None, volume=None, mass=None, consumed=(FREE_CYANIDE,)))
    assert Finding(UNKNOWN_AMOUNT, FREE_CYANIDE, "drum", REACTION) in folded.findings
    assert books.holds("filtrate", FREE_CYANIDE) == 0
    assert books.holds("filtrate", "Cu") is None


def test_an_analysis_says_how_much_of_a_species_reacted() -> None:
    """1 mmol/L in 20 L: 20 of 400 mmol are left, a tenth of them in the sludge."""
    books = a_drum()
    left = Dissolved(FREE_CYANIDE, millimoles(1))
    folded = books.record(treated(CLEAR, left))
    assert moved(folded, FREE_CYANIDE) == [
        ("drum", REACTION, 380 * MMOL),
        ("drum", "sludge", 2 * MMOL),
        ("drum", "filtrate", 18 * MMOL),
    ]


def test_of_an_unknown_volume_an_analysis_says_nothing_about_species() -> None:
    books = Books(opening("drum", mass=kilograms(20), complete=False), opening("filtrate"))
    left = Dissolved(FREE_CYANIDE, millimoles(1))
    folded = books.record(treated(left, sludge=None, volume=None, mass=None))
    assert Finding(UNKNOWN_LEVEL, FREE_CYANIDE, "drum", REACTION) in folded.findings
    assert books.holds("filtrate", FREE_CYANIDE) is None


def test_an_analysed_solute_settles_like_a_metal() -> None:
    """4 g/L in 18 L: 72 g stay dissolved, 28 g do not."""
    books = a_drum()
    folded = books.record(treated(CLEAR, per_litre("NaCl", "4000")))
    assert moved(folded, "NaCl") == [("drum", "sludge", 28 * G), ("drum", "filtrate", 72 * G)]


def test_more_dissolved_metal_than_the_books_had_is_found_and_told() -> None:
    """5 g/L in 18 L: 90 g, 40 more than there was; none is left for the sludge."""
    books = a_drum()
    folded = books.record(treated(per_litre("Cu", "5000")))
    assert moved(folded, "Cu") == [(UNACCOUNTED, "drum", 40 * G), ("drum", "filtrate", 90 * G)]
    assert books.holds("sludge", "Cu") == 0
    assert Finding(NEGATIVE_CONTENT, "Cu", "drum", "sludge") in folded.findings


def test_more_filtrate_than_the_books_had_liquid_is_unaccounted() -> None:
    books = a_drum()
    folded = books.record(treated(CLEAR, volume=litres(21)))
    assert moved(folded, VOLUME) == [(UNACCOUNTED, "drum", 1 * L), ("drum", "filtrate", 21 * L)]
    assert books.holds("sludge", "NaCl") == 0
    assert books.remembers("sludge") == {"cyanide/1"}
    assert codes(folded) == set()


def test_without_a_measured_volume_the_filtrate_is_all_the_liquid() -> None:
    """10 mg/L in 20 L: 0.2 g."""
    books = a_drum()
    folded = books.record(treated(CLEAR, volume=None))
    assert moved(folded, "Cu") == [("drum", "sludge", 49_800_000), ("drum", "filtrate", 200_000)]
    assert moved(folded, VOLUME) == [("drum", "filtrate", 20 * L)]
    assert books.holds("filtrate", FREE_CYANIDE) == 400 * MMOL


def test_an_unweighed_sludge_leaves_both_masses_unknown() -> None:
    books = a_drum()
    folded = books.record(treated(CLEAR, mass=None))
    assert (books.holds("filtrate", GROSS_MASS), books.holds("sludge", GROSS_MASS)) == (None, None)
    assert Finding(UNKNOWN_AMOUNT, GROSS_MASS, "drum", "sludge") in folded.findings


def test_an_unknown_drum_with_an_analysed_filtrate_knows_the_filtrate() -> None:
    """What nobody knew of the copper before is in the sludge."""
    books = Books(opening("drum", litres(20), complete=False), opening("filtrate"), opening("sludge"))
    folded = books.record(treated(CLEAR))
    assert books.holds("sludge", "Cu") is None
    assert (books.holds("drum", "Cu"), books.holds("filtrate", "Cu")) == (0, 180_000)
    assert Finding(UNKNOWN_AMOUNT, "Cu", "drum", "sludge") in folded.findings
    assert Finding(UNKNOWN_CONTENTS, EVERY, "drum", "sludge") in folded.findings
    assert (books.is_complete("filtrate"), books.is_complete("sludge")) == (False, False)


def test_an_unknown_volume_without_a_measured_filtrate_leaves_the_metal_unknown() -> None:
    books = Books(opening("drum", mass=kilograms(20), complete=False, Cu=grams(50)), opening("filtrate"))
    folded = books.record(treated(CLEAR, volume=None))
    assert Finding(UNKNOWN_LEVEL, "Cu", "drum", "filtrate") in folded.findings
    assert (books.holds("filtrate", "Cu"), books.holds("sludge", "Cu")) == (None, None)


def test_less_than_no_liquid_dissolves_nothing_that_one_could_compute() -> None:
    """22 of 20 L were poured out before: the books hold -2 L."""
    books = a_drum()
    books.record(DrumOff("drum", "elsewhere", litres(22)))
    folded = books.record(treated(CLEAR, volume=None))
    assert Finding(UNKNOWN_LEVEL, "Cu", "drum", "filtrate") in folded.findings
    assert (books.holds("filtrate", "Cu"), books.holds("sludge", "Cu")) == (None, None)
