"""Day sheets: a day's charge of each bath, then its racks load by load, posted as one movement between two tanks."""

from chemicals.books.events import PARTS, DaySheet
from chemicals.books.fold.dips import dip_often, merged
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.plating import fold_current, read_charge


def fold_day_sheet(folding: Folding, event: DaySheet) -> None:
    """Each bath plates onto parts, then each row of racks goes so many times through its route."""
    for row, plating in zip(event.charges, event.platings, strict=True):
        fold_current(folding, plating, row.bath, PARTS, read_charge(row.charge), None)
    for racks, drag_out in zip(event.racks, event.drag_out, strict=True):
        dip_often(folding, racks.route, drag_out, racks.loads)
    folding.transfers = merged(folding.transfers)
