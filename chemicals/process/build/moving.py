"""From what was said of matter that went from here to there to events."""

from datetime import datetime

from chemicals.books import events
from chemicals.books.events import SAMPLE, SEWER, SPILL
from chemicals.ledger.models import Vessel
from chemicals.process import inputs
from chemicals.process.build.stock import check_same_dimension
from chemicals.process.draft import Draft, by_dimension, measured, vessel_name
from chemicals.process.inputs.moving import GOES_TO


def build_move(draft: Draft, now: datetime, data: inputs.MoveInput) -> events.Move | None:
    """Return the event of a move between vessels that go together."""
    source, target = draft.vessel(data, "source"), draft.vessel(data, "target")
    if source is not None and target is not None:
        _check_ends(draft, source, target)
        goes_to = GOES_TO[source.kind]  # type: ignore[index]  # the kinds of the field are those of the table
        if target.kind not in goes_to:
            kinds = ", ".join(str(kind.label) for kind in goes_to)
            draft.refuse("target", f"From here it goes into: {kinds}. Or drum it off, or make up or top up from stock.")
    _check_amounts(draft, data)
    if draft.errors or source is None or target is None:
        return None
    return events.Move(str(source.uuid), str(target.uuid), measured(data.volume), measured(data.mass))


def build_drum_off(draft: Draft, now: datetime, data: inputs.DrumOffInput) -> events.DrumOff | None:
    """Return the event of drumming off, from anything into a waste container."""
    source, target = draft.vessel(data, "source"), draft.vessel(data, "target")
    _check_amounts(draft, data)
    if draft.errors or source is None or target is None:
        return None
    return events.DrumOff(str(source.uuid), str(target.uuid), measured(data.volume), measured(data.mass))


def _check_ends(draft: Draft, source: Vessel, target: Vessel) -> None:
    if source == target:
        draft.refuse("target", "Source and target are the same vessel. Choose another one.")


def _check_amounts(draft: Draft, data: inputs.MoveInput | inputs.DrumOffInput) -> None:
    if data.volume is not None and data.mass is not None:
        draft.refuse("mass", "Write the volume or the mass, not both.")


def build_sample(draft: Draft, now: datetime, data: inputs.SampleInput) -> events.Sample | None:
    """Return the event of a sample."""
    source = draft.vessel(data, "source")
    if draft.errors or source is None:
        return None
    amounts = by_dimension(data.amount, "volume"), by_dimension(data.amount, "mass")
    return events.Sample(str(source.uuid), SAMPLE, *amounts)


def build_spill(draft: Draft, now: datetime, data: inputs.SpillInput) -> events.Spill | None:
    """Return the event of a spill, and where it was picked up into."""
    source, target = draft.vessel(data, "source"), draft.vessel(data, "target")
    if source is not None and target is not None:
        _check_ends(draft, source, target)
    check_same_dimension(draft, data.amount, data.sd)
    if draft.errors or source is None:
        return None
    amounts = by_dimension(data.amount, "volume", data.sd), by_dimension(data.amount, "mass", data.sd)
    return events.Spill(str(source.uuid), vessel_name(target, SPILL), *amounts)


def build_discharge(draft: Draft, now: datetime, data: inputs.DischargeInput) -> events.Discharge | None:
    """Return the event of a discharge to the sewer."""
    source = draft.vessel(data, "source")
    if draft.errors or source is None:
        return None
    return events.Discharge(str(source.uuid), SEWER, measured(data.volume))


def build_hand_over(draft: Draft, now: datetime, data: inputs.HandOverInput) -> events.HandOver | None:
    """Return the event of a hand-over."""
    container = draft.vessel(data, "container")
    if draft.errors or container is None:
        return None
    return events.HandOver(str(container.uuid), data.receiver.strip(), measured(data.gross))
