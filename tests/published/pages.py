"""A page of the ledger as text: what an entry posted, line by line, the way one writes it down."""

import re
from decimal import Decimal

from chemicals.books.events import SPECIES, VOLUME
from chemicals.books.fold import Folded

Lines = list[list[str]]


def page(text: str) -> Lines:
    """Return the lines of a written page; two blanks or more stand between its columns."""
    return [re.split(r"\s{2,}", line.strip()) for line in text.strip().splitlines()]


def posted(*followed: Folded) -> Lines:
    """Return what entries posted: component, from, to, amount in g, mL or mmol with its doubt, basis."""
    return [
        [one.component, one.source, one.target, amount(one.component, one.amount, one.sd), one.basis]
        for folded in followed
        for one in folded.transfers
    ]


def amount(component: str, base: int, sd: int = 0) -> str:
    """Return an amount exactly: micrograms as g, nanolitres as mL, nanomoles as mmol."""
    unit = "mL" if component == VOLUME else "mmol" if component in SPECIES else "g"
    doubt = f" ± {_millionth(sd)}" if sd else ""
    return f"{_millionth(base)}{doubt} {unit}"


def _millionth(base: int) -> str:
    return f"{Decimal(base).scaleb(-6).normalize():f}"
