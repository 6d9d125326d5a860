"""What a person says when something happened: one input per verb. Amounts arrive parsed, with what was typed."""

from chemicals.process.inputs.base import DissolvedRow, HeldRow, IngredientRow, Input
from chemicals.process.inputs.books import CancellationInput, ChangeRow, CorrectionInput
from chemicals.process.inputs.moving import (
    DischargeInput,
    DrumOffInput,
    HandOverInput,
    MoveInput,
    SampleInput,
    SpillInput,
)
from chemicals.process.inputs.plating import ChargeRow, DaySheetInput, DummyInput, RacksRow, RunInput, StripInput
from chemicals.process.inputs.readings import (
    AcceptanceInput,
    AnalysisInput,
    DensityInput,
    LevelInput,
    ReadingInput,
    WeightInput,
)
from chemicals.process.inputs.stock import CountInput, MakeUpInput, OpeningInput, ReceiptInput, TopUpInput
from chemicals.process.inputs.upkeep import (
    CarbonInput,
    CleanOutInput,
    FilterInput,
    ResinInput,
    SludgeInput,
    SpeciesRow,
    TreatmentInput,
)

__all__ = [
    "INPUTS",
    "AcceptanceInput",
    "AnalysisInput",
    "CancellationInput",
    "CarbonInput",
    "ChangeRow",
    "ChargeRow",
    "CleanOutInput",
    "CorrectionInput",
    "CountInput",
    "DaySheetInput",
    "DensityInput",
    "DischargeInput",
    "DissolvedRow",
    "DrumOffInput",
    "DummyInput",
    "FilterInput",
    "HandOverInput",
    "HeldRow",
    "IngredientRow",
    "Input",
    "LevelInput",
    "MakeUpInput",
    "MoveInput",
    "OpeningInput",
    "RacksRow",
    "ReadingInput",
    "ReceiptInput",
    "ResinInput",
    "RunInput",
    "SampleInput",
    "SludgeInput",
    "SpeciesRow",
    "SpillInput",
    "StripInput",
    "TopUpInput",
    "TreatmentInput",
    "WeightInput",
]

INPUTS: dict[str, type[Input]] = {
    data.verb: data
    for data in (
        OpeningInput, CountInput, ReceiptInput, MakeUpInput, TopUpInput, RunInput, DaySheetInput, DummyInput,
        StripInput, MoveInput, DrumOffInput, SampleInput, SpillInput, DischargeInput, HandOverInput, LevelInput,
        WeightInput, DensityInput, ReadingInput, AnalysisInput, AcceptanceInput, FilterInput, CarbonInput, ResinInput,
        SludgeInput, CleanOutInput, TreatmentInput, CancellationInput, CorrectionInput,
    )
}  # fmt: skip
"""Every verb that records matter."""
