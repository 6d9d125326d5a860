"""What can have happened: one frozen dataclass per kind and version.

A field annotated ``Used`` is a figure that was relied on that day (composition, density, drag-out, efficiency); every
other field is what was observed. Amounts are integers in base units: micrograms, nanolitres, microcoulombs,
micrograms per litre, micrograms per kilogram, parts per million. A kind version never changes: a new shape is a new
version with a pure upcaster. Ends of a movement are vessel identifiers (text) or one of BOUNDARIES.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import datetime
from typing import Annotated, Any, ClassVar, TypeVar
from uuid import UUID

from chemicals.books import checks
from chemicals.books.canonical import CanonicalError, from_plain, to_plain, type_hints

T = TypeVar("T")
USED = "used"
Used = Annotated[T, USED]

OPENING, SUPPLIER, WATER_SUPPLY, PARTS, AIR = "opening", "supplier", "water supply", "parts", "air"
SEWER, SAMPLE, SPILL, RECEIVER, REACTION, UNACCOUNTED = (
    "sewer", "sample", "spill", "receiver", "reaction", "unaccounted",
)  # fmt: skip
BOUNDARIES = frozenset(
    {OPENING, SUPPLIER, WATER_SUPPLY, PARTS, AIR, SEWER, SAMPLE, SPILL, RECEIVER, REACTION, UNACCOUNTED}
)
UNKNOWN_LIQUID = "unknown/"
"""Begins the key by which a vessel remembers liquid that nobody can name; the vessel it was first met in follows."""
VOLUME, GROSS_MASS = "volume", "gross mass"
"""The two components that are not substances: nanolitres and micrograms."""
OBSERVED, COMPUTED, ASSUMED = "observed", "computed", "assumed"
"""The basis of a figure."""


@dataclass(frozen=True)
class Measured:
    """A figure as typed, its unit, its value in base units and its standard uncertainty (None: not stated)."""

    typed: str
    unit: str
    base: int
    sd: int | None = None

    def __post_init__(self) -> None:
        checks.not_negative("Measured", base=self.base, sd=self.stated_sd)

    @property
    def stated_sd(self) -> int:
        """Return the standard uncertainty, 0 where none was stated."""
        return self.sd or 0


@dataclass(frozen=True)
class Figure:
    """A figure relied on: value and standard uncertainty in base units, and where it comes from."""

    base: int
    sd: int
    source: str

    def __post_init__(self) -> None:
        checks.not_negative("Figure", base=self.base, sd=self.sd)


@dataclass(frozen=True)
class Share:
    """How much of a component a product holds: micrograms per ``per`` (kg or L)."""

    component: str
    amount: int
    sd: int
    per: str

    def __post_init__(self) -> None:
        checks.not_negative("Share", amount=self.amount, sd=self.sd)
        checks.one_of("Share", ("kg", "L"), per=self.per)


@dataclass(frozen=True)
class Recipe:
    """A product revision as relied on: its key for what was poured in, its list, its density in ug/mL."""

    product: UUID
    revision: int
    name: str
    solid: bool
    complete: bool
    shares: tuple[Share, ...]
    density: Figure | None

    @property
    def key(self) -> str:
        """Return what a vessel remembers of this product once it was poured in."""
        return f"{self.product}/{self.revision}"


class Event:
    """Base of all events."""

    KIND: ClassVar[str]
    VERSION: ClassVar[int] = 1

    def vessels(self) -> tuple[str, ...]:
        """Return every vessel whose content this event may change."""
        return ()

    def about(self) -> UUID | None:
        """Return the entry that this event speaks of, if any."""
        return None


@dataclass(frozen=True)
class Held:
    """An amount of a component found in a vessel."""

    component: str
    amount: Measured


@dataclass(frozen=True)
class Opening(Event):
    """What a vessel held when counting began. An incomplete list leaves every other component unknown."""

    KIND = "opening"
    vessel: str
    complete: bool
    volume: Measured | None
    mass: Measured | None
    held: tuple[Held, ...]
    density: Used[Figure | None]
    poured: Used[tuple[str, ...]]

    def __post_init__(self) -> None:
        # volume and mass have fields of their own
        checks.once("Opening", held=[VOLUME, GROSS_MASS, *(held.component for held in self.held)])

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class Receipt(Event):
    """Bought matter arrived in a stock container (or an anode set): a mass or a volume of a product."""

    KIND = "receipt"
    vessel: str
    mass: Measured | None
    volume: Measured | None
    lot: str
    recipe: Used[Recipe]

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class Ingredient:
    """What was taken from a stock container: a mass or a volume."""

    stock: str
    mass: Measured | None
    volume: Measured | None


@dataclass(frozen=True)
class MakeUp(Event):
    """A bath was made up: stock went into the tank, water filled it to a level."""

    KIND = "make-up"
    tank: str
    ingredients: tuple[Ingredient, ...]
    level: Measured | None
    water_density: Used[Figure]

    def vessels(self) -> tuple[str, ...]:
        return (self.tank, *(item.stock for item in self.ingredients))


@dataclass(frozen=True)
class TopUp(Event):
    """Liquid was added from a named source, an amount or up to a level. source: water supply or a vessel."""

    KIND = "top-up"
    tank: str
    source: str
    volume: Measured | None
    level: Measured | None
    water_density: Used[Figure]

    def vessels(self) -> tuple[str, ...]:
        return (self.tank,) if self.source in BOUNDARIES else (self.tank, self.source)


@dataclass(frozen=True)
class Deposit:
    """The figures of Faraday's law for a bath: charge per mole, efficiency in ppm."""

    metal: str
    molar_mass: str
    valence: int
    faraday: str
    efficiency: Figure

    def __post_init__(self) -> None:
        checks.positive("Deposit", molar_mass=self.molar_mass, faraday=self.faraday, valence=self.valence)


