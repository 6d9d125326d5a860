"""How much of a substance a product holds, as sheets say it: a figure, a range, or one end of a range.

    read_content("20-30 %")   from 200 to 300 g in a kilogram
    read_content("< 1 %")     from 0 to 10 g in a kilogram
    read_content(">= 95 %")   from 950 g in a kilogram to all of it
    read_content("250 g/L")   250 g in a litre

Of a range nothing is known but its ends, so every figure between them is equally likely: the best estimate is the
middle, the standard uncertainty the width over the root of 12 (GUM, JCGM 100:2008, 4.3.7).
"""

import re
import unicodedata
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Context, Decimal
from typing import Final, Literal

from chemicals.science.errors import TextError
from chemicals.science.quantity import Quantity, parse

ALL: Final = 10**9  # micrograms in a kilogram
_PER_PPM: Final = 1000  # micrograms in a kilogram
_DIGITS: Final = Context(prec=40, rounding=ROUND_HALF_EVEN)

MESSAGES: Final = {
    "falls": '"%(typed)s" falls: write the lower figure first, for example 20-30 %%.',
    "no_upper_end": '"%(typed)s" has no upper end: write both, for example 200-220 g/L.',
    "turned": 'The signs in "%(typed)s" point the wrong way: write for example >= 20 - < 30 %%.',
    "over": '"%(typed)s" is more than all of it: write at most 100 %%.',
}


class ContentError(TextError):
    """The text is no content; errors of its figures are QuantityErrors."""

    messages = MESSAGES


@dataclass(frozen=True)
class Content:
    """Micrograms of a substance per kilogram or per litre of a product, from ``low`` to ``high``."""

    typed: str
    per: Literal["kg", "L"]
    low: int
    high: int

    @property
    def amount(self) -> int:
        """The middle, rounded half-even."""
        return _round(Decimal(self.low + self.high) / 2)

    @property
    def sd(self) -> int:
        """Standard uncertainty of a rectangular distribution: the width over the root of 12; 0 of a figure."""
        return _round(_DIGITS.divide(Decimal(self.high - self.low), Decimal(12).sqrt(_DIGITS)))


_MARK: Final = re.compile(r"(?P<mark><=|=<|>=|=>|[<>≤≥]?)\s*(?P<rest>.*)")
_BETWEEN: Final = re.compile(
    r"(?<=[0-9%‰a-zA-Z])(?<![0-9][eE])\s*(?:-|\.\.\.?|\bto\b|,\s*(?=[<≤])|(?<=\s)(?=[<≤]))\s*(?=[<>=≤≥]*\s*\.?[0-9])"
)


def read_content(text: str) -> Content:
    """The content that the text says. Raises ContentError, or QuantityError for a figure that cannot be read."""
    typed = re.sub("[‐‑‒–—−]", "-", " ".join(unicodedata.normalize("NFKC", text).split()))
    parts = [_MARK.fullmatch(part.strip()) for part in _BETWEEN.split(typed, maxsplit=1)]
    ends = [(found["mark"].replace("=", ""), found["rest"]) for found in parts if found]
    low, high = _read_range(typed, ends) if len(ends) == 2 else _read_end(typed, *ends[0])
    if low > high:
        raise ContentError("falls", typed=typed)
    return Content(text, "L" if "/" in typed else "kg", low, high)


def _read_end(typed: str, mark: str, rest: str) -> tuple[int, int]:
    figure = _base(typed, _parse(typed, rest, "%"))
    if mark in ("<", "≤"):
        return 0, figure
    if mark not in (">", "≥"):
        return figure, figure
    if "/" in typed:
        raise ContentError("no_upper_end", typed=typed)
    if figure > ALL:
        raise ContentError("over", typed=typed)
    return figure, ALL


def _read_range(typed: str, ends: list[tuple[str, str]]) -> tuple[int, int]:
    (low_mark, low), (high_mark, high) = ends
    if low_mark in ("<", "≤") or high_mark in (">", "≥"):
        raise ContentError("turned", typed=typed)
    upper = _parse(typed, high, "%")
    return _base(typed, _parse(typed, low, upper.unit)), _base(typed, upper)


def _parse(typed: str, figure: str, default_unit: str) -> Quantity:
    if "/" in typed:
        return parse(figure, "concentration", default_unit=None if default_unit == "%" else default_unit)
    return parse(figure, "fraction", default_unit=default_unit)


def _base(typed: str, figure: Quantity) -> int:
    return figure.base if "/" in typed else figure.base * _PER_PPM


def _round(value: Decimal) -> int:
    return int(value.to_integral_value(ROUND_HALF_EVEN))
