"""What all events share: names of ends and components, figures, the base class."""

import re
from dataclasses import dataclass
from typing import Annotated, Any, ClassVar, TypeVar
from uuid import UUID

from chemicals.books import checks

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
FREE_CYANIDE, CHROMIUM_VI, ACID, ALKALI, AMMONIA, SULFITE = (
    "free cyanide", "chromium(VI)", "acid", "alkali", "ammonia", "sulfite",
)  # fmt: skip
SPECIES = (FREE_CYANIDE, CHROMIUM_VI, ACID, ALKALI, AMMONIA, SULFITE)
"""Species that react away: nanomoles (acid and alkali of H+ and OH-). What is missing of them goes to ``reaction``."""
SYMBOL = re.compile("[A-Z][a-z]?")
"""What names a metal: an element's symbol. A solute's name is a formula of several elements."""
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
class Gauge:
    """An instrument as relied on: its name, its standard uncertainty in base units and as a share in ppm.

    Either may be 0. ``calibrated_on`` is an ISO date, empty where nobody said so: readings of one calibration share
    what is wrong with it.
    """

    name: str
    sd: int
    relative_sd: int
    calibrated_on: str

    def __post_init__(self) -> None:
        checks.not_negative("Gauge", sd=self.sd, relative_sd=self.relative_sd)


@dataclass(frozen=True)
class Share:
    """How much of a component a product holds: micrograms (of a species nanomoles) per ``per`` (kg or L)."""

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


@dataclass(frozen=True)
class Held:
    """An amount of a component found in a vessel."""

    component: str
    amount: Measured


@dataclass(frozen=True)
class Ingredient:
    """What was taken from a stock container: a mass or a volume."""

    stock: str
    mass: Measured | None
    volume: Measured | None


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


def is_metal(component: str) -> bool:
    """Return whether a component is a metal, by its name."""
    return SYMBOL.fullmatch(component) is not None


def only_vessels(*ends: str | None) -> tuple[str, ...]:
    """Return those ends of a movement that are vessels."""
    return tuple(end for end in ends if end is not None and end not in BOUNDARIES)


def read_by_nothing(payload: dict[str, Any]) -> dict[str, Any]:
    """Make a payload one that may name an instrument: none was named."""
    return {
        "observed": {**payload["observed"], "instrument": None},
        "used": {**payload["used"], "gauge": None},
    }
