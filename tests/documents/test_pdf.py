"""The PDF, looked at by an independent parser: bytes, size, fonts, text."""

import hashlib
import json
import os
import subprocess
import sys
from collections.abc import Callable, Iterator
from io import BytesIO
from typing import Any

import pytest
from pypdf import PdfReader

from compliance.documents.errors import DoesNotFitError, MissingGlyphError, PaperDataError
from compliance.documents.render import render_pdf
from compliance.documents.shapes import PaperSize
from compliance.documents.stock import STOCKS, Stock

Data = dict[str, Any]
_FRESH = """
import hashlib, json, sys
import django
django.setup()
from compliance.documents.render import render_pdf
kind, data = json.load(sys.stdin)
print(hashlib.sha256(render_pdf(kind, data, paper_size="A4")).hexdigest())
"""


def text_of(pdf: bytes) -> str:
    return "".join(page.extract_text() for page in PdfReader(BytesIO(pdf)).pages)


def squeezed(text: str) -> str:
    """Without white space, and with the raised signs as they are drawn: a wrapped line is still the same text."""
    return "".join(text.split()).translate(str.maketrans("⁺⁻₊₋", "+−+−"))


def strings(value: object) -> Iterator[str]:
    if isinstance(value, str):
        yield value
    elif isinstance(value, dict):
        for item in value.values():
            yield from strings(item)
    elif isinstance(value, list):
        for item in value:
            yield from strings(item)


@pytest.mark.parametrize("kind", ["waste-label", "manifest"])
def test_same_data_gives_the_same_bytes_in_this_process_and_in_a_fresh_one(
    kind: str, label: Data, manifest: Data
) -> None:
    data = label if kind == "waste-label" else manifest
    first = render_pdf(kind, data, paper_size="A4")
    assert render_pdf(kind, data, paper_size="A4") == first
    fresh = subprocess.run(
        [sys.executable, "-c", _FRESH],
        input=json.dumps([kind, data]),
        capture_output=True,
        text=True,
        check=True,
        env=os.environ | {"PYTHONHASHSEED": "7"},
    )
    assert fresh.stdout.strip() == hashlib.sha256(first).hexdigest()


@pytest.mark.parametrize(("paper_size", "mm"), [("A4", (210.0, 297.0)), ("Letter", (215.9, 279.4))])
def test_pages_have_the_size_of_the_paper(paper_size: PaperSize, mm: tuple[float, float], manifest_of: Any) -> None:
    pages = PdfReader(BytesIO(render_pdf("manifest", manifest_of(9), paper_size=paper_size))).pages
    assert len(pages) > 1
    for page in pages:
        assert [float(side) / 72 * 25.4 for side in page.mediabox[2:]] == pytest.approx(mm, abs=0.01)


@pytest.mark.parametrize("kind", ["waste-label", "manifest"])
def test_every_font_is_embedded(kind: str, label: Data, manifest: Data) -> None:
    pdf = render_pdf(kind, label if kind == "waste-label" else manifest, paper_size="A4")
    found = 0
    for page in PdfReader(BytesIO(pdf)).pages:
        for font in page["/Resources"]["/Font"].values():  # type: ignore[index]
            assert "/FontFile2" in font.get_object()["/FontDescriptor"], font
            found += 1
    assert found >= 3


def test_a_label_says_everything_that_its_data_says(label: Data) -> None:
    text = squeezed(text_of(render_pdf("waste-label", label, paper_size="A4")))
    not_as_text = {*label["hazards"]["pictograms"], label["url"], label["chain_head"], label["workshop"]["address"]}
    for string in set(strings(label)) - not_as_text:
        assert squeezed(string) in text, string
    assert squeezed(label["workshop"]["address"].replace("\n", ",")) in text
    assert label["chain_head"][:16] in text


def test_a_manifest_says_everything_that_its_data_says(manifest: Data) -> None:
    text = squeezed(text_of(render_pdf("manifest", manifest, paper_size="A4")))
    not_as_text = {*manifest["containers"][0]["hazards"]["pictograms"], manifest["url"]}
    for string in set(strings(manifest)) - not_as_text:
        assert squeezed(string) in text, string
    assert "itisnolegalconsignmentnote" in text.lower()
    assert "localrulesandlicensedpracticedecide" in text.lower()


def test_unknown_amounts_print_as_unknown_and_never_as_nought(manifest: Data) -> None:
    for container in manifest["containers"]:
        container |= {"gross_kg": None, "volume": None, "origin": ""}
        container["contents"] = [{"component": "gold", "amount": None, "uncertainty": None, "basis": "assumed"}]
    text = text_of(render_pdf("manifest", manifest, paper_size="A4"))
    assert text.count("unknown") == 2 * 4 + 1
    assert "volume unknown, gross unknown" in text
    assert "unknown: 0 kg and 2 not weighed" in text


