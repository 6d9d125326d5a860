"""What the current does besides the deposit on parts: rack build-up, species made and used up."""

import pytest

from chemicals.books.events import (
    ASSUMED,
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    PARTS,
    REACTION,
    Conversion,
    Measured,
    Plating,
    Run,
)
from chemicals.books.fold.state import NEGATIVE_CONTENT, UNKNOWN_AMOUNT, WEIGHT_LOST, Finding
from tests.books.words import (
    KG,
    Books,
    G,
    bases,
    codes,
    copper_deposit,
    coulombs,
    grams,
    litres,
    made,
    moved,
    opening,
    plating,
    used_up,
)

HOUR = coulombs(3600)
"""One ampere-hour: 1.185494 g of copper."""
OXYGEN = made("acid", 10_364_270)
"""At an inert anode water gives oxygen: one H+ for each electron, 1 kC / 96485.33212 C/mol = 10.36427 mmol."""


def load(
    figures: Plating, charge: Measured | None = None, before: Measured | None = None, after: Measured | None = None
) -> Run:
    """Return a load that was plated in the bath and drags nothing out."""
    return Run("knobs", ("bath",), charge, None, None, before, after, figures, "rack", (NO_DRAG,))


NO_DRAG = copper_deposit(0).efficiency


def a_bath(*, acid_nmol: int = 0) -> Books:
    """Return 10 L with a kilogram of copper, an anode set of 2 kg and bare racks."""
    return Books(
        opening("bath", litres(10), Cu=grams(1000), acid=Measured("", "nmol", acid_nmol)),
        opening("anodes", mass=grams(2000), Cu=grams(2000)),
        opening("racks"),
    )


def mass_of(books: Books, end: str) -> tuple[int | None, int | None]:
    return books.holds(end, "Cu"), books.holds(end, GROSS_MASS)


def test_a_share_of_the_deposit_grows_on_racks_and_parts_get_the_rest() -> None:
    """1 185 494 ug: 3 % are 35 564.8 ug on racks, of which a whole 35 564; 1 149 930 ug on parts."""
    books = a_bath()
    folded = books.record(load(plating(copper_deposit(), on_racks=(30_000, 0)), HOUR))
    assert moved(folded, "Cu") == [("bath", PARTS, 1_149_930), ("bath", "racks", 35_564)]
    assert moved(folded, GROSS_MASS) == moved(folded, "Cu")
    assert [transfer.basis for transfer in folded.transfers if transfer.component == "Cu"] == [COMPUTED, ASSUMED]
    assert books.holds("bath", "Cu") == 1000 * G - 1_185_494
    assert mass_of(books, "racks") == (35_564, 35_564)


def test_the_doubt_of_the_share_is_in_both_parts() -> None:
    """1.185494 g, 3.0 +- 1.5 %: +- 17 782.4 ug on racks and the same on parts."""
    folded = a_bath().record(load(plating(copper_deposit(), on_racks=(30_000, 15_000)), HOUR))
    assert [transfer.sd for transfer in folded.transfers if transfer.component == "Cu"] == [17_783, 17_783]


def test_racks_grow_beside_a_weighed_deposit() -> None:
    """9.7 g on the parts are 97 % of the deposit: 3/97 of it, 0.3 g, are on the racks."""
    books = a_bath()
    figures = plating(copper_deposit(), on_racks=(30_000, 0))
    folded = books.record(load(figures, before=grams(5), after=grams("14.7")))
    assert moved(folded, "Cu") == [("bath", PARTS, 9_700_000), ("bath", "racks", 299_999)]
    assert bases(folded, "Cu") == {OBSERVED, ASSUMED}
    assert books.holds("bath", "Cu") == 990_000_001


def test_the_doubt_of_what_grew_beside_a_weighed_deposit() -> None:
    """m s/(1 - s), m = 9.60 +- 0.24 g, s = 0.04 +- 0.02: 0.4 g.

    By the weight 0.24 x 0.04/0.96 = 0.01 g, by the share 9.6 x 0.02/0.96^2 = 0.208333 g; together 0.208573 g.
    """
    figures = plating(copper_deposit(), on_racks=(40_000, 20_000))
    folded = a_bath().record(load(figures, before=grams(0, "0.24"), after=grams("9.6", 0)))
    on_racks = next(transfer for transfer in folded.transfers if transfer.target == "racks")
    assert (on_racks.amount, on_racks.sd) == (399_999, 208_574)


def test_the_anode_dissolves_for_parts_and_racks() -> None:
    """9.7 g weighed on parts are 10 g deposited; at 80 % efficiency the charge dissolved 12.5 g."""
    books = a_bath()
    figures = plating(copper_deposit(800_000), "anodes", on_racks=(30_000, 0))
    folded = books.record(load(figures, before=grams(5), after=grams("14.7")))
    assert moved(folded, "Cu")[2] == ("anodes", "bath", 12_500_000)
    assert mass_of(books, "anodes") == (1_987_500_000, 1_987_500_000)


def test_an_anode_dissolves_by_the_charge_where_it_was_read() -> None:
    figures = plating(copper_deposit(), "anodes", on_racks=(30_000, 0))
    folded = a_bath().record(load(figures, HOUR, before=grams(5), after=grams(6)))
    assert moved(folded, "Cu") == [
        ("bath", PARTS, 1_000_000), ("bath", "racks", 30_927), ("anodes", "bath", 1_185_494),
    ]  # fmt: skip


