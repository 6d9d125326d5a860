"""Mass balances of two lines that were constructed from figures in print. See ``balances``."""

from fractions import Fraction
from uuid import UUID

import pytest
from molmass import Formula

from chemicals.books.events import (
    AIR,
    PARTS,
    SAMPLE,
    SUPPLIER,
    Count,
    Deposit,
    Figure,
    Ingredient,
    LevelReading,
    MakeUp,
    Measured,
    Receipt,
    Recipe,
    Sample,
    Share,
    TopUp,
)
from chemicals.books.fold.plating import faraday_charge
from tests.books.words import KG, NO_ROOM, WATER, G, L, kilograms, litres, opening
from tests.published.balances import GAL, Line, analysed, assert_closes, figures, many_dipped, plated

# a week of an acid copper line


COPPER = Deposit("Cu", "63.546", 2, "96485.33212", Figure(991_425, 0, "215.04 of 216.9"))
SULFATE = Recipe(UUID(int=3), 1, "copper sulfate", solid=True, complete=True, density=None,
                 shares=(Share("Cu", 254_512_833, 0, "kg"),))  # fmt: skip
"""3.8176925 kg in 15.0 kg, as the case has it."""
IN_THE_JAR = kilograms(25)
COPPER_AT_THE_END = 55_072_061
"""220.28824246 kg in 4000 L, in ug/L."""


def a_week_of_copper(left_out: str = "") -> Line:
    """Return 4000 L at 55.0 g/L: 1000 loads drag out 97.79 mL each, a sample, the deposit, then it is set right.

    The case reckons all drag-out and the sample at 55.0 g/L: they come first.
    """
    line = Line(
        opening("bath", litres(4000), Cu=kilograms(220)),
        opening("rinse", litres(500)),
        opening("anodes", mass=kilograms(400), Cu=kilograms(400)),
        opening("jar", mass=IN_THE_JAR, Cu=Measured("", "ug", 25 * 254_512_833)),
        many_dipped(1000, ("bath", "rinse"), 97_790_000, 0),
        Sample("bath", SAMPLE, litres("0.2")),
    )
    line.record(plated(COPPER, "215.04", "216.9", anode=None if left_out == "anodes" else "anodes"))
    if left_out not in ("receipt", "receipt and addition"):
        line.record(Receipt("jar", kilograms(15), None, "lot", SULFATE))
    scooped = () if left_out in ("addition", "receipt and addition") else (Ingredient("jar", kilograms(15), None),)
    line.record(MakeUp("bath", scooped, litres(4000), WATER, (NO_ROOM,) * len(scooped)))
    line.record(analysed("bath", "Cu", COPPER_AT_THE_END))
    line.record(Count("jar", None, IN_THE_JAR))
    return line


def test_the_figures_of_the_copper_line() -> None:
    """The salt's share from a second library; 181 392.7 Ah for the deposit; 97.790 L from the gallons in print."""
    sulfate = {item.symbol: item.fraction for item in Formula("CuSO4.5H2O").composition().values()}
    assert SULFATE.shares[0].amount / KG == pytest.approx(sulfate["Cu"], rel=1e-4)
    assert faraday_charge(215_040_000_000, COPPER) / 3.6e9 == pytest.approx(181_392.7, abs=0.05)
    square_feet = Fraction("92.90304")  # in a hundredth of 1000 ft2, in m2: exact by definition
    assert float(2 * Fraction(GAL, L) / square_feet * 1200) == pytest.approx(97.790, abs=5e-4)


def test_a_week_of_the_copper_line() -> None:
    line = a_week_of_copper()
    flows = line.flows
    assert_closes(
        "copper line",
        within=2000,  # half a microgram per litre of 4000
        came=[flows["Cu", "anodes", "bath"], flows["Cu", SUPPLIER, "jar"]],
        went=[flows["Cu", "bath", PARTS], flows["Cu", "bath", "rinse"], flows["Cu", "bath", SAMPLE]],
        more=[line.more("Cu", "bath")],
    )
    assert abs(line.found("Cu", "bath")) <= 2000
    assert line.found("Cu", "jar") == 0


@pytest.mark.parametrize(
    ("left_out", "vessel", "stream"),
    [
        ("anodes", "bath", "anodes dissolved"),
        ("receipt and addition", "bath", "15.0 kg of copper sulfate pentahydrate"),
        ("receipt", "jar", "15.0 kg of copper sulfate pentahydrate"),
    ],
)
def test_copper_that_nobody_wrote_down_is_unaccounted(left_out: str, vessel: str, stream: str) -> None:
    """Found in the bath by its analysis, or in the jar by its count: exactly what is missing among the entries."""
    whole, gappy = a_week_of_copper(), a_week_of_copper(left_out)
    found = {name: gappy.found("Cu", name) - whole.found("Cu", name) for name in ("bath", "jar")}
    expected = {"anodes": 216_900_000_000}.get(left_out, 15 * 254_512_833)
    assert found == {"bath": 0, "jar": 0} | {vessel: expected}
    assert abs(expected - figures("copper line", "came")[stream]) <= 5  # the case has seven decimals


