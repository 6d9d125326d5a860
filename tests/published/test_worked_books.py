"""Worked examples of double entry: what one writes down at the bench, and each line that follows in the books.

Every line takes from one end what it gives to the other. Figures were worked out by hand, as each story tells; figures
of chemistry come from the sources it names. Columns: component, from, to, how much with its doubt, how it is known.
"""

import csv
from pathlib import Path
from uuid import UUID

import pytest
from molmass import Formula

from chemicals.books.events import (
    ACID,
    AIR,
    GROSS_MASS,
    VOLUME,
    Acceptance,
    DaySheet,
    Deposit,
    DrumOff,
    Figure,
    Filter,
    HandOver,
    Ingredient,
    LevelReading,
    MakeUp,
    Measured,
    Move,
    Racks,
    Receipt,
    Recipe,
    Run,
    Share,
    Strip,
    TopUp,
)
from chemicals.books.events import BathCharge as Charge
from tests.books.words import (
    KG,
    ML,
    Books,
    G,
    L,
    copper_deposit,
    coulombs,
    grams,
    kilograms,
    litres,
    made,
    opening,
    plating,
    step,
)
from tests.published.pages import page, posted

FARADAY = 96485.33212
"""Coulombs per mole (CODATA 2018, exact)."""
DATA = Path(__file__).parent / "data"
WATER = Figure(998_200, 0, "water at 20 °C, CRC Handbook of Chemistry and Physics")
SULFATE = Recipe(UUID(int=1), 1, "copper sulfate pentahydrate", solid=True, complete=True, density=None,
                 shares=(Share("Cu", 254_500_000, 0, "kg"),))  # fmt: skip
SULFURIC = Recipe(UUID(int=2), 1, "sulfuric acid 96 %", solid=False, complete=True,
                  density=Figure(1_840_000, 0, "label"), shares=(Share(ACID, 36_020_000_000, 0, "L"),))  # fmt: skip
SWELLING = Figure(380_000_000, 0, "0.38 L for each kilogram")


def test_salt_and_acid_are_bought_and_a_bath_is_made_up() -> None:
    """A jar of 5.000 +- 0.005 kg of the pentahydrate and a litre of 96 % sulfuric acid (1.84 g/mL) come.

    Copper: 254.5 g/kg (molmass: 63.546 / 249.685), so 1272.5 +- 1.2725 g. Acid: 1840 g x 0.96 / 98.078 g/mol (molmass)
    x 2 = 36.02 mol.

    2 kg of the salt and 0.3 L of the acid go into the tank, water up to 10.00 +- 0.05 L. Copper: 2/5 of it, 509 g, with
    2/5 of its doubt and that of the jar's weight, 0.509 g each: 0.719834... Swelling: 2 x 0.38 L. Acid: 10.806 mol in
    552 g. Water: 10 000 - 760 - 300 = 8940 mL, x 0.9982 = 8923.908 g, 50 mL weigh 49.91 g.
    """
    assert SULFATE.shares[0].amount / KG == pytest.approx(
        Formula("Cu").mass / Formula("CuSO4.5H2O").mass, rel=1e-4
    )  # fmt: skip
    assert SULFURIC.shares[0].amount / 1e9 == pytest.approx(2 * 1840 * 0.96 / Formula("H2SO4").mass, rel=1e-4)
    books = Books(opening("tank"))
    jar = books.record(Receipt("jar", kilograms(5, "0.005"), None, "lot 7", SULFATE))
    bottle = books.record(Receipt("bottle", None, litres(1), "lot 3", SULFURIC))
    assert posted(jar, bottle) == page("""
        gross mass  supplier  jar     5000 ± 5 g         observed
        Cu          supplier  jar     1272.5 ± 1.2725 g  computed
        gross mass  supplier  bottle  1840 g             computed
        volume      supplier  bottle  1000 mL            observed
        acid        supplier  bottle  36020 mmol         computed
    """)
    poured = (Ingredient("jar", kilograms(2), None), Ingredient("bottle", None, litres("0.3")))
    bath = books.record(MakeUp("tank", poured, litres(10, "0.05"), WATER, (SWELLING, Figure(0, 0, "a liquid"))))
    assert posted(bath) == page("""
        Cu          jar           tank  509 ± 0.719835 g    computed
        gross mass  jar           tank  2000 g              observed
        volume      reaction      tank  760 mL              assumed
        acid        bottle        tank  10806 mmol          computed
        gross mass  bottle        tank  552 g               computed
        volume      bottle        tank  300 mL              observed
        volume      water supply  tank  8940 ± 50 mL        computed
        gross mass  water supply  tank  8923.908 ± 49.91 g  computed
    """)
    assert (books.holds("tank", VOLUME), books.holds("jar", GROSS_MASS)) == (10 * L, 3 * KG)


