"""What a person says when something happened: one input per verb. Amounts arrive parsed, with what was typed."""

from dataclasses import dataclass
from datetime import datetime
from typing import ClassVar
from uuid import UUID

from django.utils.translation import gettext_lazy as _

from chemicals.ledger.models import VesselKind
from chemicals.process.fields import (
    AmountField,
    ChoiceField,
    FlagField,
    MomentField,
    ReferenceField,
    RowsField,
    Text,
    TextField,
    VesselField,
    use,
)  # fmt: skip
from chemicals.science.formula import METALS
from chemicals.science.quantity import Quantity

BATH, RINSE, STOCK, ANODE, WASTE = (
    VesselKind.BATH, VesselKind.RINSE, VesselKind.STOCK, VesselKind.ANODE, VesselKind.WASTE,
)  # fmt: skip
METAL_CHOICES = tuple((symbol, symbol) for symbol in METALS)
VOLUME_HELP = _("For example 20 L or 2.5 gal.")
UNCERTAINTY_HELP = _("Standard uncertainty, if you know it.")


class Input:
    """Base of all inputs. ``verb`` is the name in addresses; ``title`` what a button says."""

    verb: ClassVar[str]
    title: ClassVar[Text]


@dataclass(frozen=True, kw_only=True)
class HeldRow:
    """One metal found in a vessel: a mass, or a concentration of the volume given."""

    metal: str = use(ChoiceField(_("Metal"), choices=METAL_CHOICES))
    amount: Quantity = use(
        AmountField(
            _("Amount"), _("A mass, or a concentration."), dimensions=("mass", "concentration"), example="50 g/L"
        )
    )


@dataclass(frozen=True, kw_only=True)
class OpeningInput(Input):
    """What a vessel holds when counting begins."""

    verb = "opening"
    title = _("Start counting")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=(BATH, RINSE, STOCK, ANODE, WASTE)))
    volume: Quantity | None = use(
        AmountField(_("Volume"), VOLUME_HELP, required=False, dimensions=("volume",), example="20 L")
    )
    mass: Quantity | None = use(
        AmountField(_("Mass"), _("For solids and anodes."), required=False, dimensions=("mass",), example="1 kg")
    )
    held: tuple[HeldRow, ...] = use(RowsField(_("Metals in it"), required=False, of=HeldRow))
    product: UUID | None = use(
        ReferenceField(
            _("Made from"), _("The product that was poured in, if you know it."), required=False, to="product"
        )
    )
    complete: bool = use(
        FlagField(_("No other metal is in it"), _("Without this, every metal not named is unknown."), required=False)
    )


@dataclass(frozen=True, kw_only=True)
class ReceiptInput(Input):
    """Bought matter arrived."""

    verb = "receipt"
    title = _("Received")
    vessel: UUID = use(VesselField(_("Container"), kinds=(STOCK, ANODE)))
    amount: Quantity = use(
        AmountField(_("Amount"), _("As on the label: 1 kg, 2.5 L."), dimensions=("mass", "volume"), example="1 kg")
    )
    lot: str = use(TextField(_("Lot"), required=False, longest=60))


@dataclass(frozen=True, kw_only=True)
class IngredientRow:
    """What was taken from a stock container."""

    stock: UUID = use(VesselField(_("From"), kinds=(STOCK,)))
    amount: Quantity = use(AmountField(_("Amount"), dimensions=("mass", "volume"), example="500 g"))


@dataclass(frozen=True, kw_only=True)
class MakeUpInput(Input):
    """A bath was made up from stock and water."""

    verb = "make-up"
    title = _("Make up")
    tank: UUID = use(VesselField(_("Tank"), kinds=(BATH, RINSE)))
    ingredients: tuple[IngredientRow, ...] = use(RowsField(_("Ingredients"), required=False, of=IngredientRow))
    level: Quantity | None = use(
        AmountField(_("Filled with water to"), VOLUME_HELP, required=False, dimensions=("volume",), example="20 L")
    )


@dataclass(frozen=True, kw_only=True)
class TopUpInput(Input):
    """Liquid was added from a named source, an amount or to the mark."""

    verb = "top-up"
    title = _("Top up")
    tank: UUID = use(VesselField(_("Tank"), kinds=(BATH, RINSE)))
    source: UUID | None = use(
        VesselField(_("From"), _("Empty means the water supply."), required=False, kinds=(STOCK, RINSE))
    )
    volume: Quantity | None = use(
        AmountField(_("Amount"), _("Empty means to the mark."), required=False, dimensions=("volume",), example="1.5 L")
    )


