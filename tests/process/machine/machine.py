"""Two people who record whatever they like whenever they like; some acts die on the way, some are done twice."""

import sys
from collections import Counter
from datetime import UTC, datetime, time, timedelta
from random import Random
from typing import ClassVar
from uuid import UUID

import pytest
from hypothesis import note
from hypothesis import strategies as st
from hypothesis.stateful import RuleBasedStateMachine, initialize, invariant, precondition, rule

from chemicals.books.events import Analysis
from chemicals.books.occurred import Occurred
from chemicals.process.inputs import INPUTS
from chemicals.workshop.models import Membership
from tests.process.machine.office import Office, Said
from tests.process.machine.people import THINGS, VESSELS, Line, begin
from tests.process.machine.said import Names, draw_words

COMMON = ("run", "dummy", "strip", "move", "top-up", "analysis", "acceptance", "acceptance", "correction")
VERBS = (*INPUTS, *COMMON, *COMMON)
MOST_WRITES = 15
BUSY = {"chemicals.ledger.late.LATE_LIMIT": 2, "chemicals.ledger.recompute.STRETCH": 3}
"""Limits of a workshop that leaves nearly every late entry to the job."""
HOW_LATE = ("now", "now", "now", "earlier", "same minute", "days ago", "some day", "tomorrow")
seeds = st.integers(0, 2**64 - 1)
"""What is done in a step is drawn evenly: hypothesis would repeat itself, and it shortens a history all the same."""


class Machine(RuleBasedStateMachine):
    """Each step is an act of one of two people, or of the worker that does jobs."""

    line: ClassVar[Line]
    done: ClassVar[Counter[str]]
    at: Office

    def __init__(self) -> None:
        super().__init__()
        self.patch = pytest.MonkeyPatch()
        self.is_open = False
        self.keys = 0
        self.seeds: Counter[int] = Counter()

    @initialize(in_use=st.booleans(), limits=st.sampled_from([{}, BUSY]), seed=seeds)
    def open(self, in_use: bool, limits: dict[str, int], seed: int) -> None:  # noqa: FBT001  (hypothesis names them)
        self.seed = seed
        for name, limit in limits.items():
            self.patch.setattr(name, limit)
        self.at = Office(self.line, limits, self.done)
        self.is_open = True
        if in_use:
            for entry in begin(self.at.shop):
                self.at.books.add(entry)

    def teardown(self) -> None:
        """Let the worker finish, and look a last time, unless something is wrong already."""
        try:
            if self.is_open and sys.exc_info()[0] is None:
                self.at.finish()
                self.at.books.prove()
        finally:
            self.patch.undo()

    @invariant()
    def books_are_what_was_acknowledged(self) -> None:
        self.at.books.prove()
        self.done["steps"] += 1

    def key(self) -> UUID:
        """Return a fresh key, the same one when the steps are told again."""
        self.keys += 1
        return UUID(int=self.at.workshop.pk * 10**6 + self.keys)

    def chance(self, seed: int) -> Random:
        """Return chances that are the same whatever steps were left out before, and others when a seed comes again."""
        self.seeds[seed] += 1
        return Random(f"{self.seed} {seed} {self.seeds[seed]}")  # noqa: S311  (nothing is kept secret)

    def somebody(self, chance: Random) -> Membership:
        return chance.choice([self.at.owner, self.at.worker])

    def death(self, chance: Random) -> int:
        """Return before which of its writes a process dies; 0: it lives."""
        return chance.choice((0, 0, chance.randint(1, MOST_WRITES)))

    def draw_said(self, chance: Random) -> Said | None:
        """Return what somebody sets out to record; None if there is nothing to speak of yet."""
        self.at.now += timedelta(minutes=chance.randint(0, 90))
        verb, rows = chance.choice(VERBS), self.at.books.rows
        analyses = [label for label, entry in rows.items() if entry.kind == Analysis.KIND]
        names = Names(VESSELS, THINGS | {"entry": tuple(rows), "analysis": tuple(analyses)})
        words = draw_words(chance, INPUTS[verb], names, self.at.now)
        if words is None:
            return None
        said = Said(
            actor=self.somebody(chance),
            key=self.key(),
            data=self.at.shop.read(verb, **words),
            occurred=self.draw_occurred(chance),
            already_happened=chance.random() < 0.6,
        )
        note(f"{said.actor} at {self.at.now:%d %H:%M}: {verb} {words}, {said.occurred}, {said.already_happened}")
        return said

    def draw_occurred(self, chance: Random) -> Occurred | None:
        """Return when it happened: now, earlier, in a minute of which something is known, some day."""
        now, days, how_late = self.at.now, chance.randint(0, 9), chance.choice(HOW_LATE)
        if how_late == "same minute" and self.at.books.rows:
            return Occurred(chance.choice(list(self.at.rows)).occurred_at)
        if how_late == "some day":
            zone = self.at.workshop.zone
            return Occurred.on_day(now.astimezone(zone).date() - timedelta(days=days), zone)
        minutes = timedelta(minutes=chance.randint(1, 500))
        earlier = {"earlier": minutes, "days ago": timedelta(days) + minutes, "tomorrow": -timedelta(days=1)}
        return Occurred(now - earlier[how_late]) if how_late in earlier else None

    @rule(seed=seeds)
    def record(self, seed: int) -> None:
        chance = self.chance(seed)
        said = self.draw_said(chance)
        if said is not None:
            self.at.record(said, self.death(chance))

    @rule(seed=seeds)
    def look_and_record(self, seed: int) -> None:
        chance = self.chance(seed)
        said = self.draw_said(chance)
        if said is not None:
            self.at.record_as_shown(said)

    @rule(seed=seeds)
    def record_by_mistake(self, seed: int) -> None:
        chance = self.chance(seed)
        said = self.draw_said(chance)
        if said is not None:
            self.at.record_by_mistake(said, self.key())

    @precondition(lambda self: self.at.said or self.at.unanswered)
    @rule(seed=seeds)
    def press_again(self, seed: int) -> None:
        chance, said = self.chance(seed), list(self.at.said.values())
        if self.at.unanswered:
            self.at.try_again(chance.choice(list(self.at.unanswered)))
            return
        first, other = chance.choice(said), chance.choice(said)
        self.at.record_again(first)
        if type(other.data) is not type(first.data):
            self.at.record_under_used_key(other, first.key)

    @rule(seed=seeds)
    def keep_books(self, seed: int) -> None:
        chance = self.chance(seed)
        if not self.at.stands and chance.random() < 0.7:
            self.at.work(self.death(chance))
        elif self.at.books.closed and chance.random() < 0.5:
            self.at.reopen(self.somebody(chance), self.key(), self.death(chance))
        else:
            zone = self.at.workshop.zone
            day = self.at.now.astimezone(zone).date() - timedelta(days=chance.randint(-1, 12))
            until = datetime.combine(day, time(), zone).astimezone(UTC)
            note(f"close until {until}")
            self.at.close(self.somebody(chance), self.key(), until, self.death(chance))
