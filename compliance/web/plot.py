"""The plot of a vessel's ledger: what it held over time as a stepped line, in a band of twice its uncertainty.

A drawing is plain geometry; a template writes it as SVG. Where nobody knows what the vessel held there is no line.
"""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from datetime import datetime
from decimal import Decimal
from itertools import groupby

from django.utils.translation import gettext as _

from chemicals.ledger.running import Running, VesselLedger
from compliance.web import words
from compliance.web.axes import Scale, date_marks

TOP, BOTTOM, RIGHT, LETTER, LABEL = 30, 34, 14, 9, 96
"""Margins of the field of the plot, the width of a letter, the room that a date needs: pixels."""

BASE_LINE = 5
"""How far the base line of a text lies below its middle: pixels."""

SIZE = 6
"""How far a mark reaches to each side: pixels."""

COVERAGE = 2
"""The band reaches so many standard uncertainties to either side: about 95 % of a normal distribution."""


@dataclass(frozen=True)
class Tick:
    """A mark on an axis: where it is, where its text stands, and what it says."""

    at: str
    text_at: str
    text: str


@dataclass(frozen=True)
class Mark:
    """A measured content: a diamond, and what it says."""

    path: str
    says: str


@dataclass(frozen=True)
class Gap:
    """A time in which nobody knows what the vessel held: where it begins, its width and middle; has the word room?"""

    x: str
    width: str
    centre: str
    has_room: bool


@dataclass(frozen=True)
class Plot:
    """A plot, ready for the template."""

    width: int
    height: int
    left: int
    right: int
    top: int
    bottom: int
    unit: str
    line: str
    band: str
    gaps: tuple[Gap, ...]
    marks: tuple[Mark, ...]
    dates: tuple[Tick, ...]
    amounts: tuple[Tick, ...]
    says: tuple[str, ...]

    @property
    def depth(self) -> int:
        """Return the height of the field between the axes."""
        return self.bottom - self.top

    @property
    def middle(self) -> int:
        """Return the middle of the field, from the top down."""
        return (self.bottom + self.top) // 2


@dataclass(frozen=True)
class _Step:
    """What was held from one place on the axis of time until the next."""

    x: float
    until: float
    held: Running

    @property
    def is_known(self) -> bool:
        return self.held.amount is not None


