"""What would meet if something were done, and what would go into a vessel."""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from itertools import combinations, pairwise

from chemicals.books import events
from chemicals.books.events import GROSS_MASS, VOLUME, Measured
from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import list_held


def find_meetings(event: events.Event) -> Iterator[tuple[str, str]]:
    """Yield every pair of ends whose contents would meet: vessels by their identifiers, or boundaries."""
    if isinstance(event, events.Move):
        yield event.source, event.target
    elif isinstance(event, events.TopUp):
        yield event.source, event.tank
    elif isinstance(event, events.Run):
        yield from pairwise(event.route)  # a load drags out of one tank into the next
    elif isinstance(event, events.DaySheet):
        for row in event.racks:
            yield from pairwise(row.route)
    elif isinstance(event, events.MakeUp):
        yield from _mix([item.stock for item in event.ingredients], event.tank)
    elif isinstance(event, events.Treatment):
        stocks = [item.stock for item in event.reagents]
        yield from _mix(stocks, event.vessel)
        for end in filter(None, (event.filtrate, event.sludge)):
            yield from ((part, end) for part in (event.vessel, *stocks) if part != end)
    else:
        yield from _find_upkeep(event)


def _find_upkeep(event: events.Event) -> Iterator[tuple[str, str]]:
    if isinstance(event, events.Uptake | events.CleanOut | events.Dummy):
        yield event.tank, event.target
    elif isinstance(event, events.Strip):
        yield event.source, event.tank
    elif isinstance(event, events.Sludge):
        yield event.source, event.target


def _mix(stocks: list[str], vessel: str) -> Iterator[tuple[str, str]]:
    """Yield each stock with the vessel that it goes into, and with every other one."""
    yield from ((stock, vessel) for stock in stocks)
    yield from ((other, stock) for stock, other in combinations(stocks, 2) if other != stock)


@dataclass(frozen=True)
class Filling:
    """What would go into a vessel: nanolitres, None where nobody knows."""

    target: str
    volume: int | None


def find_fillings(vessels: Mapping[str, Vessel], event: events.Event) -> Iterator[Filling]:
    """Yield what an event would put into which vessel, as far as a waste container may be meant."""
    if isinstance(event, events.Move) and event.target in vessels:
        yield Filling(event.target, _moved(vessels[event.source], event.volume, event.mass))
    elif isinstance(event, events.Uptake):
        yield Filling(event.target, event.solution.base)
    elif isinstance(event, events.Sludge):
        yield Filling(event.target, _moved(vessels[event.source], None, event.mass))
    elif isinstance(event, events.CleanOut):
        yield Filling(event.target, _moved(vessels[event.tank], None, None) + (event.water.base if event.water else 0))
    elif isinstance(event, events.Treatment):
        if event.filtrate != event.vessel:
            filtrate = event.filtrate_volume
            yield Filling(event.filtrate, _moved(vessels[event.vessel], filtrate, None))
        if event.sludge is not None:
            yield Filling(event.sludge, None)


def _moved(source: Vessel, volume: Measured | None, mass: Measured | None) -> int:
    """Return the volume that would leave a vessel: as said, in proportion to the mass, or all of it."""
    if volume is not None:
        return volume.base
    held = {row.component: row.amount or 0 for row in list_held(source)}
    whole, weight = held.get(VOLUME, 0), held.get(GROSS_MASS, 0)
    if mass is None:
        return whole
    return whole * mass.base // weight if weight > 0 else 0


def find_opened(event: events.Event) -> str | None:
    """Return the vessel that something would be taken out of on purpose; a spill is none."""
    if isinstance(event, events.Move) and not isinstance(event, events.Spill):
        return event.source
    if isinstance(event, events.Sludge):
        return event.source
    return event.vessel if isinstance(event, events.Treatment) else None
