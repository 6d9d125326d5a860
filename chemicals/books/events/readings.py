"""What was read and analysed, and what the books follow of it."""

from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from chemicals.books import checks
from chemicals.books.events.base import AIR, SPILL, Event, Figure, Measured, Used


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
class WeightReading(Event):
    """A vessel was weighed: the mass of its content. Nothing else than the gross mass follows from it."""

    KIND = "weight reading"
    vessel: str
    mass: Measured

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class DensityReading(Event):
    """The density of a vessel's liquid was read, in ug/mL: its gross mass is density times volume."""

    KIND = "density reading"
    vessel: str
    density: Measured

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)


@dataclass(frozen=True)
class Analysis(Event):
    """A sample was analysed. Nothing is posted until the result is accepted.

    The entry's time is the time of sampling; ``reported_at`` None is when it was recorded. ``concentration`` is the
    component's own, in ug/L (of a species nmol/L), whatever the result was expressed as.
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
