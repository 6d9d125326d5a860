"""The table of calculations that a user may want by itself: CALCULATIONS, and `calculate` to run one by its name."""

from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal
from typing import Annotated, Any, Final, cast

from chemicals.science import decision, faraday, formula, rinse
from chemicals.science.calculation import (
    Calculation,
    CalculationErrors,
    ExactlyGiven,
    Output,
    choice,
    integer,
    number,
    quantity,
    refuse,
    text,
)

__all__ = ["CALCULATIONS", "Calculation", "CalculationErrors", "calculate"]

_BASIS: Final = Output("Basis", "The law or published source used.")


def _element(typed: str) -> str:
    formula.atomic_weight(typed)
    return typed


@dataclass(frozen=True)
class CompositionInput:
    """A substance."""

    formula: Annotated[
        formula.Formula,
        text("Formula", "The neutral substance; crystal water after a dot.", "CuSO4.5H2O", formula.parse_formula),
    ]


@dataclass(frozen=True)
class CompositionOutput:
    """What the substance is made of."""

    molar_mass_g_mol: Annotated[Decimal, Output("Molar mass", "Mass of one mole.", "g/mol")]
    mass_fractions: Annotated[dict[str, Decimal], Output("Mass fractions", "Grams of each element per gram.")]
    basis: Annotated[str, _BASIS]


def _composition(given: CompositionInput) -> CompositionOutput:
    return CompositionOutput(given.formula.molar_mass, given.formula.mass_fractions, formula.BASIS)


@dataclass(frozen=True)
class FaradayInput:
    """A deposit of which two of current, time and mass are known."""

    element: Annotated[str, text("Metal", "Its symbol.", "Cu", _element)]
    valence: Annotated[
        int,
        integer("Valence", "Electrons per atom: 2 for acid copper.", "2", minimum=1, maximum=faraday.MOST_ELECTRONS),
    ]
    current: Annotated[
        float | None, quantity("current", "A", "Current", "A bare number is in A.", "0.44 A", optional=True)
    ]
    time: Annotated[float | None, quantity("time", "s", "Time", "A bare number is in s.", "4 h", optional=True)]
    mass: Annotated[
        float | None, quantity("mass", "g", "Mass of the deposit", "A bare number is in g.", "2.1 g", optional=True)
    ]
    efficiency: Annotated[
        float,
        quantity(
            "fraction", "1", "Cathode efficiency", "Share of the charge that deposits metal.", "0.95",
            maximum=1, default="1.0",
        ),
    ]  # fmt: skip
    area: Annotated[
        float | None,
        quantity(
            "area", "dm2", "Area", "A bare number is in dm2. Without it there is no thickness.", "0.44 dm2",
            optional=True,
        ),
    ]  # fmt: skip
    density: Annotated[
        float | None,
        quantity(
            "density", "g/cm3", "Density of the deposit", "A bare number is in g/cm3. Left out: the handbook's.",
            "8.96 g/cm3", optional=True,
        ),
    ]  # fmt: skip


@dataclass(frozen=True)
class FaradayOutput:
    """The whole deposit; what needs the area is null without it."""

    charge_Ah: Annotated[float, Output("Charge", "Current times time, losses included.", "Ah")]  # noqa: N815
    current_A: Annotated[float, Output("Current", "As given, or calculated.", "A")]  # noqa: N815
    time_s: Annotated[float, Output("Time", "As given, or calculated.", "s")]
    mass_g: Annotated[float, Output("Mass of the deposit", "As given, or calculated.", "g")]
    thickness_um: Annotated[float | None, Output("Mean thickness", "Mass over density and area.", "µm")]
    current_density_A_dm2: Annotated[float | None, Output("Current density", "Current over area.", "A/dm²")]  # noqa: N815
    rate_um_per_h: Annotated[float | None, Output("Rate", "Mean growth.", "µm/h")]
    basis: Annotated[str, _BASIS]


