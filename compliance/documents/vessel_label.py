"""Labels of tanks, bottles and secondary containers on a sheet of stock, as large as they fit.

What does not fit at a legible size gives way in one order, whatever the label (`SETS`): first the cautions and all
precautions but personal protection; then the texts of the statements, whose codes stay, and the facts; then the codes
as well. The name, what is inside, pictograms, signal word, what must never be met, and what is not known of the hazards
are never left out, nor the code behind which everything stands. A label on which even these do not fit is refused.
"""

import json
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any, NamedTuple

from django.utils.translation import gettext as _

from chemicals.science.ghs import split_statement
from compliance.documents import fonts, label_words, words
from compliance.documents.codes import QUIET, bars, draw_code
from compliance.documents.errors import DoesNotFitError, FieldError
from compliance.documents.flow import MM, Block, Columns, Framed, Gap, Picture, Rule, Stack, Text
from compliance.documents.fonts import BOLD, REGULAR, SEMIBOLD, Style
from compliance.documents.label_words import PrintedSet
from compliance.documents.pictograms import diagonal_of, pictogram_rows
from compliance.documents.shapes import LabelsData, VesselLabelData
from compliance.documents.stock import PAGES, Stock

SETS: tuple[PrintedSet, ...] = ("all", "short", "codes", "least")
"""What is printed, from everything to what is never left out."""

# As on waste labels: the aim for a pictogram is a fifteenth of the label, never less than 1 cm2 (Regulation (EC)
# 1272/2008, annex I, 1.2.1); text below 6.6 pt nobody reads with goggles on. A module of the code is at least a third
# of a millimetre wide, which any telephone reads (common practice).
_LARGEST_TEXT, _SMALLEST_TEXT = 18.0, 6.6
_SMALLEST_MODULE = 0.33 * MM
_STEPS = 24
_MOST_IN_A_COLUMN = 2
_PROTECTION = ("P280", "P281", "P282", "P283", "P284", "P285")


@dataclass(frozen=True)
class Printed:
    """A label with what of it is printed, laid out for its stock."""

    printed: PrintedSet
    body: Block
    foot: Block


class _Sizes(NamedTuple):
    """Body text, pictogram diagonal (and the least it may be) and code side, in points."""

    body: float
    diagonal: float
    least: float
    code: float

    def style(self, font: str = REGULAR, factor: float = 1.0) -> Style:
        return Style(font, max(self.body * factor, _SMALLEST_TEXT * min(factor, 0.9)))


@dataclass(frozen=True)
class _Job:
    """One label with what its layout depends on; widths and heights in points."""

    data: LabelsData
    index: int
    width: float
    height: float

    @property
    def label(self) -> VesselLabelData:
        return self.data["labels"][self.index]


def draw_labels(canvas: Any, data: LabelsData, stock: Stock) -> None:
    """Draw the labels on their positions, on as many sheets as they take."""
    page_height, safe = PAGES[stock.page][1], stock.safe * MM
    width, height = _room(stock)
    for index, printed in enumerate(lay_out(data, stock)):
        position = (data["start"] - 1 + index) % stock.labels
        if index and not position:
            canvas.showPage()
        left, top = stock.corner(position + 1)
        x, y = left * MM + safe, (page_height - top) * MM - safe
        printed.body.draw(canvas, x, y, width)
        printed.foot.draw(canvas, x, y - height + printed.foot.height(width), width)


def _room(stock: Stock) -> tuple[float, float]:
    return (stock.width - 2 * stock.safe) * MM, (stock.height - 2 * stock.safe) * MM


def lay_out(data: LabelsData, stock: Stock) -> list[Printed]:
    """Each label as it is printed; `DoesNotFitError` names every one that does not fit."""
    known: dict[str, tuple[PrintedSet, _Sizes] | None] = {}
    found, problems = [], []
    for index, label in enumerate(data["labels"]):
        job = _Job(data, index, *_room(stock))
        key = json.dumps([len(str(index + 1)), label], sort_keys=True)  # figures are equally wide
        if key not in known:
            known[key] = _fit(job, stock)
        fitted = known[key]
        if fitted is None:
            message = _("%(name)s does not fit on %(stock)s at a legible size: choose larger label stock")
            problems.append(FieldError(f"labels[{index}]", message % {"name": label["name"], "stock": stock.name}))
        else:
            body = _body(job, *fitted)
            assert body is not None  # noqa: S101  (it was fitted)
            found.append(Printed(fitted[0], body, _foot(job, *fitted)))
    if problems:
        raise DoesNotFitError(problems)
    return found


