"""Mass balances in print, told as entries; then something that came is left out. See ``balances``."""

from fractions import Fraction
from uuid import UUID

from chemicals.books.events import (
    AIR,
    SEWER,
    SUPPLIER,
    WATER_SUPPLY,
    Discharge,
    Event,
    Ingredient,
    LevelReading,
    MakeUp,
    Measured,
    Receipt,
    Recipe,
    Share,
    TopUp,
)
from tests.books.words import KG, ML, NO_ROOM, WATER, L, kilograms, litres, opening
from tests.published.balances import CASES, GAL, LB, ROWS, Line, analysed, assert_closes, dipped, figures, many_dipped


def test_every_case_is_told_and_has_a_source() -> None:
    assert CASES == ("running rinse", "zinc bath", "copper line", "nickel line")
    assert all(row["source"] for row in ROWS)
    assert [row["read"] for row in ROWS] == ["read"] * 8 + ["constructed"] * 13


# a running rinse: textbook, grams per minute


RINSE = (("bath", "rinse"), ("rinse", "next"))
DRAG = 50 * ML
OVERFLOW = litres(150)


def a_minute(*, drag_in: bool = True, analysis: bool = False) -> list[Event]:
    """150 L of water and 0.05 L of drag-in mix in the rinse; as much overflows and is dragged on."""
    events: list[Event] = [TopUp("rinse", WATER_SUPPLY, OVERFLOW, None, WATER)]
    events += [dipped(RINSE[0], DRAG, 0)] if drag_in else []
    if analysis:
        events += [LevelReading("rinse", litres("450.05"), AIR, WATER), analysed("rinse", "Ni", 28_324)]
    return [*events, dipped(RINSE[1], DRAG, 0), Discharge("rinse", SEWER, OVERFLOW)]


def a_running_rinse(nickel_ug: int) -> Line:
    """Return a bath of 85 g/L and a rinse of 300 L that holds so much nickel."""
    return Line(
        opening("bath", litres(1000), Ni=kilograms(85)),
        opening("rinse", litres(300), Ni=Measured("", "ug", nickel_ug)),
        opening("next", litres(300)),
    )


def assert_a_minute_closes(line: Line, within: int) -> None:
    flows = line.flows
    went = [flows["Ni", "rinse", SEWER], flows["Ni", "rinse", "next"]]
    assert_closes("running rinse", within, came=[flows["Ni", "bath", "rinse"]], went=went)


def test_a_running_rinse_finds_its_steady_state() -> None:
    """From clean water, after an hour: 28.324 mg/L, and as much leaves in a minute as is dragged in."""
    line = a_running_rinse(0)
    for _ in range(60):
        for event in a_minute():
            line.record(event)
    held = line.holds("rinse", "Ni")
    assert held is not None
    assert round(held / 300) == 28_324  # ug/L
    line.flows.clear()
    for event in a_minute():
        line.record(event)
    assert line.holds("rinse", "Ni") == held
    assert_a_minute_closes(line, within=2)


STEADY = 12_747_216 - 4_250_000
"""28.324 mg/L in 450.05 L, less what a minute drags in: what 300 L hold before the minute."""


def test_a_minute_of_the_running_rinse_with_its_analysis() -> None:
    """28.324 mg/L is printed with five digits: 150.05 L of it are 4.250016 g, 16 ug more than came."""
    line = a_running_rinse(STEADY)
    for event in a_minute(analysis=True):
        line.record(event)
    assert line.found("Ni", "rinse") == 0
    assert_a_minute_closes(line, within=17)


def test_a_drag_in_that_nobody_wrote_down_is_unaccounted() -> None:
    """0.05 L at 85 g/L: the analysis finds 4.25 g that no entry explains."""
    line = a_running_rinse(STEADY)
    for event in a_minute(drag_in=False, analysis=True):
        line.record(event)
    assert line.found("Ni", "rinse") == figures("running rinse", "came")["drag-in 0.05 L/min at 85 g/L"] == 4_250_000


# an alkaline zinc bath: what leaves it is known from what has to be added, pounds per month


CAUSTIC = Recipe(UUID(int=2), 1, "caustic soda", solid=True, complete=True, density=None,
                 shares=(Share("NaOH", KG, 0, "kg"),))  # fmt: skip
FULL = Measured("8000", "gal", 8000 * GAL)


def a_month_of_zinc(*, additions: bool = True) -> Line:
    """Return 8000 gal at 20 oz/gal, of which 400 loads drag out 2 gal each; then it is set right."""
    line = Line(
        opening("bath", FULL, NaOH=Measured("10000", "lb", 10_000 * LB)),
        opening("rinse", litres(1)),
        opening("drum"),
        many_dipped(400, ("bath", "rinse"), 2 * GAL, 0),
    )
    caustic = Measured("1000", "lb", 1000 * LB)
    if additions:
        line.record(Receipt("drum", caustic, None, "lot", CAUSTIC))
    added = (Ingredient("drum", caustic, None),) if additions else ()
    line.record(MakeUp("bath", added, FULL, WATER, (NO_ROOM,) * len(added)))
    line.record(analysed("bath", "NaOH", TWENTY_OZ_PER_GAL))
    return line


TWENTY_OZ_PER_GAL = round(Fraction(20 * LB, 16) / Fraction(GAL, L))
"""149 782 870 ug/L: an analysis is rounded to a microgram per litre."""
ROUNDING = 8000 * GAL // (2 * L)
"""Half a microgram for each of 30 283 litres."""


def test_caustic_that_is_lost_only_by_drag_out() -> None:
    """800 gal at 20 oz/gal are 16 000 oz, 1000 lb: as much as was added. The analysis is rounded, to 15 mg in 4.5 t."""
    line = a_month_of_zinc()
    assert line.flows["NaOH", "bath", "rinse"] == 1000 * LB
    found = line.found("NaOH", "bath")
    assert abs(found) <= ROUNDING
    came, went = line.flows["NaOH", SUPPLIER, "drum"], line.flows["NaOH", "bath", "rinse"]
    assert_closes("zinc bath", ROUNDING, came=[came], went=[went], more=[found])


def test_caustic_that_nobody_wrote_down_is_unaccounted() -> None:
    """Beside the rounding of the analysis: 1000 lb, to the microgram."""
    found = a_month_of_zinc(additions=False).found("NaOH", "bath") - a_month_of_zinc().found("NaOH", "bath")
    assert found == figures("zinc bath", "came")["additions"] == 453_592_370_000
