"""Which of the vessels that stand together must not: by sorts, never by looking at every pair of vessels.

A pair counts unless one bath or jar would meet itself: the same products twice, the same waste stream twice, or a tank
and its own rinse, filter or cell, of which one holds nothing else than the other.
"""

from collections.abc import Callable, Hashable, Iterable, Sequence
from dataclasses import dataclass, field
from functools import cached_property

from compliance.premises.sorts import Nature

Cell = Callable[["Stander"], Hashable]


@dataclass(frozen=True)
class Stander:
    """A vessel where it stands: what it is, what it was filled with (``recipe``), and what its place shares.

    ``in_line``: what loads, filters and cells carry out of a tank goes into it. ``is_bath``: it is such a tank.
    """

    name: str
    place: int
    bund: str
    duct: str
    nature: Nature = field(hash=False)
    recipe: frozenset[Hashable]
    in_line: bool = False
    is_bath: bool = False

    @cached_property
    def likeness(self) -> Hashable:
        """Return what all vessels have in common that meet the same others."""
        return self.recipe, self.in_line, self.is_bath

    def is_like(self, other: "Stander") -> bool:
        """Say whether this and the other hold the same, so that nothing new comes of their meeting."""
        if self.recipe == other.recipe:
            return True
        nested = self.recipe <= other.recipe or other.recipe <= self.recipe
        return nested and self.in_line and other.in_line and not (self.is_bath and other.is_bath)


def find_apart(
    here: Sequence[Stander], first: str, second: str, cell: Cell | None = None
) -> tuple[list[Stander], list[Stander]]:
    """Return what is of the first sort and what of the second, as far as each has somebody opposite; in order.

    With ``cell`` two vessels count only if it differs: they share something else nearer to them, and are told there.
    """
    ones = [each for each in here if first in each.nature.sorts]
    others = [each for each in here if second in each.nature.sorts] if ones else []
    if not others:
        return [], []
    return _with_somebody(ones, others, cell), _with_somebody(others, ones, cell)


def _with_somebody(some: Iterable[Stander], others: Iterable[Stander], cell: Cell | None) -> list[Stander]:
    """Return those that have somebody opposite. One of each likeness in each cell stands for all of them."""
    cells: dict[Hashable, dict[Hashable, Stander]] = {}
    for each in others:
        cells.setdefault(cell and cell(each), {}).setdefault(each.likeness, each)
    known: dict[Hashable, bool] = {}
    found = []
    for each in some:
        own = cell and cell(each)
        key = (own, each.likeness)
        if key not in known:
            opposite = (mate for at, mates in cells.items() if cell is None or at != own for mate in mates.values())
            known[key] = any(not each.is_like(mate) for mate in opposite)
        if known[key]:
            found.append(each)
    return found
