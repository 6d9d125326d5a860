"""Labels of vessels, measured on the page: where they lie, how large the signs are, what their codes say, what is left
out on small stock.
"""

from io import BytesIO
from typing import Any

import pypdfium2
import pytest
import zxingcpp
from PIL import ImageChops
from pypdf import PdfReader

from compliance.documents.errors import DoesNotFitError, PaperDataError
from compliance.documents.render import render_html, render_pdf
from compliance.documents.shapes import LabelsData
from compliance.documents.stock import ALL_STOCKS, PAGES, SMALL_STOCKS, Stock, find_stock
from compliance.documents.vessel_label import lay_out
from tests.documents.test_pdf import squeezed, text_of
from tests.documents.test_twin import Page
from tests.documents.vessels import NOTHING_ENTERED, Data, avoid, bottle, decanted, labels_of, tank

DOTS = 300
MM = DOTS / 25.4
"""Pixels per millimetre."""
SMALL = bottle(must_not_meet=avoid(cyanide="hydrogen cyanide"), contents="H₂SO₄")
"""Fits on every stock."""


def pdf_of(data: Data) -> bytes:
    return render_pdf("labels", data, paper_size=stock_of(data).page)


def stock_of(data: Data) -> Stock:
    return next(stock for stock in ALL_STOCKS if stock.name == data["stock"])


def image_of(pdf: bytes, page: int = 0) -> Any:
    document = pypdfium2.PdfDocument(pdf)
    image = document[page].render(scale=DOTS / 72).to_pil().convert("RGB")
    document.close()
    return image


def printed(data: Data) -> list[str]:
    """What of each label is printed."""
    found: LabelsData = data  # type: ignore[assignment]
    return [each.printed for each in lay_out(found, stock_of(data))]


@pytest.mark.parametrize("stock", ALL_STOCKS, ids=lambda stock: stock.name)
def test_each_label_lies_within_its_place_and_its_code_opens_its_vessel(stock: Stock) -> None:
    last = SMALL | {"code": "ZZ99", "url": "http://bench.local:8000/c/ZZ99"}
    pdf = pdf_of(labels_of(SMALL, last, stock=stock.name, start=max(1, stock.labels - 1)))
    pages = PdfReader(BytesIO(pdf)).pages
    assert len(pages) == (1 if stock.labels > 1 else 2)
    for url, position in (("QX29", max(1, stock.labels - 1)), ("ZZ99", stock.labels)):
        page = len(pages) - 1 if url == "ZZ99" else 0
        left, top = stock.corner(position)
        codes = {code.text: code.position for code in zxingcpp.read_barcodes(image_of(pdf, page).convert("L"))}
        corners = codes[f"http://bench.local:8000/c/{url}"]
        for corner in (corners.top_left, corners.bottom_right):
            assert left + stock.safe <= corner.x / MM <= left + stock.width - stock.safe
            assert top + stock.safe <= corner.y / MM <= top + stock.height - stock.safe


def test_a_sheet_of_labels_asks_not_to_be_scaled_when_it_is_printed() -> None:
    """ISO 32000-1, table 150: PrintScaling None; else most viewers shrink a page to the printer's margins."""
    reader = PdfReader(BytesIO(pdf_of(labels_of(SMALL))))
    assert reader.viewer_preferences is not None
    assert str(dict(reader.viewer_preferences)["/PrintScaling"]) == "/None"


@pytest.mark.parametrize("stock", ALL_STOCKS, ids=lambda stock: stock.name)
def test_all_ink_stays_within_the_label(stock: Stock) -> None:
    """Every dark or coloured pixel of a sheet with one label, by its place in millimetres."""
    image = image_of(pdf_of(labels_of(SMALL, stock=stock.name, start=stock.labels))).convert("L")
    box = image.point(lambda grey: 255 if grey < 200 else 0).getbbox()
    assert box is not None
    left, top = stock.corner(stock.labels)
    assert left + stock.safe - 0.2 <= box[0] / MM
    assert top + stock.safe - 0.2 <= box[1] / MM
    assert box[2] / MM <= left + stock.width - stock.safe + 0.2
    assert box[3] / MM <= top + stock.height - stock.safe + 0.2


@pytest.mark.parametrize("stock", ALL_STOCKS, ids=lambda stock: stock.name)
def test_a_pictogram_is_never_smaller_than_a_square_centimetre(stock: Stock) -> None:
    """Regulation (EC) 1272/2008, annex I, 1.2.1: 1 cm2 at least, a diamond 14.1 mm across. Measured in red."""
    image = image_of(pdf_of(labels_of(SMALL, stock=stock.name)))
    red, green, _blue = image.split()
    reds = red.point(lambda value: 255 if value > 180 else 0)
    not_green = green.point(lambda value: 255 if value < 90 else 0)
    box = ImageChops.darker(reds, not_green).getbbox()
    assert box is not None
    across = (box[2] - box[0]) / MM
    assert across == pytest.approx((box[3] - box[1]) / MM, abs=0.3)
    assert across >= 10 * 2**0.5 - 0.1


def test_the_full_set_is_printed_wherever_it_fits() -> None:
    labels = [tank(), bottle(), decanted()]
    for stock in ("4 per A4", "2 per A4", "1 per A4", "8 per A4", "4 per Letter", "6 per Letter"):
        assert printed(labels_of(*labels, stock=stock)) == ["all"] * 3, stock


