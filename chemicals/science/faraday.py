"""Faraday's law of electrolysis: charge, mass, thickness and rate of a deposit.

    m = e Q M / (z F)        thickness = m / (d A)

m grams, e cathode efficiency (share of the charge that deposits), Q coulombs, M grams per mole, z electrons per atom,
d grams per cubic centimetre, A square decimetres. F is exact since the SI of 2019: F = e N_A.
"""

from functools import cache
from typing import Final

from chemicals.science.formula import atomic_weight
from chemicals.science.tables import read_table

F: Final = 96485.33212  # C/mol, CODATA 2018 (exact: 1.602176634e-19 C x 6.02214076e23 /mol, here to ten digits)
C_PER_AH: Final = 3600.0
CM3_PER_DM2_UM: Final = 0.01  # 1 dm2 x 1 um = 100 cm2 x 0.0001 cm
BASIS: Final = "Faraday's law, m = e Q M / (z F), with F = 96485.33212 C/mol (CODATA 2018)"
DENSITY_BASIS: Final = "(CRC Handbook of Chemistry and Physics, 80th edition)"
MOST_ELECTRONS: Final = 8  # per atom: no element has a higher valence in solution


@cache
def _handbook() -> dict[str, tuple[float, tuple[int, ...]]]:
    rows = read_table("elements")
    return {row["symbol"]: (float(row["density_g_cm3"]), tuple(map(int, row["valences"].split()))) for row in rows}


def handbook_density(symbol: str) -> float | None:
    """Density of the metal in g/cm3 at room temperature (CRC Handbook, 80th edition), or None if not in the table."""
    found = _handbook().get(symbol)
    return found[0] if found else None


def usual_valences(symbol: str) -> tuple[int, ...]:
    """Valences in which the metal is plated, the most usual first; empty if not in the table."""
    found = _handbook().get(symbol)
    return found[1] if found else ()


def equivalent_g_per_ah(symbol: str, valence: int) -> float:
    """Electrochemical equivalent: grams deposited by one ampere-hour at 100 % efficiency. Raises FormulaError."""
    return float(atomic_weight(symbol)) * C_PER_AH / (valence * F)


def deposited_mass_g(symbol: str, valence: int, charge_ah: float, efficiency: float = 1.0) -> float:
    """Grams that a charge deposits. Raises FormulaError for an unknown element."""
    return equivalent_g_per_ah(symbol, valence) * charge_ah * efficiency


def charge_needed_ah(symbol: str, valence: int, mass_g: float, efficiency: float = 1.0) -> float:
    """Ampere-hours that a mass needs. Raises FormulaError for an unknown element."""
    return mass_g / (equivalent_g_per_ah(symbol, valence) * efficiency)


def thickness_um(mass_g: float, area_dm2: float, density_g_cm3: float) -> float:
    """Mean thickness of a deposit in micrometres."""
    return mass_g / (density_g_cm3 * area_dm2 * CM3_PER_DM2_UM)


def rate_um_per_h(
    symbol: str, valence: int, current_density_a_dm2: float, density_g_cm3: float, efficiency: float = 1.0
) -> float:
    """Growth in micrometres per hour at a current density."""
    return thickness_um(deposited_mass_g(symbol, valence, current_density_a_dm2, efficiency), 1.0, density_g_cm3)