def test_an_addition_that_nobody_wrote_down_is_missing_in_the_jar_and_found_in_the_bath() -> None:
    """As much as 15.0 kg hold is missing here and found there: of the whole workshop nothing is unaccounted."""
    whole, gappy = a_week_of_copper(), a_week_of_copper("addition")
    found = [gappy.found("Cu", name) - whole.found("Cu", name) for name in ("bath", "jar")]
    assert found == [3_817_692_495, -3_817_692_495]


# a week of a nickel line with a static drag-out tank


NICKEL = Deposit("Ni", "58.6934", 2, "96485.33212", Figure(996_734, 0, "106.8 of 107.15"))
PER_RACK = round(Fraction("26.0773") * L / 800)
"""26.0773 L in all: 32.596625 mL for each of 800 racks of a square metre."""
ENDS = {"bath": (litres(3000), 71_694_956), "tank": (litres(400), 3_062_171)}
"""215.08487 kg in 3000 L and 1.2248682 kg in 400 L, in ug/L."""


def a_week_of_nickel(left_out: str = "") -> Line:
    """Return 3000 L at 72 g/L and 600 L of water: 800 racks, the deposit, 200 L evaporate and are topped up."""
    line = Line(
        opening("bath", litres(3000), Ni=kilograms(216)),
        opening("tank", litres(600)),
        opening("rinse", litres(100)),
        opening("anodes", mass=kilograms(200), Ni=kilograms(200)),
        many_dipped(800, ("bath", "tank", "rinse"), PER_RACK, PER_RACK, 0),
        plated(NICKEL, "106.8", "107.15", anode=None if left_out == "anodes" else "anodes"),
        LevelReading("bath", litres(2800), AIR, WATER),
    )
    if left_out != "return":
        line.record(TopUp("bath", "tank", litres(200), None, WATER))
    for vessel, (level, concentration) in ENDS.items():
        line.record(LevelReading(vessel, level, AIR, WATER))
        line.record(analysed(vessel, "Ni", concentration))
    return line


def test_a_week_of_the_nickel_line() -> None:
    """A load leaves a part of a microgram behind; the drag-out is printed with six digits, the analysis is rounded."""
    line = a_week_of_nickel()
    flows = line.flows
    assert_closes(
        "nickel line",
        within=4000,
        came=[flows["Ni", "anodes", "bath"]],
        went=[flows["Ni", "bath", PARTS], flows["Ni", "tank", "rinse"]],
        more=[line.more("Ni", "bath"), line.more("Ni", "tank")],
    )
    assert flows["Ni", "tank", "bath"] == pytest.approx(612_430_000, abs=10_000)  # 0.61243 kg, constructed
    assert abs(line.found("Ni", "bath")) <= 4000
    assert abs(line.found("Ni", "tank")) <= 4000


def test_the_drag_out_tank_follows_the_static_rinse() -> None:
    """72 g/L x (1 - (600/600.0325966)^800) = 3.0622 g/L (constructed, and the strict series)."""
    line = a_week_of_nickel("return")
    brought, carried = line.flows["Ni", "bath", "tank"], line.flows["Ni", "tank", "rinse"]
    assert (brought - carried) / 600 / G == pytest.approx(3.0622, abs=5e-5)
    stays = 600 / (600 + PER_RACK / L)
    assert (brought - carried) / 600 / G == pytest.approx(72 * (1 - stays**800), rel=1e-6)


def test_nickel_from_anodes_that_nobody_wrote_down_is_unaccounted() -> None:
    whole, gappy = a_week_of_nickel(), a_week_of_nickel("anodes")
    found = {name: gappy.found("Ni", name) - whole.found("Ni", name) for name in ("bath", "tank")}
    assert found == {"bath": figures("nickel line", "came")["anodes dissolved"], "tank": 0}
    assert found["bath"] == 107_150_000_000


def test_a_top_up_that_nobody_wrote_down_is_missing_here_and_found_there() -> None:
    """The books have too little in the bath by what they have too much in the drag-out tank: nothing is lost."""
    whole, gappy = a_week_of_nickel(), a_week_of_nickel("return")
    returned = whole.flows["Ni", "tank", "bath"]
    found = [gappy.found("Ni", name) - whole.found("Ni", name) for name in ("bath", "tank")]
    assert found == [returned, -returned]
