"""What holds for every history, whatever was recorded, in whatever order, and whatever was cancelled."""

import random
from collections import Counter
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, replace
from fractions import Fraction
from itertools import pairwise
from uuid import UUID

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from chemicals.books import events
from chemicals.books.events import (
    BOUNDARIES,
    GROSS_MASS,
    REACTION,
    SEWER,
    SPECIES,
    SPILL,
    VOLUME,
    Acceptance,
    Cancellation,
    CleanOut,
    Count,
    DaySheet,
    DensityReading,
    Discharge,
    DrumOff,
    Event,
    Figure,
    HandOver,
    LevelReading,
    MakeUp,
    Measured,
    Move,
    Opening,
    Run,
    Sludge,
    Spill,
    Strip,
    TopUp,
    Treatment,
    Uptake,
    WeightReading,
)
from chemicals.books.fold import Entry, Folded, fold_event, rebuild, standing
from chemicals.books.fold.state import EVERY, FINDINGS, LIMIT, Holding, State, Transfer, Vessel
from tests.books.histories import BALANCED, EVENTS, VESSELS, histories, orderly_histories
from tests.books.words import WATER, Books, L, grams, litres, opening

COMPONENTS = (*BALANCED, "Na", "Fe", VOLUME, GROSS_MASS)
FAR = 10**9


@dataclass(frozen=True)
class Moment:
    """The books at a moment, to compare with a later one."""

    holdings: dict[tuple[str, str], Holding]
    vessels: dict[str, Vessel]

    def holding(self, vessel: str, component: str) -> Holding:
        state = State(vessels=dict(self.vessels))
        if (vessel, component) in self.holdings:
            state.put(vessel, component, self.holdings[vessel, component])
        return state.holding(vessel, component)

    def vessel(self, name: str) -> Vessel:
        return self.vessels.get(name, Vessel())


def moment(state: State) -> Moment:
    return Moment(dict(state.holdings), dict(state.vessels))


def told(history: list[Entry]) -> Iterator[tuple[Moment, Entry, Folded, Moment]]:
    """Tell a history entry by entry: before, what was recorded, what followed, after."""
    state = State()
    after = moment(state)
    for entry in standing(history):
        before = after
        folded = fold_event(state, entry.event)
        after = moment(state)
        yield before, entry, folded, after


def net(transfers: tuple[Transfer, ...]) -> Counter[tuple[str, str]]:
    """Return what came to each end, less what left it, by (end, component)."""
    sums: Counter[tuple[str, str]] = Counter()
    for transfer in transfers:
        sums[transfer.source, transfer.component] -= transfer.amount
        sums[transfer.target, transfer.component] += transfer.amount
    return sums


def emptied(event: Event) -> set[str]:
    """Return the vessels of which an entry says that nothing is left, or all that there is."""
    match event:
        case Move(source=source, target=target, volume=None, mass=None):
            return {source} - {target}
        case CleanOut(tank=tank, target=target):
            return {tank} - {target}
        case Treatment(vessel=vessel, filtrate=filtrate):
            return {vessel} - {filtrate}
        case HandOver(container=vessel) | Opening(vessel=vessel):
            return {vessel}
        case _:
            return set()


@given(histories)
def test_every_unit_that_leaves_one_end_arrives_at_another(history: list[Entry]) -> None:
    """What changed in the vessels is what was posted there, and with the boundaries it sums to zero."""
    for before, _, folded, after in told(history):
        posted = net(folded.transfers)
        assert {component for _, component in posted} <= set(COMPONENTS)
        for component in COMPONENTS:
            change = {
                vessel: after.holding(vessel, component).booked - before.holding(vessel, component).booked
                for vessel in VESSELS
            }
            assert {vessel: posted[vessel, component] for vessel in VESSELS} == change
            assert sum(change.values()) + sum(posted[end, component] for end in BOUNDARIES) == 0


