"""Labels of vessels, emergency sheet and list of chemicals, each as PDF (by an independent parser) and as its twin."""

import hashlib
import json
import os
import re
import subprocess
import sys
from io import BytesIO
from itertools import pairwise
from typing import Any

import pytest
from pypdf import PdfReader

from compliance.documents.errors import DoesNotFitError, MissingGlyphError, PaperDataError
from compliance.documents.render import render_html, render_pdf
from compliance.documents.shapes import PaperSize
from tests.documents.test_codes import codes_on
from tests.documents.test_pdf import _FRESH, squeezed, strings, text_of
from tests.documents.test_twin import Page
from tests.documents.test_twin import strings as lines_of
from tests.documents.vessels import (
    NOTHING_ENTERED,
    Data,
    bottle,
    decanted,
    emergency_sheet,
    labels_of,
    list_row,
    register_list,
    tank,
    thing,
    total,
)

SIZES: list[tuple[PaperSize, tuple[float, float]]] = [("A4", (210.0, 297.0)), ("Letter", (215.9, 279.4))]
KINDS = ("labels", "emergency", "register")


@pytest.fixture(params=KINDS)
def paper(request: pytest.FixtureRequest) -> tuple[str, Data]:
    made = {
        "labels": labels_of(tank(), bottle(), decanted()),
        "emergency": emergency_sheet(),
        "register": register_list(),
    }
    return request.param, made[request.param]


def test_same_data_gives_the_same_bytes_here_and_in_a_fresh_process(paper: tuple[str, Data]) -> None:
    first = render_pdf(*paper, paper_size="A4")
    assert render_pdf(*paper, paper_size="A4") == first
    fresh = subprocess.run(
        [sys.executable, "-c", _FRESH],
        input=json.dumps(paper),
        capture_output=True,
        text=True,
        check=True,
        env=os.environ | {"PYTHONHASHSEED": "7"},
    )
    assert fresh.stdout.strip() == hashlib.sha256(first).hexdigest()


@pytest.mark.parametrize(("paper_size", "mm"), SIZES)
def test_pages_have_the_size_of_the_paper(
    paper_size: PaperSize, mm: tuple[float, float], paper: tuple[str, Data]
) -> None:
    kind, data = paper
    if kind == "labels":
        data |= {"stock": f"4 per {paper_size}"}
    for page in PdfReader(BytesIO(render_pdf(kind, data, paper_size=paper_size))).pages:
        assert [float(side) / 72 * 25.4 for side in page.mediabox[2:]] == pytest.approx(mm, abs=0.01)


def test_every_font_is_embedded(paper: tuple[str, Data]) -> None:
    found = 0
    for page in PdfReader(BytesIO(render_pdf(*paper, paper_size="A4"))).pages:
        for font in page["/Resources"]["/Font"].values():  # type: ignore[index]
            assert "/FontFile2" in font.get_object()["/FontDescriptor"], font
            found += 1
    assert found >= 3


NOT_AS_TEXT = {"GHS02", "GHS05", "GHS06", "GHS07", "GHS08", "GHS09", "A4", "4 per A4"}
WORDS_OF_ITS_OWN = {
    "tank", "bottle", "secondary container", "bund", "mark", "place", "revision", "lot", "keeps until", "opened",
    "supplier", "supplier's telephone", "note", "decanted", "decanted by", "name", "classification", "quantities",
    "areas", "sheet",
}  # fmt: skip
"""Words of the frozen data that stand for a phrase on the paper."""


def test_the_pdf_says_everything_that_its_data_says(paper: tuple[str, Data]) -> None:
    kind, data = paper
    text = squeezed(text_of(render_pdf(kind, data, paper_size="A4")))
    for string in set(strings(data)) - NOT_AS_TEXT - WORDS_OF_ITS_OWN:
        if string.startswith("http") or string == data["chain_head"]:
            continue
        assert squeezed(string.replace("\n", ", ")) in text or (kind == "labels" and "Färber" in string), string
    assert data["chain_head"][:16] in text
    assert "unknown" in text


def test_the_twin_says_everything_that_its_data_says(paper: tuple[str, Data]) -> None:
    kind, data = paper
    said = " ".join(Page(render_html(kind, data)).said.split())
    for string in set(lines_of(data)) - {"A4"} - WORDS_OF_ITS_OWN:
        assert string in said, string
    assert "unknown" in said
    assert "rules" in said


def test_the_twin_is_a_page_that_can_be_read_out(paper: tuple[str, Data]) -> None:
    page = Page(render_html(*paper))
    levels = [int(tag[1]) for tag, _ in page.tags if re.fullmatch("h[1-6]", tag)]
    assert levels[0] == 1
    assert levels.count(1) == 1
    assert all(below - above <= 1 for above, below in pairwise(levels))
    assert {attributes.get("scope") for attributes in page.all("th")} <= {"col", "row"}
    assert all(each.get("role") == "img" and each.get("aria-label") for each in page.all("svg"))
    ids = [attributes["id"] for _, attributes in page.tags if "id" in attributes]
    assert len(ids) == len(set(ids))
    assert not page.all("style")
    assert not page.all("script")
    assert not [name for _, attributes in page.tags for name in attributes if name == "style" or name.startswith("on")]


