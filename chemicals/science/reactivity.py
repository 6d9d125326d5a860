"""What must never meet: the pairs of rule that is never soft, each with the gas or danger named.

Facts of chemistry that any safety text on plating states; the names are those of the substances. What a product reacts
as is declared by the user from the safety data sheet. "unknown" counts as both an acid and a cyanide, and so does what
nobody declared.
"""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass, replace

ACID, CYANIDE, HYPOCHLORITE, AMMONIA, OXIDISER, SULFIDE, SULFITE = (
    "acid", "cyanide", "hypochlorite", "ammonia", "oxidiser", "sulfide", "sulfite",
)  # fmt: skip
FLUORIDE, NITRIC, ORGANIC, PRECIOUS, UNKNOWN, NOTHING = (
    "fluoride", "nitric or chromic acid", "organic", "silver or gold", "unknown", "nothing",
)  # fmt: skip
REACTS_AS = {
    ACID: "an acid, or anything with a pH below 7",
    CYANIDE: "free cyanide, or a salt that gives it",
    HYPOCHLORITE: "hypochlorite (bleach)",
    AMMONIA: "ammonia or an ammonium salt in alkali",
    OXIDISER: "an oxidiser such as peroxide or persulfate",
    SULFIDE: "sulfide or polysulfide",
    SULFITE: "sulfite, dithionite or thiosulfate",
    FLUORIDE: "fluoride",
    NITRIC: "nitric or chromic acid",
    ORGANIC: "an organic liquid or solid that burns",
    PRECIOUS: "a silver or gold solution",
    UNKNOWN: "unknown: nobody knows what is in it",
    NOTHING: "nothing on this list, as the sheet says",
}
"""Every declared reactivity with its meaning."""


@dataclass(frozen=True)
class Danger:
    """Two kinds of liquid that must not meet, and what happens if they do."""

    first: str
    second: str
    gives: str
    harm: str = ""

    @property
    def danger(self) -> str:
        """Return what happens, with the harm it does."""
        return f"{self.gives}, {self.harm}" if self.harm else self.gives


DANGERS = (
    Danger(ACID, CYANIDE, "hydrogen cyanide", "a gas that kills within minutes"),
    Danger(NITRIC, CYANIDE, "hydrogen cyanide", "a gas that kills within minutes"),
    Danger(OXIDISER, CYANIDE, "cyanogen chloride or a violent reaction"),
    Danger(HYPOCHLORITE, CYANIDE, "cyanogen chloride", "a poisonous gas"),
    Danger(HYPOCHLORITE, ACID, "chlorine", "a poisonous gas"),
    Danger(HYPOCHLORITE, NITRIC, "chlorine", "a poisonous gas"),
    Danger(HYPOCHLORITE, AMMONIA, "chloramines", "poisonous gases"),
    Danger(SULFIDE, ACID, "hydrogen sulfide", "a poisonous gas"),
    Danger(SULFIDE, NITRIC, "hydrogen sulfide and nitrogen oxides", "poisonous gases"),
    Danger(SULFITE, ACID, "sulfur dioxide", "a poisonous gas"),
    Danger(SULFITE, NITRIC, "sulfur dioxide and nitrogen oxides", "poisonous gases"),
    Danger(FLUORIDE, ACID, "hydrogen fluoride", "which burns deep and poisons"),
    Danger(FLUORIDE, NITRIC, "hydrogen fluoride", "which burns deep and poisons"),
    Danger(NITRIC, ORGANIC, "fire", "and nitrogen oxides that kill hours later"),
    Danger(AMMONIA, PRECIOUS, "fulminating silver or gold", "which explodes when it stands or dries"),
)


def declared(kinds: Iterable[str]) -> frozenset[str]:
    """Return what something reacts as: of what nobody declared, nobody knows."""
    return frozenset(kinds) or frozenset({UNKNOWN})


def find_dangers(one: Iterable[str], other: Iterable[str]) -> Iterator[Danger]:
    """Yield every danger of bringing two liquids together; ``first`` is of the one, ``second`` of the other."""
    left, right = _widen(one), _widen(other)
    for danger in DANGERS:
        if danger.first in left and danger.second in right:
            yield danger
        elif danger.second in left and danger.first in right:
            yield replace(danger, first=danger.second, second=danger.first)


def _widen(kinds: Iterable[str]) -> set[str]:
    found = set(kinds)
    return found | {ACID, CYANIDE} if UNKNOWN in found else found
