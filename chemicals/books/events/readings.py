"""What was read and analysed, and what the books follow of it."""

from dataclasses import dataclass
from datetime import datetime
from typing import Any
from uuid import UUID

from chemicals.books import checks
from chemicals.books.events.base import AIR, SPILL, Event, Figure, Gauge, Measured, Used, read_by_nothing
from chemicals.science.reading import READ

QUANTITIES = tuple(READ)
"""What a reading may be of: thousandths of a pH, mK, nS/cm, uV, um/s, uN/m; of a strip ug/L, nmol/L or ppm."""


@dataclass(frozen=True)
class LevelMark:
    """A row of a level table as relied on: as told, its height in nm (None: only a name), its volume at 20 °C."""

    mark: str
    height: int | None
    volume: int

    def __post_init__(self) -> None:
        checks.not_negative("LevelMark", height=self.height or 0, volume=self.volume)


@dataclass(frozen=True)
class LevelReading(Event):
    """The volume of a vessel was read. ``lost_to`` says where less volume went: air, or spill if said.

    If a mark was read, ``volume`` is as typed and as taken, at 20 °C, from the ``marks`` on both sides of it, of the
    table for hot liquid or for cold.
    """

    KIND = "level reading"
    VERSION = 2
    vessel: str
    volume: Measured
    lost_to: str
    water_density: Used[Figure]
    hot: bool = False
    marks: Used[tuple[LevelMark, ...]] = ()
    instrument: UUID | None = None
    gauge: Used[Gauge | None] = None

    def __post_init__(self) -> None:
        checks.one_of("LevelReading", (AIR, SPILL), lost_to=self.lost_to)

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class WeightReading(Event):
    """A vessel was weighed: the mass of its content. Nothing else than the gross mass follows from it."""

    KIND = "weight reading"
    VERSION = 2
    vessel: str
    mass: Measured
    instrument: UUID | None = None
    gauge: Used[Gauge | None] = None

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class DensityReading(Event):
    """The density of a vessel's liquid was read, in ug/mL: its gross mass is density times volume.

    Degrees Baumé stay as typed; ``density`` is what they were taken for.
    """

    KIND = "density reading"
    VERSION = 2
    vessel: str
    density: Measured
    instrument: UUID | None = None
    gauge: Used[Gauge | None] = None

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class Result:
    """What was read, as typed and in base units: a number has two equal ends. ``least`` None: below ``most``.

    ``most`` None: above ``least``. ``sd`` is the standard uncertainty, None where nobody stated one.
    """

    typed: str
    unit: str
    least: int | None
    most: int | None
    sd: int | None

    def __post_init__(self) -> None:
        checks.not_negative("Result", least=self.least or 0, most=self.most or 0, sd=self.sd or 0)
        checks.needed("Result", least=self.least if self.most is None else self.most)
        checks.not_above("Result", least=self.least, most=self.most)


@dataclass(frozen=True)
class Reading(Event):
    """Something else was read at a vessel. Nothing follows from it; ``shows`` says what a test strip is for.

    The air speed is that at the extraction of a tank, the voltage that of its bath.
    """

    KIND = "reading"
    vessel: str
    quantity: str
    shows: str
    result: Result
    remark: str = ""
    instrument: UUID | None = None
    gauge: Used[Gauge | None] = None

    def __post_init__(self) -> None:
        checks.one_of("Reading", QUANTITIES, quantity=self.quantity)

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class Analysis(Event):
    """A sample was analysed. Nothing is posted until the result is accepted.

    The entry's time is the time of sampling; ``reported_at`` None is when it was recorded. ``concentration`` is the
    component's own, in ug/L (of a species nmol/L), whatever the result was expressed as. ``instrument`` is the method.
    """

    KIND = "analysis"
    VERSION = 2
    vessel: str
    component: str
    result: Measured
    expressed_as: str
    reported_at: datetime | None
    concentration: Used[Figure]
    instrument: UUID | None = None
    gauge: Used[Gauge | None] = None

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


def read_as_volume(payload: dict[str, Any]) -> dict[str, Any]:
    """Make a level reading of version 1 one of version 2: a volume was read, by nothing that was named."""
    named = read_by_nothing(payload)
    return {"observed": {**named["observed"], "hot": False}, "used": {**named["used"], "marks": []}}