@given(histories)
def test_what_is_booked_is_the_sum_of_all_that_was_posted(history: list[Entry]) -> None:
    state, followed = rebuild(history)
    sums = net(tuple(transfer for folded in followed.values() for transfer in folded.transfers))
    for (vessel, component), holding in state.holdings.items():
        assert holding.booked == sums[vessel, component]
        assert holding.amount is None or holding.known_part == 0
    posted = {key for key, amount in sums.items() if amount and key[0] not in BOUNDARIES}
    assert posted <= set(state.holdings)


@given(histories)
def test_transfers_are_between_two_ends_and_within_bounds(history: list[Entry]) -> None:
    for _, _, folded, after in told(history):
        for transfer in folded.transfers:
            assert type(transfer.amount) is int
            assert type(transfer.sd) is int
            assert 0 < transfer.amount <= LIMIT
            assert 0 <= transfer.sd <= LIMIT
            assert transfer.source != transfer.target
            assert not {transfer.source, transfer.target} <= BOUNDARIES
        for holding in after.holdings.values():
            assert type(holding.booked) is int
            assert type(holding.variance) is int
            assert abs(holding.booked) <= LIMIT
            assert 0 <= holding.variance <= LIMIT**2
        assert {finding.code for finding in folded.findings} <= set(FINDINGS)
        assert not {vessel for vessel, _ in after.holdings} & BOUNDARIES


@given(histories)
def test_a_metal_never_reacts_away(history: list[Entry]) -> None:
    """Only species do; and what dissolves needs more room, or less, than before."""
    _, followed = rebuild(history)
    transfers = [transfer for folded in followed.values() for transfer in folded.transfers]
    reacted = {t.component for t in transfers if REACTION in {t.source, t.target}}
    assert reacted <= {*SPECIES, VOLUME}


@given(histories)
def test_folding_on_the_touched_vessels_is_folding_everything(history: list[Entry]) -> None:
    """An entry at the end of time reads and writes only the vessels it names."""
    kept, followed = State(), {}
    for entry in standing(history):
        part = State()
        for vessel in set(entry.event.vessels()):
            if vessel in kept.vessels:
                part.put_vessel(vessel, kept.vessels[vessel])
            for component in kept.components(vessel):
                part.put(vessel, component, kept.holding(vessel, component))
        followed[entry.uuid] = folded = fold_event(part, entry.event)
        assert {vessel for vessel, component, _ in folded.contents if component == EVERY} == set(dict(folded.vessels))
        for name, known in folded.vessels:
            kept.put_vessel(name, known)
        for name, component, holding in folded.contents:
            assert name in entry.event.vessels()
            if component == EVERY:
                assert (holding.amount is None) is kept.vessel(name).incomplete
            else:
                kept.put(name, component, holding)
    assert (kept, followed) == rebuild(history)


@given(orderly_histories, st.randoms(use_true_random=False))
def test_the_order_of_recording_does_not_matter(history: list[Entry], shuffler: random.Random) -> None:
    sequences = [entry.sequence for entry in history]
    shuffler.shuffle(sequences)
    shuffled = [replace(entry, sequence=sequence) for entry, sequence in zip(history, sequences, strict=True)]
    shuffler.shuffle(shuffled)
    assert rebuild(shuffled) == rebuild(history)


@given(histories, st.integers(0, 17), st.integers(0, 40))
def test_what_is_cancelled_has_never_been(history: list[Entry], which: int, minute: int) -> None:
    mistake = history[which % len(history)]
    at = history[0].occurred_at.replace(minute=minute)
    cancellation = Entry(UUID(int=FAR), at, FAR, Cancellation(mistake.uuid, "a mistake"))
    without = [entry for entry in history if entry.uuid != mistake.uuid]
    if isinstance(mistake.event, Cancellation):  # it cannot be cancelled: what it cancelled stays so
        without = history
    accepted = {
        entry.uuid for entry in without if isinstance(entry.event, Acceptance) and entry.event.analysis == mistake.uuid
    }
    state, followed = rebuild([*history, cancellation])
    expected, expected_followed = rebuild([entry for entry in without if entry.uuid not in accepted])
    del followed[cancellation.uuid]
    followed.pop(mistake.uuid, None)
    expected_followed.pop(mistake.uuid, None)
    assert (state, followed) == (expected, expected_followed)


