"""A vessel's ledger: what came and went of a component, line by line, with a plot of what the vessel held."""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from typing import Any
from urllib.parse import urlencode
from uuid import UUID

from django.http import HttpRequest, HttpResponseBase
from django.utils import timezone
from django.utils.translation import gettext as _

from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_event
from chemicals.ledger.components import dimension_of
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.running import Line, Movement, Running, VesselLedger, get_vessel_ledger, list_components_of
from chemicals.ledger.selectors import get_recomputed_to, get_vessel_for, list_components_for
from chemicals.workshop.models import Membership
from compliance.web import words
from compliance.web.contents import IN_FILES
from compliance.web.door import page, show
from compliance.web.export import Column, wanted_file
from compliance.web.forms.period import ComponentForm, neighbours
from compliance.web.plot import draw_plot
from compliance.web.rows import ends_of, summarise

WIDE, NARROW = (1060, 340), (350, 280)
"""Width and height of the plot in pixels: on a desk, on a phone."""


@dataclass(frozen=True)
class Told:
    """A line of the ledger in words: of each movement how much, and the rest of the sentence."""

    entry: Entry
    summary: str
    movements: list[tuple[str, str]]
    findings: list[str]
    held: Running


@page()
def vessel_ledger(request: HttpRequest, member: Membership, uuid: UUID) -> HttpResponseBase:
    """Show the ledger of what the vessel holds most of, this year so far, unless something else is chosen."""
    vessel = get_vessel_for(member, uuid)
    codes = _codes(member, vessel, request.GET.get("component", ""))
    behind = get_recomputed_to(member.workshop)
    context: dict[str, Any] = {"here": _page_of(vessel), "vessel": vessel, "recomputing": behind}
    if not codes:
        return show(request, member, "web/ledger.html", form=None, **context)
    choices = [(code, words.component_name(code)) for code in codes]
    form = ComponentForm(choices, codes[0], request.GET.dict())
    if not form.is_valid():
        return show(request, member, "web/ledger.html", form=form, status=400, **context)
    component, moments = form.cleaned_data["component"], form.moments
    names = ends_of(member)
    file = wanted_file(
        request,
        about="-".join([vessel.code, *form.kept.values()]).replace(" ", "-"),
        ledger=(
            columns_of(component, names),
            lambda: rows_of(get_vessel_ledger(vessel, component, *moments, page=None)),
        ),
    )
    if file is not None:
        return file
    ledger = get_vessel_ledger(vessel, component, *moments, page=_number(request.GET.get("page", "")))
    return show(request, member, "web/ledger.html", form=form, **context, **_context(ledger, names, form))


def _codes(member: Membership, vessel: Vessel, asked: str) -> list[str]:
    """Return what may be chosen: what the vessel ever held, and what is asked for if the books count it at all."""
    codes = [held.component for held in list_components_of(vessel)]
    return codes if asked in {"", *codes} or asked not in list_components_for(member) else [*codes, asked]


def _page_of(vessel: Vessel) -> str:
    """Return the page of the navigation under which a vessel is found."""
    return {VesselKind.STOCK: "register", VesselKind.WASTE: "waste"}.get(VesselKind(vessel.kind), "tanks")


def _number(typed: str) -> int:
    return int(typed) if typed.isascii() and typed.isdigit() and len(typed) < 9 else 1


def _context(ledger: VesselLedger, names: words.Ends, form: ComponentForm) -> dict[str, Any]:
    now = timezone.now()
    chosen = form.cleaned_data
    around = [
        urlencode(form.kept | {"since": str(since), "until": str(until)})
        for since, until in neighbours(chosen["since"], chosen["until"])
    ]
    return {
        "ledger": ledger,
        "name": words.component_name(ledger.component),
        "kept": form.kept,
        "query": urlencode(form.kept),
        "earlier": around[0],
        "later": around[1] if ledger.end <= now else "",
        "lines": _tell(ledger, names),
        "wide": draw_plot(ledger, now, width=WIDE[0], height=WIDE[1]),
        "narrow": draw_plot(ledger, now, width=NARROW[0], height=NARROW[1]),
    }


def _tell(ledger: VesselLedger, names: words.Ends) -> list[Told]:
    return [
        Told(
            entry=line.entry,
            summary=summarise(line.entry, read_event(line.entry), names),
            movements=[_say(movement, ledger.component, names) for movement in line.movements],
            findings=[words.finding(found, names) for found in line.findings],
            held=line.held,
        )
        for line in ledger.lines
    ]


def _say(movement: Movement, component: str, names: words.Ends) -> tuple[str, str]:
    """Return a movement in two parts: "+0.830 ± 0.25 g" and "from Copper bath, assumed"."""
    text = _("from %(end)s, %(basis)s") if movement.amount > 0 else _("to %(end)s, %(basis)s")
    end = {"end": names.name(movement.end), "basis": words.BASES[movement.basis]}
    return words.signed(movement.amount, movement.sd, component), text % end


@dataclass(frozen=True)
class FileRow:
    """A row of the file: one movement, or an entry without any, or what was held at an end of the period."""

    held: Running
    what: str = ""
    line: Line | None = None
    movement: Movement | None = None

    @property
    def entry(self) -> Entry | None:
        """Return the entry of the row."""
        return None if self.line is None else self.line.entry


def rows_of(ledger: VesselLedger) -> Iterator[FileRow]:
    """Yield the rows of the file, from what was held at the beginning to what was held at the end."""
    yield FileRow(ledger.opening, what="held at the beginning")
    for line in ledger.lines:
        movements: Sequence[Movement | None] = line.movements or (None,)
        yield from (FileRow(line.held, line.entry.kind, line, movement) for movement in movements)
    yield FileRow(ledger.closing, what="held at the end")


def columns_of(component: str, names: words.Ends) -> list[Column]:
    """Return the columns of the file; its figures are exact, in one unit."""
    unit, number = IN_FILES[dimension_of(component)]

    def of_entry(field: str) -> Callable[[FileRow], object]:
        return lambda row: None if row.entry is None else getattr(row.entry, field)

    def moved(read: Callable[[Movement], object]) -> Callable[[FileRow], object]:
        return lambda row: None if row.movement is None else read(row.movement)

    return [
        Column("happened", of_entry("occurred_at")),
        Column("precision", of_entry("precision")),
        Column("entry", of_entry("sequence")),
        Column("what", lambda row: row.what),
        Column(f"came or went ({unit})", moved(lambda movement: number(movement.amount))),
        Column(f"its standard uncertainty ({unit})", moved(lambda movement: number(movement.sd))),
        Column("other end", moved(lambda movement: names.name(movement.end))),
        Column("basis", moved(lambda movement: movement.basis)),
        Column(f"recorded in all ({unit})", lambda row: number(row.held.booked)),
        Column(f"held afterwards ({unit})", lambda row: number(row.held.amount)),
        Column(f"standard uncertainty of what is held ({unit})", lambda row: _sd(row.held, number)),
        Column(f"held per litre ({unit}/L)", lambda row: number(row.held.concentration)),
        Column("findings", lambda row: "" if row.line is None else " ".join(each.code for each in row.line.findings)),
    ]


def _sd(held: Running, number: Callable[[int | None], object]) -> object:
    return None if held.amount is None else number(held.sd)
