"""Accepted analyses: from sampling on, the content is concentration times volume."""

from chemicals.books.events import OBSERVED, UNACCOUNTED, VOLUME, Acceptance
from chemicals.books.fold.state import UNKNOWN_LEVEL, Folding, root


def fold_acceptance(folding: Folding, event: Acceptance) -> None:
    """Content := c x V at sampling time; the difference to the books is unaccounted."""
    volume = folding.state.holding(event.vessel, VOLUME)
    if volume.amount is None:
        folding.note(UNKNOWN_LEVEL, event.component, event.vessel, UNACCOUNTED)
        return
    concentration, sd = event.concentration.base, event.concentration.sd
    amount = concentration * volume.amount // 10**9
    variance = (sd * volume.amount // 10**9) ** 2 + concentration**2 * volume.variance // 10**18
    folding.set_content(event.vessel, event.component, amount, root(variance), UNACCOUNTED, OBSERVED)