@dataclass(frozen=True, kw_only=True)
class RunInput(Input):
    """A load was plated, rinsed, weighed if you like."""

    verb = "run"
    title = _("Log a run")
    route: UUID = use(ReferenceField(_("Route"), to="route"))
    rack: UUID | None = use(
        ReferenceField(_("Rack type"), _("Empty means the route's own."), required=False, to="rack type")
    )
    parts: str = use(TextField(_("Parts"), required=False))
    charge: Quantity | None = use(
        AmountField(
            _("Ampere-hours"), _("Or current and time."), required=False, dimensions=("charge",), example="1.8 Ah"
        )
    )
    current: Quantity | None = use(AmountField(_("Current"), required=False, dimensions=("current",), example="0.44 A"))
    current_density: Quantity | None = use(
        AmountField(
            _("Current density"),
            _("In place of the current; the area comes from the rack type."),
            required=False,
            dimensions=("current_density",),
            example="1 A/dm2",
        )
    )
    time: Quantity | None = use(AmountField(_("Time"), required=False, dimensions=("time",), example="4 h"))
    weight_before: Quantity | None = use(
        AmountField(_("Weight before"), required=False, dimensions=("mass",), example="5.6 g")
    )
    weight_after: Quantity | None = use(
        AmountField(_("Weight after"), required=False, dimensions=("mass",), example="7.7 g")
    )
    weight_sd: Quantity | None = use(
        AmountField(
            _("Uncertainty of a weight"), UNCERTAINTY_HELP, required=False, dimensions=("mass",), example="0.01 g"
        )
    )


@dataclass(frozen=True, kw_only=True)
class MoveInput(Input):
    """Liquid was moved between tanks."""

    verb = "move"
    title = _("Move liquid")
    source: UUID = use(VesselField(_("From"), kinds=(BATH, RINSE)))
    target: UUID = use(VesselField(_("To"), kinds=(BATH, RINSE)))
    volume: Quantity | None = use(
        AmountField(_("Amount"), _("Empty means all of it."), required=False, dimensions=("volume",), example="5 L")
    )


@dataclass(frozen=True, kw_only=True)
class LevelInput(Input):
    """A level was read."""

    verb = "level-reading"
    title = _("Read the level")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=(BATH, RINSE, WASTE)))
    volume: Quantity = use(AmountField(_("Volume now"), VOLUME_HELP, dimensions=("volume",), example="19.2 L"))
    sd: Quantity | None = use(
        AmountField(_("Uncertainty"), UNCERTAINTY_HELP, required=False, dimensions=("volume",), example="0.2 L")
    )
    spilled: bool = use(
        FlagField(
            _("Less, because it leaked or was spilled"),
            _("Otherwise less is taken as evaporated water."),
            required=False,
        )
    )


@dataclass(frozen=True, kw_only=True)
class AnalysisInput(Input):
    """A bath or rinse was analysed. The date of the record is the date of sampling."""

    verb = "analysis"
    title = _("Enter an analysis")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=(BATH, RINSE, WASTE)))
    metal: str = use(ChoiceField(_("Metal"), choices=METAL_CHOICES))
    result: Quantity = use(AmountField(_("Result"), dimensions=("concentration",), example="52.5 g/L"))
    sd: Quantity | None = use(
        AmountField(
            _("Uncertainty"), UNCERTAINTY_HELP, required=False, dimensions=("concentration",), example="0.5 g/L"
        )
    )
    expressed_as: str = use(
        TextField(
            _("Expressed as"), _("The formula of the salt, for example CuSO4.5H2O; empty means the metal."),
            required=False, longest=80,
        )
    )  # fmt: skip
    reported_at: datetime | None = use(MomentField(_("Reported"), _("Empty means now."), required=False))


@dataclass(frozen=True, kw_only=True)
class AcceptanceInput(Input):
    """An analysis is accepted: the books follow it."""

    verb = "acceptance"
    title = _("Accept an analysis")
    analysis: UUID = use(ReferenceField(_("Analysis"), to="analysis"))


@dataclass(frozen=True, kw_only=True)
class DrumOffInput(Input):
    """Spent liquid went into a waste container."""

    verb = "drum-off"
    title = _("Drum off")
    source: UUID = use(VesselField(_("From"), kinds=(BATH, RINSE)))
    target: UUID = use(VesselField(_("Into"), kinds=(WASTE,)))
    volume: Quantity | None = use(
        AmountField(_("Amount"), _("Empty means all of it."), required=False, dimensions=("volume",), example="20 L")
    )


@dataclass(frozen=True, kw_only=True)
class HandOverInput(Input):
    """A waste container went to its receiver."""

    verb = "hand-over"
    title = _("Hand over")
    container: UUID = use(VesselField(_("Container"), kinds=(WASTE,)))
    receiver: str = use(TextField(_("Receiver"), longest=120))
    gross: Quantity | None = use(
        AmountField(_("Gross weight"), required=False, dimensions=("mass",), example="22.4 kg")
    )


@dataclass(frozen=True, kw_only=True)
class CancellationInput(Input):
    """An entry was a mistake."""

    verb = "cancellation"
    title = _("Cancel an entry")
    entry: UUID = use(ReferenceField(_("Entry"), to="entry"))
    reason: str = use(TextField(_("Reason"), longest=400))


INPUTS: dict[str, type[Input]] = {
    data.verb: data
    for data in (
        OpeningInput, ReceiptInput, MakeUpInput, TopUpInput, RunInput, MoveInput, LevelInput, AnalysisInput,
        AcceptanceInput, DrumOffInput, HandOverInput, CancellationInput,
    )
}  # fmt: skip
"""Every verb that records matter."""