def test_what_gives_way_gives_way_in_one_order() -> None:
    """On ever smaller stock the sets follow each other; name, signal word, contents and what must never meet stay."""
    sets = [
        printed(labels_of(bottle(), stock=stock))[0] for stock in ("8 per A4", "12 per A4", "24 per A4", "40 per A4")
    ]
    order = ["all", "short", "codes", "least"]
    assert [order.index(each) for each in sets] == sorted(order.index(each) for each in sets)
    assert sets[0] == "all"
    assert sets[-1] == "least"
    for stock in ("12 per A4", "24 per A4", "40 per A4"):
        text = squeezed(text_of(pdf_of(labels_of(bottle(), stock=stock))))
        for never_left_out in ("Schwefelsäure96%", "H₂SO₄95-97%", "Danger", "QX29", "cyanide", "hypochlorite", "12.1"):
            assert never_left_out in text, (stock, never_left_out)


def test_codes_stay_where_texts_give_way_and_the_label_says_that_there_is_more() -> None:
    long = labels_of(tank(), stock="12 per A4")
    assert printed(long) == ["codes"]
    text = squeezed(text_of(pdf_of(long)))
    assert squeezed("H290, H302, H314, H410, P280") in text
    assert "Harmful" not in text
    assert squeezed("more behind the code") in text
    assert "Harmful if swallowed" in Page(render_html("labels", long)).said
    assert "the statements in words stand behind the code" in Page(render_html("labels", long)).said


def test_the_short_set_keeps_personal_protection() -> None:
    label = bottle(precautions=["P280 Wear gloves.", *(f"P30{n} Do the {n}th thing at length." for n in range(9))])
    data = labels_of(label, stock="8 per A4")
    if printed(data) == ["all"]:
        data = labels_of(label, stock="12 per A4")
    assert printed(data) == ["short"]
    text = squeezed(text_of(pdf_of(data)))
    assert squeezed("P280 Wear gloves.") in text
    assert "P301" not in text


def test_labels_that_do_not_fit_are_refused_each_by_its_number() -> None:
    signs = {**tank()["hazards"], "pictograms": ["GHS01", "GHS02", "GHS05", "GHS06", "GHS08", "GHS09"]}
    data = labels_of(SMALL, tank(hazards=signs), SMALL, tank(hazards=signs, name="Bath 2"), stock="40 per A4")
    with pytest.raises(DoesNotFitError) as caught:
        pdf_of(data)
    assert [error.field for error in caught.value.errors] == ["labels[1]", "labels[3]"]
    assert "Bath 2 does not fit on 40 per A4 at a legible size: choose larger label stock" in str(caught.value)


def test_a_sheet_goes_on_to_the_next_one() -> None:
    pdf = pdf_of(labels_of(*[SMALL] * 27, stock="24 per A4", start=23))
    texts = [page.extract_text() for page in PdfReader(BytesIO(pdf)).pages]
    assert [text.count("Danger") for text in texts] == [2, 24, 1]
    assert "12.27" in texts[2]


def test_a_used_sheet_is_printed_from_its_first_free_label_on() -> None:
    with pytest.raises(PaperDataError, match="4 per A4 has positions 1 to 4, not 5"):
        pdf_of(labels_of(SMALL, start=5))
    with pytest.raises(PaperDataError, match="is no label stock on Letter"):
        render_pdf("labels", labels_of(SMALL), paper_size="Letter")


def test_a_word_of_the_name_is_never_cut_while_it_fits_uncut() -> None:
    for stock in ("4 per A4", "24 per A4"):
        text = text_of(pdf_of(labels_of(SMALL | {"name": "Kupfersulfatlösung"}, stock=stock)))
        assert "Kupfersulfatlösung" in text


def test_hazards_that_nobody_entered_are_said_to_be_missing_on_every_set() -> None:
    bare = bottle(hazards=NOTHING_ENTERED, precautions=[], must_not_meet=[])
    for stock in ("4 per A4", "12 per A4"):
        text = squeezed(text_of(pdf_of(labels_of(bare, stock=stock))))
        assert squeezed("That does not mean there are none: ask before handling.") in text
        assert squeezed("nothing named: ask before adding or mixing anything") in text
    partly = labels_of(tank(), stock="12 per A4")
    assert squeezed("Hazards not entered for: brightener α-17.") in squeezed(text_of(pdf_of(partly)))


def test_a_long_address_still_reads_from_the_smallest_label() -> None:
    url = "https://workshop-on-the-ground-floor.gramledger.example:8443/c/QX29"
    pdf = pdf_of(labels_of(SMALL | {"url": url}, stock="24 per A4"))
    assert [code.text for code in zxingcpp.read_barcodes(image_of(pdf).convert("L"))] == [url]


@pytest.mark.parametrize("stock", SMALL_STOCKS, ids=lambda stock: stock.name)
def test_small_stock_lies_on_its_page_and_is_not_offered_for_waste(stock: Stock) -> None:
    corners = [stock.corner(start) for start in range(1, stock.labels + 1)]
    assert len(set(corners)) == stock.labels
    assert corners[-1][0] + stock.width <= PAGES[stock.page][0] + 1e-9
    assert corners[-1][1] + stock.height <= PAGES[stock.page][1] + 1e-9
    assert corners[1][0] - corners[0][0] >= stock.width
    with pytest.raises(PaperDataError, match="is no label stock"):
        find_stock(stock.name, 1, stock.page)
