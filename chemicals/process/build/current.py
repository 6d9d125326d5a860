"""What is relied on where current flows in a bath: Faraday's law, the anode, what grows on racks, what is made."""

from decimal import ROUND_HALF_EVEN, Decimal

from chemicals.books.events import ACID, ALKALI, CHROMIUM_VI, Conversion, Deposit, Figure, Measured, Plating
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.build.figures import RACK_SHARE, RECOVERY
from chemicals.process.draft import Draft
from chemicals.process.models import AnodeKind, RouteStep, SideReaction, Tank
from chemicals.science.faraday import F, usual_valences
from chemicals.science.formula import atomic_weight
from chemicals.science.quantity import Quantity

ELECTRONS = Decimal(10**12) / Decimal(str(F))
"""Nanomoles of electrons in a kilocoulomb."""
MILLION = 10**6
BALANCE = "Faraday's law, {what}, at the current efficiency of {bath}"
SIDE_REACTIONS = {
    SideReaction.ACID: (
        ACID, True, "one hydrogen ion for each electron at an inert anode, less what the cathode takes for gas",
    ),
    SideReaction.ALKALI: (
        ALKALI, False, "one hydroxide for each electron at an inert anode, less what the cathode makes with its gas",
    ),
    SideReaction.CHROMIUM_VI: (CHROMIUM_VI, False, "one chromium(VI) for each chromium that is plated"),
}  # fmt: skip
"""Side reaction -> the species, whether it is made, in words why."""


def find_bath(vessel: Vessel) -> Tank | None:
    """Return the settings of a tank in which current flows: a bath that plates a metal."""
    bath = Tank.objects.filter(vessel=vessel).select_related("vessel", "anode", "racks").first()
    return bath if bath is not None and bath.metal else None


def find_plating(vessel: Vessel) -> Plating | None:
    """Return what a load in a tank relies on; None if it plates no metal."""
    bath = find_bath(vessel)
    return None if bath is None else plating_in(bath)


def plating_in(bath: Tank) -> Plating:
    """Return what a load in the bath relies on."""
    soluble = bath.anode_kind == AnodeKind.SOLUBLE and bath.anode is not None
    return Plating(
        deposit=_deposit(bath),
        anode=str(bath.anode.uuid) if soluble and bath.anode is not None else None,
        racks=None if bath.racks is None else str(bath.racks.uuid),
        rack_share=None if bath.racks is None else _rack_share(bath),
        conversions=_conversions(bath),
    )


def plating_onto(draft: Draft, tank: Vessel, target: Vessel | None, metal: str) -> Plating | None:
    """Return what dummy plating or recovery in a tank relies on; a recovery cell has an inert anode of its own.

    Of a metal that the tank does not plate itself (a rinse, an impurity) the current efficiency is assumed.
    """
    own = draft.known.once(("bath", tank.pk), lambda: find_bath(tank))
    cell = target is not None and target.kind == VesselKind.RECOVERY_CELL
    if own is not None and metal in ("", own.metal):
        plating = plating_in(own)
        return Plating(plating.deposit, None if cell else plating.anode, None, None, plating.conversions)
    feeds = [own] if own is not None else draft.known.once(("feeds", tank.pk), lambda: find_feeds(tank))
    metals = {bath.metal for bath in feeds}
    if not metal and len(metals) != 1:
        draft.refuse("metal", "Which metal came out of this tank is not known here. Choose the metal.")
        return None
    metal = metal or metals.pop()
    valence = next((bath.valence for bath in feeds if bath.metal == metal), None) or usual_valences(metal)[0]
    return Plating(Deposit(metal, str(atomic_weight(metal)), valence, str(F), RECOVERY), None, None, None, ())


def find_feeds(rinse: Vessel) -> list[Tank]:
    """Return the baths whose loads go through a rinse."""
    first = RouteStep.objects.filter(position=0, route__steps__vessel=rinse).values("vessel")
    return list(Tank.objects.filter(vessel__in=first).exclude(metal="").order_by("pk"))


def _deposit(bath: Tank) -> Deposit:
    assert bath.valence is not None  # noqa: S101  (constraint tank_metal_with_valence)
    return Deposit(
        metal=bath.metal,
        molar_mass=str(atomic_weight(bath.metal)),
        valence=bath.valence,
        faraday=str(F),
        efficiency=Figure(bath.efficiency, bath.efficiency_sd, f"set for {bath.vessel.name}"),
    )


def _rack_share(bath: Tank) -> Figure:
    if bath.rack_share is None:
        return RACK_SHARE
    return Figure(bath.rack_share, bath.rack_share // 2, f"set for {bath.vessel.name}, uncertain by half of it")


def _conversions(bath: Tank) -> tuple[Conversion, ...]:
    """Return the species that the current makes or uses up: as much as metal is plated, electron for electron."""
    if not bath.side_reaction or bath.valence is None:
        return ()
    species, made, what = SIDE_REACTIONS[SideReaction(bath.side_reaction)]
    electrons = bath.valence if species == CHROMIUM_VI else 1
    share = ELECTRONS / electrons / MILLION
    base, sd = (_whole(share * ppm) for ppm in (min(bath.efficiency, MILLION), bath.efficiency_sd))
    source = BALANCE.format(what=what, bath=bath.vessel.name)
    return (Conversion(species, Figure(base, sd, source), made=made),)


def _whole(number: Decimal) -> int:
    return int(number.to_integral_value(ROUND_HALF_EVEN))


def check_charge(
    draft: Draft, *, charge: Quantity | None, by_current: bool, time: Quantity | None, before: object, after: object
) -> None:
    """Note what is missing or said twice of charge, current and time, and of the two weights."""
    if charge is not None and by_current:
        draft.refuse("charge", "Write the ampere-hours or the current, not both.")
    if charge is None and by_current and time is None:
        draft.refuse("time", "Write how long the current flowed.")
    if (before is None) != (after is None):
        missing = "weight_before" if before is None else "weight_after"
        draft.refuse(missing, "One weight alone tells nothing. Write both, or neither.")


def check_told(draft: Draft, charge: object, current: Measured | None, time: object, *, weighed: bool) -> None:
    """Refuse a load of which neither the charge nor the weight is known."""
    if charge is None and (current is None or time is None) and not weighed:
        draft.refuse("charge", "Write the ampere-hours, or current and time, or both weights.")
