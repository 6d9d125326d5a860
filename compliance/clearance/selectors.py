"""May this be done? Asks what was poured in, what the waste stream and its container may hold, what must never meet."""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from datetime import datetime

from django_scopes import scope

from chemicals.books import events
from chemicals.books.clearance import ALLOWED, INCIDENT, OVERRIDDEN, Clearance
from chemicals.books.occurred import Occurred
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.selectors import read_memory
from chemicals.process.inputs import Input
from chemicals.process.instruments import find_expired_instrument
from chemicals.process.selectors import Trial, try_out
from chemicals.register.selectors import list_reactivity
from chemicals.science.reactivity import ACID, CYANIDE, HYPOCHLORITE, OXIDISER, UNKNOWN, Danger, declared, find_dangers
from chemicals.workshop.models import Membership, Workshop
from compliance.clearance.meetings import find_fillings, find_meetings, find_opened
from compliance.clearance.texts import (
    FIRST_STEPS,
    NOT_CALIBRATED,
    ONLY_IN_A_LICENSED_PLAN,
    OTHER_PRODUCT,
    SEWER,
    SPILL_STEPS,
    TREATMENT_CAUTIONS,
)
from compliance.waste.selectors import find_obstacles, find_seal, get_declared_reactivity

LIQUID_PATH = frozenset(VesselKind) - {VesselKind.STOCK, VesselKind.WASTE}
"""Kinds of vessels that hold what loads, filters and cells carried there from a tank."""

Marks = Mapping[str, frozenset[str]]
"""What each thing in a vessel reacts as."""


@dataclass(frozen=True)
class Answer:
    """Whether something may be done.

    ``dangers`` and ``obstacles`` speak against it; ``questions`` only a person can answer who has read them.
    ``cautions`` go with it in any case. ``happened``: it is nothing that anybody would do on purpose.
    """

    dangers: tuple[str, ...] = ()
    obstacles: tuple[str, ...] = ()
    questions: tuple[str, ...] = ()
    cautions: tuple[str, ...] = ()
    first_steps: tuple[str, ...] = ()
    happened: bool = False

    @property
    def reasons(self) -> tuple[str, ...]:
        """Return why it is not recorded unless somebody says that it has happened."""
        return self.dangers + self.obstacles + self.questions

    @property
    def allowed(self) -> bool:
        """Say whether nothing speaks against it."""
        return not self.reasons

    @property
    def clearance(self) -> Clearance:
        """Return what the journal keeps once it has happened: the reasons, the first steps and the cautions shown."""
        if self.dangers or self.obstacles or self.happened:
            return Clearance(INCIDENT, self.reasons + self.first_steps + self.cautions)
        return Clearance(OVERRIDDEN if self.questions else ALLOWED, self.reasons + self.cautions)


@dataclass(frozen=True)
class Preview:
    """The answer before anything is written, and what would be recorded."""

    answer: Answer
    trial: Trial


def preview(member: Membership, now: datetime, data: Input, occurred: Occurred | None) -> Preview:
    """Return the verdict on an input and what would follow from it. Writes nothing."""
    trial = try_out(member, now, data, occurred)
    return Preview(ask(member.workshop, trial.event, now if trial.occurred is None else trial.occurred.at), trial)


def ask(workshop: Workshop, event: events.Event, at: datetime) -> Answer:
    """Return whether something may be done, or might have been done at that moment."""
    with scope(workshop=workshop):
        rows = Vessel.objects.filter(uuid__in=event.vessels()).select_related("workshop", "product")
        vessels = {str(vessel.uuid): vessel for vessel in rows}
    dangers = tuple(dict.fromkeys(_find_dangers(vessels, event)))
    spilled = isinstance(event, events.Spill)
    return Answer(
        dangers=dangers,
        obstacles=tuple(_find_obstacles(vessels, event, at)),
        questions=tuple(_find_questions(vessels, event)),
        cautions=tuple(_find_cautions(workshop, event, at)),
        first_steps=(FIRST_STEPS if dangers else ()) + (SPILL_STEPS if spilled else ()),
        happened=spilled,
    )


def _find_cautions(workshop: Workshop, event: events.Event, at: datetime) -> Iterator[str]:
    if isinstance(event, events.Treatment):
        yield from TREATMENT_CAUTIONS
    expired = find_expired_instrument(workshop, event, at)
    if expired is not None:
        yield NOT_CALIBRATED % {"instrument": expired, "until": expired.valid_until}


def _find_questions(vessels: Mapping[str, Vessel], event: events.Event) -> Iterator[str]:
    """Yield what only a person can answer: may it go to the sewer, shall a label become wrong."""
    if isinstance(event, events.Discharge):
        yield SEWER
    if type(event) is events.Move:
        source, target = vessels[event.source], vessels[event.target]
        if None not in (source.product, target.product) and source.product != target.product:
            yield OTHER_PRODUCT % {
                "source": source.name,
                "product": source.product,
                "target": target.name,
                "other": target.product,
            }


def _find_obstacles(vessels: Mapping[str, Vessel], event: events.Event, at: datetime) -> Iterator[str]:
    for filling in find_fillings(vessels, event):
        yield from find_obstacles(vessels[filling.target], at, filling.volume)
    opened = find_opened(event)
    if opened is not None:
        yield from find_seal(vessels[opened], at)


def _find_dangers(vessels: Mapping[str, Vessel], event: events.Event) -> Iterator[str]:
    """Yield every pair of liquids that would meet and never must, with the danger named."""
    for one, other in find_meetings(event):
        if one in vessels and other in vessels:
            for danger in find_dangers_between(vessels[one], vessels[other]):
                yield (
                    f"{vessels[one].name} ({danger.first}) and {vessels[other].name} ({danger.second}) must never "
                    f"meet, either way round: {danger.danger}."
                )
                if isinstance(event, events.Treatment) and _is_destruction(danger):
                    yield ONLY_IN_A_LICENSED_PLAN
    if isinstance(event, events.Discharge):
        source = vessels[event.source]
        for danger in find_dangers(react_as(source), {ACID}):
            yield f"{source.name} ({danger.first}) may meet acid in the sewer, which gives {danger.danger}."


def _is_destruction(danger: Danger) -> bool:
    pair = {danger.first, danger.second}
    return CYANIDE in pair and bool(pair & {OXIDISER, HYPOCHLORITE})


def find_dangers_between(one: Vessel, other: Vessel) -> list[Danger]:
    """Return every danger of bringing the contents of two vessels together, each once; ``first`` is of the one.

    A liquid that nobody can name counts as an acid and as a cyanide, but not between a tank and its own rinse or its
    own filter, of which one holds nothing else than the other.
    """
    left, right = read_marks(one), read_marks(other)
    nested = left.keys() <= right.keys() or right.keys() <= left.keys()
    return compare_marks(left, right, own_rinse=nested and {one.kind, other.kind} <= LIQUID_PATH)


def compare_marks(left: Marks, right: Marks, *, own_rinse: bool = False) -> list[Danger]:
    """Return every danger between things of two lists, each once; what stands in both is no danger to itself."""
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
