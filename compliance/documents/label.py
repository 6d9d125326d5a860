"""The waste container label: as large as its stock allows, refused if it would become too small to read."""

from collections.abc import Iterator
from typing import Any, NamedTuple

from django.utils.translation import gettext as _

from compliance.documents import words
from compliance.documents.codes import draw_code
from compliance.documents.errors import DoesNotFitError, FieldError
from compliance.documents.flow import MM, Block, Columns, Framed, Gap, Picture, Rule, Stack, Text
from compliance.documents.fonts import BOLD, REGULAR, SEMIBOLD, Style
from compliance.documents.pictograms import diagonal_of, pictogram_rows
from compliance.documents.shapes import WasteLabelData
from compliance.documents.stock import PAGES, Stock

# Sizes run together from the largest to the smallest. The aim for a pictogram is a fifteenth of the label, as
# Regulation (EC) 1272/2008, annex I, 1.2.1 asks of supply labels, and never less than its 1 cm2; where the text needs
# the room we go down to two fifths of that side. Below 6.6 pt nobody reads with goggles on.
_LARGEST_TEXT, _SMALLEST_TEXT = 18.0, 6.6
_STEPS = 40


class Sizes(NamedTuple):
    """Body text, pictogram diagonal (and the least it may be) and code side, in points."""

    body: float
    diagonal: float
    least: float
    code: float

    def style(self, font: str = REGULAR, factor: float = 1.0) -> Style:
        """A style relative to the body text."""
        return Style(font, self.body * factor)


def draw_label(canvas: Any, data: WasteLabelData, stock: Stock) -> None:
    """Draw one label on its position of the sheet."""
    left, top = stock.corner(data.get("start", 1))
    page_height = PAGES[stock.page][1]
    safe = stock.safe * MM
    width, height = stock.width * MM - 2 * safe, stock.height * MM - 2 * safe
    x, y = left * MM + safe, (page_height - top) * MM - safe
    body, foot = _fitting(data, stock, width, height)
    body.draw(canvas, x, y, width)
    foot.draw(canvas, x, y - height + foot.height(width), width)


def _fitting(data: WasteLabelData, stock: Stock, width: float, height: float) -> tuple[Block, Block]:
    """The largest label that fits its stock."""
    wide = stock.width > stock.height
    for sizes in _sizes(stock):
        body = _wide(data, sizes, width) if wide else Stack([*_hazards(data, sizes, width), *_inside(data, sizes)])
        foot = _foot(data, sizes, wide=wide)
        if body.height(width) + foot.height(width) <= height:
            return body, foot
    message = _("the text does not fit on %(stock)s at a legible size: choose larger label stock or say less")
    raise DoesNotFitError([FieldError("stock", message % {"stock": stock.name})])


def _sizes(stock: Stock) -> Iterator[Sizes]:
    largest_side = (stock.width * stock.height / 15) ** 0.5 * MM
    smallest_side = max(10 * MM, largest_side / 2.5)
    largest_code = max(18.0, min(stock.width, stock.height) * 0.26) * MM
    for step in range(_STEPS + 1):
        part = 1 - step / _STEPS
        side = smallest_side + part * (largest_side - smallest_side)
        code = 18 * MM + part * (largest_code - 18 * MM)
        body = _SMALLEST_TEXT + part * (_LARGEST_TEXT - _SMALLEST_TEXT)
        yield Sizes(body, diagonal_of(side), diagonal_of(smallest_side), code)


def _wide(data: WasteLabelData, sizes: Sizes, width: float) -> Block:
    """Two columns: what it is and how it hurts; what is in it. The hazard statements stand where there is more room."""
    gap = 5 * MM
    head, pictures, statements = _hazards(data, sizes, (width - gap) / 2)
    inside = _inside(data, sizes)
    splits = (([head, pictures, statements], inside), ([head, pictures], [statements, *inside]))
    columns = (Columns([Stack(left), Stack(right)], [0.5, 0.5], gap) for left, right in splits)
    return min(columns, key=lambda block: block.height(width))


def _identity(data: WasteLabelData, sizes: Sizes) -> Block:
    container = data["container"]
    facts = " · ".join(part for part in (container["name"], container["material"]) if part)
    text = [
        Text(words.label_title(data["hazards"]), sizes.style(SEMIBOLD, 1.25)),
        Text(data["stream"], sizes.style(BOLD, 1.75)),
        Text(_("from: %s") % words.known(data["origin"]), sizes.style()),
        Text(facts, sizes.style()),
        Text(_("volume: %s") % words.known(container["volume"]), sizes.style()),
    ]
    code = Picture(sizes.code, sizes.code, lambda canvas, x, y: draw_code(canvas, x, y, sizes.code, data["url"]))
    under = Text(container["code"], sizes.style(BOLD, 1.35), align=0.5)
    return Columns([Stack(text), Stack([code, under])], [1.0, sizes.code], gap=4)


