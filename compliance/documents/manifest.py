"""The manifest: the load of one drop-off on as many pages as it takes, the same head and chain head on each."""

from collections.abc import Iterator
from typing import Any

from django.utils.translation import gettext as _

from compliance.documents import words
from compliance.documents.codes import draw_code
from compliance.documents.flow import MM, Block, Columns, Framed, Gap, Group, Picture, Rule, Stack, Text
from compliance.documents.fonts import BOLD, REGULAR, SEMIBOLD, Style
from compliance.documents.pages import CODE, Pages, draw_pages
from compliance.documents.pictograms import pictogram_rows
from compliance.documents.shapes import HazardData, ManifestContainerData, ManifestContentData, ManifestData, PaperSize

_BODY, _STRONG, _HEADING = Style(REGULAR, 9), Style(SEMIBOLD, 9), Style(BOLD, 11)
_SMALL, _SMALL_STRONG = Style(REGULAR, 8), Style(SEMIBOLD, 8)
_TITLE, _FOOT = Style(BOLD, 17), Style(REGULAR, 7)
_DIAMOND = 15 * MM
_BESIDE = 6  # contents that stand beside the hazards; further ones follow below and may run over a page
_CONTENT_WIDTHS = (0.4, 0.2, 0.2, 0.2)
_CONTENTS_SHARE = 0.58


def draw_manifest(canvas: Any, data: ManifestData, paper_size: PaperSize) -> None:
    """Draw all pages."""
    pages = Pages(_head(data), list(_groups(data)), words.issued("manifest", data), data, field="containers")
    draw_pages(canvas, pages, paper_size)


def _head(data: ManifestData) -> Block:
    """Stands on every page: what this is, and what it is not."""
    drop_off = data["drop_off"]
    load = _("drop-off %(code)s on %(date)s") % {"code": drop_off["code"], "date": drop_off["date"]}
    title = Stack(
        [
            Text(words.paper_title("manifest", data), _TITLE),
            Text(f"{data['workshop']['name']}: {load}", _STRONG),
            Gap(4),
            Text(words.no_consignment_note(), _BODY),
        ]
    )
    code = Picture(CODE, CODE, lambda canvas, x, y: draw_code(canvas, x, y, CODE, data["url"]))
    return Stack([Columns([title, code], [1.0, CODE]), Rule(1.2, 1, 6)])


def _groups(data: ManifestData) -> Iterator[Group]:
    nothing = Gap(0)
    yield Group([_parties(data), Gap(6)], nothing)
    yield Group([*_dangers(data), Gap(6)], nothing)
    yield Group([Text(words.load(data["containers"]), _HEADING)], nothing)
    for container in data["containers"]:
        yield _container(container)
    yield Group([Rule(0.4, 4, 6), _chain(data), Gap(8), *_signatures(data)], nothing)


def _parties(data: ManifestData) -> Block:
    workshop, receiver, drop_off = data["workshop"], data["receiver"], data["drop_off"]
    return Columns(
        [
            _party(_("From"), workshop["name"], workshop["address"], _("telephone"), workshop["telephone"]),
            _party(_("To"), receiver["name"], receiver["address"], _("their reference"), receiver["reference"]),
            _party(_("Drop-off"), drop_off["code"], drop_off["date"], "", words.mode(drop_off["mode"])),
        ],
        [0.38, 0.38, 0.24],
    )


def _party(title: str, name: str, address: str, what: str, value: str) -> Block:
    last = f"{what} {words.known(value)}" if what else value
    return Stack([Text(title, _SMALL, grey=0.25), Text(name, _STRONG), Text(address, _BODY), Text(last, _BODY)])


def _dangers(data: ManifestData) -> Iterator[Block]:
    """What must never be mixed, and the cautions."""
    apart: list[Block] = [Text(_("Must never meet, nor share a bund or a vehicle"), _HEADING)]
    for other, which in words.never_together(data["containers"]):
        apart.append(Columns([Text(other, _STRONG), Text(which, _BODY)], [0.3, 0.7]))
    if len(apart) == 1:
        apart.append(Text(words.nothing_to_avoid(), _BODY))
    yield Framed(Stack(apart), pad=6)
    yield Gap(5)
    for caution in (*data["cautions"], words.ask_locally()):
        yield Text(caution, _BODY)


