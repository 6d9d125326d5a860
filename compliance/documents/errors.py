"""What can be wrong with a paper: typed, all at once, each naming the field and the remedy."""

from collections.abc import Sequence
from typing import NamedTuple


class Problem(NamedTuple):
    """One thing wrong: the field as a path ("containers[2].origin") and what to do about it."""

    field: str
    message: str


class PaperError(ValueError):
    """A paper that cannot be drawn; `problems` lists everything that is wrong."""

    def __init__(self, problems: Sequence[Problem]) -> None:
        self.problems = tuple(problems)
        super().__init__("; ".join(f"{problem.field}: {problem.message}" for problem in problems))


class PaperDataError(PaperError):
    """The data has not the shape of its kind."""


class MissingGlyphError(PaperError):
    """The font has no drawing for a character: on a safety paper that would be a hole, so nothing is drawn."""


class DoesNotFitError(PaperError):
    """The text does not fit on the label at a legible size."""
