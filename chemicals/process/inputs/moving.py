"""What a person says of matter that goes from here to there: moves, drumming off, samples, spills, the sewer."""

from collections.abc import Mapping
from dataclasses import dataclass
from uuid import UUID

from django.utils.translation import gettext_lazy as _

from chemicals.ledger.models import VesselKind
from chemicals.process.fields import AmountField, TextField, VesselField, use
from chemicals.process.inputs.base import (
    ALL_HELP,
    ANODE,
    BATH,
    CARBON,
    EVERYTHING,
    FILTER,
    RACKS,
    RECOVERY_CELL,
    RESIN,
    RINSE,
    SLUDGE,
    SOLIDS,
    STOCK,
    TANKS,
    WASTE,
    Input,
    if_known,
)
from chemicals.science.quantity import Quantity

GOES_TO: Mapping[VesselKind, tuple[VesselKind, ...]] = {
    BATH: TANKS,
    RINSE: TANKS,
    STOCK: (STOCK,),
    ANODE: (ANODE, STOCK),
    FILTER: (FILTER, SLUDGE),
    CARBON: (CARBON, SLUDGE),
    RESIN: (RESIN, SLUDGE),
    RECOVERY_CELL: (RECOVERY_CELL, ANODE, STOCK),
    RACKS: (RACKS,),
    SLUDGE: (SLUDGE,),
    WASTE: (WASTE,),
}
"""Where a move leads from each kind of vessel. Stock gets into a bath by make-up and top-up, waste by drum off."""


@dataclass(frozen=True, kw_only=True)
class MoveInput(Input):
    """Liquid was moved between tanks, or matter between vessels of its kind."""

    verb = "move"
    title = _("Move")
    source: UUID = use(VesselField(_("From"), kinds=tuple(GOES_TO)))
    target: UUID = use(VesselField(_("To"), kinds=(*TANKS, STOCK, ANODE, *SOLIDS, WASTE), fills=True))
    volume: Quantity | None = if_known(_("Volume"), ALL_HELP, "volume", example="5 L")
    mass: Quantity | None = if_known(_("Mass"), _("In place of a volume."), "mass", example="2 kg")


@dataclass(frozen=True, kw_only=True)
class DrumOffInput(Input):
    """Spent liquid, spent solids or expired stock went into a waste container."""

    verb = "drum-off"
    title = _("Drum off")
    source: UUID = use(VesselField(_("From"), kinds=(*TANKS, STOCK, ANODE, *SOLIDS)))
    target: UUID = use(VesselField(_("Into"), kinds=(WASTE,), fills=True))
    volume: Quantity | None = if_known(_("Volume"), ALL_HELP, "volume", example="20 L")
    mass: Quantity | None = if_known(_("Mass"), _("In place of a volume."), "mass", example="2.2 kg")


@dataclass(frozen=True, kw_only=True)
class SampleInput(Input):
    """A sample was taken and does not come back."""

    verb = "sample"
    title = _("Take a sample")
    source: UUID = use(VesselField(_("From"), kinds=EVERYTHING))
    amount: Quantity = use(AmountField(_("Amount"), dimensions=("volume", "mass"), example="20 mL"))


@dataclass(frozen=True, kw_only=True)
class SpillInput(Input):
    """Something was spilled. It is always recorded as an incident."""

    verb = "spill"
    title = _("Record a spill")
    source: UUID = use(VesselField(_("Out of"), kinds=EVERYTHING))
    amount: Quantity | None = if_known(_("Amount"), _("Empty means all of it."), "volume", "mass", example="0.5 L")
    sd: Quantity | None = if_known(
        _("Uncertainty"),
        _("Standard uncertainty; a guess is uncertain."),
        "volume",
        "mass",
        example="0.2 L",
        detail=True,
    )
    target: UUID | None = use(
        VesselField(
            _("Picked up into"), _("Empty means it was not picked up."), required=False, kinds=(WASTE,), fills=True
        )
    )


@dataclass(frozen=True, kw_only=True)
class DischargeInput(Input):
    """Liquid went to the sewer. Whether it may is for your permit and your local rules."""

    verb = "discharge"
    title = _("Discharge to the sewer")
    source: UUID = use(VesselField(_("From"), kinds=(RINSE, BATH, WASTE)))
    volume: Quantity | None = if_known(_("Volume"), _("Empty means all of it."), "volume", example="20 L")


@dataclass(frozen=True, kw_only=True)
class HandOverInput(Input):
    """A waste container, an empty stock container or expired stock went to its receiver, all that is in it too."""

    verb = "hand-over"
    title = _("Hand over")
    container: UUID = use(VesselField(_("Container"), kinds=(WASTE, STOCK)))
    receiver: str = use(TextField(_("Receiver"), longest=120))
    gross: Quantity | None = if_known(_("Gross weight"), "", "mass", example="22.4 kg")
