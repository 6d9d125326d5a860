"""Substances to begin a register with: the usual salts, acids and alkalis of plating by name, CAS number and formula.

No hazards: those stand on the sheet of each product. data/substances.csv says where each row comes from.
"""

from dataclasses import dataclass
from functools import cache

from chemicals.science.tables import read_table


@dataclass(frozen=True)
class Starter:
    """A substance as a register would name it; the CAS number is empty where none is known here."""

    name: str
    cas_number: str
    formula: str
    synonyms: tuple[str, ...]


@cache
def list_starters() -> tuple[Starter, ...]:
    """Every substance of the table."""
    return tuple(
        Starter(row["name"], row["cas_number"], row["formula"], tuple(filter(None, row["synonyms"].split("; "))))
        for row in read_table("substances")
    )
