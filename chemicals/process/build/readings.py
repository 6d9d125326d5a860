"""From readings and analyses as told to events."""

from datetime import datetime

from chemicals.books import events
from chemicals.books.events import AIR, SPILL, Figure, Measured
from chemicals.process import inputs
from chemicals.process.build.substances import find_factor, times
from chemicals.process.draft import WATER, Draft, measured


def build_level(draft: Draft, now: datetime, data: inputs.LevelInput) -> events.LevelReading | None:
    """Return the event of a level reading."""
    vessel = draft.vessel(data, "vessel")
    if vessel is not None and vessel.capacity is not None and data.volume.base > vessel.capacity:
        draft.refuse("volume", "This is more than the vessel can hold. Read the level again.")
    volume = measured(data.volume, data.sd)
    if draft.errors or vessel is None or volume is None:
        return None
    return events.LevelReading(str(vessel.uuid), volume, SPILL if data.spilled else AIR, WATER)


def build_weight(draft: Draft, now: datetime, data: inputs.WeightInput) -> events.WeightReading | None:
    """Return the event of a weighing: what the scale says, less the empty container."""
    vessel, mass = draft.vessel(data, "vessel"), measured(data.mass, data.sd)
    if data.tare is not None and data.tare.base > data.mass.base:
        draft.refuse("mass", "This is less than the empty container weighs. Read the scale again.")
    if draft.errors or vessel is None or mass is None:
        return None
    if data.tare is not None:
        typed = f"{data.mass.typed} - {data.tare.typed}"
        mass = Measured(typed, data.mass.base_unit, data.mass.base - data.tare.base, mass.sd)
    return events.WeightReading(str(vessel.uuid), mass)


def build_density(draft: Draft, now: datetime, data: inputs.DensityInput) -> events.DensityReading | None:
    """Return the event of a density reading."""
    vessel, density = draft.vessel(data, "vessel"), measured(data.density, data.sd)
    if not data.density.base:
        draft.refuse("density", "A density is more than zero. Read it again.")
    if draft.errors or vessel is None or density is None:
        return None
    return events.DensityReading(str(vessel.uuid), density)


def build_analysis(draft: Draft, now: datetime, data: inputs.AnalysisInput) -> events.Analysis | None:
    """Return the event of an analysis: the result as reported, and the component's own concentration."""
    vessel, component = draft.vessel(data, "vessel"), draft.component("metal", data.metal)
    if data.reported_at is not None and data.reported_at > now:
        draft.refuse("reported_at", "This lies in the future. Write when the result came.")
    if data.sd is not None and data.sd.dimension != data.result.dimension:
        draft.refuse("sd", "Write the uncertainty in a unit of the same kind as the result, or leave it out.")
    factor = component and find_factor(draft, "expressed_as", component, data.expressed_as, data.result)
    result, salt = measured(data.result, data.sd), data.expressed_as.strip()
    if draft.errors or vessel is None or not component or not factor or result is None:
        return None
    source = "as reported" if not salt else f"as reported, {_per_unit(factor)} of {component} for each of {salt}"
    return events.Analysis(
        vessel=str(vessel.uuid),
        component=component,
        result=result,
        expressed_as=salt or component,
        reported_at=data.reported_at,
        concentration=Figure(times(factor, result.base), times(factor, result.stated_sd), source),
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
