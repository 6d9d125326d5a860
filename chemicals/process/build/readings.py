"""From readings and analyses as told to events."""

from datetime import datetime

from chemicals.books import events
from chemicals.books.events import AIR, SPILL, Figure, Measured
from chemicals.ledger.models import Vessel
from chemicals.process import inputs
from chemicals.process.build.instruments import Used, find_instrument
from chemicals.process.build.levels import Level, find_level
from chemicals.process.build.substances import find_factor, times
from chemicals.process.draft import WATER, Draft
from chemicals.science import baume
from chemicals.science.errors import TextError
from chemicals.science.quantity import Quantity
from chemicals.science.reading import (
    ANALYSIS,
    DENSITY,
    LEVEL,
    READ,
    TEST_STRIP,
    WEIGHT,
    Measurable,
    Span,
    parse_in,
    parse_span,
)


def build_level(draft: Draft, now: datetime, data: inputs.LevelInput) -> events.LevelReading | None:
    """Return the event of a level reading: of a volume, or of a mark of the level table."""
    vessel, used = draft.vessel(data, "vessel"), find_instrument(draft, data.instrument, LEVEL)
    mark = data.mark.strip()
    if (data.volume is None) is not bool(mark):
        draft.refuse("volume", "Write the volume, or the height or mark that was read: one of the two.")
    read = None if vessel is None or draft.errors else _level(draft, vessel, data, used)
    if read is not None and vessel is not None and vessel.capacity is not None and read[0].base > vessel.capacity:
        draft.refuse("mark" if mark else "volume", "This is more than the vessel can hold. Read the level again.")
    if draft.errors or vessel is None or read is None:
        return None
    lost_to = SPILL if data.spilled else AIR
    return events.LevelReading(str(vessel.uuid), read[0], lost_to, WATER, data.hot, read[1], *used)


def _level(draft: Draft, vessel: Vessel, data: inputs.LevelInput, used: Used) -> Level | None:
    if data.volume is not None:
        return _measured(data.volume, used.doubt(data.volume.base, data.sd)), ()
    return find_level(draft, vessel, data.mark, hot=data.hot, used=used, sd=data.sd)


def _measured(quantity: Quantity, sd: int | None) -> Measured:
    return Measured(quantity.typed, quantity.unit, quantity.base, sd)


def build_weight(draft: Draft, now: datetime, data: inputs.WeightInput) -> events.WeightReading | None:
    """Return the event of a weighing: what the scale says, less the empty container."""
    vessel, used = draft.vessel(data, "vessel"), find_instrument(draft, data.instrument, WEIGHT)
    mass = _measured(data.mass, used.doubt(data.mass.base, data.sd))
    if data.tare is not None and data.tare.base > data.mass.base:
        draft.refuse("mass", "This is less than the empty container weighs. Read the scale again.")
    if draft.errors or vessel is None:
        return None
    if data.tare is not None:
        typed = f"{data.mass.typed} - {data.tare.typed}"
        mass = Measured(typed, data.mass.base_unit, data.mass.base - data.tare.base, mass.sd)
    return events.WeightReading(str(vessel.uuid), mass, *used)


def build_density(draft: Draft, now: datetime, data: inputs.DensityInput) -> events.DensityReading | None:
    """Return the event of a density reading; degrees Baumé stay as typed, and are taken for a density."""
    vessel, used = draft.vessel(data, "vessel"), find_instrument(draft, data.instrument, DENSITY)
    said = data.density
    if said.dimension == "density" and not said.base:
        draft.refuse("density", "A density is more than zero. Read it again.")
    if data.sd is not None and data.sd.dimension not in {"density", said.dimension}:
        draft.refuse("sd", "Write the uncertainty in a unit of the same kind as the reading, or leave it out.")
    density = None if draft.errors else _density(draft, said, data.sd, used)
    if draft.errors or vessel is None or density is None:
        return None
    return events.DensityReading(str(vessel.uuid), density, *used)


