"""The tables of science/data: one row is one fact, with source, edition and whether it was read there or remembered."""

import csv
from functools import cache
from pathlib import Path
from typing import Final

_FOLDER: Final = Path(__file__).parent / "data"


@cache
def read_table(name: str) -> tuple[dict[str, str], ...]:
    """The rows of data/NAME.csv by column name, read once."""
    with (_FOLDER / f"{name}.csv").open(encoding="utf-8", newline="") as file:
        return tuple(csv.DictReader(file))
