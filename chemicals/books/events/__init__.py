"""What can have happened: one frozen dataclass per kind and version.

A field annotated ``Used`` is a figure that was relied on that day (composition, density, drag-out, efficiency); every
other field is what was observed. Amounts are integers in base units: micrograms, nanolitres, microcoulombs,
micrograms per litre, micrograms per kilogram, parts per million; of species nanomoles in place of micrograms. A kind
version never changes: a new shape is a new version with a pure upcaster. Ends of a movement are vessel identifiers
(text) or one of BOUNDARIES.
"""

from collections.abc import Callable, Mapping
from typing import Any

from chemicals.books.canonical import CanonicalError, from_plain, to_plain, type_hints
from chemicals.books.events.base import (
    ACID,
    AIR,
    ALKALI,
    AMMONIA,
    ASSUMED,
    BOUNDARIES,
    CHROMIUM_VI,
    COMPUTED,
    FREE_CYANIDE,
    GROSS_MASS,
    OBSERVED,
    OPENING,
    PARTS,
    REACTION,
    RECEIVER,
    SAMPLE,
    SEWER,
    SPECIES,
    SPILL,
    SULFITE,
    SUPPLIER,
    UNACCOUNTED,
    UNKNOWN_LIQUID,
    USED,
    VOLUME,
    WATER_SUPPLY,
    Event,
    Figure,
    Gauge,
    Held,
    Ingredient,
    Measured,
    Recipe,
    Share,
    Used,
    is_metal,
    read_by_nothing,
)
from chemicals.books.events.books import (
    Cancellation,
    Change,
    Correction,
    HandOver,
    Paper,
    PeriodClosing,
    PeriodReopening,
)
from chemicals.books.events.moving import Discharge, DrumOff, Move, Sample, Spill, weigh_nothing
from chemicals.books.events.plating import (
    BathCharge,
    Conversion,
    DaySheet,
    Deposit,
    Dummy,
    Plating,
    Racks,
    Run,
    Strip,
    join_plating,
)
from chemicals.books.events.readings import (
    Acceptance,
    Analysis,
    DensityReading,
    LevelMark,
    LevelReading,
    Reading,
    Result,
    WeightReading,
    read_as_volume,
)
from chemicals.books.events.stock import Count, MakeUp, Opening, Receipt, TopUp, swell_nothing
from chemicals.books.events.upkeep import Carbon, CleanOut, Dissolved, Filter, Resin, Sludge, Treatment, Uptake

__all__ = [
    "ACID",
    "AIR",
    "ALKALI",
    "AMMONIA",
    "ASSUMED",
    "BOUNDARIES",
    "CHROMIUM_VI",
    "COMPUTED",
    "CURRENT",
    "EVENTS",
    "FREE_CYANIDE",
    "GROSS_MASS",
    "OBSERVED",
    "OPENING",
    "PARTS",
    "REACTION",
    "RECEIVER",
    "SAMPLE",
    "SEWER",
    "SPECIES",
    "SPILL",
    "SULFITE",
    "SUPPLIER",
    "UNACCOUNTED",
    "UNKNOWN_LIQUID",
    "UPCASTERS",
    "USED",
    "VOLUME",
    "WATER_SUPPLY",
    "Acceptance",
    "Analysis",
    "BathCharge",
    "Cancellation",
    "Carbon",
    "Change",
    "CleanOut",
    "Conversion",
    "Correction",
    "Count",
    "DaySheet",
    "DensityReading",
    "Deposit",
    "Discharge",
    "Dissolved",
    "DrumOff",
    "Dummy",
    "Event",
    "Figure",
    "Filter",
    "Gauge",
    "HandOver",
    "Held",
    "Ingredient",
    "LevelMark",
    "LevelReading",
    "MakeUp",
    "Measured",
    "Move",
    "Opening",
    "Paper",
    "PeriodClosing",
    "PeriodReopening",
    "Plating",
    "Racks",
    "Reading",
    "Receipt",
    "Recipe",
    "Resin",
    "Result",
    "Run",
    "Sample",
    "Share",
    "Sludge",
    "Spill",
    "Strip",
    "TopUp",
    "Treatment",
    "Upcaster",
    "Uptake",
    "Used",
    "WeightReading",
    "decode",
    "encode",
    "is_metal",
]

EVENTS: tuple[type[Event], ...] = (
    Opening, Count, Receipt, MakeUp, TopUp, Run, DaySheet, Dummy, Strip, Move, DrumOff, Sample, Spill, Discharge,
    LevelReading, WeightReading, DensityReading, Reading, Analysis, Acceptance, Filter, Carbon, Resin, Sludge, CleanOut,
    Treatment, HandOver, Cancellation, Correction, PeriodClosing, PeriodReopening, Paper,
)  # fmt: skip
CURRENT: Mapping[str, type[Event]] = {event.KIND: event for event in EVENTS}
Upcaster = Callable[[dict[str, Any]], dict[str, Any]]
UPCASTERS: Mapping[tuple[str, int], Upcaster] = {
    (MakeUp.KIND, 1): swell_nothing,
    (Run.KIND, 1): join_plating,
    (Run.KIND, 2): read_by_nothing,
    (LevelReading.KIND, 1): read_as_volume,
    (WeightReading.KIND, 1): read_by_nothing,
    (DensityReading.KIND, 1): read_by_nothing,
    (Analysis.KIND, 1): read_by_nothing,
    (Move.KIND, 1): weigh_nothing,
    (DrumOff.KIND, 1): weigh_nothing,
}
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