def _fit(job: _Job, stock: Stock) -> tuple[PrintedSet, _Sizes] | None:
    """The fullest set that fits, and the largest size at which it does."""
    for printed in SETS:
        if not _fits(job, printed, _size(job, stock, 0)):
            continue
        low, high = 0, _STEPS + 1
        while high - low > 1:
            middle = (low + high) // 2
            low, high = (middle, high) if _fits(job, printed, _size(job, stock, middle)) else (low, middle)
        return printed, _size(job, stock, low)
    return None


def _fits(job: _Job, printed: PrintedSet, sizes: _Sizes) -> bool:
    body = _body(job, printed, sizes)
    return body is not None and body.height(job.width) + _foot(job, printed, sizes).height(job.width) <= job.height


def _size(job: _Job, stock: Stock, step: int) -> _Sizes:
    """Sizes run together from the smallest (0) to the largest (`_STEPS`)."""
    part = step / _STEPS
    largest_side = max(10.0, (stock.width * stock.height / 15) ** 0.5) * MM
    smallest_side = max(10 * MM, largest_side / 2.5)
    side = smallest_side + part * (largest_side - smallest_side)
    modules = bars(job.label["url"])[0] + 2 * QUIET
    smallest_code = modules * _SMALLEST_MODULE
    largest_code = max(smallest_code, min(stock.width, stock.height) * 0.3 * MM)
    body = _SMALLEST_TEXT + part * (_LARGEST_TEXT - _SMALLEST_TEXT)
    code = smallest_code + part * (largest_code - smallest_code)
    return _Sizes(body, diagonal_of(side), diagonal_of(smallest_side), code)


def _body(job: _Job, printed: PrintedSet, sizes: _Sizes) -> Block | None:
    """The lowest of the layouts in which no word of the name is cut: the signs below the name, beside the code, left
    of the name, or the text in a second column. None if there is no such layout.
    """
    gap = 3 * MM
    name, code = Stack(list(_identity(job, printed, sizes))), _code(job, printed, sizes)
    text = list(_text(job, printed, sizes))
    beside, half = job.width - sizes.code - gap, (job.width - gap) / 2
    layouts: list[tuple[float, Block]] = [
        (beside, Stack([Columns([name, code], [1.0, sizes.code], gap), _signs(job, sizes, job.width), *text])),
        (beside, Stack([Columns([Stack([name, _signs(job, sizes, beside)]), code], [1.0, sizes.code], gap), *text])),
    ]
    if 0 < len(job.label["hazards"]["pictograms"]) <= _MOST_IN_A_COLUMN:
        column, taken = _pictograms(job, sizes, sizes.diagonal)
        between = Stack([name, _warnings(job, sizes)])
        three = Columns([column, between, code], [taken, 1.0, sizes.code], gap / 2)
        layouts.append((beside - taken, Stack([three, *text])))
    head = Columns([name, code], [1.0, sizes.code], gap)
    left = Stack([head, _signs(job, sizes, half)])
    if job.width > job.height:
        layouts.append((half - sizes.code - gap, Columns([left, Stack(text)], [0.5, 0.5], gap)))
    need = max(fonts.width(word, _name_style(printed, sizes)) for word in job.label["name"].split())
    fitting = [block for room, block in layouts if need <= room]
    return min(fitting, key=lambda block: block.height(job.width), default=None)


def _name_style(printed: PrintedSet, sizes: _Sizes) -> Style:
    return sizes.style(BOLD, 1.2 if printed == "least" else 1.5)


def _identity(job: _Job, printed: PrintedSet, sizes: _Sizes) -> Iterator[Block]:
    label = job.label
    if printed != "least":
        yield Text(label_words.vessel_label_title(label["sort"]), sizes.style(SEMIBOLD, 0.9))
    yield Text(label["name"], _name_style(printed, sizes))
    if label["contents"] != label["name"]:
        yield Text(words.contents(label["contents"]), sizes.style(SEMIBOLD))


