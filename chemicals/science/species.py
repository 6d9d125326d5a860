"""Species that react away in a workshop's liquids: how many moles of each a formula brings.

Free cyanide is what is not bound to a metal (NaCN, KCN); acid is the hydrogen of strong acids, alkali the hydroxide of
strong bases; ammonia counts with ammonium. Weak acids (boric) and complexes (potassium gold cyanide) bring none.
"""

from decimal import ROUND_HALF_EVEN, Context, Decimal
from functools import cache
from typing import Final

from chemicals.science.formula import molar_mass, parse_formula, split_water
from chemicals.science.tables import read_table

_DIGITS: Final = Context(prec=12, rounding=ROUND_HALF_EVEN)


@cache
def _table() -> dict[frozenset[tuple[str, int]], dict[str, int]]:
    found: dict[frozenset[tuple[str, int]], dict[str, int]] = {}
    for row in read_table("species"):
        found.setdefault(frozenset(parse_formula(row["formula"]).atoms), {})[row["species"]] = int(row["moles"])
    return found


def moles_of(formula: str) -> dict[str, int]:
    """Moles of each species that a mole of the substance brings; none for a formula that is not in the table.

    Raises FormulaError.
    """
    dry, _ = split_water(formula)
    return dict(_table().get(frozenset(dry.atoms), {}))


def nanomoles_per_microgram(formula: str) -> dict[str, Decimal]:
    """Nanomoles of each species in a microgram of the substance, crystal water included. Raises FormulaError."""
    whole = molar_mass(formula)
    return {species: _DIGITS.divide(Decimal(1000 * moles), whole) for species, moles in moles_of(formula).items()}
