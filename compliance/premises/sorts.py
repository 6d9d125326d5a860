"""Sorts of matter, by which a workshop's own lines say what they are of; and of which sorts something is.

A sort is everything, a hazard class without its category, a pictogram, or what something reacts as; its code is what is
kept: "hazard class: Flammable liquids", "pictogram: GHS06", "reacts as: acid".
"""

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache

from chemicals.science.ghs import PICTOGRAMS, families_of, list_families
from chemicals.science.reactivity import NOTHING, REACTS_AS, UNKNOWN
from compliance.premises.hazards import Part

EVERYTHING = "everything"
HAZARD_CLASS, PICTOGRAM, REACTS = "hazard class", "pictogram", "reacts as"


def reacting(kind: str) -> str:
    """Return the sort of what reacts as a kind of science.reactivity."""
    return f"{REACTS}: {kind}"


@cache
def list_sorts() -> tuple[str, ...]:
    """Return the code of every sort."""
    return (
        EVERYTHING,
        *(f"{HAZARD_CLASS}: {family}" for family in list_families()),
        *(f"{PICTOGRAM}: {code}" for code in PICTOGRAMS),
        *(reacting(kind) for kind in REACTS_AS if kind not in (UNKNOWN, NOTHING)),
    )


@dataclass(frozen=True)
class Nature:
    """The sorts of something, and whether all of its hazards, and of what it reacts as, was entered."""

    sorts: frozenset[str]
    hazards_known: bool = True
    reactivity_known: bool = True

    def may_be(self, sort: str) -> bool:
        """Say whether it may be of a sort without being known to be."""
        if sort in self.sorts or sort == EVERYTHING:
            return False
        return not (self.reactivity_known if sort.startswith(REACTS) else self.hazards_known)


def nature_of(parts: Iterable[Part], kinds: Iterable[str]) -> Nature:
    """Return the nature of what consists of these parts and reacts as these kinds; it is whole of every sort."""
    listed, reacts = list(parts), frozenset(kinds)
    return Nature(
        sorts=frozenset(
            [
                EVERYTHING,
                *(f"{HAZARD_CLASS}: {name}" for part in listed for name in families_of(part.classes, part.statements)),
                *(f"{PICTOGRAM}: {code}" for part in listed for code in part.pictograms),
                *(reacting(kind) for kind in reacts - {UNKNOWN, NOTHING}),
            ]
        ),
        hazards_known=all(part.entered for part in listed),
        reactivity_known=UNKNOWN not in reacts,
    )
