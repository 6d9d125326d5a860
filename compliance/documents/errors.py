"""What can be wrong with a paper: typed, all at once, each naming the field and the remedy."""

from chemicals.workshop.errors import FieldError, InvalidInputError


class PaperError(InvalidInputError):
    """A paper that cannot be drawn; fields are paths into its data, such as "containers[2].origin"."""


class PaperDataError(PaperError):
    """The data has not the shape of its kind."""


class MissingGlyphError(PaperError):
    """The font has no drawing for a character: on a safety paper that would be a hole, so nothing is drawn."""


class DoesNotFitError(PaperError):
    """The text does not fit on the label or the page at a legible size."""


__all__ = ["DoesNotFitError", "FieldError", "MissingGlyphError", "PaperDataError", "PaperError"]