def _hazards(data: WasteLabelData, sizes: Sizes, width: float) -> tuple[Block, Block, Block]:
    """What it is; pictograms with the signal word; hazard statements."""
    head = Stack([_identity(data, sizes), Rule(0.8, 3, 3)])
    hazards = data["hazards"]
    if not words.has_hazards(hazards):
        return head, Text(words.no_hazards(), sizes.style(SEMIBOLD)), Rule(0.8, 3, 3)
    codes = hazards["pictograms"]
    diagonal = min(sizes.diagonal, width, max(width / max(len(codes), 1), sizes.least))
    rows = Stack(pictogram_rows(codes, diagonal, int(width / diagonal + 1e-6)))
    word = words.signal_word(hazards["signal_word"])
    signal = [Text(word, sizes.style(BOLD, 1.6))] if word else []
    statements = [Text(statement, sizes.style()) for statement in hazards["statements"]]
    taken = len(codes) * diagonal
    if 0 < taken <= 0.45 * width:
        return head, Columns([rows, Stack([*signal, *statements])], [taken, 1.0]), Rule(0.8, 3, 3)
    return head, Stack([rows, *signal]), Stack([*statements, Rule(0.8, 3, 3)])


def _inside(data: WasteLabelData, sizes: Sizes) -> list[Block]:
    """Contents, what they must never meet, cautions."""
    avoid = ", ".join(data["must_not_meet"]) or words.nothing_to_avoid()
    warning = [Text(_("Must never meet"), sizes.style(SEMIBOLD)), Text(avoid, sizes.style(BOLD, 1.25))]
    cautions = [Text(each, sizes.style()) for each in (*data["cautions"], words.ask_locally())]
    return [*_contents(data, sizes), Gap(4), Framed(Stack(warning)), Gap(4), *cautions]


def _contents(data: WasteLabelData, sizes: Sizes) -> Iterator[Block]:
    yield Text(_("Contents"), sizes.style(SEMIBOLD))
    if not data["contents"]:
        yield Text(words.no_contents(), sizes.style())
    for line in data["contents"]:
        name = f"{line['name']} ({line['note']})" if line["note"] else line["name"]
        yield Columns(
            [Text(name, sizes.style()), Text(words.known(line["amount"]), sizes.style(), align=1.0)], [0.68, 0.32]
        )


def _foot(data: WasteLabelData, sizes: Sizes, *, wide: bool) -> Block:
    """Dates, and who stands behind the label."""
    workshop = data["workshop"]
    small = sizes.style(factor=0.9)
    dates = [_date(_("First drop"), data["first_drop"], sizes), _date(_("Full"), data["full"], sizes)]
    name = Text(workshop["name"], sizes.style(SEMIBOLD))
    address = Text(workshop["address"].replace("\n", ", "), small)
    call = Text(_("In an emergency call %s") % words.known(workshop["telephone"]), sizes.style(SEMIBOLD))
    who = [Columns([Stack([name, address]), call], [0.5, 0.5], gap=5 * MM)] if wide else [name, address, call]
    issued = Text(_issued(data), Style(REGULAR, max(5.5, small.size * 0.8)))
    return Stack([Gap(3), Columns(dates, [0.5, 0.5], gap=5 * MM), Rule(0.8, 3, 2), *who, issued])


def _issued(data: WasteLabelData) -> str:
    """Number, date and journal entry; the whole hash stands on the twin that the code opens."""
    return _("Label %(number)d, issued %(at)s by %(by)s; journal %(sequence)d %(head)s…") % {
        "number": data["number"],
        "at": data["issued_at"],
        "by": data["issued_by"],
        "sequence": data["chain_sequence"],
        "head": words.grouped(data["chain_head"][:16]),
    }


def _date(name: str, date: str | None, sizes: Sizes) -> Block:
    """A date, or a line to write it on."""
    room = Text(date, sizes.style(BOLD, 1.2)) if date else Stack([Gap(sizes.body * 1.1), Rule(0.6, 0, 0)])
    return Columns([Text(name, sizes.style()), room], [0.4, 0.6])
