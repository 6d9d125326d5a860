"""Forms of the process: baths, rinses, anode sets, rack types, routes."""

from functools import partial
from typing import Any
from uuid import UUID

from django import forms
from django.utils.translation import gettext_lazy as _

from chemicals.ledger.models import VesselKind
from chemicals.ledger.selectors import get_vessel_for, list_vessels_for
from chemicals.process.models import AnodeKind, SideReaction, Tank
from chemicals.process.selectors import list_rack_types_for
from chemicals.process.setup import FACTS, SHOWN_AS, SOLID_HOLDERS, TankInput
from chemicals.register.selectors import list_products_for
from chemicals.science.formula import METALS, element_name
from chemicals.science.quantity import spell
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.selectors import get_place_for
from compliance.web.forms.base import Row, Rows, WebForm
from compliance.web.forms.fields import AmountField, LineField, ThingField, WordField
from compliance.web.forms.register import place_field


class VesselForm(WebForm):
    """What every vessel has."""

    def __init__(self, member: Membership, data: Any = None, **kwargs: Any) -> None:
        super().__init__(data, **kwargs)
        self.member = member
        self.fields["name"] = LineField(label=_("Name"), max_length=80, help_text=_("As written on it."))
        self.fields["place"] = place_field(member)
        self.fields["capacity"] = AmountField(["volume"], example="30 L", label=_("Holds at most"), required=False)

    def place(self) -> Place | None:
        """Return the chosen place."""
        chosen = self.cleaned_data["place"]
        return chosen and get_place_for(self.member, chosen)

    def common(self) -> dict[str, Any]:
        """Return name, place and capacity as services take them."""
        cleaned = self.cleaned_data
        return {"name": cleaned["name"], "place": self.place(), "capacity": _base(cleaned["capacity"])}


class RinseForm(VesselForm):
    """A rinse stage."""

    kind = VesselKind.RINSE

    def __init__(self, member: Membership, data: Any = None) -> None:
        super().__init__(member, data)
        self.fields["mark"] = AmountField(
            ["volume"], example="20 L", label=_("Volume at the mark"), required=False, help_text=_("For topping up.")
        )

    def to_tank(self) -> TankInput:
        """Return the tank."""
        return TankInput(kind=self.kind, mark=_base(self.cleaned_data["mark"]), **self.common())


class BathForm(RinseForm):
    """A bath."""

    kind = VesselKind.BATH

    def __init__(self, member: Membership, data: Any = None) -> None:
        super().__init__(member, data)
        holders = list(list_vessels_for(member, VesselKind.ANODE, VesselKind.RACKS).filter(gone_at=None))
        anodes, racks = (
            [(vessel.uuid, vessel.name) for vessel in holders if vessel.kind == kind]
            for kind in (VesselKind.ANODE, VesselKind.RACKS)
        )
        more: dict[str, forms.Field] = {
            "bath_type": LineField(
                label=_("Bath type"), required=False, max_length=80, help_text=_("For example acid copper, bright.")
            ),
            "metal": WordField(
                [(symbol, f"{symbol}, {element_name(symbol)}") for symbol in METALS],
                label=_("Metal that it plates"),
                required=False,
            ),
            "valence": forms.IntegerField(
                label=_("Valence"), required=False, help_text=_("Electrons per atom: 2 for acid copper, 1 for silver.")
            ),
            "efficiency": AmountField(
                ["fraction"],
                example="98 %",
                label=_("Current efficiency"),
                required=False,
                help_text=_("Share of the charge that deposits metal. Empty means 100 %."),
            ),
            "efficiency_sd": AmountField(
                ["fraction"],
                example="3 %",
                label=_("Its uncertainty"),
                required=False,
                help_text=_("Standard uncertainty. Empty means 3 %."),
            ),
            "anode_kind": WordField(AnodeKind.choices, label=_("Anode"), required=False),
            "anode": ThingField(
                anodes, label=_("Anode set"), required=False, help_text=_("That gives its metal to the bath.")
            ),
            "side_reaction": WordField(
                SideReaction.choices,
                label=_("Besides, at an inert anode"),
                required=False,
                help_text=_("What the current makes or uses up; how much follows from Faraday's law."),
            ),
            "racks": ThingField(
                racks,
                label=_("Rack build-up"),
                required=False,
                help_text=_("Where metal is counted that grows on racks instead of on parts."),
            ),
            "rack_share": AmountField(
                ["fraction"],
                example="3 %",
                label=_("Share that grows on racks"),
                required=False,
                help_text=_("Of the deposit. Empty means 3 %, assumed, if a rack build-up is chosen."),
            ),
        }
        self.fields.update(more)

    def to_tank(self) -> TankInput:
        cleaned = self.cleaned_data
        figures: dict[str, Any] = {
            name: _base(cleaned[name]) for name in ("efficiency", "efficiency_sd") if cleaned[name]
        }
        return TankInput(
            kind=self.kind,
            mark=_base(cleaned["mark"]),
            bath_type=cleaned["bath_type"],
            metal=cleaned["metal"],
            valence=cleaned["valence"],
            anode_kind=cleaned["anode_kind"],
            anode=cleaned["anode"] and get_vessel_for(self.member, cleaned["anode"]),
            side_reaction=cleaned["side_reaction"],
            racks=cleaned["racks"] and get_vessel_for(self.member, cleaned["racks"]),
            rack_share=_base(cleaned["rack_share"]),
            **figures,
            **self.common(),
        )