def _faraday(given: FaradayInput) -> FaradayOutput:
    current, time, mass = _complete(given)
    charge = current * time / faraday.C_PER_AH
    if given.area is None:
        return FaradayOutput(charge, current, time, mass, None, None, None, faraday.BASIS)
    density, source = given.density, "as given"
    if density is None:
        density, source = faraday.handbook_density(given.element), faraday.DENSITY_BASIS
    if density is None:
        raise refuse("density", f"The density of {given.element} is not in the table: write it, for example 10 g/cm3.")
    thickness = faraday.thickness_um(mass, given.area, density)
    return FaradayOutput(
        charge_Ah=charge,
        current_A=current,
        time_s=time,
        mass_g=mass,
        thickness_um=thickness,
        current_density_A_dm2=current / given.area,
        rate_um_per_h=thickness / (time / 3600),
        basis=f"{faraday.BASIS}; density {density:g} g/cm3 {source}",
    )


def _complete(given: FaradayInput) -> tuple[float, float, float]:
    """Current, time and mass: the two that are known, and the third from Faraday's law."""
    if given.mass is None:
        current, time = cast("float", given.current), cast("float", given.time)
        charge = current * time / faraday.C_PER_AH
        return current, time, faraday.deposited_mass_g(given.element, given.valence, charge, given.efficiency)
    charge = faraday.charge_needed_ah(given.element, given.valence, given.mass, given.efficiency) * faraday.C_PER_AH
    if given.time is None:
        current = cast("float", given.current)
        return current, charge / current, given.mass
    return charge / given.time, given.time, given.mass


@dataclass(frozen=True)
class StaticRinseInput:
    """A rinse tank without flow, and either the number of dips or the concentration to reach."""

    volume: Annotated[float, quantity("volume", "L", "Volume of the rinse", "A bare number is in L.", "20 L")]
    drag_out_per_dip: Annotated[
        float,
        quantity(
            "volume", "mL", "Drag-out per dip", "What a dip brings from the bath. A bare number is in mL.", "10 mL"
        ),
    ]
    bath: Annotated[
        float,
        quantity(
            "concentration", "g/L", "Concentration of the bath", "A bare number is in g/L.", "60 g/L", above_zero=False
        ),
    ]
    start: Annotated[
        float,
        quantity(
            "concentration", "g/L", "Concentration at the start", "Of the rinse. A bare number is in g/L.", "0 g/L",
            above_zero=False, default="0 g/L",
        ),
    ]  # fmt: skip
    dips: Annotated[
        int | None,
        integer("Dips", "How many parts or loads were rinsed.", "50", minimum=0, maximum=10**9, optional=True),
    ]
    target: Annotated[
        float | None,
        quantity(
            "concentration", "g/L", "Concentration to reach", "In place of the dips. A bare number is in g/L.", "2 g/L",
            above_zero=False, optional=True,
        ),
    ]  # fmt: skip


@dataclass(frozen=True)
class StaticRinseOutput:
    """The rinse after its dips."""

    concentration_g_per_L: Annotated[float, Output("Concentration", "Of the rinse at the end.", "g/L")]  # noqa: N815
    dips: Annotated[int, Output("Dips", "As given, or the first that reaches the target.")]
    metal_g: Annotated[float, Output("In the rinse", "Concentration times volume.", "g")]
    basis: Annotated[str, _BASIS]


def _static_rinse(given: StaticRinseInput) -> StaticRinseOutput:
    drag_out = given.drag_out_per_dip / 1000
    dips = given.dips
    if dips is None:
        dips = rinse.dips_to_reach(given.volume, drag_out, cast("float", given.target), given.bath, given.start)
    if dips is None:
        raise refuse("target", "No number of dips gets there: write a target between the start and the bath.")
    concentration = rinse.static_concentration(given.volume, drag_out, dips, given.bath, given.start)
    return StaticRinseOutput(concentration, dips, concentration * given.volume, rinse.BASIS)


