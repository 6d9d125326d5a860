"""Metal out of a bath onto something that is no part, and back into one: dummies, recovery cells, strips."""

from chemicals.books.events import COMPUTED, GROSS_MASS, Dummy, Strip
from chemicals.books.fold.arithmetic import root
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.plating import charge_of, fold_current, gained_by, move_metal, weighed_difference
from chemicals.books.fold.state import WEIGHT_GAINED


def fold_dummy(folding: Folding, event: Dummy) -> None:
    """bath -> dummy sheet or cell's cathode (or parts), by weights or by the charge, as in a run."""
    fold_current(folding, event.plating, event.tank, event.target, charge_of(event), gained_by(event))


def fold_strip(folding: Folding, event: Strip) -> None:
    """parts or rack build-up -> tank: as much as the weights tell, or all that the books have of the metal there."""
    if event.weight_before is None or event.weight_after is None:
        _strip_all(folding, event)
        return
    lost = weighed_difference(event.weight_before, event.weight_after)
    move_metal(folding, event.metal, event.source, event.tank, lost)
    if lost[0] < 0:
        folding.note(WEIGHT_GAINED, event.metal, event.source, event.tank)


def _strip_all(folding: Folding, event: Strip) -> None:
    held = folding.state.holding(event.source, event.metal)
    folding.move_all(event.metal, event.source, event.tank)
    if held.amount is None:
        folding.move_unknown(GROSS_MASS, event.source, event.tank)
    elif held.amount > 0:
        folding.move(GROSS_MASS, event.source, event.tank, held.amount, root(held.variance), COMPUTED)
