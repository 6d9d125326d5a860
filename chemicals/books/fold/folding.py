"""The movements that one entry causes: each changes the state and is kept as a transfer, or as a finding."""

from collections.abc import Collection, Iterable

from chemicals.books.events import (
    ASSUMED,
    BOUNDARIES,
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    REACTION,
    SPECIES,
    UNACCOUNTED,
    UNKNOWN_LIQUID,
    VOLUME,
    Figure,
)
from chemicals.books.fold.arithmetic import portion, product, root, scaled
from chemicals.books.fold.state import (
    EVERY,
    LIMIT,
    NEGATIVE_CONTENT,
    TOO_MUCH,
    UNKNOWN_AMOUNT,
    UNKNOWN_CONTENTS,
    UNKNOWN_LEVEL,
    UNKNOWN_MASS,
    WAS_UNKNOWN,
    Finding,
    Holding,
    State,
    Transfer,
    Vessel,
)

NONE: Collection[str] = frozenset()


def difference_end(component: str, end: str = UNACCOUNTED) -> str:
    """Return where a difference goes that nobody explained: a species reacts away, all else is unaccounted."""
    return REACTION if end == UNACCOUNTED and component in SPECIES else end


class Folding:
    """Applies the movements of one entry to a state and keeps them as transfers and findings.

    Whatever is moved from an end to itself stays where it is. ``unaccounted`` stands for ``difference_end``.
    """

    def __init__(self, state: State) -> None:
        self.state = state
        self.transfers: list[Transfer] = []
        self.findings: list[Finding] = []

    def move(self, component: str, source: str, target: str, amount: int, sd: int, basis: str) -> None:
        """Move a known amount with its own, independent uncertainty."""
        left = self.state.holding(source, component).variance + sd * sd
        self._shift(component, source, target, amount, sd * sd, left, basis)

    def move_unknown(self, component: str, source: str, target: str) -> None:
        """Record that an unknown amount moved: both ends are unknown from now on."""
        if source == target:
            return
        self.note(UNKNOWN_AMOUNT, component, source, target)
        self._make_unknown(source, component)
        self._make_unknown(target, component)

    def set_content(self, vessel: str, component: str, amount: int, sd: int, against: str, basis: str) -> None:
        """Set what a vessel holds, as measured; the difference goes to (or comes from) ``against``."""
        held = self.state.holding(vessel, component)
        difference = amount - held.booked
        if max(abs(amount), abs(difference)) > LIMIT:
            self.note(TOO_MUCH, component, against, vessel)
            self._make_unknown(vessel, component)
            return
        if held.amount is None:
            self.note(WAS_UNKNOWN, component, vessel, against)
        self._post(component, against, vessel, difference, sd * sd + held.variance, basis)
        self.state.put(vessel, component, Holding(amount, min(sd * sd, LIMIT**2)))

    def count(self, vessel: str, amount: int, sd: int, *, by: str) -> None:
        """Set the volume or the mass (``by``) as counted: all else is as much less, or more, in proportion.

        Without a whole to compare with, nobody knows how much of all else is missing or was found.
        """
        whole = self.state.holding(vessel, by)
        if whole.amount is None or whole.amount <= 0:
            self._count_blindly(vessel, amount, by=by)
        else:
            basis = COMPUTED if amount <= whole.amount else ASSUMED
            for component in sorted(set(self.state.components(vessel)) - {by}):
                held = self.state.holding(vessel, component)
                if held.amount is not None:
                    there = max(held.amount, 0)
                    now, variance, doubt = scaled(there, held.variance, amount, sd, whole.amount, whole.variance)
                    self._shift(component, vessel, UNACCOUNTED, there - now, doubt, variance, basis)
                elif amount != whole.amount:
                    self.move_unknown(component, vessel, UNACCOUNTED)
        self.set_content(vessel, by, amount, sd, UNACCOUNTED, COMPUTED)

    def settle(self, component: str, source: str, target: str, left: tuple[int, int] | None) -> None:
        """Move all of a component but what is ``left``, an amount with its standard uncertainty; None is unknown.

        Of an unknown rest the books' part goes to the target.
        """
        held = self.state.holding(source, component)
        if held.amount is None or left is None:
            self.move_unknown(component, source, target)
        amount, sd = left or (0, 0)
        rest, basis = held.booked - amount, ASSUMED if held.amount is None or left is None else COMPUTED
        if rest > 0:
            self._shift(component, source, target, rest, held.variance + sd * sd, sd * sd, basis)
        elif rest < 0 and held.amount is not None:
            self.note(NEGATIVE_CONTENT, component, source, target)
        if left is not None:
            self.set_content(source, component, amount, sd, UNACCOUNTED, COMPUTED)

    def share(self, vessel: str, component: str, volume: int, sd: int) -> tuple[int, int] | None:
        """Return how much a volume of a vessel's liquid holds, with its standard uncertainty; None where unknown."""
        held, whole = self.state.holding(vessel, component), self.state.holding(vessel, VOLUME)
        if held.amount is None or whole.amount is None or whole.amount <= 0:
            return None
        amount, variance, _ = portion(held.amount, held.variance, volume, sd, whole.amount, whole.variance)
        return amount, root(variance)

    def pour(self, source: str, target: str, volume: int, sd: int, basis: str, *, but: Collection[str] = NONE) -> None:
        """Move liquid: every component goes in proportion to the volume, ``but`` some that go otherwise."""
        self._take(source, target, volume, sd, basis, by=VOLUME, but=but)

    def scoop(self, source: str, target: str, mass: int, sd: int, basis: str, *, but: Collection[str] = NONE) -> None:
        """Move a weighed part: every component goes in proportion to the mass, ``but`` some that go otherwise."""
        self._take(source, target, mass, sd, basis, by=GROSS_MASS, but=but)

    def pour_all(self, source: str, target: str) -> None:
        """Move everything, as the books have it; the source is empty afterwards and remembers nothing."""
        if source == target:
            return
        for component in self.state.components(source):
            self.move_all(component, source, target)
        self.remember_from(source, target)
        self.state.put_vessel(source, Vessel())

    def move_all(self, component: str, source: str, target: str) -> None:
        """Move all of one component, as the books have it: none is left."""
        if source == target:
            return
        held = self.state.holding(source, component)
        basis = COMPUTED if held.amount is not None else ASSUMED
        if held.amount is None:
            self.move_unknown(component, source, target)
        if held.booked > 0:
            self._shift(component, source, target, held.booked, held.variance, 0, basis)
        left = self.state.holding(source, component)
        if left.amount is not None and left.amount < 0:
            self.note(NEGATIVE_CONTENT, component, source, source)
        # less than nothing cannot be carried away: that the vessel is empty shows how wrong the books were
        self._post(component, source, UNACCOUNTED, left.booked, left.variance, COMPUTED)
        self.state.put(source, component, Holding(0))

    def pour_unknown(self, source: str, target: str, *, but: Collection[str] = NONE) -> None:
        """Move nobody knows how much of everything there is in the source, ``but`` of some components."""
        if source == target:
            return
        for component in sorted({*self.state.components(source), VOLUME, GROSS_MASS}.difference(but)):
            # of what is known to be absent nothing came along; whatever came along has a mass
            absent = source not in BOUNDARIES and self.state.holding(source, component).amount == 0
            if component == GROSS_MASS or not absent:
                self.move_unknown(component, source, target)
        self.remember_from(source, target, known=but)

    def water(self, source: str, target: str, volume: int, sd: int, density: Figure, basis: str) -> None:
        """Move plain water (from the supply, or to air) with its mass. density in ug/mL."""
        self.move(VOLUME, source, target, volume, sd, basis)
        mass, mass_sd = product(volume, sd, density.base, density.sd, 10**6)
        self.move(GROSS_MASS, source, target, mass, mass_sd, COMPUTED)

    def remember_from(self, source: str, target: str, *, known: Collection[str] = NONE) -> None:
        """Carry what the source remembers to the target; how much came of ``known`` components was said."""
        if source == target:
            return
        came = self.state.vessel(source)
        if came.incomplete:
            self.note(UNKNOWN_CONTENTS, EVERY, source, target)
        if target not in BOUNDARIES:
            listed = [*self.state.components(source), *known]
            self.remember(target, came.poured, incomplete=came.incomplete, listed=listed)

    def remember(self, vessel: str, keys: Iterable[str], *, incomplete: bool, listed: Collection[str]) -> None:
        """Remember what was poured in. Of an incomplete list, whatever is not ``listed`` may have come along."""
        before, there = self.state.vessel(vessel), set(self.state.components(vessel))
        if incomplete:
            for component in sorted(there.difference(listed)):
                self._make_unknown(vessel, component)
        if incomplete and not before.incomplete:
            for component in sorted(set(listed) - there):  # none of it is there: that stays known
                self.state.put(vessel, component, self.state.holding(vessel, component))
        after = Vessel(before.incomplete or incomplete, before.poured | frozenset(keys))
        if after != before:
            self.state.put_vessel(vessel, after)

    def note(self, code: str, component: str, source: str, target: str) -> None:
        """Keep a finding."""
        finding = Finding(code, component, difference_end(component, source), difference_end(component, target))
        if finding not in self.findings:
            self.findings.append(finding)

    def _take(self, source: str, target: str, part: int, sd: int, basis: str, *, by: str, but: Collection[str]) -> None:
        """Move the part of every component; the measured one (``by``) brings the uncertainty of the part."""
        if source == target or part <= 0:
            return
        whole = self.state.holding(source, by)
        if whole.amount is None or whole.amount <= 0:
            self._take_blindly(source, target, part, sd, basis, by=by, but=but)
            return
        follows = COMPUTED if basis == OBSERVED else basis
        for component in self.state.components(source):
            if component in but:
                continue
            held = self.state.holding(source, component)
            if component == by:
                self.move(component, source, target, part, sd, basis)
            elif held.amount is None:
                self.move_unknown(component, source, target)
            else:
                gone = portion(held.amount, held.variance, part, sd, whole.amount, whole.variance)
                self._shift(component, source, target, *gone, follows)
        self.remember_from(source, target, known=but)

    def _take_blindly(
        self, source: str, target: str, part: int, sd: int, basis: str, *, by: str, but: Collection[str]
    ) -> None:
        """Take a part of an unknown whole: the part is known, its content is not.

        Where the books hold nothing, something else than they say is there: at both ends anything may be.
        """
        self.note(UNKNOWN_LEVEL if by == VOLUME else UNKNOWN_MASS, by, source, target)
        contradicted = self.state.holding(source, by).amount is not None
        self.move(by, source, target, part, sd, basis)
        known = {by, *but}
        self.pour_unknown(source, target, but=known)
        if contradicted:
            self.note(UNKNOWN_CONTENTS, EVERY, source, target)
            for end in {source, target} - BOUNDARIES:
                self.remember(end, [UNKNOWN_LIQUID + source], incomplete=True, listed=known)

    def _count_blindly(self, vessel: str, amount: int, *, by: str) -> None:
        """Nobody knows how much is missing or was found. Where the books hold nothing, nobody can name it either."""
        held = self.state.holding(vessel, by).amount
        if held is not None and amount == 0:
            return
        self.note(UNKNOWN_LEVEL if by == VOLUME else UNKNOWN_MASS, by, vessel, UNACCOUNTED)
        self.pour_unknown(vessel, UNACCOUNTED, but={by})
        if held is not None:
            self.note(UNKNOWN_CONTENTS, EVERY, UNACCOUNTED, vessel)
            self.remember(vessel, [UNKNOWN_LIQUID + vessel], incomplete=True, listed=[by])

    def _shift(
        self, component: str, source: str, target: str, amount: int, variance: int, left: int, basis: str
    ) -> None:
        """Move an amount; the source is left with a variance, the target's grows. Too much to book is unknown."""
        if source == target:
            return
        gives, takes = self.state.holding(source, component), self.state.holding(target, component)
        sums = amount, gives.booked - amount, takes.booked + amount
        if any(abs(booked) > LIMIT for booked in sums):
            self.note(TOO_MUCH, component, source, target)
            self.move_unknown(component, source, target)
            return
        self._post(component, source, target, amount, variance, basis)
        self._put(source, component, gives.rebooked(gives.booked - amount, left))
        self._put(target, component, takes.rebooked(takes.booked + amount, takes.variance + variance))

    def _make_unknown(self, end: str, component: str) -> None:
        self._put(end, component, self.state.holding(end, component).made_unknown())

    def _put(self, end: str, component: str, holding: Holding) -> None:
        if end in BOUNDARIES:
            return
        if holding.amount is not None and holding.amount < 0:
            self.note(NEGATIVE_CONTENT, component, end, end)
        self.state.put(end, component, holding)

    def _post(self, component: str, source: str, target: str, amount: int, variance: int, basis: str) -> None:
        if amount < 0:
            source, target, amount = target, source, -amount
        if amount:
            source, target = difference_end(component, source), difference_end(component, target)
            self.transfers.append(Transfer(component, source, target, amount, min(root(variance), LIMIT), basis))
