"""What the current does in a bath: metal onto parts and racks, metal from soluble anodes, species made and used up.

The books keep no covariances: what leaves the bath for parts and what leaves it for racks count as independent, so that
the bath is rather less certain than it might be.
"""

from collections.abc import Iterator
from decimal import ROUND_HALF_EVEN, Decimal, localcontext

from chemicals.books.events import (
    ASSUMED,
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    REACTION,
    Conversion,
    Deposit,
    Dummy,
    Figure,
    Measured,
    Plating,
    Run,
)
from chemicals.books.fold.arithmetic import ceiling, product, quotient, root
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.state import WEIGHT_LOST

MILLION = 10**6
UC_PER_KC = 10**9
"""Microcoulombs in a kilocoulomb."""
ALL_DISSOLVES = Figure(MILLION, 0, "a soluble anode has no other reaction")
NO_SHARE = Figure(0, 0, "nothing grows on racks")
Amount = tuple[int, int, str]
"""An amount (micrograms; of charge microcoulombs), its standard uncertainty and its basis."""


def fold_current(
    folding: Folding, plating: Plating, bath: str, target: str, charge: Amount | None, gained: Amount | None
) -> None:
    """bath -> target and racks, anode set -> bath, species to and from reaction.

    ``charge`` is what flowed and ``gained`` what the target weighs more than before; None where nobody knows.
    """
    metal = plating.deposit.metal
    for end, amount in _deposited(plating, target, charge, gained):
        move_metal(folding, metal, bath, end, amount)
    if gained is not None and gained[0] < 0:
        folding.note(WEIGHT_LOST, metal, bath, target)
    flowed = charge or _charge_behind(plating, gained)
    if plating.anode is not None:
        move_metal(folding, metal, plating.anode, bath, _by_faraday(flowed, plating.deposit, ALL_DISSOLVES))
    for conversion in plating.conversions:
        _convert(folding, bath, conversion, flowed)


def move_metal(folding: Folding, metal: str, source: str, target: str, amount: Amount | None) -> None:
    """Move metal without liquid: its mass goes along with it."""
    for component in (metal, GROSS_MASS):
        if amount is None:
            folding.move_unknown(component, source, target)
        else:
            folding.move(component, source, target, *amount)


def charge_of(event: Run | Dummy) -> Amount | None:
    """Return the charge as read, else current (uA) times time (ms); None where it is not known."""
    if event.charge is not None:
        return read_charge(event.charge)
    if event.current is None or event.time is None:
        return None
    current, time = event.current, event.time
    return *product(current.base, current.stated_sd, time.base, time.stated_sd, 1000), COMPUTED


def read_charge(charge: Measured) -> Amount:
    """Return a charge as the counter says: what follows from it is computed."""
    return charge.base, charge.stated_sd, COMPUTED


def gained_by(event: Run | Dummy) -> Amount | None:
    """Return by how much the weight grew; None where it was not taken before and after."""
    before, after = event.weight_before, event.weight_after
    return None if before is None or after is None else weighed_difference(after, before)


def weighed_difference(more: Measured, less: Measured) -> Amount:
    """Return the difference of two weighings, below zero if the first one is the smaller."""
    return more.base - less.base, root(more.stated_sd**2 + less.stated_sd**2), OBSERVED


def _deposited(
    plating: Plating, target: str, charge: Amount | None, gained: Amount | None
) -> Iterator[tuple[str, Amount | None]]:
    """Yield what grew where. A weight speaks of the target alone, the charge of target and racks together."""
    share = _rack_share(plating)
    whole = _by_faraday(charge, plating.deposit, plating.deposit.efficiency)
    yield target, gained or _part(whole, MILLION - share.base, share.sd, COMPUTED, rounded_up=True)
    if plating.racks is not None and share.base:
        beside = _part(whole, share.base, share.sd, ASSUMED) if gained is None else _beside(gained, share)
        yield plating.racks, beside


def _rack_share(plating: Plating) -> Figure:
    """Return the part of the deposit, in ppm, that grows on racks: at most all of it."""
    share = plating.rack_share
    if plating.racks is None or share is None:
        return NO_SHARE
    return Figure(min(share.base, MILLION), share.sd, share.source)


def _part(whole: Amount | None, ppm: int, sd: int, basis: str, *, rounded_up: bool = False) -> Amount | None:
    """Return a part of the deposit; of two that make the whole, one is rounded up."""
    if whole is None:
        return None
    amount, doubt = product(whole[0], whole[1], ppm, sd, MILLION)
    return ceiling(whole[0] * ppm, MILLION) if rounded_up else amount, doubt, basis


def _beside(gained: Amount, share: Figure) -> Amount | None:
    """Return what grew on racks beside the weighed deposit: share / (1 - share) of it."""
    rest = MILLION - share.base
    if gained[0] < 0 or rest <= 0:
        return None
    odds, doubt = share.base * MILLION**2 // rest, ceiling(share.sd * MILLION**3, rest**2)
    return *product(gained[0], gained[1], odds, doubt, MILLION**2), ASSUMED


def _charge_behind(plating: Plating, gained: Amount | None) -> Amount | None:
    """Return the charge that a weighed deposit needed, racks included; None where the weight does not tell."""
    deposit, share = plating.deposit, _rack_share(plating)
    rest = MILLION - share.base
    if gained is None or gained[0] < 0 or rest <= 0 or deposit.efficiency.base <= 0:
        return None
    whole = quotient(gained[0], gained[1], rest, share.sd, MILLION)
    base, sd = quotient(*whole, deposit.efficiency.base, deposit.efficiency.sd, MILLION)
    return faraday_charge(base, deposit), faraday_charge(sd, deposit), ASSUMED


def _by_faraday(charge: Amount | None, deposit: Deposit, efficiency: Figure) -> Amount | None:
    if charge is None:
        return None
    base, sd, basis = charge
    doubts = faraday_mass(sd, deposit, efficiency.base), faraday_mass(base, deposit, efficiency.sd)
    return faraday_mass(base, deposit, efficiency.base), root(doubts[0] ** 2 + doubts[1] ** 2), basis


def _convert(folding: Folding, bath: str, conversion: Conversion, charge: Amount | None) -> None:
    """reaction -> bath of a species that is made, bath -> reaction of one that is used up."""
    source, target = (REACTION, bath) if conversion.made else (bath, REACTION)
    if charge is None:
        folding.move_unknown(conversion.species, source, target)
        return
    yielded = conversion.per_kilocoulomb
    amount, sd = product(charge[0], charge[1], yielded.base, yielded.sd, UC_PER_KC)
    folding.move(conversion.species, source, target, amount, sd, ASSUMED)


def faraday_mass(charge: int, deposit: Deposit, efficiency_ppm: int) -> int:
    """Return the mass in micrograms: M Q / (z F) x efficiency (Faraday's laws of electrolysis)."""
    with localcontext() as context:
        context.prec = 60
        mass = Decimal(deposit.molar_mass) * charge * efficiency_ppm
        mass /= deposit.valence * Decimal(deposit.faraday) * MILLION
        return int(mass.to_integral_value(ROUND_HALF_EVEN))


def faraday_charge(mass: int, deposit: Deposit) -> int:
    """Return the charge in microcoulombs that a mass needs at full efficiency: z F m / M."""
    with localcontext() as context:
        context.prec = 60
        charge = deposit.valence * Decimal(deposit.faraday) * mass / Decimal(deposit.molar_mass)
        return int(charge.to_integral_value(ROUND_HALF_EVEN))
