"""The state of the books while folding, and the movements that one entry causes."""

import math
from collections.abc import Iterable
from dataclasses import dataclass, field

from chemicals.books.events import BOUNDARIES, GROSS_MASS, VOLUME

EVERY = ""
"""Stands for every component that is not listed, in findings of vessels with an incomplete list."""


@dataclass(frozen=True)
class Holding:
    """An amount in base units, None where unknown, and the variance of the estimate (base units squared)."""

    amount: int | None
    variance: int = 0


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

    holdings: dict[tuple[str, str], Holding] = field(default_factory=dict)
    vessels: dict[str, Vessel] = field(default_factory=dict)
    touched: set[tuple[str, str]] = field(default_factory=set)
    """(vessel, component) of every holding written, EVERY for the vessel itself; the caller clears it."""

    def put(self, vessel: str, component: str, holding: Holding) -> None:
        """Write a holding."""
        self.holdings[vessel, component] = holding
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
        known = self.holdings.get((vessel, component))
        if known is not None:
            return known
        return Holding(None) if self.vessel(vessel).incomplete else Holding(0)

    def components(self, vessel: str) -> list[str]:
        """Return the components listed in a vessel, in a fixed order."""
        return sorted(component for name, component in self.holdings if name == vessel)


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


UNKNOWN_AMOUNT, UNKNOWN_CONTENTS, NEGATIVE_CONTENT, WAS_UNKNOWN, UNKNOWN_LEVEL = (
    "unknown-amount", "unknown-contents", "negative-content", "was-unknown", "unknown-level",
)  # fmt: skip
FINDINGS = {
    UNKNOWN_AMOUNT: "An unknown amount moved; what both ends hold is unknown until an accepted analysis.",
    UNKNOWN_CONTENTS: "The source has an incomplete list: anything may have come along.",
    NEGATIVE_CONTENT: "The books hold less than nothing here: an earlier figure or a missing entry is wrong.",
    WAS_UNKNOWN: "The content was unknown before: the difference is no loss and no gain.",
    UNKNOWN_LEVEL: "The volume was unknown when it was needed: read the level.",
}
"""Every finding code with its meaning."""


def ratio(amount: int, part: int, whole: int) -> int:
    """Return amount x part // whole; taking the whole takes every unit."""
    return amount * part // whole


def root(variance: int) -> int:
    """Return the standard uncertainty, rounded up: never more certain than computed."""
    return 0 if variance <= 0 else math.isqrt(variance - 1) + 1