@dataclass(frozen=True)
class Run(Event):
    """A load went through a route of tanks; the first one plated it. Weights, where taken, tell the mass.

    ``deposit`` is None for a load that is only dipped. ``anode`` names the anode set of a soluble anode; an inert
    anode gives nothing to the bath. ``drag_out`` is what the load drags out of each tank of the route, in nanolitres.
    """

    KIND = "run"
    parts: str
    route: tuple[str, ...]
    charge: Measured | None
    current: Measured | None
    time: Measured | None
    weight_before: Measured | None
    weight_after: Measured | None
    deposit: Used[Deposit | None]
    anode: Used[str | None]
    rack: Used[str]
    drag_out: Used[tuple[Figure, ...]]

    def __post_init__(self) -> None:
        checks.as_many("Run", self.route, drag_out=self.drag_out)

    def vessels(self) -> tuple[str, ...]:
        return (*self.route, *((self.anode,) if self.anode else ()))


@dataclass(frozen=True)
class Move(Event):
    """Liquid moved from one vessel to another; ``volume`` None means all of it."""

    KIND = "move"
    source: str
    target: str
    volume: Measured | None

    def vessels(self) -> tuple[str, ...]:
        return (self.source, self.target)


@dataclass(frozen=True)
class DrumOff(Move):
    """Spent liquid went into a waste container; ``volume`` None means all of it."""

    KIND = "drum off"


@dataclass(frozen=True)
class LevelReading(Event):
    """The volume of a vessel was read. ``lost_to`` says where less volume went: air, or spill if said."""

    KIND = "level reading"
    vessel: str
    volume: Measured
    lost_to: str
    water_density: Used[Figure]

    def __post_init__(self) -> None:
        checks.one_of("LevelReading", (AIR, SPILL), lost_to=self.lost_to)

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class Analysis(Event):
    """A sample was analysed. Nothing is posted until the result is accepted.

    The entry's time is the time of sampling; ``reported_at`` None is when it was recorded. ``concentration`` is the
    component's own, in ug/L, whatever the result was expressed as.
    """

    KIND = "analysis"
    vessel: str
    component: str
    result: Measured
    expressed_as: str
    reported_at: datetime | None
    concentration: Used[Figure]

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class Acceptance(Event):
    """An analysis was accepted: from its sampling time on, the content is concentration times volume.

    The entry's time is the time of sampling, as in the analysis.
    """

    KIND = "acceptance"
    analysis: UUID
    vessel: Used[str]
    component: Used[str]
    concentration: Used[Figure]

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)

    def about(self) -> UUID | None:
        return self.analysis


@dataclass(frozen=True)
class HandOver(Event):
    """A waste container went to a receiver, all of it."""

    KIND = "hand-over"
    container: str
    receiver: str
    gross: Measured | None

    def vessels(self) -> tuple[str, ...]:
        return (self.container,)


@dataclass(frozen=True)
class Cancellation(Event):
    """An earlier entry was a mistake; the books fold as if it had not been."""

    KIND = "cancellation"
    entry: UUID
    reason: str

    def about(self) -> UUID | None:
        return self.entry


@dataclass(frozen=True)
class Paper(Event):
    """A numbered paper was issued; the hashes prove its frozen data and its bytes."""

    KIND = "paper"
    paper: str
    number: int
    data_sha256: str
    pdf_sha256: str


EVENTS: tuple[type[Event], ...] = (
    Opening, Receipt, MakeUp, TopUp, Run, Move, DrumOff, LevelReading, Analysis, Acceptance, HandOver, Cancellation,
    Paper,
)  # fmt: skip
CURRENT: Mapping[str, type[Event]] = {event.KIND: event for event in EVENTS}
Upcaster = Callable[[dict[str, Any]], dict[str, Any]]
UPCASTERS: Mapping[tuple[str, int], Upcaster] = {}
"""(kind, version) -> the payload of the next version. Old entries are read for ever."""


def encode(event: Event) -> dict[str, Any]:
    """Return the payload of an event: what was observed and what was used."""
    plain = to_plain(event)
    hints = type_hints(type(event))
    return {
        "observed": {name: value for name, value in plain.items() if not _is_used(hints[name])},
        "used": {name: value for name, value in plain.items() if _is_used(hints[name])},
    }


def decode(
    kind: str, version: int, payload: Mapping[str, Any], upcasters: Mapping[tuple[str, int], Upcaster] = UPCASTERS
) -> Event:
    """Return the event behind a payload of any version; an unknown kind or shape is refused."""
    if kind not in CURRENT or not 1 <= version <= CURRENT[kind].VERSION:
        raise CanonicalError(f"This version of the program does not know {kind} version {version}.")
    current = dict(payload)
    for step in range(version, CURRENT[kind].VERSION):
        current = upcasters[kind, step](current)
    _check_parts(kind, current)
    return from_plain(CURRENT[kind], {**current["observed"], **current["used"]})


def _check_parts(kind: str, payload: Mapping[str, Any]) -> None:
    """Refuse a payload whose fields do not stand in the part they belong to."""
    if set(payload) != {"observed", "used"} or not all(type(part) is dict for part in payload.values()):
        raise CanonicalError(f"{kind}: a payload has the parts observed and used.")
    hints = type_hints(CURRENT[kind])
    for part, is_used in (("observed", False), ("used", True)):
        astray = sorted(name for name in payload[part] if name in hints and _is_used(hints[name]) is not is_used)
        if astray:
            raise CanonicalError(f"{kind}: {', '.join(astray)} does not belong to what was {part}.")


def _is_used(hint: Any) -> bool:
    return USED in getattr(hint, "__metadata__", ())
