"""Degrees Baumé of liquids heavier than water, as densities.

    relative density = modulus / (modulus - degrees)

In the United States the modulus is 145, and both the liquid and the water it is compared with are at 60 °F (Etherington
and Roberts, Bookbinding and the Conservation of Books, 1982, as read at cool.culturalheritage.org; the same in Marks'
handbook). The older "rational" scale has the modulus 144.3 at 15 °C (common practice, from memory). A plain reading is
taken on the first one. The two differ by 2 mg/mL at 30 degrees. Density of water: CRC Handbook, from memory.
"""

from decimal import ROUND_HALF_EVEN, Decimal
from typing import Final

from chemicals.science.errors import TextError

MODULI: Final = {
    "baume": (Decimal("145"), Decimal("999016")),
    "rational_baume": (Decimal("144.3"), Decimal("999100")),
}
"""Dimension of the reading -> the modulus, and the density of water in ug/mL at 60 °F and at 15 °C."""

MOST: Final = 80_000
"""Thousandths of a degree; hydrometers for heavy liquids end at 70."""


class BaumeError(TextError):
    """Nothing has so many degrees."""

    messages = {"too_many": "A Baumé hydrometer for heavy liquids ends at %(most)s degrees. Read it again."}


def density(base: int, dimension: str) -> int:
    """Return the density in ug/mL of a reading in thousandths of a degree. Raises BaumeError above 80 degrees."""
    if base > MOST:
        raise BaumeError("too_many", most=str(MOST // 1000))
    modulus, water = MODULI[dimension]
    return int((water * modulus / (modulus - Decimal(base) / 1000)).to_integral_value(ROUND_HALF_EVEN))


def density_sd(base: int, sd: int, dimension: str) -> int:
    """Return the standard uncertainty of that density, to first order (JCGM 100:2008, 5.1.2)."""
    modulus, water = MODULI[dimension]
    slope = water * modulus / (modulus - Decimal(base) / 1000) ** 2 / 1000
    return int((slope * sd).to_integral_value(ROUND_HALF_EVEN))