TAKING_ALL: Mapping[str, Callable[[str], Event]] = {
    "move": lambda vessel: Move(vessel, "new drum"),
    "drum off": lambda vessel: DrumOff(vessel, "new drum"),
    "clean-out": lambda vessel: CleanOut(vessel, "new drum", litres(0), WATER),
    "treatment": lambda vessel: Treatment(vessel, (), "new drum", "new box", litres(1), grams(9), (), ("acid",)),
    "discharge": lambda vessel: Discharge(vessel, SEWER),
    "spill": lambda vessel: Spill(vessel, SPILL),
    "hand-over": lambda vessel: HandOver(vessel, "the collection point", None),
}


@pytest.mark.parametrize("way", TAKING_ALL)
@settings(max_examples=40)
@given(history=histories, vessel=st.sampled_from(VESSELS))
def test_taking_all_leaves_nothing(way: str, history: list[Entry], vessel: str) -> None:
    state, _ = rebuild(history)
    total = Counter({c: sum(state.holding(v, c).booked for v in VESSELS) for c in COMPONENTS})
    folded = fold_event(state, TAKING_ALL[way](vessel))
    assert state.vessel(vessel) == Vessel()
    for component in COMPONENTS:
        assert state.holding(vessel, component) == Holding(0)
    after = Counter({c: sum(state.holding(v, c).booked for v in (*VESSELS, "new drum", "new box")) for c in COMPONENTS})
    posted = net(folded.transfers)
    assert {c: after[c] - total[c] for c in COMPONENTS} == {
        c: -sum(posted[end, c] for end in BOUNDARIES) for c in COMPONENTS
    }


def said(event: Event) -> set[tuple[str, str]]:
    """Return (vessel, component) of what an entry says how much there is of it."""
    known: set[tuple[str, str]] = set()
    match event:
        case Acceptance(vessel=vessel, component=component):
            known = {(vessel, component)}
        case Count(vessel=vessel, volume=volume):
            known = {(vessel, GROSS_MASS if volume is None else VOLUME)}
        case WeightReading(vessel=vessel) | DensityReading(vessel=vessel):
            known = {(vessel, GROSS_MASS)}
        case LevelReading(vessel=tank) | MakeUp(tank=tank, level=Measured()) | TopUp(tank=tank, level=Measured()):
            known = {(tank, VOLUME)}
        case Strip(source=source, metal=metal, weight_before=None):
            known = {(source, metal)}
        case Treatment(vessel=vessel, dissolved=dissolved, consumed=consumed):
            known = {(vessel, component) for component in (VOLUME, *(row.component for row in dissolved), *consumed)}
    return known


@given(histories)
def test_unknown_stays_unknown_until_somebody_says_how_much_there_is(history: list[Entry]) -> None:
    for before, entry, _, after in told(history):
        for vessel in VESSELS:
            for component in COMPONENTS:
                silent = vessel not in emptied(entry.event) and (vessel, component) not in said(entry.event)
                if silent and before.holding(vessel, component).amount is None:
                    assert after.holding(vessel, component).amount is None


moves = st.builds(Move, st.sampled_from(VESSELS), st.sampled_from(VESSELS), st.none() | st.just(litres(1)))
scoops = st.builds(Move, st.sampled_from(VESSELS), st.sampled_from(VESSELS), st.none(), st.just(grams(1)))


@given(histories, moves | scoops)
def test_an_unknown_source_makes_the_target_unknown(history: list[Entry], move: Move) -> None:
    state, _ = rebuild(history)
    before = moment(state)
    fold_event(state, move)
    everything = move.volume is None and move.mass is None
    for component in COMPONENTS:
        source = before.holding(move.source, component)
        measured = component == (GROSS_MASS if move.volume is None else VOLUME) and not everything
        if source.amount is None and move.source != move.target and not measured:
            assert state.holding(move.target, component).amount is None
            assert state.holding(move.source, component).amount == (0 if everything else None)


