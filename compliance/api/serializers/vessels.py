"""Vessels and what they hold, tanks, rack types, routes."""

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.ledger.components import dimension_of, dimension_per_litre
from chemicals.ledger.models import VesselKind
from chemicals.ledger.selectors import Held, HeldMetal
from chemicals.process.models import AnodeKind, SideReaction
from chemicals.process.setup import HOLDERS
from chemicals.science.formula import METALS
from compliance.api.fields import BaseUnits, Choice, Identifier, Strict, Text, Whole, Words
from compliance.api.serializers.base import STANDS_HELP, Estimate, Figure, Named, Shape, choices_of
from compliance.api.serializers.entries import DatedFinding
from compliance.api.serializers.query import PageQuery

CAPACITY_HELP = _('What it can hold, such as "25 L" or "6.5 gal".')


class VesselShape(Shape):
    """Anything that holds matter."""

    uuid = serializers.UUIDField(help_text=_("The vessel's identifier."))
    code = serializers.CharField(help_text=_("The short code on its label, unique everywhere."))
    kind = choices_of(VesselKind.values, _("What it is."))
    name = serializers.CharField(help_text=_("Its name."))
    place = Named(allow_null=True, help_text=_("Where it stands; null where that is not said."))
    product = Named(allow_null=True, help_text=_("The product that arrives in it; null for tanks and waste."))
    capacity = Figure(dimension="volume", allow_null=True, help_text=_("What it can hold; null where not said."))
    opened_on = serializers.DateField(allow_null=True, help_text=_("When it was opened; null where not said."))
    expires_on = serializers.DateField(allow_null=True, help_text=_("Until when it keeps; null where not said."))
    gone_at = serializers.DateTimeField(
        allow_null=True, help_text=_("Since when it is gone: put away, or handed over; null while it is here.")
    )
    created_at = serializers.DateTimeField(help_text=_("When it was set up."))


class VesselsShape(Shape):
    """Vessels as they are now."""

    vessels = VesselShape(many=True, help_text=_("Each of them, by name."))


class VesselQuery(PageQuery):
    """Which vessels to list."""

    kind = Choice(choices=VesselKind.choices, required=False, help_text=_("Only vessels of this kind."))
    code = Text(required=False, max_length=20, help_text=_("Only the vessel with this code, as typed or scanned."))


class VesselInput(Strict):
    """A new stock container, anode set, filter or the like; tanks and waste containers have addresses of their own."""

    kind = Choice(
        choices=[(kind.value, kind.label) for kind in HOLDERS],
        help_text=_("A stock container, an anode set, or what stands for solids that take metal out of a liquid."),
    )
    name = Text(max_length=80, help_text=_("A name that no other vessel here has."))
    product = Identifier(
        required=False, allow_null=True, help_text=_("The product that it holds; only a stock container needs one.")
    )
    place = Identifier(required=False, allow_null=True, help_text=_("Where it stands."))
    capacity = BaseUnits("volume", example="2.5 L", required=False, allow_null=True, help_text=CAPACITY_HELP)


def _amount(held: Held) -> Estimate:
    return Estimate(held.amount, held.sd, dimension_of(held.component))


def _concentration(held: HeldMetal) -> Estimate:
    return Estimate(held.concentration, held.concentration_sd, dimension_per_litre(held.component))


class HeldShape(Shape):
    """What a vessel holds of one component: metals and solutes by mass, species by amount of substance."""

    component = serializers.CharField(
        help_text=_("The metal's symbol, a species, the formula of a solute, volume, or gross mass.")
    )
    amount = Figure(source="*", of=_amount, help_text=_("How much, now."))


class HeldMetalShape(HeldShape):
    """A metal (or another substance) in a vessel, also per litre where the volume is known."""

    concentration = Figure(
        source="*", of=_concentration, help_text=_("Amount over volume; unknown where either is unknown.")
    )


class ContentsShape(Shape):
    """What a vessel holds now, as the entries say."""

    volume = HeldShape(allow_null=True, help_text=_("The volume; null if nothing was ever recorded of it."))
    mass = HeldShape(allow_null=True, help_text=_("The gross mass; null if nothing was ever recorded of it."))
    metals = HeldMetalShape(many=True, help_text=_("Every metal, species and solute that is listed."))
    incomplete = serializers.BooleanField(help_text=_("True if there may be more in it than is listed."))


class VesselDetail(VesselShape):
    """A vessel with what it holds."""

    contents = ContentsShape(help_text=_("What it holds now."))
    stands_to = serializers.DateTimeField(allow_null=True, help_text=STANDS_HELP)
    findings = DatedFinding(many=True, help_text=_("What a person should know about it, the latest 50."))