def _code(job: _Job, printed: PrintedSet, sizes: _Sizes) -> Block:
    """The code that opens the page of the vessel, and the short one to type."""
    label = job.label
    picture = Picture(sizes.code, sizes.code, lambda canvas, x, y: draw_code(canvas, x, y, sizes.code, label["url"]))
    return Stack([picture, Text(label["code"], sizes.style(BOLD, 1.0 if printed == "least" else 1.2), align=0.5)])


def _signs(job: _Job, sizes: _Sizes, width: float) -> Block:
    """Pictograms with the signal word, and what is not known of the hazards."""
    rows, taken = _pictograms(job, sizes, width)
    warnings = _warnings(job, sizes)
    if 0 < taken <= 0.6 * width:
        return Columns([rows, warnings], [taken, 1.0], gap=4)
    return Stack([Gap(1), rows, warnings, Gap(1)])


def _pictograms(job: _Job, sizes: _Sizes, width: float) -> tuple[Block, float]:
    """The diamonds in rows, and how wide these are."""
    codes = job.label["hazards"]["pictograms"]
    if not codes:
        return Gap(0), 0.0
    diagonal = min(sizes.diagonal, width, max(width / len(codes), sizes.least))
    rows = pictogram_rows(codes, diagonal, max(1, int(width / diagonal + 1e-6)))
    return Stack(rows), max(row.wide for row in rows)


def _warnings(job: _Job, sizes: _Sizes) -> Block:
    label = job.label
    word = words.signal_word(label["hazards"]["signal_word"])
    blocks = [Text(word, sizes.style(BOLD, 1.6))] if word else []
    if not words.has_hazards(label["hazards"]):
        blocks.append(Text(words.no_hazards(), sizes.style(SEMIBOLD)))
    elif label["not_entered"]:
        blocks.append(Text(words.not_entered(label["not_entered"]), sizes.style(SEMIBOLD)))
    return Stack(blocks)


def _text(job: _Job, printed: PrintedSet, sizes: _Sizes) -> Iterator[Block]:
    """Statements, what must never be met, precautions, facts, cautions: as much as the set leaves."""
    label = job.label
    yield from (Text(line, sizes.style()) for line in _statements(label, printed))
    never = Text(words.must_never_meet(label["must_not_meet"], brief=printed == "least"), sizes.style(SEMIBOLD))
    yield from (never,) if printed == "least" else (Gap(2), Framed(never, weight=0.8, pad=2), Gap(2))
    if printed in ("all", "short") and label["facts"]:
        yield Text(" · ".join(label_words.fact(fact) for fact in label["facts"]), sizes.style())
    if printed == "all":
        yield from (Text(each, sizes.style(factor=0.9)) for each in label_words.cautions(label))
    elif printed == "short":
        yield Text(label_words.shortened(printed), sizes.style(factor=0.9))


def _statements(label: VesselLabelData, printed: PrintedSet) -> Iterator[str]:
    if printed == "least":
        return
    precautions = [each for each in label["precautions"] if printed == "all" or each.startswith(_PROTECTION)]
    lines = [*label["hazards"]["statements"], *precautions]
    if printed != "codes":
        yield from lines
    elif lines:
        yield ", ".join("+".join(split_statement(line)[0]) or line for line in lines)


def _foot(job: _Job, printed: PrintedSet, sizes: _Sizes) -> Block:
    """Who answers for the label, and which paper it belongs to."""
    data, small = job.data, sizes.style(factor=0.85)
    workshop = data["workshop"]
    number = f"{data['number']}.{job.index + 1}"
    if printed in ("codes", "least"):
        name = [workshop["name"]] if printed == "codes" else []
        parts = " · ".join([*name, number, data["issued_at"][:10], label_words.more_behind_the_code()])
        return Stack([Rule(0.4, 1, 1), Text(parts, small)])
    call = _("In an emergency call %s") % words.known(workshop["telephone"])
    issued = _("Label %(number)s, issued %(at)s by %(by)s; journal %(sequence)d %(head)s…") % {
        "number": number,
        "at": data["issued_at"],
        "by": data["issued_by"],
        "sequence": data["chain_sequence"],
        "head": words.grouped(data["chain_head"][:16]),
    }
    who = Text(f"{workshop['name']} · {call}", sizes.style(SEMIBOLD, 0.9))
    return Stack([Rule(0.6, 2, 1.5), who, Text(issued, small)])
