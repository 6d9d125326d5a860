"""Why a movement has the amount that it has: which figure of the entry it goes back to.

Each reason reads on after the basis: "assumed", "from the drag-out (rack type Small rack)".
"""

from collections.abc import Callable, Iterable, Mapping
from typing import Any

from django.utils.translation import gettext as _

from chemicals.books import events
from chemicals.books.events import (
    AIR,
    ASSUMED,
    COMPUTED,
    GROSS_MASS,
    OBSERVED,
    REACTION,
    SUPPLIER,
    UNACCOUNTED,
    VOLUME,
    WATER_SUPPLY,
    Event,
    Figure,
    Plating,
    is_metal,
)
from chemicals.books.fold.state import Transfer


def reason(event: Event, transfer: Transfer) -> str:
    """Return why an amount followed from the entry; empty where its kind has no figure for it."""
    give = next((REASONS[kind] for kind in type(event).__mro__ if kind in REASONS), None)
    return "" if give is None else give(event, transfer)


def _sourced(text: str, figures: Iterable[Figure | None]) -> str:
    """Return a text with where its figures come from, each source once."""
    sources = list(dict.fromkeys(figure.source for figure in figures if figure is not None and figure.source))
    return f"{text} ({'; '.join(sources)})" if sources else text


def _opening(event: events.Opening, transfer: Transfer) -> str:
    if transfer.basis == OBSERVED:
        return _("as found when counting began")
    return _sourced(_("from volume and density"), [event.density])


def _count(event: events.Count, transfer: Transfer) -> str:
    if transfer.component == (VOLUME if event.mass is None else GROSS_MASS):
        return _("from what was counted")
    return _("in proportion to what was counted")


def _receipt(event: events.Receipt, transfer: Transfer) -> str:
    if transfer.basis == OBSERVED:
        return _("as delivered")
    if transfer.component in (VOLUME, GROSS_MASS):
        return _sourced(_("from the density"), [event.recipe.density])
    product = {"product": event.recipe.name, "number": event.recipe.revision}
    return _("from the composition of %(product)s, revision %(number)s") % product


def _make_up(event: events.MakeUp, transfer: Transfer) -> str:
    if transfer.source in {item.stock for item in event.ingredients}:
        return _taken(transfer)
    if REACTION in (transfer.source, transfer.target) and transfer.component == VOLUME:
        return _sourced(_("from the room that needs what dissolves"), event.dissolved)
    if transfer.source == WATER_SUPPLY:
        return _missing(transfer, event.water_density)
    return _level(event, transfer)


def _top_up(event: events.TopUp, transfer: Transfer) -> str:
    if transfer.source != event.source:
        return _level(event, transfer)
    if event.volume is None:
        return _missing(transfer, event.water_density)
    if event.source == WATER_SUPPLY and transfer.component == GROSS_MASS:
        return _sourced(_("from the density of water"), [event.water_density])
    return _taken(transfer)


def _taken(transfer: Transfer) -> str:
    return _("as measured") if transfer.basis == OBSERVED else _("from the amount that was taken")


def _missing(transfer: Transfer, water_density: Figure) -> str:
    text = _("from what was missing to the level")
    of_water = transfer.component == GROSS_MASS and transfer.source == WATER_SUPPLY
    return _sourced(text, [water_density]) if of_water else text


def _level(event: events.MakeUp | events.TopUp | events.LevelReading, transfer: Transfer) -> str:
    if transfer.component == GROSS_MASS and AIR in (transfer.source, transfer.target):
        return _sourced(_("from the level and the density of water"), [event.water_density])
    if transfer.basis == ASSUMED:
        return _("as if it were as dense as the rest")
    return _("from the level")


def _move(event: events.Move, transfer: Transfer) -> str:
    if event.volume is None and event.mass is None:
        return _all(transfer)
    if transfer.basis == OBSERVED:
        return _("as measured")
    return _("from the volume that moved") if event.mass is None else _("from the weight that moved")


def _all(transfer: Transfer) -> str:
    if UNACCOUNTED in (transfer.source, transfer.target):
        return _("since the vessel is empty now")
    return _("from all that the books had there")


def _run(event: events.Run, transfer: Transfer) -> str:
    charge = _("from the ampere-hours") if event.current is None else _("from current and time")
    plated = _plated(event.plating, transfer, charge) if event.plating is not None else ""
    return plated or _dragged(transfer, [(event.route, event.drag_out)])


def _dummy(event: events.Dummy, transfer: Transfer) -> str:
    charge = _("from the ampere-hours") if event.current is None else _("from current and time")
    return _plated(event.plating, transfer, charge)


