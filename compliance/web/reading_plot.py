"""The plot of what was read at a vessel over time: a diamond for each reading, joined by a line."""

from collections.abc import Sequence
from datetime import timedelta
from decimal import Decimal

from django.utils.translation import gettext as _

from chemicals.process.readings import Taken
from chemicals.science.quantity import show
from chemicals.science.units import DIMENSIONS, find, to_base
from compliance.web import words
from compliance.web.axes import Scale, date_marks
from compliance.web.plot import BOTTOM, LABEL, LETTER, RIGHT, TOP, Plot, diamond, place_amount, place_date
from compliance.web.words.readings import amount_of

FREEZING = 273_150
"""Millikelvin at which degrees Celsius begin."""


def draw_readings(readings: Sequence[Taken], *, width: int, height: int) -> Plot | None:
    """Return the plot of the numbers among readings of one quantity; None of fewer than two, or of several units."""
    numbers = [(taken, _middle(taken)) for taken in reversed(readings) if None not in (taken.least, taken.most)]
    if len(numbers) < 2 or len({taken.dimension for taken, _value in numbers}) > 1:
        return None
    values = [value for _taken, value in numbers]
    unit, size = _unit(max(values), numbers[0][0].dimension)
    scale = Scale.around_in(min(values), max(values), unit, size)
    start = numbers[0][0].entry.occurred_at
    end = max(numbers[-1][0].entry.occurred_at, start + timedelta(hours=1))
    left = 12 + LETTER * max(len(text) for _at, text in scale.marks())
    field = width - RIGHT - left, height - TOP - BOTTOM

    def across(at: object) -> float:
        return float(left + field[0] * ((at - start) / (end - start)))  # type: ignore[operator]  # it is a moment

    def up(amount: int | Decimal) -> float:
        return TOP + field[1] * (1 - scale.place(amount))

    points = [(across(taken.entry.occurred_at), up(value), taken) for taken, value in numbers]
    dates = date_marks(start, end, field[0] // LABEL)
    return Plot(
        width=width,
        height=height,
        left=left,
        right=width - RIGHT,
        top=TOP,
        bottom=height - BOTTOM,
        unit=scale.unit,
        line="M" + "L".join(f"{x:.1f} {y:.1f}" for x, y, _taken in points),
        band="",
        gaps=(),
        marks=tuple(diamond(x, y, f"{_when(taken)}: {amount_of(taken)}") for x, y, taken in points),
        dates=tuple(place_date(across(at), text, width) for at, text in dates),
        amounts=tuple(place_amount(up(at), text) for at, text in scale.marks()),
        says=tuple(_tell(numbers, scale)),
    )


def _middle(taken: Taken) -> int:
    middle = ((taken.least or 0) + (taken.most or 0)) // 2
    return middle - FREEZING if taken.dimension == "temperature" else middle


def _unit(largest: int, dimension: str) -> tuple[str, Decimal]:
    """Return the unit of the axis and how many base units it has; pH and degrees count in thousandths."""
    if dimension == "temperature":
        return "°C", Decimal(1000)
    if dimension == "ph":
        return "pH", Decimal(1000)
    word = show(largest, dimension).rpartition(" ")[2]
    unit = find(word, dimension) or DIMENSIONS[dimension].units[0]
    return word, to_base(Decimal(1), unit, dimension)


def _when(taken: Taken) -> str:
    return words.moment(taken.entry.occurred_at, taken.entry.precision)


def _tell(numbers: Sequence[tuple[Taken, int]], scale: Scale) -> list[str]:
    """Return in sentences what the plot shows."""
    ordered = sorted(numbers, key=lambda pair: pair[1])
    said = [
        _("First %(first)s, last %(last)s.") % {"first": amount_of(numbers[0][0]), "last": amount_of(numbers[-1][0])},
        _("The least was %(least)s, the most %(most)s.")
        % {"least": amount_of(ordered[0][0]), "most": amount_of(ordered[-1][0])},
    ]
    return said if scale.begins_at_zero else [*said, _("The axis does not begin at zero.")]