def test_the_total_adds_decimals_exactly_and_names_what_was_not_weighed(manifest_of: Callable[[int], Data]) -> None:
    data = manifest_of(3)
    for container, weight in zip(data["containers"], ("0.1", "0.2", None), strict=True):
        container["gross_kg"] = weight
    assert "gross unknown: 0.3 kg and 1 not weighed" in text_of(render_pdf("manifest", data, paper_size="A4"))


def test_a_long_manifest_repeats_its_head_on_every_page(manifest_of: Callable[[int], Data]) -> None:
    pages = PdfReader(BytesIO(render_pdf("manifest", manifest_of(40), paper_size="A4"))).pages
    assert len(pages) > 5
    for number, page in enumerate(pages, start=1):
        text = page.extract_text()
        assert text.startswith("Manifest 7Werkstatt Löwenzahn (invented): drop-off D-0009 on 2025-04-14")
        assert "no legal consignment note" in text
        assert f"page {number} of {len(pages)}" in text
        assert "9f86 d081 884c 7d65 9a2f eaa0 c55a d015 a3bf 4f1b 2b0b 822c d15d 6c15 b0f0 0a08" in text
    whole = "".join(page.extract_text() for page in pages)
    assert all(f"W-{number:04d}" in whole for number in range(1, 41))
    assert whole.count("Received by") == 1


def test_a_container_longer_than_a_page_repeats_its_own_head(manifest: Data) -> None:
    line = manifest["containers"][0]["contents"][0]
    manifest["containers"][1]["contents"] = [{**line, "component": f"component {number}"} for number in range(150)]
    pages = PdfReader(BytesIO(render_pdf("manifest", manifest, paper_size="A4"))).pages
    continued = [page.extract_text() for page in pages if "W-0002 (continued)" in page.extract_text()]
    assert len(continued) >= 2
    assert all("Component" in text and "Uncertainty" in text for text in continued)
    whole = squeezed("".join(page.extract_text() for page in pages))
    assert all(f"component{number}316g" in whole for number in range(150))


def test_a_picked_up_load_has_a_third_signature(manifest: Data) -> None:
    assert "Picked up by" not in text_of(render_pdf("manifest", manifest, paper_size="A4"))
    manifest["drop_off"]["mode"] = "picked up"
    assert "Picked up by" in text_of(render_pdf("manifest", manifest, paper_size="A4"))


def test_what_must_never_meet_names_the_containers_of_each(manifest: Data) -> None:
    manifest["containers"][1]["must_not_meet"] = ["acid", "cyanide"]
    text = squeezed(text_of(render_pdf("manifest", manifest, paper_size="A4")))
    assert "cyanideW-0001,W-0002hypochloriteW-0001acidW-0002" in text


def test_what_no_container_may_meet_is_said_for_all_at_once(manifest_of: Callable[[int], Data]) -> None:
    data = manifest_of(5)
    data["containers"][4]["must_not_meet"] = ["cyanide"]
    text = squeezed(text_of(render_pdf("manifest", data, paper_size="A4")))
    assert "cyanideall5wastecontainershypochloriteW-0001,W-0002,W-0003,W-0004" in text


def test_without_entered_hazards_a_label_does_not_claim_that_there_are_none(label: Data) -> None:
    label |= {"hazards": {"signal_word": "", "pictograms": [], "statements": []}, "contents": [], "must_not_meet": []}
    text = squeezed(text_of(render_pdf("waste-label", label, paper_size="A4")))
    for sentence in ("Waste, hazards not entered", "ask before handling", "Contents unknown", "nothing named: ask"):
        assert squeezed(sentence) in text
    assert "Hazardouswaste" not in text


def test_a_character_without_a_drawing_is_refused_with_its_name_and_field(label: Data) -> None:
    label["contents"][1]["name"] = "漂白剂"
    label["workshop"]["name"] = "Shop \U0001f40b\u200b"
    with pytest.raises(MissingGlyphError) as caught:
        render_pdf("waste-label", label, paper_size="A4")
    problems = {error.field: error.message for error in caught.value.errors}
    assert problems.keys() == {"contents[1].name", "workshop.name"}
    assert "'漂' (U+6F02 CJK UNIFIED IDEOGRAPH-6F02)" in str(caught.value)
    assert "'🐋' (U+1F40B WHALE)" in str(caught.value)
    assert "(U+200B ZERO WIDTH SPACE)" in str(caught.value)
    assert len(caught.value.errors) == 5


