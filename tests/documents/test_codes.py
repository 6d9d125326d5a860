"""Codes, read back from the page as it is printed, by an independent reader."""

from typing import Any

import pypdfium2
import pytest
import zxingcpp

from compliance.documents.render import render_pdf
from compliance.documents.stock import STOCKS, Stock

Data = dict[str, Any]


def codes_on(pdf: bytes, page: int = 0, dots_per_inch: int = 200) -> list[str]:
    """What a camera would see: the page as grey pixels."""
    document = pypdfium2.PdfDocument(pdf)
    image = document[page].render(scale=dots_per_inch / 72).to_pil().convert("L")
    document.close()
    return [code.text for code in zxingcpp.read_barcodes(image)]


@pytest.mark.parametrize("stock", STOCKS, ids=lambda stock: stock.name)
def test_the_code_of_a_label_opens_its_container(stock: Stock, label: Data) -> None:
    label |= {"stock": stock.name, "contents": label["contents"][:1], "cautions": []}
    assert codes_on(render_pdf("waste-label", label, paper_size=stock.page)) == [label["url"]]


def test_a_long_address_still_reads_on_small_stock(label: Data) -> None:
    label |= {"stock": "8 per A4", "contents": label["contents"][:1], "cautions": []}
    label["url"] = "https://workshop-on-the-ground-floor.gramledger.example:8443/c/7K3M"
    assert codes_on(render_pdf("waste-label", label, paper_size="A4")) == [label["url"]]


def test_a_manifest_carries_its_page_on_every_sheet_and_the_chain_head_on_the_last(manifest_of: Any) -> None:
    data = manifest_of(6)
    pdf = render_pdf("manifest", data, paper_size="A4")
    pages = len(pypdfium2.PdfDocument(pdf))
    assert pages >= 2
    found = [set(codes_on(pdf, page)) for page in range(pages)]
    assert all(data["url"] in codes for codes in found)
    assert f"128 {data['chain_head']}" in found[-1]
