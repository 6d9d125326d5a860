"""What the sheet for the fire brigade says, from the books as they stand."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from math import isqrt
from typing import Any

from django.conf import settings

from chemicals.books.events import GROSS_MASS, VOLUME
from chemicals.ledger.components import dimension_of
from chemicals.ledger.models import VesselKind
from chemicals.ledger.selectors import Held, get_recomputed_to
from chemicals.science.quantity import show
from chemicals.workshop.models import EmergencyNumber, Membership
from chemicals.workshop.selectors import list_emergency_numbers_for
from compliance.premises.hazards import (
    find_together,
    list_avoided,
    list_hazards,
    list_with_acid,
    list_with_water,
    order_of_hazard,
)
from compliance.premises.labels import contents_of
from compliance.premises.selectors import Standing, group_by_place, is_stock, list_standing_for
from compliance.waste.label import name_of, show_held

CAUTIONS = ("Acid and cyanide never in one bund, drain or duct: together they give a gas that kills within minutes.",)
_KINDS = dict(VesselKind.choices)  # looked up once: a choice field makes them anew for each row
IN_WATER = (VesselKind.BATH, VesselKind.RINSE)
"""Kinds of vessels whose contents have met water already."""


@dataclass(frozen=True)
class Premises:
    """What is here, by place; how many vessels hold nothing by the books; whom to call; up to when the books stand."""

    here: tuple[Standing, ...]
    left_out: int
    numbers: tuple[EmergencyNumber, ...]
    behind: str = ""


def read_premises(member: Membership) -> Premises:
    """Return everything that the sheet speaks of. Ten queries."""
    standing = list_standing_for(member)
    here = tuple(each for each in standing if each.is_here)
    recomputing = get_recomputed_to(member.workshop)
    behind = "" if recomputing is None else recomputing.until.astimezone(member.workshop.zone).isoformat(" ", "minutes")
    return Premises(here, len(standing) - len(here), tuple(list_emergency_numbers_for(member)), behind)


def build_sheet(member: Membership) -> dict[str, Any]:
    """Return the frozen data of the sheet; the issuing adds number, chain head and names."""
    premises = read_premises(member)
    behind = [f"The books are being recomputed: what is said here is as of {premises.behind}."]
    return {
        "calls": [{"label": row.label, "call": row.number} for row in premises.numbers],
        "totals": list_totals(premises.here),
        "shared": list_shared(premises.here),
        "places": list_places(premises.here),
        "left_out": premises.left_out,
        "cautions": [*CAUTIONS, *(behind if premises.behind else [])],
        "url": f"{settings.PUBLIC_URL}/w/{member.workshop.uuid}/emergency/",
    }


def list_places(here: Iterable[Standing]) -> list[dict[str, Any]]:
    """Return the places by name with what stands there; what stands nobody knows where comes last."""
    return [
        {
            "name": things[0].vessel.place.name if things[0].vessel.place else None,
            "bund": things[0].vessel.place.bund if things[0].vessel.place else "",
            "exhaust_duct": things[0].vessel.place.exhaust_duct if things[0].vessel.place else "",
            "things": [_thing(each) for each in things],
            "together": find_together((each.vessel.name, each.kinds) for each in things) if place else [],
        }
        for place, things in sorted(group_by_place(here).items(), key=_by_name)
    ]


def _by_name(pair: tuple[int | None, list[Standing]]) -> tuple[bool, str]:
    place = pair[1][0].vessel.place
    return place is None, "" if place is None else place.name.casefold()


def _thing(standing: Standing) -> dict[str, Any]:
    vessel, hazards, kinds = standing.vessel, standing.hazards, standing.kinds
    amount = amount_of(standing)
    return {
        "name": vessel.name,
        "code": vessel.code,
        "kind": str(_KINDS[vessel.kind]),
        "contents": contents_of(standing),
        "amount": amount.text,
        "doubt": amount.doubt,
        "hazards": hazards.data,
        "not_entered": list(hazards.not_entered),
        "un_numbers": sorted({row.un_number for row in standing.revisions if row.un_number and is_stock(vessel)}),
        "must_not_meet": list_avoided(kinds),
        "with_water": [] if vessel.kind in IN_WATER else list_with_water(hazards.statements),
        "with_acid": list_with_acid(hazards.statements, kinds),
    }


@dataclass(frozen=True)
class Amount:
    """An amount as it is read, with its standard uncertainty; None is unknown, or not stated."""

    text: str | None
    doubt: str | None = None


def amount_of(standing: Standing) -> Amount:
    """Return how much there is: the volume of a liquid, else the mass; of what is left on a solid, its metals."""
    held = measured(standing)
    if held is not None:
        return Amount(show_held(held), _doubt(held))
    metals = [f"{name_of(row.component)} {show_held(row)}" for row in standing.held if row.amount]
    return Amount(", ".join(metals) or None)


def measured(standing: Standing) -> Held | None:
    """Return the volume, if there is any or it is unknown, else likewise the mass; None where neither was recorded."""
    for code in (VOLUME, GROSS_MASS):
        for row in standing.held:
            if row.component == code and row.amount != 0:
                return row
    return None


def _doubt(held: Held) -> str | None:
    return show(held.sd, dimension_of(held.component), digits=2) if held.amount is not None and held.sd else None


def list_shared(here: Sequence[Standing]) -> list[dict[str, Any]]:
    """Return every bund and exhaust duct that places share, with what never may meet over it or under it."""
    found = []
    for sort, column in (("bund", "bund"), ("exhaust duct", "exhaust_duct")):
        for name, things in sorted(_by_column(here, column).items()):
            places = sorted({each.vessel.place.name for each in things if each.vessel.place})
            together = find_together((each.vessel.name, each.kinds) for each in things)
            if len(places) > 1:
                found.append({"sort": sort, "name": name, "places": places, "together": together})
    return found


def _by_column(here: Iterable[Standing], column: str) -> Mapping[str, list[Standing]]:
    found: dict[str, list[Standing]] = {}
    for each in here:
        name = getattr(each.vessel.place, column, "")
        if name:
            found.setdefault(name, []).append(each)
    return found


@dataclass
class _Sum:
    """Amounts of one dimension added up: base units, and the sum of variances."""

    total: int = 0
    variance: int = 0
    any: bool = False

    def add(self, held: Held) -> None:
        self.total += held.amount or 0
        self.variance += held.sd**2
        self.any = True

    def show(self, dimension: str) -> tuple[str | None, str | None]:
        """Return the sum and its standard uncertainty as they are read; None where nothing was added, or is stated."""
        if not self.any:
            return None, None
        sd = isqrt(self.variance)
        return show(self.total, dimension), show(sd, dimension, digits=2) if sd else None


@dataclass
class _Total:
    volume: _Sum = field(default_factory=_Sum)
    mass: _Sum = field(default_factory=_Sum)
    vessels: int = 0
    unknown: int = 0

    def add(self, standing: Standing) -> None:
        held = measured(standing)
        self.vessels += 1
        if held is None or held.amount is None:
            self.unknown += 1
        else:
            (self.volume if held.component == VOLUME else self.mass).add(held)


def list_totals(here: Iterable[Standing]) -> list[dict[str, Any]]:
    """Return how much of each hazard there is; every vessel counts whole for each of its hazards."""
    totals: dict[str, _Total] = {}
    for standing in here:
        for hazard in list_hazards(standing.parts):
            totals.setdefault(hazard, _Total()).add(standing)
    return [_row(hazard, total) for hazard, total in sorted(totals.items(), key=lambda pair: order_of_hazard(pair[0]))]


def _row(hazard: str, total: _Total) -> dict[str, Any]:
    volume, volume_doubt = total.volume.show("volume")
    mass, mass_doubt = total.mass.show("mass")
    return {
        "hazard": hazard,
        "volume": volume,
        "volume_doubt": volume_doubt,
        "mass": mass,
        "mass_doubt": mass_doubt,
        "vessels": total.vessels,
        "unknown": total.unknown,
    }
