"""The nine pictograms: complete, well formed, inside their frame, and different from each other."""

from typing import Any
from xml.etree import ElementTree

import pypdfium2
import pytest
from django.template.loader import render_to_string

from compliance.documents.pictograms import INKS, SYMBOLS, commands, parts
from compliance.documents.render import render_pdf
from compliance.documents.shapes import Pictogram
from compliance.documents.twin import symbol

CODES = sorted(SYMBOLS)
SVG = "{http://www.w3.org/2000/svg}"


def test_there_are_nine() -> None:
    assert [f"GHS0{number}" for number in range(1, 10)] == CODES


@pytest.mark.parametrize("code", CODES)
def test_svg_is_well_formed_named_and_free_of_style(code: Pictogram) -> None:
    markup = render_to_string("documents/_pictogram.svg", {"symbol": symbol(code)})
    root = ElementTree.fromstring(markup)  # noqa: S314  (our own markup)
    assert root.tag == f"{SVG}svg"
    assert root.get("role") == "img"
    title = root.find(f"{SVG}title")
    assert title is not None
    assert title.text == root.get("aria-label") == f"{code}: {symbol(code)['name']}"
    assert len(root.findall(f"{SVG}path")) == len(parts(code)) > 2
    assert all("style" not in element.attrib for element in root.iter())


def test_each_has_a_name_of_its_own() -> None:
    assert len({symbol(code)["name"] for code in CODES}) == 9


@pytest.mark.parametrize("code", CODES)
def test_the_symbol_lies_inside_the_white_of_its_frame(code: Pictogram) -> None:
    for part in SYMBOLS[code]:
        for command, numbers in commands(part.path):
            if command != "Z":
                x, y = numbers[-2:]  # where the line arrives; the points before only bend it
                assert abs(x - 50) + abs(y - 50) + part.stroke / 2 <= 42.5, (part, x, y)


def drawn(label: dict[str, Any], code: Pictogram) -> Any:
    """The pixels of a label with this pictogram only."""
    label["hazards"] = {"signal_word": "", "pictograms": [code], "statements": []}
    document = pypdfium2.PdfDocument(render_pdf("waste-label", label | {"stock": "1 per A4"}, paper_size="A4"))
    image = document[0].render(scale=1).to_pil().convert("RGB")
    document.close()
    return image


@pytest.mark.parametrize("code", CODES)
def test_a_pictogram_is_printed_with_a_red_frame_and_a_black_symbol(code: Pictogram, label: dict[str, Any]) -> None:
    image = drawn(label, code)
    red = tuple(int(INKS["red"][place : place + 2], 16) for place in (1, 3, 5))
    pixels = {(x, y): image.getpixel((x, y)) for x in range(image.width) for y in range(image.height)}
    frame = [place for place, colour in pixels.items() if colour == red]
    left, right = min(x for x, _ in frame), max(x for x, _ in frame)
    top, bottom = min(y for _, y in frame), max(y for _, y in frame)
    assert right - left == pytest.approx(bottom - top, abs=2)
    middle = [
        pixels[x, y]
        for x in range(left, right)
        for y in range(top, bottom)
        if abs(x - (left + right) / 2) + abs(y - (top + bottom) / 2) < (right - left) * 0.42
    ]
    assert 0.08 < sum(colour == (0, 0, 0) for colour in middle) / len(middle) < 0.7


def test_no_two_look_alike(label: dict[str, Any]) -> None:
    assert len({drawn(label, code).tobytes() for code in CODES}) == 9


def test_an_unknown_pictogram_is_refused(label: dict[str, Any]) -> None:
    from compliance.documents.errors import PaperDataError

    label["hazards"]["pictograms"] = ["GHS10"]
    with pytest.raises(PaperDataError, match=r"hazards.pictograms\[0\]: 'GHS10' is not one of 'GHS01'"):
        render_pdf("waste-label", label, paper_size="A4")