def _container(container: ManifestContainerData) -> Group:
    title, header = _container_title(container, ""), _contents_header()
    lines = [_content(line) for line in container["contents"]] or [Text(words.nothing_listed(container), _SMALL)]
    contents = Stack([header, *lines[:_BESIDE]])
    beside = Columns([contents, Stack(list(_hazards(container)))], [_CONTENTS_SHARE, 1 - _CONTENTS_SHARE], gap=10)
    more: list[Block] = [
        Columns([line, Gap(0)], [_CONTENTS_SHARE, 1 - _CONTENTS_SHARE], gap=10) for line in lines[_BESIDE:]
    ]
    narrow = Columns([header, Gap(0)], [_CONTENTS_SHARE, 1 - _CONTENTS_SHARE], gap=10)
    again = Stack([_container_title(container, _(" (continued)")), narrow])
    return Group([title, beside, *more], again)


def _container_title(container: ManifestContainerData, suffix: str) -> Block:
    measure = _("volume %(volume)s, gross %(gross)s") % {
        "volume": words.known(container["volume"]),
        "gross": words.gross_kg(container["gross_kg"]),
    }
    name = Columns([Text(f"{container['code']}{suffix}", _HEADING), Text(container["stream"], _HEADING)], [0.35, 0.65])
    codes = _("codes: %s") % (", ".join(container["codes"]) or _("none stated"))
    return Stack(
        [
            Rule(0.8, 4, 2),
            Columns([name, Text(measure, _STRONG, align=1.0)], [0.6, 0.4]),
            Columns([Text(words.origin(container), _SMALL), Text(codes, _SMALL, align=1.0)], [0.6, 0.4]),
            Gap(2),
        ]
    )


def _contents_header() -> Block:
    names = (_("Component"), _("Amount"), _("Uncertainty"), _("Basis"))
    return Columns([Text(name, _SMALL_STRONG) for name in names], _CONTENT_WIDTHS, gap=4)


def _content(line: ManifestContentData) -> Block:
    cells = (line["component"], words.known(line["amount"]), words.uncertainty(line["uncertainty"]), line["basis"])
    return Columns([Text(cell, _SMALL) for cell in cells], _CONTENT_WIDTHS, gap=4)


def _hazards(container: ManifestContainerData) -> Iterator[Block]:
    hazards = container["hazards"]
    if words.has_hazards(hazards):
        yield from _hazard_lines(hazards)
    else:
        yield Text(words.no_hazards(), _SMALL_STRONG)
    avoid = ", ".join(container["must_not_meet"]) or words.nothing_to_avoid()
    yield Gap(2)
    yield Text(_("Must never meet: %s") % avoid, _SMALL_STRONG)


def _hazard_lines(hazards: HazardData) -> Iterator[Block]:
    yield from pictogram_rows(hazards["pictograms"], _DIAMOND, 4)
    if hazards["signal_word"]:
        yield Text(words.signal_word(hazards["signal_word"]), _HEADING)
    for statement in hazards["statements"]:
        yield Text(statement, _SMALL)


def _chain(data: ManifestData) -> Block:
    """The journal's head at the time of issue: this sheet, kept by somebody else, witnesses every entry up to it."""
    witness = words.witness(data["chain_sequence"], data["chain_head"])
    code = Picture(CODE, CODE, lambda canvas, x, y: draw_code(canvas, x, y, CODE, witness))
    text = Stack(
        [
            Text(_("Chain head"), _HEADING),
            Text(words.chain_meaning(data["chain_sequence"]), _BODY),
            Gap(3),
            Text(words.grouped(data["chain_head"]), Style(SEMIBOLD, 10)),
        ]
    )
    return Columns([text, code], [1.0, CODE])


def _signatures(data: ManifestData) -> Iterator[Block]:
    roles = words.signatories(data["drop_off"]["mode"])
    yield Columns([_signature(role) for role in roles], [1 / len(roles)] * len(roles), gap=12)
    yield Gap(6)
    yield _write_in(_("Refused, missing or different from this manifest"))


def _signature(role: str) -> Block:
    lines = [_write_in(name) for name in (_("name"), _("date and time"), _("signature"))]
    return Stack([Text(role, _STRONG), *lines])


def _write_in(name: str) -> Block:
    return Stack([Gap(20), Rule(0.6, 0, 1), Text(name, _FOOT)])
