"""Accepted analyses: from sampling on, the content is concentration times volume."""

from chemicals.books.events import COMPUTED, UNACCOUNTED, VOLUME, Acceptance
from chemicals.books.fold.arithmetic import product, root
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.state import UNKNOWN_LEVEL


def fold_acceptance(folding: Folding, event: Acceptance) -> None:
    """Content := c x V at sampling time; the difference to the books is unaccounted."""
    volume, concentration = folding.state.holding(event.vessel, VOLUME), event.concentration
    if volume.amount is None or volume.amount <= 0:
        folding.note(UNKNOWN_LEVEL, event.component, event.vessel, UNACCOUNTED)
        return
    amount, sd = product(volume.amount, root(volume.variance), concentration.base, concentration.sd, 10**9)
    folding.set_content(event.vessel, event.component, amount, sd, UNACCOUNTED, COMPUTED)
