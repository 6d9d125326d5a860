"""From inputs to events: what was observed, and the figures relied on that day. One function per verb."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import datetime
from typing import Any

from chemicals.books import events
from chemicals.books.events import Event
from chemicals.books.occurred import Occurred
from chemicals.process import inputs
from chemicals.process.build.books import build_cancellation, build_correction
from chemicals.process.build.moving import (
    build_discharge,
    build_drum_off,
    build_hand_over,
    build_move,
    build_sample,
    build_spill,
)
from chemicals.process.build.plating import build_day_sheet, build_dummy, build_run, build_strip
from chemicals.process.build.readings import (
    build_acceptance,
    build_analysis,
    build_density,
    build_level,
    build_reading,
    build_weight,
)
from chemicals.process.build.stock import build_count, build_make_up, build_opening, build_receipt, build_top_up
from chemicals.process.build.upkeep import (
    build_carbon,
    build_clean_out,
    build_filter,
    build_resin,
    build_sludge,
    build_treatment,
)
from chemicals.process.draft import Draft, Known
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership

Builder = Callable[[Draft, datetime, Any], Event | None]
BUILDERS: Mapping[type[inputs.Input], Builder] = {
    inputs.OpeningInput: build_opening,
    inputs.CountInput: build_count,
    inputs.ReceiptInput: build_receipt,
    inputs.MakeUpInput: build_make_up,
    inputs.TopUpInput: build_top_up,
    inputs.RunInput: build_run,
    inputs.DaySheetInput: build_day_sheet,
    inputs.DummyInput: build_dummy,
    inputs.StripInput: build_strip,
    inputs.MoveInput: build_move,
    inputs.DrumOffInput: build_drum_off,
    inputs.SampleInput: build_sample,
    inputs.SpillInput: build_spill,
    inputs.DischargeInput: build_discharge,
    inputs.HandOverInput: build_hand_over,
    inputs.LevelInput: build_level,
    inputs.WeightInput: build_weight,
    inputs.DensityInput: build_density,
    inputs.ReadingInput: build_reading,
    inputs.AnalysisInput: build_analysis,
    inputs.AcceptanceInput: build_acceptance,
    inputs.FilterInput: build_filter,
    inputs.CarbonInput: build_carbon,
    inputs.ResinInput: build_resin,
    inputs.SludgeInput: build_sludge,
    inputs.CleanOutInput: build_clean_out,
    inputs.TreatmentInput: build_treatment,
    inputs.CancellationInput: build_cancellation,
    inputs.CorrectionInput: build_correction,
}


@dataclass(frozen=True)
class Built:
    """An event ready to be recorded, and the time it must have if it may not be chosen.

    ``gone`` speaks of vessels that are gone by then: such an event is not recorded, unless it is recorded already.
    """

    event: Event
    occurred: Occurred | None
    gone: tuple[FieldError, ...] = ()

    def require_here(self) -> None:
        """Refuse what names a vessel that is gone."""
        if self.gone:
            raise InvalidInputError(list(self.gone))


def build(
    member: Membership, now: datetime, data: inputs.Input, occurred: Occurred | None, known: Known | None = None
) -> Built:
    """Return the event that the input describes, or raise InvalidInputError with everything that is wrong.

    Many builds may share what is ``known``.
    """
    draft = Draft(member, known)
    event = BUILDERS[type(data)](draft, now, data)
    draft.finish()
    assert event is not None  # noqa: S101  (a builder that returns nothing has refused)
    when = _occurred(draft, event, occurred)
    # a correction sets right what the books say of the time before
    gone = () if isinstance(event, events.Correction) else draft.find_gone(now if when is None else when.at)
    return Built(event, when, gone)


def _occurred(draft: Draft, event: Event, occurred: Occurred | None) -> Occurred | None:
    """An acceptance happens at sampling time: from then on the content is what was found."""
    if not isinstance(event, events.Acceptance):
        return occurred
    analysis = draft.entry("analysis", event.analysis)
    assert analysis is not None  # noqa: S101  (its acceptance was built)
    return Occurred(analysis.occurred_at, analysis.precision)