class TankShape(Shape):
    """A bath or a rinse with the figures that its runs rely on."""

    vessel = VesselShape(help_text=_("The tank as a vessel."))
    mark = Figure(dimension="volume", allow_null=True, help_text=_("Volume at the mark; null where there is none."))
    bath_type = serializers.CharField(help_text=_("What kind of bath it is."))
    metal = serializers.CharField(help_text=_("The metal that it plates; empty for a rinse."))
    valence = serializers.IntegerField(allow_null=True, help_text=_("Electrons per atom; null for a rinse."))
    efficiency = Figure(dimension="fraction", help_text=_("Share of the charge that deposits metal."))
    efficiency_sd = Figure(dimension="fraction", help_text=_("Standard uncertainty of that share."))
    anode_kind = serializers.CharField(help_text=_("soluble, inert, or empty where there is none."))
    anode = Named(allow_null=True, help_text=_("The anode set of a soluble anode."))
    side_reaction = serializers.CharField(
        help_text=_("What the current does at an inert anode: acid, alkali, chromium(VI), or empty.")
    )
    racks = Named(allow_null=True, help_text=_("The rack build-up; null where it is not counted."))
    rack_share = Figure(
        dimension="fraction", allow_null=True, help_text=_("Share of the deposit that grows on racks; null is assumed.")
    )


class TankInput(Strict):
    """A new bath or rinse with its vessel."""

    kind = Choice(
        choices=[(kind.value, kind.label) for kind in (VesselKind.BATH, VesselKind.RINSE)],
        help_text=_("A bath or a rinse."),
    )
    name = Text(max_length=80, help_text=_("A name that no other vessel here has."))
    place = Identifier(required=False, allow_null=True, help_text=_("Where it stands."))
    capacity = BaseUnits("volume", example="25 L", required=False, allow_null=True, help_text=CAPACITY_HELP)
    mark = BaseUnits(
        "volume", example="20 L", required=False, allow_null=True, help_text=_("Volume at the mark, for topping up.")
    )
    bath_type = Text(required=False, allow_blank=True, max_length=80, help_text=_("Such as bright acid copper."))
    metal = Choice(
        choices=[(symbol, symbol) for symbol in METALS],
        required=False,
        allow_null=True,
        help_text=_("The metal that it plates; none for a rinse."),
    )
    valence = Whole(
        required=False, allow_null=True, min_value=1, max_value=8, help_text=_("Electrons per atom: 2 for acid copper.")
    )
    efficiency = BaseUnits(
        "fraction",
        example="95 %",
        required=False,
        allow_null=True,
        help_text=_("Share of the charge that deposits metal; 100 % if left out."),
    )
    efficiency_sd = BaseUnits(
        "fraction",
        example="3 %",
        required=False,
        allow_null=True,
        help_text=_("Standard uncertainty of that share; 3 % if left out."),
    )
    anode_kind = Choice(
        choices=AnodeKind.choices,
        required=False,
        allow_null=True,
        help_text=_("A soluble anode gives its metal to the bath."),
    )
    anode = Identifier(required=False, allow_null=True, help_text=_("The anode set of a soluble anode."))
    side_reaction = Choice(
        choices=SideReaction.choices,
        required=False,
        allow_null=True,
        help_text=_("What the current does at an inert anode besides plating; how much follows from Faraday's law."),
    )
    racks = Identifier(
        required=False, allow_null=True, help_text=_("The rack build-up: counts what grows on racks, not on parts.")
    )
    rack_share = BaseUnits(
        "fraction",
        example="3 %",
        required=False,
        allow_null=True,
        help_text=_("Share of the deposit that grows on racks; 3 %, assumed, if left out."),
    )


class RackTypeShape(Shape):
    """Parts on a rack."""

    uuid = serializers.UUIDField(help_text=_("The rack type's identifier."))
    name = serializers.CharField(help_text=_("Its name."))
    area = Figure(dimension="area", allow_null=True, help_text=_("Area of a load; null where not said."))
    drag_out = Figure(dimension="volume", help_text=_("What a load drags out of a tank."))
    drag_out_sd = Figure(dimension="fraction", help_text=_("Relative standard uncertainty of the drag-out."))


class RackTypeInput(Strict):
    """A new rack type."""

    name = Text(max_length=80, help_text=_("A name that no other rack type here has."))
    drag_out = BaseUnits("volume", example="10 mL", help_text=_("What a load drags out of a tank."))
    drag_out_sd = BaseUnits(
        "fraction",
        example="30 %",
        required=False,
        allow_null=True,
        help_text=_("Its relative standard uncertainty; 30 % if left out."),
    )
    area = BaseUnits(
        "area",
        example="0.44 dm2",
        required=False,
        allow_null=True,
        help_text=_("Area of a load; current densities need it."),
    )


class RouteStepShape(Shape):
    """One tank of a route."""

    vessel = Named(help_text=_("The tank."))


class RouteShape(Shape):
    """The tanks that a load goes through, in order."""

    uuid = serializers.UUIDField(help_text=_("The route's identifier."))
    name = serializers.CharField(help_text=_("Its name."))
    rack = Named(help_text=_("Its usual rack type."))
    steps = RouteStepShape(many=True, help_text=_("The tanks in order; the first one plates."))


class RouteInput(Strict):
    """A new route."""

    name = Text(max_length=80, help_text=_("A name that no other route here has."))
    rack = Identifier(help_text=_("Its usual rack type."))
    vessels = Words(child=Identifier(help_text=_("A tank.")), help_text=_("The tanks in order; the first one plates."))