def _density(draft: Draft, said: Quantity, sd: Quantity | None, used: Used) -> Measured | None:
    if said.dimension == "density":
        return _measured(said, used.doubt(said.base, sd))
    try:
        base = baume.density(said.base, said.dimension)
    except baume.BaumeError as error:
        draft.refuse("density", error.message)
        return None
    if sd is not None and sd.dimension != "density":
        return Measured(said.typed, said.unit, base, baume.density_sd(said.base, sd.base, said.dimension))
    return Measured(said.typed, said.unit, base, used.doubt(base, sd))


def build_reading(draft: Draft, now: datetime, data: inputs.ReadingInput) -> events.Reading | None:
    """Return the event of any other reading, its unit checked by what was read."""
    vessel, measurable = draft.vessel(data, "vessel"), READ.get(data.quantity)
    if measurable is None:
        draft.refuse("quantity", "Choose what was read from the list.")
        return None
    used, shows = find_instrument(draft, data.instrument, data.quantity), data.shows.strip()
    if data.quantity == TEST_STRIP and not shows:
        draft.refuse("shows", "Write what the strip shows: a metal, or for example chlorine.")
    if data.quantity != TEST_STRIP and shows:
        draft.refuse("shows", "Only a test strip needs this. Leave it empty.")
    span = _span(draft, data.result, measurable)
    sd = None if span is None else _doubt(draft, data.sd, measurable, span, used)
    if draft.errors or vessel is None or span is None:
        return None
    result = events.Result(span.typed, span.unit, span.least, span.most, sd)
    return events.Reading(str(vessel.uuid), data.quantity, shows, result, data.remark.strip(), *used)


def _span(draft: Draft, said: str, measurable: Measurable) -> Span | None:
    try:
        return parse_span(said, measurable.dimensions, example=measurable.example)
    except TextError as error:
        draft.refuse("result", error.message)
        return None


def _doubt(draft: Draft, said: str, measurable: Measurable, span: Span, used: Used) -> int | None:
    """Return the standard uncertainty of a result; of a temperature it is a difference, of a strip as the result is."""
    if not said.strip():
        return used.doubt(span.middle, None)
    try:
        return parse_in(said, (measurable.doubt or span.dimension,)).base
    except TextError as error:
        draft.refuse("sd", error.message)
        return None


def build_analysis(draft: Draft, now: datetime, data: inputs.AnalysisInput) -> events.Analysis | None:
    """Return the event of an analysis: the result as reported, and the component's own concentration."""
    vessel, component = draft.vessel(data, "vessel"), draft.component("metal", data.metal)
    if data.reported_at is not None and data.reported_at > now:
        draft.refuse("reported_at", "This lies in the future. Write when the result came.")
    if data.sd is not None and data.sd.dimension != data.result.dimension:
        draft.refuse("sd", "Write the uncertainty in a unit of the same kind as the result, or leave it out.")
    factor = component and find_factor(draft, "expressed_as", component, data.expressed_as, data.result)
    used, salt = find_instrument(draft, data.instrument, ANALYSIS), data.expressed_as.strip()
    result = _measured(data.result, used.doubt(data.result.base, data.sd))
    if draft.errors or vessel is None or not component or not factor:
        return None
    source = "as reported" if not salt else f"as reported, {_per_unit(factor)} of {component} for each of {salt}"
    return events.Analysis(
        vessel=str(vessel.uuid),
        component=component,
        result=result,
        expressed_as=salt or component,
        reported_at=data.reported_at,
        concentration=Figure(times(factor, result.base), times(factor, result.stated_sd), source),
        instrument=used.instrument,
        gauge=used.gauge,
    )


def _per_unit(factor: object) -> str:
    return f"{factor:.8g}"


def build_acceptance(draft: Draft, now: datetime, data: inputs.AcceptanceInput) -> events.Acceptance | None:
    """Return the event of an acceptance: what the analysis says."""
    entry = draft.entry("analysis", data.analysis, events.Analysis)
    if entry is None:
        return None
    analysis = draft.known.event_of(entry)
    assert isinstance(analysis, events.Analysis)  # noqa: S101  (the kind was asked for)
    return events.Acceptance(
        analysis=entry.uuid,
        vessel=analysis.vessel,
        component=analysis.component,
        concentration=analysis.concentration,
    )
