"""Worked examples of double entry: what is treated, drummed off and handed over, and a month from five inputs.

As in ``test_worked_books``: each line takes from one end what it gives to the other, with figures worked out by hand.
"""

from uuid import UUID

import pytest
from molmass import Formula

from chemicals.books.events import (
    AIR,
    ALKALI,
    CHROMIUM_VI,
    OPENING,
    PARTS,
    RECEIVER,
    SEWER,
    SULFITE,
    SUPPLIER,
    UNACCOUNTED,
    Acceptance,
    BathCharge,
    CleanOut,
    Count,
    DaySheet,
    Discharge,
    Dissolved,
    DrumOff,
    Figure,
    HandOver,
    Held,
    Ingredient,
    LevelReading,
    Measured,
    Opening,
    Receipt,
    Recipe,
    Share,
    Treatment,
)
from tests.books.words import KG, Books, G, copper_deposit, grams, kilograms, litres, opening, plating
from tests.published.pages import page, posted

WATER = Figure(998_200, 0, "water at 20 °C, CRC Handbook of Chemistry and Physics")
METABISULFITE = Recipe(UUID(int=1), 1, "sodium metabisulfite", solid=True, complete=True, density=None,
                       shares=(Share(SULFITE, 10_520_400_000, 0, "kg"),))  # fmt: skip
CAUSTIC = Recipe(UUID(int=2), 1, "caustic soda 10 mol/L", solid=False, complete=True,
                 density=Figure(1_330_000, 0, "label"), shares=(Share(ALKALI, 10_000_000_000, 0, "L"),))  # fmt: skip
ANODES = Recipe(UUID(int=3), 1, "copper anodes", solid=True, complete=True, density=None,
                shares=(Share("Cu", KG, 0, "kg"),))  # fmt: skip


def millimoles(amount: str) -> Measured:
    return Measured(amount, "mmol", round(float(amount) * 10**6))


def a_spent_rinse() -> Books:
    """Return 20 L with 10 g of chromium, all of it chromium(VI), and what treats it."""
    held = Held("Cr", grams(10)), Held(CHROMIUM_VI, millimoles("192.322"))
    return Books(
        Opening(
            "tank",
            complete=True,
            volume=litres(20),
            mass=kilograms(20),
            held=held,
            density=None,
            poured=("chromic acid/1",),
        ),
        Receipt("bag", kilograms(1), None, "lot 1", METABISULFITE),
        Receipt("bottle", None, litres(1), "lot 2", CAUSTIC),
        opening("cask"),
        opening("sludge"),
        opening("drum"),
    )


def test_chromium_is_reduced_settled_and_handed_over() -> None:
    """2 HCrO4- + 3 HSO3- + 5 H+ = 2 Cr3+ + 3 SO4-- + 5 H2O: 1.5 sulfite for each chromium(VI), 2 in each Na2S2O5.

    10 g of chromium are 192.322 mmol (molmass: 51.9961 g/mol); they need 288.483 mmol of sulfite, 27.42 g of
    metabisulfite (190.106 g/mol). 30 g were taken: 30 x 10.5204 = 315.612 mmol. 0.1 L of caustic soda, 133 g with
    1 mol, settles the chromium as hydroxide and is used up. Now there are 20.1 L, 20 163 g.

    Found: 1.35 mmol/L of sulfite are left, 27.135 mmol: 288.477 mmol reacted, as the equation wants. In the filtrate,
    18.9 L, 0.50 +- 0.05 mg/L of chromium: 9.45 +- 0.945 mg. All else is in the sludge, 1.25 kg wet: 9.99055 g, and
    1.2 L of the liquid with 1.2/20.1 of the sulfite, 1.62 mmol. The filtrate weighs 20 163 - 1250 g.
    """
    assert 10_000 / Formula("Cr").mass == pytest.approx(192.322, rel=1e-5)
    assert METABISULFITE.shares[0].amount / 1e9 == pytest.approx(2000 / Formula("Na2S2O5").mass, rel=1e-5)
    assert 15_000 / Formula("Cr").mass == pytest.approx(315.612 - 20.1 * 1.35, rel=1e-4)
    books = a_spent_rinse()
    treated = books.record(
        Treatment(
            "tank",
            (Ingredient("bag", grams(30), None), Ingredient("bottle", None, litres("0.1"))),
            filtrate="cask",
            sludge="sludge",
            filtrate_volume=litres("18.9"),
            sludge_mass=kilograms("1.25"),
            dissolved=(
                Dissolved("Cr", Measured("0.50", "mg/L", 500, 50)),
                Dissolved(SULFITE, Measured("1.35", "mmol/L", 1_350_000)),
            ),
            consumed=(ALKALI, CHROMIUM_VI),
        )
    )
    assert treated.findings == ()
    assert posted(treated) == page("""
        gross mass    bag     tank      30 g                   observed
        sulfite       bag     tank      315.612 mmol           computed
        alkali        bottle  tank      1000 mmol              computed
        gross mass    bottle  tank      133 g                  computed
        volume        bottle  tank      100 mL                 observed
        alkali        tank    reaction  1000 mmol              computed
        chromium(VI)  tank    reaction  192.322 mmol           computed
        sulfite       tank    reaction  288.477 mmol           computed
        Cr            tank    sludge    9.99055 ± 0.000945 g   computed
        sulfite       tank    sludge    1.62 mmol              computed
        volume        tank    sludge    1200 mL                computed
        gross mass    tank    sludge    1250 g                 observed
        Cr            tank    cask      0.00945 ± 0.000945 g   computed
        gross mass    tank    cask      18913 g                computed
        sulfite       tank    cask      25.515 mmol            computed
        volume        tank    cask      18900 mL               computed
    """)
    sewer = books.record(Discharge("cask", SEWER))
    receiver = books.record(HandOver("sludge", "collection point", kilograms("1.6")))
    assert posted(sewer, receiver) == page("""
        Cr          cask    sewer     0.00945 ± 0.000945 g  computed
        gross mass  cask    sewer     18913 g               computed
        sulfite     cask    sewer     25.515 mmol           computed
        volume      cask    sewer     18900 mL              computed
        Cr          sludge  receiver  9.99055 ± 0.000945 g  computed
        gross mass  sludge  receiver  1250 g                computed
        sulfite     sludge  receiver  1.62 mmol             computed
        volume      sludge  receiver  1200 mL               computed
    """)
    assert {end: books.went_to(end, "Cr") for end in (OPENING, SEWER, RECEIVER, UNACCOUNTED)} == {
        OPENING: -10 * G, SEWER: 9450, RECEIVER: 9_990_550, UNACCOUNTED: 0,
    }  # fmt: skip