def poured(event: Event) -> list[tuple[str, str]]:
    """Return (from, to) of all liquids and salts that an entry says were poured, in order."""
    pours: list[tuple[str, str]] = []
    match event:
        case Move(source=source, target=target, volume=volume, mass=mass):
            pours = some([(source, target, volume or mass)])
        case TopUp(tank=tank, source=source, volume=Measured() as volume):
            pours = some([(source, tank, volume)])
        case MakeUp(tank=tank, ingredients=ingredients):
            pours = some([(item.stock, tank, item.volume or item.mass) for item in ingredients])
        case Run(route=route, drag_out=drag_out):
            pours = dipped(route, drag_out)
        case DaySheet(racks=racks, drag_out=drag_out):
            pours = [ends for row, drags in zip(racks, drag_out, strict=True) for ends in dipped(row.route, drags)]
        case Uptake(tank=source, target=target) | CleanOut(tank=source, target=target):
            pours = [(source, target)]
        case Sludge(source=source, target=target, mass=mass):
            pours = some([(source, target, mass)])
        case Treatment(vessel=vessel, reagents=reagents, filtrate=filtrate, sludge=sludge):
            went_in = some([(item.stock, vessel, item.volume or item.mass) for item in reagents])
            pours = [*went_in, *((vessel, end) for end in (sludge, filtrate) if end is not None)]
    return pours


def some(pours: list[tuple[str, str, Measured | None]]) -> list[tuple[str, str]]:
    """Return the ends of what was poured: None is an unknown amount, or all."""
    return [(source, target) for source, target, amount in pours if amount is None or amount.base]


def dipped(route: tuple[str, ...], drag_out: tuple[Figure, ...]) -> list[tuple[str, str]]:
    """Return the ends between which a load drags liquid."""
    return [ends for ends, drags in zip(pairwise(route), drag_out, strict=False) if drags.base]


@given(histories)
def test_what_was_poured_in_is_remembered_until_the_vessel_is_emptied(history: list[Entry]) -> None:
    for before, entry, _, after in told(history):
        kept = {vessel: set(before.vessel(vessel).poured) for vessel in VESSELS}
        for source, target in poured(entry.event):
            kept.setdefault(target, set()).update(kept.get(source, ()))
        for vessel in set(VESSELS) - emptied(entry.event):
            assert after.vessel(vessel).poured >= kept[vessel]
            assert after.vessel(vessel).incomplete >= before.vessel(vessel).incomplete


@given(
    st.lists(st.integers(0, 10**9), min_size=3, max_size=3),
    st.lists(st.tuples(st.integers(0, 2), st.integers(0, 2), st.integers(0, 2 * L)), max_size=30),
)
def test_mixing_agrees_with_exact_fractions(copper: list[int], moves: list[tuple[int, int, int]]) -> None:
    """Three tanks of 5 L; a second, independent book in fractions. Each pour leaves less than a microgram behind."""
    books = Books(*(opening(str(i), Measured("5", "L", 5 * L), Cu=Measured("", "", c)) for i, c in enumerate(copper)))
    volume, content = [Fraction(5 * L)] * 3, [Fraction(c) for c in copper]
    done = 0
    for source, target, part in moves:
        if source == target or part > volume[source]:
            continue
        books.record(Move(str(source), str(target), Measured("", "nL", part)))
        if part:
            gone = content[source] * part / volume[source]
            for sums, amount in ((volume, part), (content, gone)):
                sums[source] -= amount
                sums[target] += amount
            done += 1
    for tank in range(3):
        held = books.holds(str(tank), "Cu")
        assert held is not None
        assert books.holds(str(tank), VOLUME) == volume[tank]
        assert abs(held - content[tank]) <= done


def test_histories_are_of_every_kind() -> None:
    assert set(EVENTS) == set(events.EVENTS)


@pytest.mark.parametrize("kind", EVENTS, ids=lambda kind: str(kind.KIND))
@settings(max_examples=20)
@given(data=st.data())
def test_every_kind_folds_on_empty_books(kind: type[Event], data: st.DataObject) -> None:
    """Whatever is recorded first, the fold has an answer: no refusal, no crash."""
    event = data.draw(EVENTS[kind])
    folded = fold_event(State(), event)
    assert isinstance(folded, Folded)
    assert set(event.vessels()) >= {vessel for vessel, _, _ in folded.contents}
