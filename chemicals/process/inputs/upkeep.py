"""What a person says of upkeep: filters, carbon, resin, sludge, cleaning out, treating a batch."""

from dataclasses import dataclass
from uuid import UUID

from django.utils.translation import gettext_lazy as _

from chemicals.books.events import SPECIES
from chemicals.process.fields import AmountField, ChoiceField, RowsField, VesselField, use
from chemicals.process.inputs.base import (
    BATH,
    CARBON,
    FILTER,
    RESIN,
    RINSE,
    SLUDGE,
    TANKS,
    WASTE,
    DissolvedRow,
    HeldRow,
    IngredientRow,
    Input,
    if_known,
)
from chemicals.science.quantity import Quantity

IN_LABEL, IN_HELP = _("Metals in it"), _("If it was weighed or analysed.")
PASSED_LABEL = _("Volume that went through")


@dataclass(frozen=True, kw_only=True)
class FilterInput(Input):
    """A filter came out of a tank's liquid, with what it holds."""

    verb = "filter"
    title = _("Change the filter")
    tank: UUID = use(VesselField(_("Tank"), kinds=TANKS))
    target: UUID = use(VesselField(_("The filter, or where it went"), kinds=(FILTER, WASTE), fills=True))
    solution: Quantity | None = if_known(
        _("Solution in it"), _("Empty means 0.25 L, assumed for a drained cartridge."), "volume", example="0.2 L"
    )
    medium: Quantity | None = if_known(
        _("Weight of the dry filter"), _("So that the waste weighs what it weighs."), "mass", example="300 g",
        detail=True,
    )  # fmt: skip
    passed: Quantity | None = if_known(PASSED_LABEL, "", "volume", example="200 L", detail=True)
    uptake: Quantity | None = if_known(
        _("Share of the metal that it keeps"), _("Empty means none of what is dissolved."), "fraction", example="0.1 %",
        detail=True,
    )  # fmt: skip
    taken: tuple[HeldRow, ...] = use(
        RowsField(IN_LABEL, IN_HELP, required=False, detail=True, of=HeldRow, blank_rows=1)
    )


@dataclass(frozen=True, kw_only=True)
class CarbonInput(Input):
    """A tank's liquid was treated with activated carbon."""

    verb = "carbon"
    title = _("Treat with carbon")
    tank: UUID = use(VesselField(_("Tank"), kinds=TANKS))
    target: UUID = use(VesselField(_("The carbon, or where it went"), kinds=(CARBON, WASTE), fills=True))
    medium: Quantity | None = if_known(_("Carbon"), _("Its weight when it was dry."), "mass", example="60 g")
    solution: Quantity | None = if_known(
        _("Solution in it"), _("Empty means 2 L for each kilogram, assumed."), "volume", example="0.1 L", detail=True
    )
    passed: Quantity | None = if_known(PASSED_LABEL, "", "volume", example="20 L", detail=True)
    uptake: Quantity | None = if_known(
        _("Share of the metal that it keeps"),
        _("Empty means none. Carbon does take gold and silver out of cyanide: then say how much."),
        "fraction", example="5 %", detail=True,
    )  # fmt: skip
    taken: tuple[HeldRow, ...] = use(
        RowsField(IN_LABEL, IN_HELP, required=False, detail=True, of=HeldRow, blank_rows=1)
    )


@dataclass(frozen=True, kw_only=True)
class ResinInput(Input):
    """Liquid went through an ion exchange resin, which keeps its metal."""

    verb = "resin"
    title = _("Run over resin")
    tank: UUID = use(VesselField(_("Tank"), kinds=TANKS))
    target: UUID = use(VesselField(_("The resin, or where it went"), kinds=(RESIN, WASTE), fills=True))
    passed: Quantity | None = if_known(PASSED_LABEL, "", "volume", example="40 L")
    uptake: Quantity | None = if_known(
        _("Share of the metal that it keeps"), _("Empty means 90 %, assumed for a fresh bed."), "fraction",
        example="95 %", detail=True,
    )  # fmt: skip
    medium: Quantity | None = if_known(
        _("Resin"), _("Its weight, if the bed itself is now in the vessel."), "mass", example="1 kg", detail=True
    )
    solution: Quantity | None = if_known(
        _("Solution in it"), _("Empty means half a litre for each kilogram, assumed; none without its weight."),
        "volume", example="0.3 L", detail=True,
    )  # fmt: skip
    taken: tuple[HeldRow, ...] = use(
        RowsField(IN_LABEL, IN_HELP, required=False, detail=True, of=HeldRow, blank_rows=1)
    )


@dataclass(frozen=True, kw_only=True)
class SludgeInput(Input):
    """Settled solids were taken out of a vessel."""

    verb = "sludge"
    title = _("Take out sludge")
    source: UUID = use(VesselField(_("Out of"), kinds=(*TANKS, WASTE)))
    target: UUID = use(VesselField(_("Into"), kinds=(SLUDGE, WASTE), fills=True))
    mass: Quantity = use(AmountField(_("Weight of the wet sludge"), dimensions=("mass",), example="1.5 kg"))
    held: tuple[HeldRow, ...] = use(
        RowsField(
            IN_LABEL, _("If it was analysed; else in proportion to the weight."), required=False, of=HeldRow,
            blank_rows=2,
        )
    )  # fmt: skip


@dataclass(frozen=True, kw_only=True)
class CleanOutInput(Input):
    """A tank was emptied and washed, and all of it went into one vessel."""

    verb = "clean-out"
    title = _("Clean out")
    tank: UUID = use(VesselField(_("Tank"), kinds=TANKS))
    target: UUID = use(VesselField(_("Into"), kinds=(WASTE, BATH, RINSE), fills=True))
    water: Quantity | None = if_known(_("Wash water"), _("That went along."), "volume", example="2 L")


@dataclass(frozen=True, kw_only=True)
class SpeciesRow:
    """A species that reacted away, wholly."""

    species: str = use(ChoiceField(_("Species"), choices=tuple((name, name) for name in SPECIES)))


@dataclass(frozen=True, kw_only=True)
class TreatmentInput(Input):
    """A vessel's content was treated as a batch: reagents went in, filtrate and sludge came out."""

    verb = "treatment"
    title = _("Treat a batch")
    vessel: UUID = use(VesselField(_("Vessel"), kinds=(*TANKS, WASTE)))
    reagents: tuple[IngredientRow, ...] = use(RowsField(_("Reagents"), required=False, of=IngredientRow, blank_rows=2))
    filtrate: UUID | None = use(
        VesselField(
            _("Filtrate into"), _("Empty means that it stays where it is."), required=False,
            kinds=(RINSE, BATH, WASTE), fills=True,
        )
    )  # fmt: skip
    filtrate_volume: Quantity | None = if_known(
        _("Volume of the filtrate"), _("Empty means all the liquid."), "volume", example="18 L"
    )
    sludge: UUID | None = use(
        VesselField(
            _("Sludge into"), _("Empty means that there is none."), required=False, kinds=(SLUDGE, WASTE), fills=True
        )
    )
    sludge_mass: Quantity | None = if_known(_("Weight of the wet sludge"), "", "mass", example="3 kg")
    dissolved: tuple[DissolvedRow, ...] = use(
        RowsField(
            _("Found in the filtrate"),
            _("Of each metal the rest is in the sludge."),
            required=False,
            of=DissolvedRow,
            blank_rows=2,
        )
    )
    consumed: tuple[SpeciesRow, ...] = use(
        RowsField(
            _("Reacted away"), _("What a test showed to be gone, wholly."), required=False, of=SpeciesRow, blank_rows=1
        )
    )
