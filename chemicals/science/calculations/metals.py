"""The calculations `composition` and `faraday`: what a substance is made of, and what a current deposits."""

from dataclasses import dataclass
from decimal import Decimal
from typing import Annotated, Final, cast

from chemicals.science import faraday, formula
from chemicals.science.calculation import BASIS, Calculation, ExactlyGiven, Output, integer, quantity, refuse, text


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
    basis: Annotated[str, BASIS]


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
    basis: Annotated[str, BASIS]


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


COMPOSITION: Final = Calculation(
    "composition", "Composition", "Molar mass and mass fractions of a substance.",
    CompositionInput, CompositionOutput, _composition, {"formula": "CuSO4.5H2O"},
)  # fmt: skip

FARADAY: Final = Calculation(
    "faraday", "Faraday's law", "Charge, mass, thickness and rate of a deposit.",
    FaradayInput, FaradayOutput, _faraday,
    {"element": "Cu", "valence": 2, "current": "0.44 A", "time": "4 h", "area": "0.44 dm2"},
    (ExactlyGiven(("current", "time", "mass"), 2),),
)  # fmt: skip
