"""At the desk: drum off, close, label, pack with a manifest, hand over."""

import re
from collections.abc import Callable
from io import BytesIO
from urllib.parse import urljoin

from pypdf import PdfReader

from chemicals.journal.selectors import get_head
from chemicals.workshop.models import Workshop
from tests.journeys.conftest import DESK, Visitor
from tests.journeys.test_bench import People, vessel_of


def pdf_text(visitor: Visitor) -> str:
    """Fetch the PDF that the page links to, as the person would, and return its text."""
    link = visitor.page.get_by_role("link", name="PDF").first.get_attribute("href")
    assert link is not None
    response = visitor.page.request.get(urljoin(visitor.page.url, link))
    assert response.headers["content-type"] == "application/pdf"
    return "\n".join(page.extract_text() for page in PdfReader(BytesIO(response.body())).pages)


def test_from_the_rinse_to_the_collection_point(demo: People, visit: Callable[..., Visitor]) -> None:
    visitor = visit(DESK)
    page = visitor.page
    visitor.sign_in(*demo["owner"])

    page.get_by_role("navigation").get_by_role("link", name="Waste").click()
    page.get_by_role("link", name="Drum off").click()
    page.get_by_label(re.compile("^From")).select_option(str(vessel_of("Copper second rinse").uuid))
    page.get_by_label(re.compile("^Into")).select_option(str(vessel_of("Canister 2").uuid))
    page.get_by_label("Volume", exact=True).fill("3 L")
    visitor.check_page()
    page.get_by_role("button", name="See what follows").click()
    page.get_by_role("button", name="Save").click()
    page.get_by_role("heading", level=1, name="Drum off").wait_for()

    page.get_by_role("navigation").get_by_role("link", name="Waste").click()
    page.get_by_role("link", name="Canister 2").first.click()
    page.get_by_label("Gross weight").fill("9.61 kg")
    page.get_by_role("button", name="Close").click()
    page.get_by_role("button", name="Issue a label").click()
    page.get_by_role("heading", level=1).wait_for()
    visitor.check_page()
    assert vessel_of("Canister 2").code in pdf_text(visitor)

    workshop = Workshop.objects.get()
    visitor.go(f"/w/{workshop.uuid}/drop-offs/new/")
    page.get_by_label("Receiver").select_option(index=1)
    page.get_by_label("Canister 2").check()
    visitor.check_page()
    page.get_by_role("button", name="Draft").click()
    head = get_head(workshop)
    page.get_by_role("button", name="Pack").click()
    page.get_by_role("link", name="Manifest").first.wait_for()
    visitor.check_page()
    page.get_by_role("link", name="Manifest").first.click()
    page.get_by_role("heading", level=1).wait_for()
    visitor.check_page()
    paper = pdf_text(visitor)
    assert vessel_of("Canister 2").code in paper
    assert "9.610" in paper
    assert head[1][:8] in paper.replace(" ", "").lower()

    page.go_back()
    page.get_by_role("button", name="It was handed over").click()
    page.get_by_text("handed over").first.wait_for()
    visitor.check_page()