def test_a_bath_that_was_made_up_is_as_dense_as_the_table_says() -> None:
    """2 kg of the pentahydrate in 10 L: 2000 g and 9240 mL of water, 9223.368 g: 1.1223 g/mL.

    It is 1278.5 g of CuSO4 (molmass: 159.609 / 249.685) in 11 223 g, 11.39 %. In print: 1.107 at 10 % (CRC handbook
    data), 1.1314 at 12 % (Laliberté 2009), between them 1.1240 (data/solution_density.csv); 0.2 % is the doubt of both.
    """
    books = Books(opening("tank"), Receipt("jar", kilograms(5), None, "lot 7", SULFATE))
    books.record(MakeUp("tank", (Ingredient("jar", kilograms(2), None),), litres(10), WATER, (SWELLING,)))
    mass = books.holds("tank", GROSS_MASS)
    assert mass == 11_223_368_000
    share = 2 * KG * Formula("CuSO4").mass / Formula("CuSO4.5H2O").mass / mass
    lines = csv.DictReader((DATA / "solution_density.csv").read_text(encoding="utf-8").splitlines())
    table = {
        row["mass_percent"]: float(row["density_g_cm3"])
        for row in lines
        if row["formula"] == "CuSO4" and row["read"] != "memory"
    }
    between = table["10"] + (table["12"] - table["10"]) * (share - 0.10) / 0.02
    assert mass / (10 * L) == pytest.approx(between, rel=2e-3)


def a_line() -> Books:
    """Return 10 L of 1.15 g/mL with 509 g of copper, 2 kg of anodes, a drag-out tank of 2 L and a rinse of 20 L."""
    return Books(
        opening("bath", litres(10), mass=kilograms("11.5"), Cu=grams(509)),
        opening("anodes", mass=kilograms(2), Cu=kilograms(2)),
        opening("saver", litres(2)),
        opening("rinse", litres(20)),
    )


def through(*steps: tuple[str, int], **figures: Measured | None) -> Run:
    """Return a load of knobs that copper anodes plate at full efficiency, and what it drags out in mL."""
    route = [step(tank, drags) for tank, drags in steps]
    seen = {name: figures.get(name) for name in ("charge", "current", "time", "weight_before", "weight_after")}
    return Run(
        "12 knobs", tuple(one.tank for one in route), **seen,  # type: ignore[arg-type]  # none of them is an instrument
        plating=plating(copper_deposit(), "anodes"),
        rack="small hooks", drag_out=tuple(one.drag_out for one in route),
    )  # fmt: skip


def test_a_load_is_weighed_plated_and_rinsed() -> None:
    """5.60 +- 0.03 g before, 7.70 +- 0.04 g after: 2.10 +- 0.05 g on the knobs; the anodes lost as much.

    5 mL of the bath's 10 000: 509 g / 2000 = 0.2545 g of copper (and of the bath's new doubt, sqrt(2) x 0.05 g,
    35.4 ug), 5.75 g in all. Out of the drag-out tank 5 of 2005 mL: 254 500 ug x 5/2005 = 634 ug of copper, and
    2005.75 g x 5/2005 = 5.001870 g. Out of the rinse 5 of 20 005 mL: 0.16 ug of copper, which is none, and
    20 005.00187 g x 5/20 005 = 5.000000 g.
    """
    books = a_line()
    weighed = through(
        ("bath", 5), ("saver", 5), ("rinse", 5),
        weight_before=grams("5.60", "0.03"), weight_after=grams("7.70", "0.04"),
    )  # fmt: skip
    assert posted(books.record(weighed)) == page("""
        Cu          bath    parts  2.1 ± 0.05 g            observed
        gross mass  bath    parts  2.1 ± 0.05 g            observed
        Cu          anodes  bath   2.1 ± 0.05 g            assumed
        gross mass  anodes  bath   2.1 ± 0.05 g            assumed
        Cu          bath    saver  0.2545 ± 0.000036 g     assumed
        gross mass  bath    saver  5.75 ± 0.000036 g       assumed
        volume      bath    saver  5 mL                    assumed
        Cu          saver   rinse  0.000634 ± 0.000001 g   assumed
        gross mass  saver   rinse  5.00187 ± 0.000001 g    assumed
        volume      saver   rinse  5 mL                    assumed
        gross mass  rinse   parts  5 ± 0.000001 g          assumed
        volume      rinse   parts  5 mL                    assumed
    """)
    assert books.holds("bath", VOLUME) == 9995 * ML


