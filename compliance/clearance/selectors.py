"""May this be done? Asks what was poured in, what the waste stream and its container may hold, what must never meet."""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from datetime import datetime
from itertools import pairwise

from django_scopes import scope

from chemicals.books import events
from chemicals.books.events import BOUNDARIES
from chemicals.books.occurred import Occurred
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import list_held, read_memory
from chemicals.process.inputs import Input
from chemicals.process.selectors import Trial, try_out
from chemicals.register.selectors import list_reactivity
from chemicals.science.reactivity import UNKNOWN, Danger, declared, find_dangers
from chemicals.workshop.models import Membership, Workshop
from compliance.waste.selectors import find_obstacles, get_declared_reactivity

FIRST_STEPS = (
    "Everyone out, and warn others. Shut off from outside only. Call the emergency number.",
    "Nobody returns without breathing apparatus; oxygen is given by trained people.",
    "Follow your local rules and the written instruction of this workplace.",
)
"""What to do first where liquids met that must never meet."""


@dataclass(frozen=True)
class Answer:
    """Why something must not be done, and what to do first if it has happened. No reason: it may be done."""

    reasons: tuple[str, ...]
    first_steps: tuple[str, ...]


@dataclass(frozen=True)
class Preview:
    """The answer before anything is written: allowed or not, why, and what would be recorded."""

    allowed: bool
    reasons: tuple[str, ...]
    first_steps: tuple[str, ...]
    trial: Trial


def preview(member: Membership, now: datetime, data: Input, occurred: Occurred | None) -> Preview:
    """Return the verdict on an input and what would follow from it. Writes nothing."""
    trial = try_out(member, now, data, occurred)
    answer = ask(member.workshop, trial.event, now if trial.occurred is None else trial.occurred.at)
    return Preview(not answer.reasons, answer.reasons, answer.first_steps, trial)


def ask(workshop: Workshop, event: events.Event, at: datetime) -> Answer:
    """Return whether something may be done, or might have been done at that moment."""
    with scope(workshop=workshop):
        rows = Vessel.objects.filter(uuid__in=event.vessels()).select_related("workshop")
        vessels = {str(vessel.uuid): vessel for vessel in rows}
    dangers = tuple(_find_dangers(vessels, event))
    obstacles: tuple[str, ...] = ()
    if isinstance(event, events.Move):
        obstacles = tuple(find_obstacles(vessels[event.target], at, _poured(vessels, event)))
    return Answer(dangers + obstacles, FIRST_STEPS if dangers else ())


def _poured(vessels: Mapping[str, Vessel], event: events.Move) -> int | None:
    """Return how much would be poured, as far as that is known."""
    if event.volume is not None:
        return event.volume.base
    held = {row.component: row.amount for row in list_held(vessels[event.source])}
    return held.get(events.VOLUME, 0)


def _find_dangers(vessels: Mapping[str, Vessel], event: events.Event) -> Iterator[str]:
    """Yield every pair of liquids that would meet and never must, with the danger named."""
    for one, other in _meetings(event):
        if one not in BOUNDARIES:
            for danger in find_dangers_between(vessels[one], vessels[other]):
                yield (
                    f"{vessels[one].name} ({danger.first}) and {vessels[other].name} ({danger.second}) must never "
                    f"meet, either way round: {danger.danger}."
                )


def _meetings(event: events.Event) -> Iterator[tuple[str, str]]:
    """Yield every pair of vessels whose contents would meet."""
    if isinstance(event, events.Move):
        yield event.source, event.target
    elif isinstance(event, events.TopUp):
        yield event.source, event.tank
    elif isinstance(event, events.Run):
        yield from pairwise(event.route)  # a load drags out of one tank into the next
    elif isinstance(event, events.MakeUp):
        stocks = [item.stock for item in event.ingredients]
        for number, stock in enumerate(stocks):
            yield stock, event.tank
            yield from ((stock, other) for other in stocks[:number] if other != stock)


def find_dangers_between(one: Vessel, other: Vessel) -> list[Danger]:
    """Return every danger of bringing the contents of two vessels together, each once; ``first`` is of the one.

    A liquid that nobody can name counts as an acid and as a cyanide, but not between a tank and its own rinse, of
    which one holds nothing else than the other.
    """
    left, right = read_marks(one), read_marks(other)
    nested = left.keys() <= right.keys() or right.keys() <= left.keys()
    own_rinse = nested and {one.kind, other.kind} <= {VesselKind.BATH, VesselKind.RINSE}
    found = {
        (danger.gives, danger.harm): danger
        for key, kinds in sorted(left.items())
        for other_key, other_kinds in sorted(right.items())
        if key != other_key and not (own_rinse and UNKNOWN in kinds | other_kinds)
        for danger in find_dangers(kinds, other_kinds)
    }
    return list(found.values())


def react_as(vessel: Vessel) -> frozenset[str]:
    """Return what a vessel may react as: everything poured in since last empty, not today's balance."""
    return frozenset().union(*read_marks(vessel).values())


def read_marks(vessel: Vessel) -> dict[str, frozenset[str]]:
    """Return what each thing poured in reacts as, and what the stream of a waste container may react as."""
    _, poured = read_memory(vessel)
    known = list_reactivity(vessel.workshop, poured)
    marks = {key: declared(known.get(key, ())) for key in poured}
    if vessel.kind == VesselKind.WASTE:
        marks[f"stream/{vessel.uuid}"] = declared(get_declared_reactivity(vessel))
    return marks
