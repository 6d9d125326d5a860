"""The list of chemicals: a line for each product that is here or was used of late, in the words that rules ask for."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from datetime import date, datetime, timedelta
from typing import Any

from django.conf import settings
from django.db.models import Sum
from django_scopes import scope

from chemicals.books import events
from chemicals.books.events import GROSS_MASS, VOLUME
from chemicals.ledger.care import CONTAINERS
from chemicals.ledger.models import Posting
from chemicals.register.models import ProductRevision
from chemicals.register.selectors import list_current_revisions_for
from chemicals.science.ghs import split_statement
from chemicals.workshop.models import Membership
from compliance.premises.emergency import measured
from compliance.premises.models import ChosenRule
from compliance.premises.rules import ListRule
from compliance.premises.selectors import Standing, is_stock, list_standing_for

LOOK_BACK = timedelta(days=365)
NO_USE = (
    events.Opening.KIND, events.Receipt.KIND, events.Count.KIND, events.LevelReading.KIND, events.Correction.KIND,
)  # fmt: skip
"""Kinds of entries by which nothing is taken out of a stock container for use."""
CAUTIONS = (
    "What nobody entered is listed too: not entered does not mean harmless.",
    "Baths and wastes stand here by the products that were poured into them.",
)
_UNITS = {VOLUME: "L", GROSS_MASS: "kg"}
_DECADES = ((10**8, "0.1"), (10**9, "1"), (10**10, "10"), (10**11, "100"), (10**12, "1000"))
"""Base units of a volume and of a mass alike: nanolitres in litres, micrograms in kilograms."""


@dataclass
class Chemical:
    """One line: the product as it is known now, what is here of it, what was used in twelve months, and where."""

    revision: ProductRevision
    here: dict[str, int | None]
    used: dict[str, int]
    areas: frozenset[str]

    @property
    def cells(self) -> dict[str, list[str]]:
        """The lines of every column."""
        return {
            "name": [text for text in (self.revision.product.name, self.revision.product.supplier) if text],
            "classification": classification_of(self.revision),
            "quantities": [
                f"here: {_ranges(self.here)}",
                f"used in twelve months: {_ranges(self.used)}",
            ],
            "areas": sorted(self.areas),
            "sheet": sheet_of(self.revision),
        }


@dataclass(frozen=True)
class ChemicalList:
    """The lines by name of the product, and how many products of the register are left off."""

    rows: list[Chemical]
    left_out: int


def read_list(member: Membership, now: datetime) -> ChemicalList:
    """Return the list as the books stand. Twelve queries."""
    standing = [each for each in list_standing_for(member) if each.is_here]
    used = _read_used(member, now - LOOK_BACK)
    rows, left_out = [], 0
    here: dict[int, list[Standing]] = {}
    for each in standing:
        for product in {revision.product_id for revision in each.revisions}:
            here.setdefault(product, []).append(each)
    for revision in list_current_revisions_for(member):
        product = revision.product_id
        if product not in here and product not in used:
            left_out += 1
            continue
        rows.append(_chemical(revision, here.get(product, []), used.get(product, {})))
    return ChemicalList(rows, left_out)


def _chemical(revision: ProductRevision, here: Iterable[Standing], used: dict[str, int]) -> Chemical:
    amounts: dict[str, int | None] = {}
    areas = set()
    for each in here:
        areas.add(each.vessel.place.name if each.vessel.place else "place not stated")
        held = measured(each)
        if not is_stock(each.vessel):
            continue
        code = VOLUME if held is None else held.component
        before = amounts.get(code, 0)
        amounts[code] = None if held is None or held.amount is None or before is None else before + held.amount
    return Chemical(revision, amounts, used, frozenset(areas))


def _read_used(member: Membership, since: datetime) -> dict[int, dict[str, int]]:
    """Return what left the stock containers of each product for use: what moved between them counts for nothing."""
    with scope(workshop=member.workshop):
        rows = (
            Posting.objects.filter(
                vessel__kind__in=CONTAINERS,
                component__code__in=_UNITS,
                occurred_at__gte=since,
            )
            .exclude(entry__kind__in=NO_USE)
            .order_by()
            .values_list("vessel__product_id", "component__code")
            .annotate(total=Sum("amount"))
        )
        found: dict[int, dict[str, int]] = {}
        for product, code, total in rows:
            if total < 0:
                found.setdefault(product, {})[code] = -total
    return found


def _ranges(amounts: Mapping[str, int | None]) -> str:
    """Return the ranges in which amounts lie: volume first; a liquid that has both is told by its volume."""
    for code, unit in _UNITS.items():
        if code in amounts:
            return band(amounts[code], unit)
    return "none"


def band(base: int | None, unit: str) -> str:
    """Return the decade in which an amount lies, in L (of nanolitres) or kg (of micrograms); None is unknown."""
    if base is None:
        return "unknown"
    if base <= 0:
        return "none"
    below = ""
    for limit, name in _DECADES:
        if base < limit:
            return f"{below} to {name} {unit}" if below else f"less than {name} {unit}"
        below = name
    return f"{below} {unit} or more"


def classification_of(revision: ProductRevision) -> list[str]:
    """Return signal word, classes, and statements by their codes, as entered; the word that nothing was."""
    codes = ["+".join(split_statement(text)[0]) or text for text in revision.statements]
    hazard_codes = [code for code in codes if not code.startswith("P")]
    lines = (revision.signal_word, ", ".join(revision.hazard_classes), ", ".join(hazard_codes))
    return [line for line in lines if line] or ["not entered"]


def sheet_of(revision: ProductRevision) -> list[str]:
    """Return which safety data sheet is kept: its file, date and language."""
    sheet = revision.safety_data_sheet
    if sheet is None:
        return ["none kept here"]
    day = "no date entered" if revision.sheet_date is None else revision.sheet_date.isoformat()
    return [sheet.name, f"{day}, {revision.sheet_language}" if revision.sheet_language else day]


def build_list(member: Membership, now: datetime, rule: ListRule, chosen: ChosenRule) -> dict[str, Any]:
    """Return the frozen data of the list; the issuing adds number, chain head and names."""
    found = read_list(member, now)
    return {
        "rule": {
            "provision": rule.provision,
            "asks_for": rule.asks_for,
            "source": rule.source,
            "edition": rule.edition,
            "citation": chosen.citation,
            "checked_on": _day(chosen.checked_on),
            "chosen_by": str(chosen.chosen_by.user),
        },
        "columns": list(rule.columns),
        "rows": [row.cells for row in found.rows],
        "left_out": found.left_out,
        "cautions": list(CAUTIONS),
        "url": f"{settings.PUBLIC_URL}/w/{member.workshop.uuid}/register/list/",
    }


def _day(day: date) -> str:
    return day.isoformat()
