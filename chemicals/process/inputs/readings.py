"""What a person reads and has analysed: level, weight, density and all else, analysis and its acceptance."""

from dataclasses import dataclass
from datetime import datetime
from typing import Any
from uuid import UUID

from django.utils.translation import gettext_lazy as _

from chemicals.process.fields import (
    AmountField,
    ChoiceField,
    ComponentField,
    FlagField,
    InstrumentField,
    MomentField,
    ReferenceField,
    Text,
    TextField,
    VesselField,
    use,
)
from chemicals.process.inputs.base import (
    EVERYTHING,
    STOCK,
    TANKS,
    UNCERTAINTY_HELP,
    WASTE,
    Input,
    if_known,
)
from chemicals.process.models import LONGEST_TYPED
from chemicals.science.quantity import Quantity
from chemicals.science.reading import ANALYSIS, DENSITY, LEVEL, READ, WEIGHT

READINGS = {
    "pH": _("pH"),
    "temperature": _("temperature"),
    "conductivity": _("conductivity"),
    "voltage": _("voltage at the bath"),
    "air speed": _("air speed at its extraction"),
    "surface tension": _("surface tension"),
    "test strip": _("what a test strip shows"),
}
"""What may be read, as a list to choose from says it."""
READ_WITH = _("Read with")


def instrument(label: Text, help: Text, *measures: str, by: str = "") -> Any:
    """Return an optional choice of an instrument that measures one of these."""
    return use(InstrumentField(label, help, required=False, measures=measures, by=by))


@dataclass(frozen=True, kw_only=True)
class LevelInput(Input):
    """A level was read."""

    verb = "level-reading"
    title = _("Read the level")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=(*TANKS, WASTE)))
    volume: Quantity | None = if_known(
        _("Volume now"), _("Or a mark of its level table, below."), "volume", example="19.2 L"
    )
    mark: str = use(
        TextField(
            _("Height or mark"),
            _("As its level table says, for example 32 cm or upper mark."),
            required=False,
            detail=True,
            longest=LONGEST_TYPED,
        )
    )
    hot: bool = use(
        FlagField(
            _("Read hot"), _("Then the table for hot liquid tells the volume at 20 °C."), required=False, detail=True
        )
    )
    instrument: UUID | None = instrument(READ_WITH, "", LEVEL)
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
    instrument: UUID | None = instrument(_("Weighed with"), "", WEIGHT)
    sd: Quantity | None = if_known(_("Uncertainty"), UNCERTAINTY_HELP, "mass", example="50 g", detail=True)


@dataclass(frozen=True, kw_only=True)
class DensityInput(Input):
    """The density of a liquid was read: its weight is density times volume."""

    verb = "density-reading"
    title = _("Read the density")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=(*TANKS, STOCK, WASTE)))
    density: Quantity = use(
        AmountField(
            _("Density"),
            _("Or degrees Baumé, for example 32 °Bé (145 at 60 °F); of the older scale 32 °Bé rational (144.3)."),
            dimensions=("density", "baume", "rational_baume"),
            example="1.18 g/mL",
        )
    )
    instrument: UUID | None = instrument(READ_WITH, "", DENSITY)
    sd: Quantity | None = if_known(
        _("Uncertainty"), UNCERTAINTY_HELP, "density", "baume", "rational_baume", example="0.005 g/mL", detail=True
    )


@dataclass(frozen=True, kw_only=True)
class ReadingInput(Input):
    """Something else was read at a vessel. It is kept as it was read: nothing else follows from it."""

    verb = "reading"
    title = _("Take a reading")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=EVERYTHING))
    quantity: str = use(ChoiceField(_("What was read"), choices=tuple(READINGS.items())))
    shows: str = use(
        TextField(
            _("What the strip shows"),
            _("Only of a test strip: for example copper, free cyanide, chlorine."),
            required=False,
            longest=80,
        )
    )
    result: str = use(
        TextField(
            _("Result"),
            _("For example 4.2, 24 °C, 250 uS/cm, 3.5 V, 0.5 m/s, 45 mN/m, 10 to 25 mg/L, below 0.5 mg/L."),
            longest=80,
        )
    )
    instrument: UUID | None = instrument(READ_WITH, "", *READ, by="quantity")
    sd: str = use(TextField(_("Uncertainty"), UNCERTAINTY_HELP, required=False, detail=True, longest=80))
    remark: str = use(TextField(_("Remark"), required=False))


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
    instrument: UUID | None = instrument(
        _("Laboratory or method"), _("Its uncertainty counts if none is written above."), ANALYSIS
    )
    reported_at: datetime | None = use(MomentField(_("Reported"), _("Empty means now."), required=False))


@dataclass(frozen=True, kw_only=True)
class AcceptanceInput(Input):
    """An analysis is accepted: the books follow it."""

    verb = "acceptance"
    title = _("Accept an analysis")
    analysis: UUID = use(ReferenceField(_("Analysis"), to="analysis"))
