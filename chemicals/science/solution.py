"""Solutions: how much room a dissolved salt or strong acid needs, and the density that follows.

The apparent specific volume of a solute is by how much a kilogram of it swells the water that it dissolves in. For
most salts of the trade it is known (Laliberté 2009):

    v = (w + c2 + c3 t) / ((c0 w + c1) exp(1e-6 (t + c4)^2))      m3/kg, w mass fraction, t in degrees Celsius
    1 / density = w v + (1 - w) / density of water

Crystal water dissolves as water. Of other solids a kilogram is taken to need 0.4 L, uncertain by half of it.
"""

import math
from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache
from typing import Final

from chemicals.science.formula import Formula, FormulaError, parse_formula, split_water
from chemicals.science.tables import read_table

WATER_KG_L: Final = 0.99821  # at 20 degrees Celsius (CRC Handbook of Chemistry and Physics)
TEMPERATURE: Final = 20.0
USUAL_FRACTION: Final = 0.15  # of the mass: about what plating solutions hold of a salt
THIN, STRONG = 0.02, 0.3
"""Between these mass fractions a solution is expected to lie: half the difference is the doubt."""
ASSUMED_L_KG, ASSUMED_SD_L_KG = 0.4, 0.2
ASSUMED: Final = "assumed for a dissolved solid: 0.4 L for each kilogram, uncertain by half of it"
TABLE: Final = "apparent volume of {formula} in water at 20 °C (Laliberté 2009)"


@dataclass(frozen=True)
class Swelling:
    """By how many litres a kilogram swells the water it dissolves in, its standard uncertainty, where that is from."""

    litres: float
    sd: float
    source: str


@dataclass(frozen=True)
class _Solute:
    c0: float
    c1: float
    c2: float
    c3: float
    c4: float
    up_to: float

    def volume(self, fraction: float) -> float:
        """Litres for each kilogram of solute at a mass fraction."""
        w = min(fraction, self.up_to)
        over = w + self.c2 + self.c3 * TEMPERATURE
        return 1000 * over / ((self.c0 * w + self.c1) * math.exp(1e-6 * (TEMPERATURE + self.c4) ** 2))


@cache
def _solutes() -> dict[frozenset[tuple[str, int]], _Solute]:
    figures = ("c0", "c1", "c2", "c3", "c4", "up_to")
    return {
        frozenset(parse_formula(row["formula"]).atoms): _Solute(*(float(row[name]) for name in figures))
        for row in read_table("dissolved")
    }


def _find(formula: Formula) -> _Solute | None:
    return _solutes().get(frozenset(formula.atoms))


def apparent_volume(formula: str, fraction: float = USUAL_FRACTION) -> float | None:
    """Litres that a kilogram of the anhydrous solute needs at a mass fraction; None if it is not in the table."""
    found = _find(split_water(formula)[0])
    return None if found is None else found.volume(fraction)


def density(formula: str, fraction: float) -> float | None:
    """Kilograms per litre at 20 degrees Celsius of a solution with this mass fraction of the anhydrous solute."""
    volume = apparent_volume(formula, fraction)
    return None if volume is None else 1 / (fraction * volume + (1 - fraction) / WATER_KG_L)


def swelling_of(formula: str) -> Swelling:
    """How much a kilogram of the substance, crystal water included, swells the water that it dissolves in."""
    try:
        dry, water = split_water(formula)
    except FormulaError:
        return Swelling(ASSUMED_L_KG, ASSUMED_SD_L_KG, ASSUMED)
    found = _find(dry)
    if found is None:
        return Swelling(ASSUMED_L_KG, ASSUMED_SD_L_KG, ASSUMED)
    wet = water * float(parse_formula("H2O").molar_mass)
    part = float(dry.molar_mass) / (float(dry.molar_mass) + wet)
    doubt = abs(found.volume(STRONG) - found.volume(THIN)) / 2
    litres = part * found.volume(USUAL_FRACTION) + (1 - part) / WATER_KG_L
    return Swelling(litres, part * doubt, TABLE.format(formula=dry.typed))


def swelling_of_mixture(parts: Iterable[tuple[str, float]]) -> Swelling:
    """The same for a kilogram of a product; parts: formula (empty if unknown) -> mass fraction. The rest is unknown."""
    known = [(swelling_of(formula), fraction) for formula, fraction in parts if fraction > 0]
    rest = 1 - sum(fraction for _, fraction in known)
    if rest > 1e-9:
        known.append((Swelling(ASSUMED_L_KG, ASSUMED_SD_L_KG, ASSUMED), rest))
    sources = dict.fromkeys(found.source for found, _ in known)
    return Swelling(
        sum(found.litres * fraction for found, fraction in known),
        math.hypot(*(found.sd * fraction for found, fraction in known)),
        "; ".join(sources),
    )