def test_a_tank_is_cleaned_out_into_a_drum() -> None:
    """20 L go into the drum, and 2 L of wash water (1.9964 kg); the tank remembers nothing, the drum all of it."""
    books = a_spent_rinse()
    assert posted(books.record(CleanOut("tank", "drum", litres(2), WATER))) == page("""
        Cr            tank          drum  10 g          computed
        chromium(VI)  tank          drum  192.322 mmol  computed
        gross mass    tank          drum  20000 g       computed
        volume        tank          drum  20000 mL      computed
        volume        water supply  drum  2000 mL       observed
        gross mass    water supply  drum  1996.4 g      computed
    """)
    assert (books.remembers("tank"), books.remembers("drum")) == (set(), {"chromic acid/1"})


def test_a_month_from_five_inputs() -> None:
    """Tanks and their make-up; metal bought; the month's ampere-hours; the waste's weight; analysis and level at last.

    100 L at 50.0 +- 0.5 g/L: 5000 +- 50 g, 115 kg in all. Anodes: 8 kg, and 2 kg bought. 1000 Ah: 63.546 x 3 600 000 /
    (2 x 96485.33212) = 1185.494183 g onto parts and off the anodes. 5.75 of 115 kg were drummed off: 1/20 of it. The
    level is 92 of 95 L: 3 L have evaporated. The analysis says 51.0 +- 0.5 g/L, 4692 +- 46 g, where the books have
    4750 +- 47.5 g: 58 +- 66.122992 g, which shows nothing. The anodes weigh 8.8 kg, where the books have 8814.505817 g.
    """
    books = Books(opening("anodes", mass=kilograms(8), Cu=kilograms(8)), opening("drum"))
    bath = opening("bath", litres(100), mass=kilograms(115), Cu=grams(5000, 50))
    bought = Receipt("anodes", kilograms(2), None, "lot 5", ANODES)
    meter = BathCharge("bath", Measured("1000", "Ah", 3_600_000_000_000))
    month = DaySheet((), (meter,), (), (plating(copper_deposit(), "anodes"),))
    drummed = DrumOff("bath", "drum", mass=kilograms("5.75"))
    handed_over = HandOver("drum", "collection point", kilograms("6.4"))
    level = LevelReading("bath", litres(92), AIR, WATER)
    analysis = Acceptance(UUID(int=9), "bath", "Cu", Figure(51_000_000, 500_000, "titration"))
    weighed = Count("anodes", None, kilograms("8.8"))
    entries = (bath, bought, month, drummed, handed_over, level, analysis, weighed)
    assert posted(*(books.record(event) for event in entries)) == page("""
        Cu          opening   bath         5000 ± 50 g         observed
        gross mass  opening   bath         115000 g            observed
        volume      opening   bath         100000 mL           observed
        gross mass  supplier  anodes       2000 g              observed
        Cu          supplier  anodes       2000 g              computed
        Cu          bath      parts        1185.494183 g       computed
        gross mass  bath      parts        1185.494183 g       computed
        Cu          anodes    bath         1185.494183 g       computed
        gross mass  anodes    bath         1185.494183 g       computed
        Cu          bath      drum         250 ± 2.5 g         computed
        gross mass  bath      drum         5750 g              observed
        volume      bath      drum         5000 mL             computed
        Cu          drum      receiver     250 ± 2.5 g         computed
        gross mass  drum      receiver     5750 g              computed
        volume      drum      receiver     5000 mL             computed
        gross mass  bath      air          2994.6 g            computed
        volume      bath      air          3000 mL             computed
        Cu          bath      unaccounted  58 ± 66.122992 g    computed
        Cu          anodes    unaccounted  14.505817 g         computed
        gross mass  anodes    unaccounted  14.505817 g         computed
    """)
    came = {end: -books.went_to(end, "Cu") for end in (OPENING, SUPPLIER)}
    went = {end: books.went_to(end, "Cu") for end in (PARTS, RECEIVER, UNACCOUNTED)}
    assert came == {OPENING: 13 * KG, SUPPLIER: 2 * KG}
    assert went == {PARTS: 1_185_494_183, RECEIVER: 250 * G, UNACCOUNTED: 72_505_817}
    assert sum(came.values()) - sum(went.values()) == 4692 * G + 8800 * G