class Folding:
    """Applies the movements of one entry to a state and keeps them as transfers and findings."""

    def __init__(self, state: State) -> None:
        self.state = state
        self.transfers: list[Transfer] = []
        self.findings: list[Finding] = []

    def move(self, component: str, source: str, target: str, amount: int, sd: int, basis: str) -> None:
        """Move a known amount with its own, independent uncertainty."""
        self._post(component, source, target, amount, sd * sd, basis)
        for end, sign in ((source, -1), (target, 1)):
            if end not in BOUNDARIES:
                held = self.state.holding(end, component)
                if held.amount is not None:
                    self._put(end, component, Holding(held.amount + sign * amount, held.variance + sd * sd))

    def move_unknown(self, component: str, source: str, target: str) -> None:
        """Record that an unknown amount moved: both ends are unknown from now on."""
        self.note(UNKNOWN_AMOUNT, component, source, target)
        for end in (source, target):
            if end not in BOUNDARIES:
                self._put(end, component, Holding(None))

    def set_content(self, vessel: str, component: str, amount: int, sd: int, against: str, basis: str) -> None:
        """Set what a vessel holds, as measured; the difference goes to (or comes from) ``against``."""
        held = self.state.holding(vessel, component)
        if held.amount is None:
            self.note(WAS_UNKNOWN, component, vessel, against)
        difference = amount - (held.amount or 0)
        variance = sd * sd + held.variance
        if difference < 0:
            self._post(component, vessel, against, -difference, variance, basis)
        else:
            self._post(component, against, vessel, difference, variance, basis)
        self._put(vessel, component, Holding(amount, sd * sd))

    def pour(self, source: str, target: str, volume: int, sd: int, basis: str) -> None:
        """Move liquid: every component goes in proportion to the volume."""
        whole = self.state.holding(source, VOLUME).amount
        if whole is None or whole <= 0:
            self._pour_blindly(source, target, volume, sd, basis)
        else:
            self._take_part(source, target, volume, whole, sd, basis, by=VOLUME)

    def scoop(self, source: str, target: str, mass: int, sd: int, basis: str) -> None:
        """Move a weighed part of a stock: every component goes in proportion to the mass."""
        whole = self.state.holding(source, GROSS_MASS).amount
        if whole is None or whole <= 0:
            self._unknown_rest(source, target, but=GROSS_MASS)
            self.move(GROSS_MASS, source, target, mass, sd, basis)
            self._mark(source, target, known=GROSS_MASS)
        else:
            self._take_part(source, target, mass, whole, sd, basis, by=GROSS_MASS)

    def pour_all(self, source: str, target: str, basis: str) -> None:
        """Move everything; the source is empty afterwards and remembers nothing."""
        self._mark(source, target)
        for component in self.state.components(source):
            held = self.state.holding(source, component)
            if held.amount is None:
                self.move_unknown(component, source, target)
            else:
                self._post(component, source, target, held.amount, held.variance, basis)
                self._receive(target, component, held.amount, held.variance)
            self.state.put(source, component, Holding(0))
        self.state.put_vessel(source, Vessel())

    def water(self, source: str, target: str, volume: int, sd: int, density: int, basis: str) -> None:
        """Move plain water (from the supply, or to air) with its mass. density in ug/mL."""
        self.move(VOLUME, source, target, volume, sd, basis)
        self.move(GROSS_MASS, source, target, volume * density // 10**6, sd * density // 10**6, basis)

    def pour_into(self, vessel: str, keys: Iterable[str], *, complete: bool = True) -> None:
        """Remember what was poured in, and whether its list was complete."""
        before = self.state.vessel(vessel)
        self.state.put_vessel(vessel, Vessel(before.incomplete or not complete, before.poured | frozenset(keys)))

    def note(self, code: str, component: str, source: str, target: str) -> None:
        """Keep a finding."""
        finding = Finding(code, component, source, target)
        if finding not in self.findings:
            self.findings.append(finding)

    def _take_part(self, source: str, target: str, part: int, whole: int, sd: int, basis: str, *, by: str) -> None:
        """Move the part of every component; the measured one (``by``) brings the uncertainty of the part."""
        if part == whole:
            self.pour_all(source, target, basis)
            return
        for component in self.state.components(source):
            held = self.state.holding(source, component)
            if held.amount is None:
                self.move_unknown(component, source, target)
                continue
            moved = ratio(held.amount, part, whole)
            # the part taken is as uncertain as what was held, and as the measure of the part
            own = ratio(held.amount, sd, whole) ** 2
            variance = sd * sd if component == by else own + held.variance * part * part // (whole * whole)
            rest = abs(whole - part)
            left = held.variance + sd * sd if component == by else own + held.variance * rest * rest // (whole * whole)
            self._post(component, source, target, moved, variance, basis)
            self._put(source, component, Holding(held.amount - moved, left))
            self._receive(target, component, moved, variance)
        self._mark(source, target)

    def _pour_blindly(self, source: str, target: str, volume: int, sd: int, basis: str) -> None:
        """Pour from a vessel whose volume is unknown or nothing: the liquid is known, its content is not."""
        self.note(UNKNOWN_LEVEL, VOLUME, source, target)
        self._unknown_rest(source, target, but=VOLUME)
        self.move(VOLUME, source, target, volume, sd, basis)
        self._mark(source, target, known=VOLUME)

    def _unknown_rest(self, source: str, target: str, *, but: str) -> None:
        for component in self.state.components(source):
            if component != but and self.state.holding(source, component).amount != 0:
                self.move_unknown(component, source, target)

    def _mark(self, source: str, target: str, *, known: str = "") -> None:
        """Carry what the source remembers to the target. What an incomplete source does not list may have come too."""
        before = self.state.vessel(source)
        if before.incomplete:
            self.note(UNKNOWN_CONTENTS, EVERY, source, target)
        if target in BOUNDARIES:
            return
        if before.incomplete:
            for component in set(self.state.components(target)) - {known, *self.state.components(source)}:
                self._put(target, component, Holding(None))
        self.pour_into(target, before.poured, complete=not before.incomplete)

    def _receive(self, target: str, component: str, amount: int, variance: int) -> None:
        if target in BOUNDARIES:
            return
        held = self.state.holding(target, component)
        if held.amount is not None:
            self._put(target, component, Holding(held.amount + amount, held.variance + variance))

    def _put(self, vessel: str, component: str, holding: Holding) -> None:
        if holding.amount is not None and holding.amount < 0:
            self.note(NEGATIVE_CONTENT, component, vessel, vessel)
        self.state.put(vessel, component, holding)

    def _post(self, component: str, source: str, target: str, amount: int, variance: int, basis: str) -> None:
        if amount < 0:
            source, target, amount = target, source, -amount
        if amount:
            self.transfers.append(Transfer(component, source, target, amount, root(variance), basis))