@pytest.mark.parametrize(
    "text", ["CuSO₄·5H₂O", "Cu²⁺ + SO₄²⁻", "äöüßÄÖÜé ñ ø ł č", "αβγδεμΩΔ µ ±½ ≤ ≥ – — “x” €", "x₊y₋"]
)
def test_chemistry_and_european_letters_can_be_printed(text: str, label: Data) -> None:
    label["stream"] = text
    assert squeezed(text) in squeezed(text_of(render_pdf("waste-label", label, paper_size="A4")))


def test_all_faults_of_shape_are_told_at_once_with_their_fields(manifest: Data) -> None:
    del manifest["url"]
    manifest |= {"chain_head": "abc", "number": 0, "issued_at": "yesterday", "colour": "red", "cautions": "none"}
    manifest["drop_off"]["mode"] = "thrown"
    manifest["containers"][1] |= {"gross_kg": "1,500", "volume": 3, "codes": [7]}
    with pytest.raises(PaperDataError) as caught:
        render_pdf("manifest", manifest, paper_size="A4")
    assert {error.field for error in caught.value.errors} == {
        "url",
        "chain_head",
        "number",
        "issued_at",
        "colour",
        "cautions",
        "drop_off.mode",
        "containers[1].gross_kg",
        "containers[1].volume",
        "containers[1].codes[0]",
    }


def test_an_unknown_kind_is_refused(label: Data) -> None:
    with pytest.raises(PaperDataError, match="no paper of kind 'passport': use one of waste-label, manifest"):
        render_pdf("passport", label, paper_size="A4")
    with pytest.raises(PaperDataError, match="must be an object"):
        render_pdf("manifest", [], paper_size="A4")  # type: ignore[arg-type]


def test_a_text_longer_than_a_page_is_refused(manifest: Data) -> None:
    manifest["containers"][0]["hazards"]["statements"] = ["word " * 5000]
    with pytest.raises(DoesNotFitError, match="longer than a page"):
        render_pdf("manifest", manifest, paper_size="A4")


@pytest.mark.parametrize("stock", STOCKS, ids=lambda stock: stock.name)
def test_labels_stay_within_their_place_on_the_sheet(stock: Stock, label: Data) -> None:
    label |= {"stock": stock.name, "start": stock.labels, "contents": label["contents"][:1], "cautions": []}
    page = PdfReader(BytesIO(render_pdf("waste-label", label, paper_size=stock.page))).pages[0]
    left, top = stock.corner(stock.labels)
    spots: list[tuple[float, float]] = []

    def visit(text: str, _user: Any, matrix: list[float], *_rest: Any) -> None:
        if text.strip():
            spots.append((matrix[4] / 72 * 25.4, float(page.mediabox.height) / 72 * 25.4 - matrix[5] / 72 * 25.4))

    page.extract_text(visitor_text=visit)
    assert len(spots) > 15
    for x, y in spots:
        assert left + stock.safe - 0.1 <= x <= left + stock.width - stock.safe
        assert top + stock.safe <= y <= top + stock.height - stock.safe


def test_a_label_that_would_become_too_small_to_read_is_refused(label: Data) -> None:
    label["contents"] = [{"name": f"content {number}", "amount": "1 g", "note": ""} for number in range(60)]
    with pytest.raises(DoesNotFitError, match="does not fit on 4 per A4 at a legible size: choose larger"):
        render_pdf("waste-label", label, paper_size="A4")
    label["contents"] = label["contents"][:30]
    label["stock"] = "1 per A4"
    assert "content 29" in text_of(render_pdf("waste-label", label, paper_size="A4"))


def test_stock_and_position_must_exist_on_the_paper(label: Data) -> None:
    with pytest.raises(PaperDataError, match="'4 per A4' is no label stock on Letter: use one of 4 per Letter"):
        render_pdf("waste-label", label | {"stock": "4 per A4"}, paper_size="Letter")
    with pytest.raises(PaperDataError, match="4 per A4 has positions 1 to 4, not 5"):
        render_pdf("waste-label", label | {"start": 5}, paper_size="A4")


@pytest.mark.parametrize("stock", STOCKS, ids=lambda stock: stock.name)
def test_stock_lies_on_its_page_and_labels_do_not_overlap(stock: Stock) -> None:
    corners = [stock.corner(start) for start in range(1, stock.labels + 1)]
    assert len(set(corners)) == stock.labels
    right, bottom = corners[-1][0] + stock.width, corners[-1][1] + stock.height
    page = {"A4": (210.0, 297.0), "Letter": (215.9, 279.4)}[stock.page]
    assert right <= page[0] + 1e-9
    assert bottom <= page[1] + 1e-9
    if stock.columns > 1:
        assert corners[1][0] - corners[0][0] >= stock.width
