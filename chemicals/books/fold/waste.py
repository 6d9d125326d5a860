"""Waste: into the container, and with the container to a receiver."""

from chemicals.books.events import RECEIVER, DrumOff, HandOver
from chemicals.books.fold.folding import Folding
from chemicals.books.fold.making import fold_move


def fold_drum_off(folding: Folding, event: DrumOff) -> None:
    """Vessel -> waste container: a part in proportion, or all of it."""
    fold_move(folding, event)


def fold_hand_over(folding: Folding, event: HandOver) -> None:
    """Container -> receiver: everything that is in it, if anything is, and it remembers nothing."""
    folding.pour_all(event.container, RECEIVER)