@dataclass(frozen=True)
class LimitInput:
    """A value, its standard uncertainty and its limit, all in one unit."""

    value: Annotated[float, number("Value", "The estimate, a bare number.", "1.9")]
    sd: Annotated[float, number("Standard uncertainty", "In the unit of the value; 0 if exact.", "0.1", minimum=0)]
    limit: Annotated[float, number("Limit", "In the unit of the value.", "2.07")]
    direction: Annotated[
        decision.Direction,
        choice(
            "Direction", "below: must not exceed the limit; above: must not fall below it.", decision.DIRECTIONS,
            default="below",
        ),
    ]  # fmt: skip
    risk: Annotated[
        float,
        quantity(
            "fraction", "1", "Risk", "Probability of a wrong verdict that is accepted.", "0.05",
            maximum=0.5, default="0.05",
        ),
    ]  # fmt: skip
    distribution: Annotated[
        decision.Distribution,
        choice("Distribution", "Of what the true value may be.", decision.DISTRIBUTIONS, default="normal"),
    ]


@dataclass(frozen=True)
class LimitOutput:
    """The verdict."""

    probability_over: Annotated[float, Output("Probability over the limit", "That the true value exceeds it.")]
    verdict: Annotated[decision.Verdict, Output("Verdict", "within, outside, or undecided: have it analysed.")]
    guard_band: Annotated[float, Output("Guard band", "How far from the limit the verdict turns to within.")]
    basis: Annotated[str, _BASIS]


def _limit(given: LimitInput) -> LimitOutput:
    errors = [
        refuse(name, "A lognormal value is more than 0: write a positive number or another distribution.").errors[0]
        for name, value in (("value", given.value), ("limit", given.limit))
        if given.distribution == "lognormal" and value <= 0
    ]
    if errors:
        raise CalculationErrors(errors)
    found = decision.decide(
        given.value, given.sd, given.limit, direction=given.direction, risk=given.risk, distribution=given.distribution
    )
    basis = f"{decision.BASIS}, {given.distribution} distribution"
    return LimitOutput(found.probability_over, found.verdict, found.guard_band, basis)


_TABLE: Final = (
    Calculation(
        "composition", "Composition", "Molar mass and mass fractions of a substance.",
        CompositionInput, CompositionOutput, _composition, {"formula": "CuSO4.5H2O"},
    ),
    Calculation(
        "faraday", "Faraday's law", "Charge, mass, thickness and rate of a deposit.",
        FaradayInput, FaradayOutput, _faraday,
        {"element": "Cu", "valence": 2, "current": "0.44 A", "time": "4 h", "area": "0.44 dm2"},
        (ExactlyGiven(("current", "time", "mass"), 2),),
    ),
    Calculation(
        "static-rinse", "Static rinse", "What a rinse without flow holds after so many dips.",
        StaticRinseInput, StaticRinseOutput, _static_rinse,
        {"volume": "20 L", "drag_out_per_dip": "10 mL", "bath": "60 g/L", "dips": 50},
        (ExactlyGiven(("dips", "target"), 1),),
    ),
    Calculation(
        "limit", "Limit", "Is a value within its limit, at a stated risk?",
        LimitInput, LimitOutput, _limit, {"value": 1.9, "sd": 0.1, "limit": 2.07},
    ),
)  # fmt: skip

CALCULATIONS: Final[Mapping[str, Calculation]] = {calculation.name: calculation for calculation in _TABLE}


def calculate(name: str, data: Any) -> dict[str, Any]:
    """Run the calculation of this name on the fields sent, and give its results ready for JSON.

    Raises CalculationErrors: an unknown name as field `name`, anything but an object as field `input`.
    """
    if name not in CALCULATIONS:
        raise refuse("name", f'"{name}" is no calculation: write one of {", ".join(CALCULATIONS)}.')
    if not isinstance(data, Mapping):
        raise refuse("input", "This is no JSON object: write the fields by name between braces.")
    return CALCULATIONS[name].run(data)
