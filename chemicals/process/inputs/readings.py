"""What a person reads and has analysed: level, weight, density, analysis and its acceptance."""

from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from django.utils.translation import gettext_lazy as _

from chemicals.process.fields import (
    AmountField,
    ComponentField,
    FlagField,
    MomentField,
    ReferenceField,
    TextField,
    VesselField,
    use,
)
from chemicals.process.inputs.base import (
    EVERYTHING,
    STOCK,
    TANKS,
    UNCERTAINTY_HELP,
    VOLUME_HELP,
    WASTE,
    Input,
    if_known,
)
from chemicals.science.quantity import Quantity


@dataclass(frozen=True, kw_only=True)
class LevelInput(Input):
    """A level was read."""

    verb = "level-reading"
    title = _("Read the level")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=(*TANKS, WASTE)))
    volume: Quantity = use(AmountField(_("Volume now"), VOLUME_HELP, dimensions=("volume",), example="19.2 L"))
    sd: Quantity | None = if_known(_("Uncertainty"), UNCERTAINTY_HELP, "volume", example="0.2 L")
    spilled: bool = use(
        FlagField(
            _("Less, because it leaked or was spilled"),
            _("Otherwise less is taken as evaporated water."),
            required=False,
        )
    )


@dataclass(frozen=True, kw_only=True)
class WeightInput(Input):
    """A vessel was weighed: the weight of its content is set, nothing else."""

    verb = "weight-reading"
    title = _("Weigh it")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=EVERYTHING))
    mass: Quantity = use(AmountField(_("Weight"), _("As the scale says."), dimensions=("mass",), example="22.4 kg"))
    tare: Quantity | None = if_known(
        _("Empty weight"),
        _("Of the container, if it stood on the scale; empty means that the content alone was weighed."),
        "mass",
        example="1.2 kg",
    )
    sd: Quantity | None = if_known(_("Uncertainty"), UNCERTAINTY_HELP, "mass", example="50 g", detail=True)


@dataclass(frozen=True, kw_only=True)
class DensityInput(Input):
    """The density of a liquid was read: its weight is density times volume."""

    verb = "density-reading"
    title = _("Read the density")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=(*TANKS, STOCK, WASTE)))
    density: Quantity = use(AmountField(_("Density"), dimensions=("density",), example="1.18 g/mL"))
    sd: Quantity | None = if_known(_("Uncertainty"), UNCERTAINTY_HELP, "density", example="0.005 g/mL", detail=True)


@dataclass(frozen=True, kw_only=True)
class AnalysisInput(Input):
    """A bath or rinse was analysed. The date of the record is the date of sampling."""

    verb = "analysis"
    title = _("Enter an analysis")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=(*TANKS, STOCK, WASTE)))
    metal: str = use(ComponentField(_("Metal or other substance")))
    result: Quantity = use(
        AmountField(
            _("Result"),
            _("As mass or moles in a litre."),
            dimensions=("concentration", "molar_concentration"),
            example="52.5 g/L",
        )
    )
    sd: Quantity | None = if_known(
        _("Uncertainty"), UNCERTAINTY_HELP, "concentration", "molar_concentration", example="0.5 g/L"
    )
    expressed_as: str = use(
        TextField(
            _("Expressed as"),
            _("The formula, for example CuSO4.5H2O; empty means the metal. Of cyanide: NaCN, KCN or CN."),
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
