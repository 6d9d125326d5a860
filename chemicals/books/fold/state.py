"""The state of the books while folding: what every vessel holds, and what followed from an entry."""

from bisect import insort
from collections.abc import Mapping
from dataclasses import dataclass, field
from types import MappingProxyType

from chemicals.books.fold.arithmetic import root

__all__ = ["EVERY", "FINDINGS", "LIMIT", "Finding", "Holding", "State", "Transfer", "Vessel", "root"]

EVERY = ""
"""Stands for every component that is not listed, in findings of vessels with an incomplete list."""

LIMIT = 10**15
"""The largest amount that the books can hold: a thousand tonnes, a thousand cubic metres."""


@dataclass(frozen=True)
class Holding:
    """An amount in base units, None where unknown, and the variance of the estimate (base units squared).

    ``known_part`` matters while the amount is unknown: what the postings sum to. The next figure that becomes known is
    posted against it, so that the postings of a vessel always sum to what it holds.
    """

    amount: int | None
    variance: int = 0
    known_part: int = 0

    @property
    def booked(self) -> int:
        """Return what the postings sum to."""
        return self.known_part if self.amount is None else self.amount

    def made_unknown(self) -> "Holding":
        """Return the holding after an unknown amount went in or out."""
        return Holding(None, 0, self.booked)

    def rebooked(self, booked: int, variance: int) -> "Holding":
        """Return the holding with another sum of postings; what was unknown stays unknown."""
        return Holding(None, 0, booked) if self.amount is None else Holding(booked, min(variance, LIMIT**2))


@dataclass(frozen=True)
class Vessel:
    """What is known of a vessel as a whole.

    ``incomplete``: a component that is not listed is unknown, not absent. ``poured``: recipe keys of everything poured
    in since it was last empty.
    """

    incomplete: bool = False
    poured: frozenset[str] = frozenset()


@dataclass
class State:
    """All holdings and vessels. A missing holding is nothing, or unknown where the vessel's list is incomplete."""

    vessels: dict[str, Vessel] = field(default_factory=dict)
    touched: set[tuple[str, str]] = field(default_factory=set, compare=False)
    """(vessel, component) of every holding written, EVERY for the vessel itself; the caller clears it."""
    _holdings: dict[tuple[str, str], Holding] = field(default_factory=dict)
    _listed: dict[str, list[str]] = field(default_factory=dict, compare=False)

    @property
    def holdings(self) -> Mapping[tuple[str, str], Holding]:
        """Return all holdings by (vessel, component), to read; they are written by ``put``."""
        return MappingProxyType(self._holdings)

    def put(self, vessel: str, component: str, holding: Holding) -> None:
        """Write a holding."""
        if (vessel, component) not in self._holdings:
            insort(self._listed.setdefault(vessel, []), component)
        self._holdings[vessel, component] = holding
        self.touched.add((vessel, component))

    def put_vessel(self, name: str, vessel: Vessel) -> None:
        """Write what is known of a vessel as a whole."""
        self.vessels[name] = vessel
        self.touched.add((name, EVERY))

    def vessel(self, name: str) -> Vessel:
        """Return what is known of a vessel; an unseen one is empty."""
        return self.vessels.get(name, Vessel())

    def holding(self, vessel: str, component: str) -> Holding:
        """Return what a vessel holds of a component."""
        known = self._holdings.get((vessel, component))
        if known is not None:
            return known
        return Holding(None) if self.vessel(vessel).incomplete else Holding(0)

    def components(self, vessel: str) -> tuple[str, ...]:
        """Return the components listed in a vessel, in a fixed order."""
        return tuple(self._listed.get(vessel, ()))


@dataclass(frozen=True)
class Transfer:
    """A movement of a component between two ends: two postings that sum to zero. The amount is above zero."""

    component: str
    source: str
    target: str
    amount: int
    sd: int
    basis: str


@dataclass(frozen=True)
class Finding:
    """What a person should know: a code with the place it concerns. Never a refusal: it happened."""

    code: str
    component: str
    source: str
    target: str


UNKNOWN_AMOUNT, UNKNOWN_CONTENTS, NEGATIVE_CONTENT, WAS_UNKNOWN, UNKNOWN_LEVEL, UNKNOWN_MASS = (
    "unknown-amount", "unknown-contents", "negative-content", "was-unknown", "unknown-level", "unknown-mass",
)  # fmt: skip
WEIGHT_LOST, WEIGHT_GAINED, TOO_MUCH = "weight-lost", "weight-gained", "too-much"
FINDINGS = {
    UNKNOWN_AMOUNT: "An unknown amount moved; what both ends hold is unknown until an accepted analysis.",
    UNKNOWN_CONTENTS: "What the source holds is not all listed: anything may have come along.",
    NEGATIVE_CONTENT: "The books hold less than nothing here: an earlier figure or a missing entry is wrong.",
    WAS_UNKNOWN: "The content was unknown before: the difference is no loss and no gain.",
    UNKNOWN_LEVEL: "The volume was unknown, or nothing, when it was needed: read the level.",
    UNKNOWN_MASS: "The mass was unknown, or nothing, when it was needed: weigh the container.",
    WEIGHT_LOST: "The load weighs less than before: a part dissolved, or a weighing is wrong.",
    WEIGHT_GAINED: "What was stripped weighs more than before: a weighing is wrong.",
    TOO_MUCH: "More than the books can hold: a figure or its unit is wrong. The content is unknown from here on.",
}
"""Every finding code with its meaning."""
