"""Runs: the current in the first tank, then drag-out along the route."""

from chemicals.books.events import PARTS, Run
from chemicals.books.fold.dips import dip
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.plating import charge_of, fold_current, gained_by


def fold_run(folding: Folding, event: Run) -> None:
    """bath -> parts and racks, anode set -> bath, then each step drags out to the next and drags in."""
    if event.plating is not None and event.route:
        fold_current(folding, event.plating, event.route[0], PARTS, charge_of(event), gained_by(event))
    dip(folding, event.route, event.drag_out)
