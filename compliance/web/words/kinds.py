"""Kinds of entries, verdicts and bases as a person reads them."""

from django.utils.translation import gettext_lazy

from chemicals.books import clearance, events
from chemicals.process.inputs import INPUTS

BASES = {
    events.OBSERVED: gettext_lazy("observed"),
    events.COMPUTED: gettext_lazy("computed"),
    events.ASSUMED: gettext_lazy("assumed"),
}
VERDICTS = {
    clearance.ALLOWED: gettext_lazy("allowed"),
    clearance.OVERRIDDEN: gettext_lazy("overridden"),
    clearance.INCIDENT: gettext_lazy("incident"),
    clearance.NOT_ASKED: gettext_lazy("not asked"),
}
KINDS = {
    events.Opening.KIND: gettext_lazy("opening"),
    events.Count.KIND: gettext_lazy("count"),
    events.Receipt.KIND: gettext_lazy("receipt"),
    events.MakeUp.KIND: gettext_lazy("make-up"),
    events.TopUp.KIND: gettext_lazy("top-up"),
    events.Run.KIND: gettext_lazy("run"),
    events.DaySheet.KIND: gettext_lazy("day sheet"),
    events.Dummy.KIND: gettext_lazy("dummy plating"),
    events.Strip.KIND: gettext_lazy("strip"),
    events.Move.KIND: gettext_lazy("move"),
    events.DrumOff.KIND: gettext_lazy("drum off"),
    events.Sample.KIND: gettext_lazy("sample"),
    events.Spill.KIND: gettext_lazy("spill"),
    events.Discharge.KIND: gettext_lazy("discharge"),
    events.LevelReading.KIND: gettext_lazy("level reading"),
    events.WeightReading.KIND: gettext_lazy("weight reading"),
    events.DensityReading.KIND: gettext_lazy("density reading"),
    events.Reading.KIND: gettext_lazy("reading"),
    events.Analysis.KIND: gettext_lazy("analysis"),
    events.Acceptance.KIND: gettext_lazy("acceptance"),
    events.Filter.KIND: gettext_lazy("filter"),
    events.Carbon.KIND: gettext_lazy("carbon"),
    events.Resin.KIND: gettext_lazy("resin"),
    events.Sludge.KIND: gettext_lazy("sludge"),
    events.CleanOut.KIND: gettext_lazy("clean-out"),
    events.Treatment.KIND: gettext_lazy("treatment"),
    events.HandOver.KIND: gettext_lazy("hand-over"),
    events.Cancellation.KIND: gettext_lazy("cancellation"),
    events.Correction.KIND: gettext_lazy("correction"),
    events.PeriodClosing.KIND: gettext_lazy("period closing"),
    events.PeriodReopening.KIND: gettext_lazy("period reopening"),
    events.Paper.KIND: gettext_lazy("paper"),
}
"""Every kind of entry as a person reads it."""


def verb_of(kind: str) -> str:
    """Return the verb in addresses that records entries of this kind; empty if none does."""
    verb = kind.replace(" ", "-")
    return verb if verb in INPUTS else ""