def test_a_day_of_loads_then_topped_up_from_the_drag_out_tank() -> None:
    """3 Ah and three loads, of which each drags 10 mL of the bath into 1990 mL of the drag-out tank, and 10 mL on.

    Charge: 63.546 x 10 800 C / (2 x 96485.33212 C/mol) = 3.556483 g; tables have 1.186 g/Ah (data/
    electrochemical_equivalents.csv). The anodes give as much.

    Of 50 g/L each load brings 0.5 g, and takes 10/2000 of what is then there: 2500 ug; (497 500 + 500 000)/200 =
    4987 ug; (992 513 + 500 000)/200 = 7462 ug; together 14 949 ug. Masses: 11 g each; 10.005 + 10.009975 + 10.014925 =
    30.0299 g.

    By the evening the level is 9.7 L: 270 mL have evaporated, 269.514 g. 0.3 of the 1.99 L of the drag-out tank fill it
    up: 1 485 051 ug x 300/1990 = 223 877 ug, 1992.9701 g x 300/1990 = 300.447753 g.
    """
    books = Books(
        opening("bath", litres(10), mass=kilograms(11), Cu=grams(500)),
        opening("anodes", mass=kilograms(2), Cu=kilograms(2)),
        opening("saver", litres("1.99")),
        opening("rinse", litres(20)),
    )
    racks = Racks(("bath", "saver", "rinse"), "small hooks", 3)
    drags = tuple(Figure(drag * ML, 0, "small hooks") for drag in (10, 10, 0))
    by_charge = plating(copper_deposit(), "anodes")
    day = DaySheet((racks,), (Charge("bath", Measured("3", "Ah", 10_800_000_000)),), (drags,), (by_charge,))
    assert posted(books.record(day)) == page("""
        Cu          bath    parts  3.556483 g  computed
        gross mass  bath    parts  3.556483 g  computed
        Cu          anodes  bath   3.556483 g  computed
        gross mass  anodes  bath   3.556483 g  computed
        Cu          bath    saver  1.5 g       assumed
        gross mass  bath    saver  33 g        assumed
        volume      bath    saver  30 mL       assumed
        Cu          saver   rinse  0.014949 g  assumed
        gross mass  saver   rinse  30.0299 g   assumed
        volume      saver   rinse  30 mL       assumed
    """)
    lines = csv.DictReader((DATA / "electrochemical_equivalents.csv").read_text(encoding="utf-8").splitlines())
    in_print = [float(row["g_per_ah"]) for row in lines if (row["metal"], row["valence"]) == ("Cu", "2")]
    assert in_print == pytest.approx([3.556483 / 3] * len(in_print), rel=1e-3)
    level = books.record(LevelReading("bath", litres("9.7"), AIR, WATER))
    top_up = books.record(TopUp("bath", "saver", litres("0.3"), None, WATER))
    assert posted(level, top_up) == page("""
        gross mass  bath   air   269.514 g     computed
        volume      bath   air   270 mL        computed
        Cu          saver  bath  0.223877 g    computed
        gross mass  saver  bath  300.447753 g  computed
        volume      saver  bath  300 mL        observed
    """)
    assert books.holds("bath", "Cu") == 500 * G - 1_500_000 + 223_877


def test_an_analysis_is_accepted() -> None:
    """Five titrations with EDTA in print: 9.62 +- 0.02 g/L of copper (Hiranuma application data G10, 2019, read).

    The bath stood at 10.00 +- 0.05 L: 96.2 g, +- sqrt((10 x 0.02)^2 + (9.62 x 0.05)^2) = 0.520923 g. The books had
    97.0 +- 0.3 g: 0.8 g are missing, +- sqrt(0.3^2 + 0.520923^2) = 0.601134 g, which shows nothing.
    """
    books = Books(opening("bath", litres(10, "0.05"), Cu=grams(97, "0.3")))
    found = Figure(9_620_000, 20_000, "EDTA, five repeats")
    accepted = books.record(Acceptance(UUID(int=9), "bath", "Cu", found))
    assert posted(accepted) == page("Cu  bath  unaccounted  0.8 ± 0.601134 g  computed")
    assert books.holds("bath", "Cu") == 96_200_000


