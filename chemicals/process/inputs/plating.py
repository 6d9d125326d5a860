"""What a person says of loads and current: runs, day sheets, dummy plating and recovery, stripping."""

from dataclasses import dataclass
from uuid import UUID

from django.utils.translation import gettext_lazy as _

from chemicals.process.fields import (
    AmountField,
    InstrumentField,
    ReferenceField,
    RowsField,
    TextField,
    VesselField,
    WholeField,
    use,
)
from chemicals.process.inputs.base import (
    BATH,
    RACKS,
    RECOVERY_CELL,
    TANKS,
    UNCERTAINTY_HELP,
    Input,
    if_known,
    metal_choice,
)
from chemicals.science.quantity import Quantity
from chemicals.science.reading import WEIGHT


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
    charge: Quantity | None = if_known(_("Ampere-hours"), _("Or current and time."), "charge", example="1.8 Ah")
    current: Quantity | None = if_known(_("Current"), "", "current", example="0.44 A")
    current_density: Quantity | None = if_known(
        _("Current density"),
        _("In place of the current; the area comes from the rack type."),
        "current_density",
        example="1 A/dm2",
    )
    time: Quantity | None = if_known(_("Time"), "", "time", example="4 h")
    weight_before: Quantity | None = if_known(_("Weight before"), "", "mass", example="5.6 g")
    weight_after: Quantity | None = if_known(_("Weight after"), "", "mass", example="7.7 g")
    instrument: UUID | None = use(
        InstrumentField(_("Weighed with"), _("Both weights."), required=False, detail=True, measures=(WEIGHT,))
    )
    weight_sd: Quantity | None = if_known(_("Uncertainty of a weight"), UNCERTAINTY_HELP, "mass", example="0.01 g")


@dataclass(frozen=True, kw_only=True)
class RacksRow:
    """So many loads of one rack type through a route."""

    route: UUID = use(ReferenceField(_("Route"), to="route"))
    rack: UUID | None = use(
        ReferenceField(_("Rack type"), _("Empty means the route's own."), required=False, to="rack type")
    )
    loads: int = use(WholeField(_("Loads"), _("How many.")))


@dataclass(frozen=True, kw_only=True)
class ChargeRow:
    """The charge that went through a bath, as its counter says."""

    bath: UUID = use(VesselField(_("Bath"), kinds=(BATH,)))
    charge: Quantity = use(AmountField(_("Ampere-hours"), dimensions=("charge",), example="31.5 Ah"))


@dataclass(frozen=True, kw_only=True)
class DaySheetInput(Input):
    """A day's (or a month's) racks by type and ampere-hours by bath, in one grid, at the end of it."""

    verb = "day-sheet"
    title = _("Fill in a day sheet")
    racks: tuple[RacksRow, ...] = use(RowsField(_("Racks"), required=False, of=RacksRow, blank_rows=4))
    charges: tuple[ChargeRow, ...] = use(RowsField(_("Ampere-hours of a bath"), required=False, of=ChargeRow))


@dataclass(frozen=True, kw_only=True)
class DummyInput(Input):
    """A tank was dummied, or a recovery cell ran on it: metal went out of the liquid onto something else."""

    verb = "dummy"
    title = _("Dummy, or recover metal")
    tank: UUID = use(VesselField(_("Tank"), kinds=TANKS))
    target: UUID | None = use(
        VesselField(
            _("Onto"), _("Empty means a scrap sheet: it counts as parts."), required=False,
            kinds=(RECOVERY_CELL, RACKS), fills=True,
        )
    )  # fmt: skip
    charge: Quantity | None = if_known(_("Ampere-hours"), _("Or current and time."), "charge", example="2 Ah")
    current: Quantity | None = if_known(_("Current"), "", "current", example="0.5 A")
    time: Quantity | None = if_known(_("Time"), "", "time", example="4 h")
    weight_before: Quantity | None = if_known(_("Weight before"), _("Of the sheet or cathode."), "mass", example="85 g")
    weight_after: Quantity | None = if_known(_("Weight after"), "", "mass", example="91.2 g")
    weight_sd: Quantity | None = if_known(
        _("Uncertainty of a weight"), UNCERTAINTY_HELP, "mass", example="0.1 g", detail=True
    )
    metal: str = metal_choice(_("Empty means what the bath plates; for a rinse, what the bath before it plates."))


@dataclass(frozen=True, kw_only=True)
class StripInput(Input):
    """Metal was stripped from parts or from rack build-up into a tank."""

    verb = "strip"
    title = _("Strip")
    tank: UUID = use(VesselField(_("In"), kinds=TANKS, fills=True))
    source: UUID | None = use(
        VesselField(
            _("Rack build-up"), _("Empty means parts: those are weighed."), required=False,
            kinds=(RACKS, RECOVERY_CELL),
        )
    )  # fmt: skip
    metal: str = metal_choice(_("Empty means the only metal that the build-up holds."))
    weight_before: Quantity | None = if_known(
        _("Weight before"), _("Without weights: all of the build-up."), "mass", example="85 g"
    )
    weight_after: Quantity | None = if_known(_("Weight after"), "", "mass", example="80.2 g")
    weight_sd: Quantity | None = if_known(
        _("Uncertainty of a weight"), UNCERTAINTY_HELP, "mass", example="0.1 g", detail=True
    )
