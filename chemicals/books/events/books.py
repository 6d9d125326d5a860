"""What is said about the books themselves: cancelled entries, corrections, periods, papers; hand-over of waste."""

from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from chemicals.books import checks
from chemicals.books.events.base import Event, Measured


@dataclass(frozen=True)
class HandOver(Event):
    """A container went to a receiver, with all that is in it."""

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
class Change:
    """How much more (``found``) or less (not ``found``) of a component is there than the books said."""

    component: str
    amount: Measured
    found: bool


@dataclass(frozen=True)
class Correction(Event):
    """An error in a closed period is set right now, against unaccounted. ``entry`` is the one that was wrong."""

    KIND = "correction"
    entry: UUID
    vessel: str
    changes: tuple[Change, ...]
    reason: str

    def __post_init__(self) -> None:
        checks.once("Correction", changes=[change.component for change in self.changes])

    def vessels(self) -> tuple[str, ...]:
        return (self.vessel,)

    def about(self) -> UUID | None:
        return self.entry


@dataclass(frozen=True)
class PeriodClosing(Event):
    """The books are closed for everything that happened before ``until``.

    ``after`` is the end of the period before (None: there is none). ``sequence`` is the last entry that was recorded
    by then; the two hashes prove what followed from the entries of the period and what every vessel held at its end,
    as ``fold_version`` folds.
    """

    KIND = "period closing"
    after: datetime | None
    until: datetime
    sequence: int
    fold_version: int
    followed_sha256: str
    holdings_sha256: str

    def __post_init__(self) -> None:
        checks.in_order("PeriodClosing", after=self.after, until=self.until)


@dataclass(frozen=True)
class PeriodReopening(Event):
    """The last closed period is open again."""

    KIND = "period reopening"
    closing: UUID
    reason: str

    def about(self) -> UUID | None:
        return self.closing


@dataclass(frozen=True)
class Paper(Event):
    """A numbered paper was issued; the hashes prove its frozen data and its bytes."""

    KIND = "paper"
    paper: str
    number: int
    data_sha256: str
    pdf_sha256: str