def test_nothing_grows_on_well_coated_racks() -> None:
    folded = a_bath().record(load(plating(copper_deposit(), on_racks=(0, 0)), HOUR))
    assert moved(folded, "Cu") == [("bath", PARTS, 1_185_494)]
    assert a_bath().record(load(plating(copper_deposit(), on_racks=(0, 0)))).findings == (
        Finding(UNKNOWN_AMOUNT, "Cu", "bath", PARTS),
        Finding(UNKNOWN_AMOUNT, GROSS_MASS, "bath", PARTS),
    )


def test_all_of_it_grows_on_racks() -> None:
    """A share of 100 %, or of more: by the charge all of it is on the racks; a weight tells nothing about them."""
    figures = plating(copper_deposit(), "anodes", on_racks=(1_200_000, 0))
    assert moved(a_bath().record(load(figures, HOUR)), "Cu")[0] == ("bath", "racks", 1_185_494)
    books = a_bath()
    books.record(load(figures, before=grams(5), after=grams(6)))
    assert mass_of(books, "racks") == (None, None)
    assert mass_of(books, "anodes") == (None, None)


def test_neither_weights_nor_charge_leave_racks_and_species_unknown() -> None:
    books = a_bath()
    folded = books.record(load(plating(copper_deposit(), on_racks=(30_000, 0), conversions=(OXYGEN,))))
    assert folded.transfers == ()
    assert mass_of(books, "racks") == (None, None)
    assert books.holds("bath", "acid") is None
    assert Finding(UNKNOWN_AMOUNT, "acid", REACTION, "bath") in folded.findings


def test_a_load_that_lost_weight_tells_nothing_about_racks_and_species() -> None:
    books = a_bath()
    figures = plating(copper_deposit(), on_racks=(30_000, 0), conversions=(OXYGEN,))
    folded = books.record(load(figures, before=grams(6), after=grams(5)))
    assert moved(folded, "Cu") == [(PARTS, "bath", 1 * G)]
    assert codes(folded) == {WEIGHT_LOST, UNKNOWN_AMOUNT}
    assert (books.holds("racks", "Cu"), books.holds("bath", "acid")) == (None, None)


def test_an_ampere_hour_at_an_inert_anode_makes_acid() -> None:
    """Faraday's law: 3600 C / 96485.33212 C/mol = 37.3114 mmol of electrons, and as much H+."""
    books = a_bath()
    folded = books.record(load(plating(copper_deposit(), conversions=(OXYGEN,)), HOUR))
    assert moved(folded, "acid") == [(REACTION, "bath", 37_311_372)]
    assert round(3600 / 96485.33212 * 1e9) == 37_311_371  # the figure per kilocoulomb is rounded up
    assert bases(folded, "acid") == {ASSUMED}
    assert books.holds("bath", "acid") == 37_311_372
    assert books.holds("bath", GROSS_MASS) == 10 * KG - 1_185_494  # the oxygen that left is not weighed


def test_the_doubt_of_charge_and_yield() -> None:
    """3600 +- 108 C (3 %) and 10.0 +- 0.4 mmol/kC (4 %): 36 mmol, 5 % of it."""
    figures = plating(copper_deposit(), conversions=(made("acid", 10_000_000, 400_000),))
    folded = a_bath().record(load(figures, coulombs(3600, 108)))
    acid = next(transfer for transfer in folded.transfers if transfer.component == "acid")
    assert (acid.amount, acid.sd) == (36_000_000, 1_800_000)


def test_a_weighed_load_makes_as_much_acid_as_its_charge_would() -> None:
    """Cu2+ + H2O = Cu + 2 H+ + O2/2: 2.1 g / 63.546 g/mol x 2 = 66.093853 mmol."""
    figures = plating(copper_deposit(), conversions=(OXYGEN,))
    ((source, target, acid),) = moved(a_bath().record(load(figures, before=grams("5.6"), after=grams("7.7"))), "acid")
    assert (source, target) == (REACTION, "bath")
    assert abs(acid - 66_093_853) <= 3  # the figure per kilocoulomb has seven digits


def test_a_species_that_is_used_up_reacts_away() -> None:
    """2 kC use up 3 mmol each: 6 of 10 mmol."""
    books = a_bath(acid_nmol=10_000_000)
    folded = books.record(load(plating(copper_deposit(), conversions=(used_up("acid", 3_000_000),)), coulombs(2000)))
    assert moved(folded, "acid") == [("bath", REACTION, 6_000_000)]
    assert books.holds("bath", "acid") == 4_000_000


def test_more_of_a_species_used_up_than_there_was_is_told() -> None:
    books = a_bath(acid_nmol=1_000_000)
    folded = books.record(load(plating(copper_deposit(), conversions=(used_up("acid", 3_000_000),)), coulombs(2000)))
    assert books.holds("bath", "acid") == -5_000_000
    assert folded.findings == (Finding(NEGATIVE_CONTENT, "acid", "bath", "bath"),)


@pytest.mark.parametrize("conversion", [OXYGEN, used_up("acid", 3_000_000)])
def test_no_current_converts_nothing(conversion: Conversion) -> None:
    folded = a_bath().record(load(plating(copper_deposit(), conversions=(conversion,)), coulombs(0)))
    assert folded.transfers == ()
    assert folded.findings == ()
