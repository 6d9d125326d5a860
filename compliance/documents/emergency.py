"""The sheet for the fire brigade and for emergencies: whom to call, how much of what hazard, what stands where."""

from collections.abc import Iterator
from typing import Any

from django.utils.translation import gettext as _

from compliance.documents import emergency_words, words
from compliance.documents.codes import draw_code
from compliance.documents.flow import MM, Block, Columns, Framed, Gap, Group, Picture, Rule, Stack, Text
from compliance.documents.fonts import BOLD, REGULAR, SEMIBOLD, Style
from compliance.documents.pages import CODE, Pages, draw_pages
from compliance.documents.pictograms import pictogram_rows
from compliance.documents.shapes import (
    EmergencyData,
    EmergencyPlaceData,
    EmergencyThingData,
    HazardTotalData,
    PaperSize,
)

_BODY, _STRONG, _HEADING = Style(REGULAR, 9), Style(SEMIBOLD, 9), Style(BOLD, 12)
_SMALL, _SMALL_STRONG = Style(REGULAR, 8), Style(SEMIBOLD, 8)
_TITLE, _CALL, _NAME = Style(BOLD, 17), Style(BOLD, 15), Style(BOLD, 10.5)
_DIAMOND = 11 * MM
_TOTAL_WIDTHS = (0.4, 0.19, 0.19, 0.1, 0.12)
_THING_WIDTHS = (0.31, 0.22, 0.47)


def draw_emergency_sheet(canvas: Any, data: EmergencyData, paper_size: PaperSize) -> None:
    """Draw all pages."""
    draw_pages(
        canvas, Pages(_head(data), list(_groups(data)), words.issued("emergency", data), data, "places"), paper_size
    )


def _head(data: EmergencyData) -> Block:
    workshop = data["workshop"]
    day = _("as of %(day)s") % {"day": data["issued_at"][:16].replace("T", " ")}
    text = Stack(
        [
            Text(f"{words.paper_title('emergency', data)}, {day}", _TITLE),
            Text(f"{workshop['name']}, {workshop['address']}".replace("\n", ", "), _STRONG),
            Gap(3),
            Text(emergency_words.follow_the_fire_brigade(), _BODY),
        ]
    )
    code = Picture(CODE, CODE, lambda canvas, x, y: draw_code(canvas, x, y, CODE, data["url"]))
    return Stack([Columns([text, code], [1.0, CODE]), Rule(1.2, 1, 6)])


def _groups(data: EmergencyData) -> Iterator[Group]:
    nothing = Gap(0)
    yield Group([Text(_("Call"), _HEADING), *_calls(data), Gap(4)], nothing)
    yield Group([*_together(data), Gap(5)], nothing)
    yield Group([*(Text(each, _BODY) for each in emergency_words.cautions(data["cautions"])), Gap(4)], nothing)
    totals = [_total(total) for total in data["totals"]]
    if totals:
        head = Stack([Text(_("How much of which hazard, in all places"), _HEADING), _total_header()])
        yield Group([head, *totals, Text(emergency_words.counted_whole(), _SMALL), Gap(4)], _total_header())
    for place in data["places"]:
        yield _place(place)
    if data["left_out"]:
        yield Group([Gap(4), Text(emergency_words.left_out(data["left_out"]), _SMALL)], nothing)


def _calls(data: EmergencyData) -> Iterator[Block]:
    if not data["calls"]:
        yield Text(emergency_words.no_calls(), _STRONG)
    for label, call in emergency_words.calls(data):
        yield Columns([Text(label, _BODY), Text(call, _CALL)], [0.4, 0.6])


def _together(data: EmergencyData) -> Iterator[Block]:
    """What stands in one place, over one bund or under one duct and must never meet."""
    title = Text(_("Stand together and must never meet"), _HEADING)
    lines: list[Block] = [
        Columns([Text(where, _STRONG), Stack([Text(line, _BODY) for line in lines])], [0.3, 0.7])
        for where, lines in emergency_words.together(data)
    ]
    yield Framed(Stack([title, *(lines or [Text(emergency_words.nothing_together(), _BODY)])]), pad=6)


def _total_header() -> Block:
    names = emergency_words.total_columns()
    return Columns([Text(name, _SMALL_STRONG) for name in names], _TOTAL_WIDTHS, gap=4)


def _total(total: HazardTotalData) -> Block:
    cells = emergency_words.total_cells(total)
    return Columns([Text(cell, _SMALL) for cell in cells], _TOTAL_WIDTHS, gap=4)


def _place(place: EmergencyPlaceData) -> Group:
    title = _place_title(place, "")
    rows: list[Block] = [_thing(thing) for thing in place["things"]]
    return Group([title, *rows, Gap(6)], _place_title(place, _(" (continued)")))


def _place_title(place: EmergencyPlaceData, suffix: str) -> Block:
    shared = emergency_words.bund_and_duct(place["bund"], place["exhaust_duct"])
    name = Text(f"{emergency_words.place(place['name'])}{suffix}", _HEADING)
    return Stack([Rule(1.2, 4, 2), Columns([name, Text(shared, _STRONG, align=1.0)], [0.5, 0.5]), Gap(1)])


def _thing(thing: EmergencyThingData) -> Block:
    what = [
        Text(thing["name"], _NAME),
        Text(f"{thing['kind']}, {thing['code']}", _SMALL),
        Text(words.contents(thing["contents"]), _BODY),
        *([Text(emergency_words.un_numbers(thing["un_numbers"]), _STRONG)] if thing["un_numbers"] else []),
    ]
    amount = Text(emergency_words.amount(thing["amount"], thing["doubt"]), _STRONG)
    below = [Text(line, _SMALL_STRONG) for line in emergency_words.reactions(thing)]
    row = Columns([Stack(what), amount, Stack(list(_hazards(thing)))], _THING_WIDTHS, gap=6)
    return Stack([Rule(0.4, 2, 2), row, *below])


def _hazards(thing: EmergencyThingData) -> Iterator[Block]:
    hazards = thing["hazards"]
    word = words.signal_word(hazards["signal_word"])
    rows = Stack(pictogram_rows(hazards["pictograms"], _DIAMOND, 5))
    if word:
        taken = min(5, len(hazards["pictograms"])) * _DIAMOND
        yield Columns([rows, Text(word, _NAME)], [max(taken, 1.5), 1.0], gap=4)
    else:
        yield rows
    if not words.has_hazards(hazards):
        yield Text(words.no_hazards(), _SMALL_STRONG)
    elif thing["not_entered"]:
        yield Text(words.not_entered(thing["not_entered"]), _SMALL_STRONG)
    for statement in hazards["statements"]:
        yield Text(statement, _SMALL)