def draw_plot(ledger: VesselLedger, now: datetime, *, width: int, height: int) -> Plot | None:
    """Return the plot of the period, as far as it has passed; None where it lies ahead, or nothing was ever held.

    It has no more than a few steps for each pixel, whatever the number of entries.
    """
    end = min(ledger.end, now)
    held = [ledger.opening, *(point.held for point in ledger.points)]
    if end <= ledger.start or all(each.amount == 0 for each in held):
        return None
    scale = Scale.around(*_range(held), ledger.component)
    left = 12 + LETTER * max(len(text) for _at, text in scale.marks())
    field = width - RIGHT - left, height - TOP - BOTTOM

    def across(at: datetime) -> float:
        return left + field[0] * ((at - ledger.start) / (ledger.end - ledger.start))

    def up(amount: int | Decimal) -> float:
        return TOP + field[1] * (1 - scale.place(amount))

    places = [across(ledger.start), *(across(point.at) for point in ledger.points)]
    steps = _thin(list(zip(places, held, strict=True)), across(end))
    known = [list(run) for is_known, run in groupby(steps, key=lambda step: step.is_known) if is_known]
    dates = date_marks(ledger.start, ledger.end, field[0] // LABEL)
    return Plot(
        width=width,
        height=height,
        left=left,
        right=width - RIGHT,
        top=TOP,
        bottom=height - BOTTOM,
        unit=scale.unit,
        line="".join(_line(run, up) for run in known),
        band="".join(_band(run, up) for run in known),
        gaps=tuple(_gaps(steps)),
        marks=tuple(_marks(ledger, across, up)),
        dates=tuple(place_date(across(at), text, width) for at, text in dates),
        amounts=tuple(place_amount(up(at), text) for at, text in scale.marks()),
        says=tuple(_tell(ledger, held, scale)),
    )


def _reach(held: Running) -> tuple[int, int]:
    """Return the two ends of the band; of what is there, there cannot be less than nothing."""
    amount = held.amount or 0
    low = amount - COVERAGE * held.sd
    return max(low, 0) if amount >= 0 else low, amount + COVERAGE * held.sd


def _range(held: Sequence[Running]) -> tuple[int, int]:
    reaches = [_reach(each) for each in held if each.amount is not None] or [(0, 0)]
    return min(low for low, _high in reaches), max(high for _low, high in reaches)


def _thin(places: Sequence[tuple[float, Running]], end: float) -> list[_Step]:
    """Return the steps; of those within one pixel the first, the lowest, the highest and the last are enough."""
    kept: list[tuple[float, Running]] = []
    for _pixel, group in groupby(places, key=lambda place: (int(place[0]), place[1].amount is None)):
        numbered = list(enumerate(group))
        by_amount = sorted(numbered, key=lambda item: item[1][1].amount or 0)
        wanted = dict((numbered[0], by_amount[0], by_amount[-1], numbered[-1]))
        kept += [wanted[number] for number in sorted(wanted)]
    ends = [*(x for x, _held in kept[1:]), end]
    return [_Step(x, until, held) for (x, held), until in zip(kept, ends, strict=True)]


Height = Callable[[int | Decimal], float]


def _line(run: Sequence[_Step], up: Height) -> str:
    """Draw the amounts of a run of steps: across, up or down, across."""
    heights = [up(step.held.amount or 0) for step in run]
    strokes = [f"V{height:.1f}H{step.until:.1f}" for height, step in zip(heights, run, strict=True)]
    return f"M{run[0].x:.1f} {heights[0]:.1f}" + "".join(strokes)


def _band(run: Sequence[_Step], up: Height) -> str:
    """Draw around a run of steps: along the upper ends, back along the lower ones."""
    reaches = [_reach(step.held) for step in run]
    there = [f"V{up(high):.1f}H{step.until:.1f}" for (_low, high), step in zip(reaches, run, strict=True)]
    back = [f"V{up(low):.1f}H{step.x:.1f}" for (low, _high), step in zip(reaches, run, strict=True)]
    return f"M{run[0].x:.1f} {up(reaches[0][1]):.1f}" + "".join([*there, *reversed(back)]) + "Z"


def _gaps(steps: Sequence[_Step]) -> Iterator[Gap]:
    for is_known, group in groupby(steps, key=lambda step: step.is_known):
        if not is_known:
            run = list(group)
            x, width = run[0].x, run[-1].until - run[0].x
            yield Gap(_px(x), _px(width), _px(x + width / 2), width > LETTER * (len(str(words.UNKNOWN)) + 1))


def _marks(ledger: VesselLedger, across: Callable[[datetime], float], up: Height) -> Iterator[Mark]:
    """Yield the measured contents; where they would cover each other, the last one."""
    last = {int(across(point.at)): point for point in ledger.points if point.measured}
    for point in last.values():
        x, y = across(point.at), up(point.held.amount or 0)
        amount = words.with_uncertainty(point.held.amount, point.held.sd, ledger.component)
        says = _("measured %(when)s: %(amount)s") % {"when": words.moment(point.at), "amount": amount}
        yield diamond(x, y, says)


def diamond(x: float, y: float, says: str) -> Mark:
    """Return the mark of something measured."""
    return Mark(f"M{x:.1f} {y - SIZE:.1f}l{SIZE} {SIZE}l-{SIZE} {SIZE}l-{SIZE} -{SIZE}Z", says)


def place_amount(y: float, text: str) -> Tick:
    """Return a mark on the axis of amounts; its text stands beside it."""
    return Tick(_px(y), _px(y + BASE_LINE), text)


def place_date(x: float, text: str, width: int) -> Tick:
    """Return a mark on the axis of time; its text stands below it, but not beyond the edges of the plot."""
    half = LETTER * len(text) / 2
    return Tick(_px(x), _px(min(max(x, half), width - half)), text)


def _px(place: float) -> str:
    """Return a place as SVG writes it, in whatever language the page is."""
    return f"{place:.1f}"


def _tell(ledger: VesselLedger, held: Sequence[Running], scale: Scale) -> Iterator[str]:
    """Yield in sentences what the plot shows."""

    def amount(of: Running) -> str:
        return words.with_uncertainty(of.amount, of.sd, ledger.component)

    known = sorted((each for each in held if each.amount is not None), key=lambda each: each.amount or 0)
    yield _("At the beginning %(amount)s, at the end %(last)s.") % {
        "amount": amount(ledger.opening),
        "last": amount(ledger.closing),
    }
    if known and ledger.points:
        yield _("The least was %(least)s, the most %(most)s.") % {"least": amount(known[0]), "most": amount(known[-1])}
    if len(known) < len(held):
        yield _("For a time the content was unknown: there is no line.")
    if known and not scale.begins_at_zero:
        yield _("The axis does not begin at zero.")