def _begin_with(form: RinseForm, tank: Tank) -> None:
    """Let the fields show how the tank is set up; name, place and size belong to the vessel and are not asked."""
    for name in ("name", "place", "capacity"):
        del form.fields[name]
    known = {name: getattr(tank, name) for name in FACTS}
    for name, dimension in SHOWN_AS.items():
        known[name] = None if known[name] is None else spell(known[name], dimension)
    for name in ("anode", "racks"):
        known[name] = known[name] and known[name].uuid
    form.initial = known
    form.fields["note"] = LineField(
        label=_("Why"), required=False, max_length=200, help_text=_("Kept with who changed it and when.")
    )


def _of_vessel(tank: Tank) -> dict[str, Any]:
    """Return what belongs to the vessel, as it is."""
    return {"name": tank.vessel.name, "place": tank.vessel.place, "capacity": tank.vessel.capacity}


class ChangeRinseForm(RinseForm):
    """How a rinse is set up, to be changed."""

    def __init__(self, member: Membership, tank: Tank, data: Any = None) -> None:
        super().__init__(member, data)
        self.tank = tank
        _begin_with(self, tank)

    def common(self) -> dict[str, Any]:
        return _of_vessel(self.tank)


class ChangeBathForm(BathForm):
    """How a bath is set up, to be changed."""

    def __init__(self, member: Membership, tank: Tank, data: Any = None) -> None:
        super().__init__(member, data)
        self.tank = tank
        _begin_with(self, tank)

    def common(self) -> dict[str, Any]:
        return _of_vessel(self.tank)


class AnodeForm(VesselForm):
    """A set of anodes."""

    def __init__(self, member: Membership, data: Any = None) -> None:
        super().__init__(member, data)
        del self.fields["capacity"]
        products = [(row.uuid, row.name) for row in list_products_for(member)]
        self.fields["product"] = ThingField(
            products, label=_("Product"), required=False, help_text=_("What is bought for it.")
        )


class HolderForm(VesselForm):
    """What stands for solids: a filter, carbon, resin, a recovery cell, what grows on racks, sludge."""

    def __init__(self, member: Membership, data: Any = None) -> None:
        super().__init__(member, data)
        self.fields["kind"] = WordField([(kind.value, kind.label) for kind in SOLID_HOLDERS], label=_("What it is"))
        self.fields["capacity"].help_text = _("Of a sludge box or a resin column.")
        self.order_fields(["kind"])


class RackTypeForm(WebForm):
    """A rack type."""

    name = LineField(label=_("Name"), max_length=80, help_text=_("For example small brass parts, 12 on a rack."))
    area = AmountField(["area"], example="4.4 dm2", label=_("Area of the parts"), required=False)
    drag_out = AmountField(
        ["volume"], example="12 mL", label=_("Drag-out per load"), help_text=_("Solution that clings to a load.")
    )
    drag_out_sd = AmountField(
        ["fraction"],
        example="30 %",
        label=_("Its uncertainty"),
        required=False,
        help_text=_("Standard uncertainty, as a share. Empty means 30 %."),
    )

    def to_rack_type(self) -> dict[str, Any]:
        """Return the rack type as the service takes it."""
        cleaned = self.cleaned_data
        doubt = {"drag_out_sd": cleaned["drag_out_sd"].base} if cleaned["drag_out_sd"] else {}
        return {
            "name": cleaned["name"],
            "area": _base(cleaned["area"]),
            "drag_out": cleaned["drag_out"].base,
            **doubt,
        }


class StepRow(Row):
    """One tank of a route."""

    def __init__(self, things: list[tuple[UUID, str]], **kwargs: Any) -> None:
        super().__init__(**kwargs)
        self.fields["tank"] = ThingField(
            things, label=_("Tank"), initial="", missing=_("No tank yet. Set up a bath or a rinse first.")
        )


class RouteForm(WebForm):
    """A route through tanks."""

    def __init__(self, member: Membership, data: Any = None) -> None:
        super().__init__(data)
        self.fields["name"] = LineField(label=_("Name"), max_length=80, help_text=_("For example copper line."))
        racks = [(rack.uuid, rack.name) for rack in list_rack_types_for(member)]
        self.fields["rack"] = ThingField(
            racks, label=_("Usual rack type"), missing=_("No rack type yet. Add one on the page Tanks first.")
        )
        self.tanks = {v.uuid: v for v in list_vessels_for(member, VesselKind.BATH, VesselKind.RINSE)}
        things = [(vessel.uuid, vessel.name) for vessel in self.tanks.values()]
        text = _("In order: the first one plates, the others rinse.")
        self.add_rows(Rows("vessels", _("Tank"), text, partial(StepRow, things), blank=4))

    def vessels(self) -> list[Any]:
        """Return the tanks in order."""
        return [self.tanks[row.cleaned_data["tank"]] for row in self.rows["vessels"].filled]


def _base(amount: Any) -> int | None:
    return None if amount is None else amount.base
