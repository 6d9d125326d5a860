"""Rules that ask for a list of chemicals, each with the columns that it names: data/list_rules.csv.

None applies by itself: a workshop chooses one line, and says when it compared it with its own law.
"""

import csv
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Final

_TABLE: Final = Path(__file__).parent / "data" / "list_rules.csv"
COLUMNS: Final = ("name", "classification", "quantities", "areas", "sheet")


@dataclass(frozen=True)
class ListRule:
    """One line: the provision, what it asks for, the columns that say it, where that was read or remembered."""

    code: str
    area: str
    provision: str
    asks_for: str
    columns: tuple[str, ...]
    source: str
    edition: str
    read: str

    @property
    def from_memory(self) -> bool:
        """Whether nobody looked it up: then whoever chooses it writes the citation."""
        return self.read == "memory"

    def __str__(self) -> str:
        return f"{self.provision} ({self.area})"


@cache
def list_rules() -> tuple[ListRule, ...]:
    """Return every line."""
    with _TABLE.open(encoding="utf-8", newline="") as file:
        return tuple(_read(row) for row in csv.DictReader(file))


def _read(row: dict[str, str]) -> ListRule:
    columns = tuple(row.pop("columns").split())
    return ListRule(**row, columns=columns)


def find_rule(code: str) -> ListRule | None:
    """Return the line of a code."""
    return next((rule for rule in list_rules() if rule.code == code), None)
