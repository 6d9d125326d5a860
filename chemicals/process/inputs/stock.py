"""What a person says of stock and of baths made from it: opening, count, receipt, make-up, top-up."""

from dataclasses import dataclass
from uuid import UUID

from django.utils.translation import gettext_lazy as _

from chemicals.process.fields import AmountField, FlagField, ReferenceField, RowsField, TextField, VesselField, use
from chemicals.process.inputs.base import (
    ANODE,
    EVERYTHING,
    RINSE,
    SOLIDS,
    STOCK,
    TANKS,
    UNCERTAINTY_HELP,
    VOLUME_HELP,
    HeldRow,
    IngredientRow,
    Input,
    if_known,
)
from chemicals.science.quantity import Quantity


@dataclass(frozen=True, kw_only=True)
class OpeningInput(Input):
    """What a vessel holds when counting begins."""

    verb = "opening"
    title = _("Start counting")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=EVERYTHING))
    volume: Quantity | None = if_known(_("Volume"), VOLUME_HELP, "volume", example="20 L")
    mass: Quantity | None = if_known(_("Mass"), _("For solids and anodes."), "mass", example="1 kg")
    held: tuple[HeldRow, ...] = use(RowsField(_("Metals in it"), required=False, of=HeldRow))
    product: UUID | None = use(
        ReferenceField(
            _("Made from"), _("The product that was poured in, if you know it."), required=False, to="product"
        )
    )
    complete: bool = use(
        FlagField(
            _("No other metal is in it"),
            _("Then everything not named is absent, acid and cyanide too; without this, it is unknown."),
            required=False,
        )
    )


@dataclass(frozen=True, kw_only=True)
class CountInput(Input):
    """What is there was counted: weighed or measured. What is missing, or too much, is unaccounted."""

    verb = "count"
    title = _("Count")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=(STOCK, ANODE, *SOLIDS)))
    amount: Quantity = use(
        AmountField(
            _("Amount there now"), _("Without the container."), dimensions=("mass", "volume"), example="17.2 kg"
        )
    )
    sd: Quantity | None = if_known(_("Uncertainty"), UNCERTAINTY_HELP, "mass", "volume", example="50 g", detail=True)


@dataclass(frozen=True, kw_only=True)
class ReceiptInput(Input):
    """Bought matter arrived."""

    verb = "receipt"
    title = _("Received")
    vessel: UUID = use(VesselField(_("Container"), kinds=(STOCK, ANODE), fills=True))
    amount: Quantity = use(
        AmountField(_("Amount"), _("As on the label: 1 kg, 2.5 L."), dimensions=("mass", "volume"), example="1 kg")
    )
    lot: str = use(TextField(_("Lot"), required=False, longest=60))


@dataclass(frozen=True, kw_only=True)
class MakeUpInput(Input):
    """A bath was made up from stock and water."""

    verb = "make-up"
    title = _("Make up")
    tank: UUID = use(VesselField(_("Tank"), kinds=TANKS, fills=True))
    ingredients: tuple[IngredientRow, ...] = use(RowsField(_("Ingredients"), required=False, of=IngredientRow))
    level: Quantity | None = if_known(_("Filled with water to"), VOLUME_HELP, "volume", example="20 L")


@dataclass(frozen=True, kw_only=True)
class TopUpInput(Input):
    """Liquid was added from a named source, an amount or to the mark."""

    verb = "top-up"
    title = _("Top up")
    tank: UUID = use(VesselField(_("Tank"), kinds=TANKS, fills=True))
    source: UUID | None = use(
        VesselField(_("From"), _("Empty means the water supply."), required=False, kinds=(STOCK, RINSE))
    )
    volume: Quantity | None = if_known(_("Amount"), _("Empty means to the mark."), "volume", example="1.5 L")
