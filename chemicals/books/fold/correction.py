"""Corrections: an error of a closed period is set right against what is unaccounted."""

from chemicals.books.events import OBSERVED, UNACCOUNTED, Correction
from chemicals.books.fold.folding import Folding


def fold_correction(folding: Folding, event: Correction) -> None:
    """``unaccounted`` -> vessel of what was found to be there, vessel -> ``unaccounted`` of what is not."""
    for change in event.changes:
        source, target = (UNACCOUNTED, event.vessel) if change.found else (event.vessel, UNACCOUNTED)
        folding.move(change.component, source, target, change.amount.base, change.amount.stated_sd, OBSERVED)