def test_characters_without_a_drawing_are_refused_all_at_once(paper: tuple[str, Data]) -> None:
    kind, data = paper
    data["workshop"] = data["workshop"] | {"name": "漂 ☃"}
    with pytest.raises(MissingGlyphError) as caught:
        render_pdf(kind, data, paper_size="A4")
    assert [error.field for error in caught.value.errors] == ["workshop.name", "workshop.name"]


@pytest.mark.parametrize("text", ["CuSO₄·5H₂O", "Cu²⁺ + SO₄²⁻", "äöüßÄÖÜé ñ ø ł č", "αβγδεμΩΔ µ ±½ ≤ ≥ – — “x” €"])
def test_chemistry_and_european_letters_can_be_printed(text: str) -> None:
    for kind, data in (
        ("labels", labels_of(tank(contents=text), stock="2 per A4")),
        ("emergency", emergency_sheet() | {"cautions": [text]}),
        ("register", register_list() | {"rows": [list_row(1, name=[text])]}),
    ):
        assert squeezed(text) in squeezed(text_of(render_pdf(kind, data, paper_size="A4")))


def test_faults_of_shape_are_told_at_once() -> None:
    data = emergency_sheet()
    data["calls"].append({"label": "x"})
    data["places"][0]["things"][0]["amount"] = 3
    del data["totals"][0]["unknown"]
    with pytest.raises(PaperDataError) as caught:
        render_pdf("emergency", data, paper_size="A4")
    assert {error.field for error in caught.value.errors} == {
        "calls[2].call",
        "places[0].things[0].amount",
        "totals[0].unknown",
    }


def test_an_emergency_sheet_says_how_sure_an_amount_is_in_words() -> None:
    things = [thing(1), thing(2, doubt=None), thing(3, amount=None, doubt=None)]
    data = emergency_sheet() | {"totals": []}
    data["places"] = [data["places"][0] | {"things": things}]
    text = " ".join(text_of(render_pdf("emergency", data, paper_size="A4")).split())
    assert "1.5 kg, give or take 20 g" in text
    assert "1.5 kg, how sure is not stated" in squeezed_spaces(text)
    assert "amount unknown" in text


def squeezed_spaces(text: str) -> str:
    """Return a wrapped cell as one line."""
    return text.replace("not stated", " not stated").replace("  ", " ")


def test_an_unknown_amount_makes_a_total_the_least() -> None:
    data = emergency_sheet() | {"totals": [total("H314", unknown=1), total("H290")]}
    text = squeezed(text_of(render_pdf("emergency", data, paper_size="A4")))
    assert squeezed("at least 21 L, give or take 0.3 L") in text
    assert text.count(squeezed("at least 21 L")) == 1


def test_a_long_emergency_sheet_repeats_head_and_place_on_every_page() -> None:
    pdf = render_pdf("emergency", emergency_sheet(30), paper_size="A4")
    pages = [page.extract_text() for page in PdfReader(BytesIO(pdf)).pages]
    assert len(pages) > 3
    for number, text in enumerate(pages, 1):
        assert "fire brigade's instructions" in text
        assert f"page {number} of {len(pages)}" in text
        assert "9f86 d081 884c 7d65" in text
    assert all("Cupboard (continued)" in text for text in pages[1:3])
    assert codes_on(pdf, len(pages) - 1) == ["http://bench.local:8000/w/1/emergency/"]
    whole = "".join(pages)
    assert all(f"B{number:03d}" in whole for number in range(1, 31))


def test_without_numbers_the_sheet_says_so() -> None:
    data = emergency_sheet() | {"calls": []}
    assert "No emergency number has been entered" in text_of(render_pdf("emergency", data, paper_size="A4"))
    assert "No emergency number has been entered" in Page(render_html("emergency", data)).said


def test_hazards_that_nobody_entered_are_never_said_to_be_none() -> None:
    bare = thing(1, hazards=NOTHING_ENTERED)
    data = emergency_sheet()
    data["places"][0]["things"] = [bare]
    assert "does not mean there are none" in text_of(render_pdf("emergency", data, paper_size="A4"))


def test_a_list_repeats_its_columns_on_every_page_and_prints_only_those_chosen() -> None:
    data = register_list(60) | {"columns": ["name", "areas"]}
    pdf = render_pdf("register", data, paper_size="A4")
    pages = [page.extract_text() for page in PdfReader(BytesIO(pdf)).pages]
    assert len(pages) > 2
    for text in pages:
        assert "Name, as on the safety data sheet" in text
        assert "Whether that is what a rule asks for, it does not say" in text
    whole = "".join(pages)
    assert "Quantity ranges" not in whole
    assert "H302" not in whole
    assert "H302" not in Page(render_html("register", data)).said
    assert all(f"Kupfersulfat {number}" in whole for number in range(60))


def test_a_list_of_nothing_says_so() -> None:
    data = register_list() | {"rows": []}
    assert "Nothing of the register is here" in text_of(render_pdf("register", data, paper_size="A4"))
    assert "Nothing of the register is here" in Page(render_html("register", data)).said


@pytest.mark.parametrize(
    ("kind", "data"),
    [
        ("emergency", emergency_sheet() | {"cautions": ["word " * 5000]}),
        ("register", register_list() | {"rows": [list_row(1, areas=["word " * 5000])]}),
    ],
    ids=["emergency", "register"],
)
def test_a_text_longer_than_a_page_is_refused(kind: str, data: Any) -> None:
    with pytest.raises(DoesNotFitError, match="longer than a page"):
        render_pdf(kind, data, paper_size="A4")