def _day_sheet(event: events.DaySheet, transfer: Transfer) -> str:
    for row, plating in zip(event.charges, event.platings, strict=True):
        if row.bath in (transfer.source, transfer.target):
            plated = _plated(plating, transfer, _("from the ampere-hours"))
            if plated:
                return plated
    steps = [(row.route, figures) for row, figures in zip(event.racks, event.drag_out, strict=True)]
    return _dragged(transfer, steps)


def _plated(plating: Plating, transfer: Transfer, charge: str) -> str:
    """Return why the current moved so much; empty for what it did not move."""
    if REACTION in (transfer.source, transfer.target):
        made = [row.per_kilocoulomb for row in plating.conversions if row.species == transfer.component]
        return _sourced(_("from what the current makes and uses up"), made)
    if plating.racks is not None and transfer.target == plating.racks and transfer.basis == ASSUMED:
        return _sourced(_("from the part that grows on racks"), [plating.rack_share])
    if transfer.basis == OBSERVED:
        return _("by weighing before and after")
    if plating.anode is not None and transfer.source == plating.anode:
        return charge if transfer.basis == COMPUTED else _("from the charge that the weight needed")
    if transfer.basis == COMPUTED and transfer.component in (plating.deposit.metal, GROSS_MASS):
        return _sourced(_("%(charge)s and the efficiency") % {"charge": charge}, [plating.deposit.efficiency])
    return ""


def _dragged(transfer: Transfer, steps: Iterable[tuple[tuple[str, ...], tuple[Figure, ...]]]) -> str:
    figures = [
        figure
        for route, drags in steps
        for tank, figure in zip(route, drags, strict=True)
        if tank == transfer.source and transfer.basis == ASSUMED
    ]
    return _sourced(_("from the drag-out"), figures)


def _strip(event: events.Strip, transfer: Transfer) -> str:
    return _("by weighing before and after") if transfer.basis == OBSERVED else _all(transfer)


def _acceptance(event: events.Acceptance, _transfer: Transfer) -> str:
    return _sourced(_("from concentration and volume"), [event.concentration])


def _uptake(event: events.Uptake, transfer: Transfer) -> str:
    if transfer.source == SUPPLIER:
        return _("from the weight of the medium")
    if transfer.basis != ASSUMED:
        return _("from what was found in the medium")
    kept = [event.solution] if event.solution.base else []
    keeps_metal = transfer.component == GROSS_MASS or is_metal(transfer.component)
    if keeps_metal and event.passed is not None and event.uptake.base:
        return _sourced(_("from what it keeps of the liquid and of metal"), [*kept, event.uptake])
    return _sourced(_("from the liquid that it keeps"), kept)


def _sludge(event: events.Sludge, transfer: Transfer) -> str:
    analysed = transfer.component in {row.component for row in event.held}
    return _("from the analysis of the sludge") if analysed else _("from the wet weight")


def _clean_out(event: events.CleanOut, transfer: Transfer) -> str:
    if transfer.source != WATER_SUPPLY:
        return _all(transfer)
    if transfer.component == GROSS_MASS:
        return _sourced(_("from the density of water"), [event.water_density])
    return _("as measured")


def _treatment(event: events.Treatment, transfer: Transfer) -> str:
    analysed = transfer.component in {row.component for row in event.dissolved}
    if transfer.target == event.vessel and transfer.source in {item.stock for item in event.reagents}:
        return _taken(transfer)
    if REACTION in (transfer.source, transfer.target):
        return _("from the analysis of the filtrate") if analysed else _("since it reacted away")
    if UNACCOUNTED in (transfer.source, transfer.target):
        return _("from the volume of the filtrate") if transfer.component == VOLUME else _("from what was found")
    return _settled(transfer, analysed=analysed) if transfer.target == event.sludge else _("from all that was left")


def _settled(transfer: Transfer, *, analysed: bool) -> str:
    if transfer.component == GROSS_MASS:
        return _("from the wet weight")
    if analysed or is_metal(transfer.component):
        return _("from what was not found dissolved")
    return _("from the liquid that the sludge keeps")


REASONS: Mapping[type[Event], Callable[[Any, Transfer], str]] = {
    events.Opening: _opening,
    events.Count: _count,
    events.Receipt: _receipt,
    events.MakeUp: _make_up,
    events.TopUp: _top_up,
    events.Run: _run,
    events.DaySheet: _day_sheet,
    events.Dummy: _dummy,
    events.Strip: _strip,
    events.Move: _move,
    events.LevelReading: _level,
    events.WeightReading: lambda _event, _transfer: _("from the weight"),
    events.DensityReading: lambda _event, _transfer: _("from density and volume"),
    events.Acceptance: _acceptance,
    events.Uptake: _uptake,
    events.Sludge: _sludge,
    events.CleanOut: _clean_out,
    events.Treatment: _treatment,
    events.HandOver: lambda _event, transfer: _all(transfer),
    events.Correction: lambda _event, _transfer: _("as corrected"),
}
"""By kind of event; the kinds that post nothing have none."""
