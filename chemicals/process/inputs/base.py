"""What all inputs share: kinds of vessels that go together, words of help, rows that several verbs ask for."""

from dataclasses import dataclass
from typing import Any, ClassVar
from uuid import UUID

from django.utils.translation import gettext_lazy as _

from chemicals.ledger.models import VesselKind
from chemicals.process.fields import AmountField, ChoiceField, ComponentField, Text, TextField, VesselField, use
from chemicals.science.formula import METALS
from chemicals.science.quantity import Quantity

BATH, RINSE, STOCK, ANODE, WASTE = (
    VesselKind.BATH, VesselKind.RINSE, VesselKind.STOCK, VesselKind.ANODE, VesselKind.WASTE,
)  # fmt: skip
FILTER, CARBON, RESIN, RECOVERY_CELL, RACKS, SLUDGE = (
    VesselKind.FILTER, VesselKind.CARBON, VesselKind.RESIN, VesselKind.RECOVERY_CELL, VesselKind.RACKS,
    VesselKind.SLUDGE,
)  # fmt: skip
TANKS = (BATH, RINSE)
SOLIDS = (FILTER, CARBON, RESIN, RECOVERY_CELL, RACKS, SLUDGE)
"""What stands for solids that took metal out of a liquid."""
EVERYTHING = tuple(VesselKind)
METAL_CHOICES = tuple((symbol, symbol) for symbol in METALS)
VOLUME_HELP = _("For example 20 L or 2.5 gal.")
UNCERTAINTY_HELP = _("Standard uncertainty, if you know it.")
ALL_HELP = _("Without volume and mass: all of it.")
FORMULA_HELP = _("A formula: CuSO4.5H2O, NaCN; empty means the metal itself.")


class Input:
    """Base of all inputs. ``verb`` is the name in addresses; ``title`` what a button says."""

    verb: ClassVar[str]
    title: ClassVar[Text]


def if_known(label: Text, help: Text = "", *dimensions: str, example: str, **more: Any) -> Any:
    """Return an optional amount."""
    return use(AmountField(label, help, required=False, dimensions=dimensions, example=example, **more))


@dataclass(frozen=True, kw_only=True)
class HeldRow:
    """One metal (or species, or solute) found in a vessel: an amount, or a share of the volume or mass given."""

    metal: str = use(ComponentField(_("Metal or other substance")))
    amount: Quantity = use(
        AmountField(
            _("Amount"),
            _("A mass, moles, per litre, or a share."),
            dimensions=("mass", "concentration", "amount_of_substance", "molar_concentration", "fraction"),
            example="50 g/L",
        )
    )
    expressed_as: str = use(TextField(_("Expressed as"), FORMULA_HELP, required=False, longest=80))


@dataclass(frozen=True, kw_only=True)
class DissolvedRow:
    """What an analysis found of a metal (or species, or solute) in a liquid."""

    metal: str = use(ComponentField(_("Metal or other substance")))
    result: Quantity = use(
        AmountField(_("Result"), dimensions=("concentration", "molar_concentration"), example="1.8 mg/L")
    )
    expressed_as: str = use(TextField(_("Expressed as"), FORMULA_HELP, required=False, longest=80))


@dataclass(frozen=True, kw_only=True)
class IngredientRow:
    """What was taken from a stock container."""

    stock: UUID = use(VesselField(_("From"), kinds=(STOCK,)))
    amount: Quantity = use(AmountField(_("Amount"), dimensions=("mass", "volume"), example="500 g"))


def metal_choice(help: Text) -> Any:
    """Return an optional choice of a metal."""
    return use(ChoiceField(_("Metal"), help, required=False, choices=METAL_CHOICES))
