"""The difference between two dates: what every vessel held then and later, and what explains it."""

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any
from urllib.parse import urlencode

from django.http import HttpRequest, HttpResponseBase

from chemicals.balance.difference import (
    Difference,
    Explained,
    VesselDifference,
    get_differences_for,
)
from chemicals.balance.selectors import Amount, find_main_metal_for
from chemicals.books.events import UNACCOUNTED
from chemicals.ledger.components import dimension_of
from chemicals.ledger.selectors import get_recomputed_to, list_components_for
from chemicals.workshop.models import Membership
from compliance.web import words
from compliance.web.contents import IN_FILES
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.period import DifferenceForm
from compliance.web.statement import CAME, LEFT, NAMES

ORDER = (*CAME, *LEFT, UNACCOUNTED)
"""In which order the boundaries stand: where it came from, where it went, and what nobody recorded."""


@dataclass(frozen=True)
class FileRow:
    """A row of a file: a row of a difference, and of which component."""

    component: str
    row: Any

    @property
    def unit(self) -> str:
        """Return the unit of the row's figures."""
        return IN_FILES[dimension_of(self.component)][0]

    def number(self, base: int | None) -> object:
        """Return an exact number of that unit."""
        return IN_FILES[dimension_of(self.component)][1](base)

    def sd(self, amount: Amount) -> object:
        """Return the standard uncertainty, where there is an amount."""
        return None if amount.value is None else self.number(amount.sd)


COMMON = (Column("what", lambda file: file.component), Column("unit", lambda file: file.unit))
VESSEL_COLUMNS = (
    *COMMON,
    Column("vessel", lambda file: file.row.vessel.name),
    Column("code", lambda file: file.row.vessel.code),
    Column("before", lambda file: file.number(file.row.before.value)),
    Column("uncertainty before", lambda file: file.sd(file.row.before)),
    Column("came", lambda file: file.number(file.row.came)),
    Column("went", lambda file: file.number(file.row.went)),
    Column("after", lambda file: file.number(file.row.after.value)),
    Column("uncertainty after", lambda file: file.sd(file.row.after)),
    Column("difference", lambda file: file.number(file.row.value)),
)
EXPLAINED_COLUMNS = (
    *COMMON,
    Column("boundary", lambda file: file.row.boundary),
    Column("kind of entry", lambda file: file.row.kind),
    Column("came or went", lambda file: file.number(file.row.amount.value)),
    Column("its standard uncertainty", lambda file: file.sd(file.row.amount)),
    Column("recorded of it", lambda file: file.number(file.row.booked)),
)


@page()
def index(request: HttpRequest, member: Membership) -> HttpResponseBase:
    """Show the difference of the main metal this year so far, unless something else is chosen."""
    codes = list_components_for(member)
    if not codes:
        return show(request, member, "web/difference.html", here="balance", form=None)
    choices = [(code, words.component_name(code)) for code in codes]
    form = DifferenceForm(choices, find_main_metal_for(member) or codes[0], request.GET.dict())
    if not form.is_valid():
        return show(request, member, "web/difference.html", here="balance", form=form, status=400)
    found = get_differences_for(member, *form.moments, form.component)
    file = wanted_file(
        request,
        about="-".join(form.kept.values()).replace(" ", "-"),
        vessels=(VESSEL_COLUMNS, lambda: _rows(found, "vessels")),
        explained=(EXPLAINED_COLUMNS, lambda: _rows(found, "explained")),
    )
    told = [_Told(difference) for difference in found]
    context: dict[str, Any] = {
        "recomputing": get_recomputed_to(member.workshop),
        "found": told,
        "kept": form.kept,
        "query": urlencode(form.kept),
    }
    return file or show(request, member, "web/difference.html", here="balance", form=form, **context)


def _rows(found: tuple[Difference, ...], part: str) -> Iterator[FileRow]:
    for difference in found:
        yield from (FileRow(difference.component, row) for row in getattr(difference, part))


class _Told:
    """A difference in words."""

    def __init__(self, difference: Difference) -> None:
        self.component = difference.component
        self.name = words.component_name(difference.component)
        self.before, self.after = self._amount(difference.before), self._amount(difference.after)
        self.value = self._signed(difference.value)
        self.is_known = difference.value is not None
        self.booked = self._signed(difference.booked)
        self.vessels = [self._vessel(row) for row in difference.vessels]
        in_order = sorted(difference.explained, key=lambda row: (ORDER.index(row.boundary), row.kind))
        self.explained = [self._explain(row) for row in in_order]
        self.unknown = ", ".join(row.vessel.name for row in difference.vessels if row.value is None)

    def _amount(self, amount: Amount) -> str:
        return words.with_uncertainty(amount.value, amount.sd, self.component)

    def _signed(self, value: int | None, sd: int = 0) -> str:
        return words.signed(value, sd, self.component)

    def _vessel(self, row: VesselDifference) -> dict[str, Any]:
        came, went = (words.amount(amount, self.component) for amount in (row.came, row.went))
        ends = {"before": self._amount(row.before), "after": self._amount(row.after)}
        return {"vessel": row.vessel, **ends, "came": came, "went": went, "value": self._signed(row.value)}

    def _explain(self, row: Explained) -> dict[str, str]:
        boundary = str(NAMES.get(row.boundary, words.BOUNDARIES[row.boundary]))
        value = self._signed(row.amount.value, row.amount.sd)
        return {"boundary": boundary, "kind": str(words.KINDS[row.kind]), "value": value}