def test_a_filter_comes_out_and_goes_with_the_waste() -> None:
    """A cartridge of 60 g was bought; it keeps 0.25 of the bath's 10 L (assumed): 287.5 g with 12.725 g of copper.

    The cartridge, then 3.9 of the 9.75 L that are left, 2/5 of 496.275 g of copper and of 11 212.5 g, go into the drum.
    All of it goes to the receiver: 60 + 287.5 + 4485 g. That the drum was 17.5 g heavier is said on the manifest.
    """
    books = a_line()
    books.record(opening("cartridge"))
    books.record(opening("drum"))
    kept, none = Figure(250 * ML, 0, "assumed"), Figure(0, 0, "filters keep no metal")
    found = Filter("bath", "cartridge", grams(60), None, (), kept, none)
    assert posted(books.record(found)) == page("""
        gross mass  supplier  cartridge  60 g      observed
        Cu          bath      cartridge  12.725 g  assumed
        gross mass  bath      cartridge  287.5 g   assumed
        volume      bath      cartridge  250 mL    assumed
    """)
    spent = books.record(Move("cartridge", "drum"))
    bath = books.record(DrumOff("bath", "drum", litres("3.9")))
    gone = books.record(HandOver("drum", "collection point", kilograms("4.85")))
    assert posted(spent, bath, gone) == page("""
        Cu          cartridge  drum      12.725 g   computed
        gross mass  cartridge  drum      347.5 g    computed
        volume      cartridge  drum      250 mL     computed
        Cu          bath       drum      198.51 g   computed
        gross mass  bath       drum      4485 g     computed
        volume      bath       drum      3900 mL    observed
        Cu          drum       receiver  211.235 g  computed
        gross mass  drum       receiver  4832.5 g   computed
        volume      drum       receiver  4150 mL    computed
    """)
    assert books.holds("drum", GROSS_MASS) == 0


GOLD = Deposit("Au", "196.96657", 1, "96485.33212", Figure(1_000_000, 0, "neutral cyanide bath"))
GOLD_SALT = Recipe(UUID(int=3), 1, "potassium gold cyanide", solid=True, complete=True, density=None,
                   shares=(Share("Au", 683_670_000, 0, "kg"),))  # fmt: skip


def test_gold_from_a_salt_onto_parts_and_racks_at_an_inert_anode() -> None:
    """20 g of KAu(CN)2 with 68.367 % of gold (molmass): 13.6734 g; 5 g go into 1 L, 3.41835 g (5 g/L: J. Met. Finish.
    Soc. Japan 21(4) 1970, read).

    0.2 Ah, 720 C: 196.96657 x 720 / 96485.33212 = 1.469819 g of gold, 7.349 g/Ah (in print 7.348 to 7.356, data/
    electrochemical_equivalents.csv). 2 % of it grow on the hooks: 29 396 ug; the parts have 1 440 423 ug.
    Au(CN)2- + e- = Au + 2 CN-: 2 x 720 / 96485.33212 = 14.924548 mmol of cyanide are free again.

    The hooks are stripped back into the bath: 30.000 g before, 29.975 g after.
    """
    assert GOLD_SALT.shares[0].amount / KG == pytest.approx(Formula("Au").mass / Formula("KAu(CN)2").mass, rel=1e-4)
    books = Books(opening("bath", litres(1)), opening("racks"))
    tin = books.record(Receipt("tin", grams(20), None, "lot 1", GOLD_SALT))
    salted = books.record(
        MakeUp("bath", (Ingredient("tin", grams(5), None),), None, WATER, (Figure(0, 0, "too little to matter"),))
    )
    assert posted(tin, salted) == page("""
        gross mass  supplier  tin   20 g       observed
        Au          supplier  tin   13.6734 g  computed
        Au          tin       bath  3.41835 g  computed
        gross mass  tin       bath  5 g        observed
    """)
    freed = made("free cyanide", round(2 * 1e12 / FARADAY))
    figures = plating(GOLD, on_racks=(20_000, 0), conversions=(freed,))
    gilded = Run("a cup", ("bath",), coulombs(720), None, None, None, None, figures, "hooks", (Figure(0, 0, "dry"),))
    assert posted(books.record(gilded)) == page("""
        Au            bath      parts  1.440423 g      computed
        gross mass    bath      parts  1.440423 g      computed
        Au            bath      racks  0.029396 g      assumed
        gross mass    bath      racks  0.029396 g      assumed
        free cyanide  reaction  bath   14.924548 mmol  assumed
    """)
    lines = csv.DictReader((DATA / "electrochemical_equivalents.csv").read_text(encoding="utf-8").splitlines())
    in_print = [float(row["g_per_ah"]) for row in lines if (row["metal"], row["valence"]) == ("Au", "1")]
    assert in_print == pytest.approx([1.469819 / 0.2] * len(in_print), rel=1e-3)
    stripped = books.record(Strip("racks", "bath", "Au", grams("30.000"), grams("29.975")))
    assert posted(stripped) == page("""
        Au          racks  bath  0.025 g  observed
        gross mass  racks  bath  0.025 g  observed
    """)
