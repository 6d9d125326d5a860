"""The pages of an import of the register: what the file makes, what is wrong, what is worth a look, and all of it."""

import re
from pathlib import Path

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from pytest_django import Settings

from chemicals.jobs.services import run_next
from chemicals.ledger.selectors import list_vessels_for
from chemicals.process.models import Import
from chemicals.process.selectors import list_imports_for
from chemicals.register.selectors import list_current_revisions_for, list_products_for
from chemicals.workshop.models import Membership
from compliance.clearance import importing
from tests.process.importing.sheets import lines
from tests.web.conftest import Line, Visitor, text_of
from tests.web.test_import_pages import columns_of

GOOD = lines(
    "Product,Supplier,Physical form,Composition,Hazard classes,Signal word,Container,Place,Amount,Received on",
    "Green salt,Invented Supply,solid,NiSO4.6H2O 98 %; Oddity 1 %,Carc. 1A,Warning,Green tub,Bench,2 kg,2026-01-05",
    "Blue salt,Invented Supply,,,,,Second tub,,500 g,",
)


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


def uploaded(visit: Visitor, data: bytes = GOOD, name: str = "shelf.csv") -> Import:
    """Upload a file of the register and return what was made of it."""
    response = visit.post("imports", subject="register", file=SimpleUploadedFile(name, data))
    assert response.status_code == 302
    return list_imports_for(visit.member)[0]


def test_the_register_leads_to_the_page_with_its_kind_chosen(visit: Visitor, line: Line) -> None:
    link = f"{visit.address('imports')}?subject=register"
    assert link in visit.get("register").content.decode()
    page = visit.get("imports", query="?subject=register").content.decode()
    assert '<option value="register" selected>' in page
    assert 'value="nonsense"' not in visit.get("imports", query="?subject=nonsense").content.decode()


def test_another_kind_is_refused(visit: Visitor, line: Line) -> None:
    response = visit.post("imports", subject="recipes", file=SimpleUploadedFile("a.csv", GOOD))
    assert response.status_code == 400
    assert "Choose one from the list." in text_of(response)


def test_what_the_file_makes_is_told_before_anything_is_written(visit: Visitor, line: Line) -> None:
    page = text_of(visit.get("import", uploaded(visit).uuid))
    assert "1 new product, 0 revisions, 2 containers, 2 new substances, 0 new places" in page
    assert "New substances: Nickel sulfate hexahydrate, Oddity" in page
    assert "a new product" in page
    assert "a product that is here already" in page
    assert "Received, in each: <strong>2 kg, 2026-01-05</strong>" in page
    assert "There now, in each: <strong>500 g</strong>" in page
    assert "&quot;Oddity&quot; is a new substance." in page
    assert "row 2: Carc. 1A calls for the signal word Danger; entered is Warning." in page
    assert "Import all of it" in page
    assert list_products_for(visit.member).count() == 2


def test_what_was_seen_is_imported(visit: Visitor, line: Line) -> None:
    found = uploaded(visit)
    fields = columns_of(visit.get("import", found.uuid).content.decode())
    assert visit.post("import", found.uuid, step="import", **fields).status_code == 302
    page = text_of(visit.get("import", found.uuid))
    assert "1 new product, 0 revisions, 2 containers" in page
    assert visit.address("register") in page
    assert {"Green tub", "Second tub"} <= {row.name for row in list_vessels_for(visit.member)}
    assert "the register: products and containers · imported" in text_of(visit.get("imports"))


def test_what_rows_may_do_is_kept_for_the_next_file(visit: Visitor, line: Line) -> None:
    data = lines("Product,Supplier,Gloves,Container,Place", "Blue salt,Invented Supply,nitrile,Tub 9,Cellar")
    found = uploaded(visit, data)
    page = visit.get("import", found.uuid)
    assert "2 things are wrong in the file" in text_of(page)
    fields = columns_of(page.content.decode())
    visit.post("import", found.uuid, step="look", revise="on", add_places="on", **fields)
    page = visit.get("import", found.uuid)
    assert "0 new products, 1 revision, 1 container, 0 new substances, 1 new place" in text_of(page)
    assert "New places: Cellar" in text_of(page)
    fields = columns_of(page.content.decode())
    visit.post("import", found.uuid, step="import", revise="on", add_places="on", **fields)
    revision = list_current_revisions_for(visit.member).get(product__name="Blue salt")
    assert (revision.number, revision.gloves, revision.signal_word) == (2, "nitrile", "Danger")
    later = visit.get("import", uploaded(visit, data.replace(b"Tub 9", b"Tub 10"), "later.csv").uuid).content.decode()
    assert re.search(r'name="revise"[^>]*checked', later)


def test_what_is_wrong_is_told_by_row_and_column_and_as_a_file(visit: Visitor, line: Line) -> None:
    found = uploaded(visit, GOOD.replace(b"NiSO4.6H2O 98 %", b"NiSO4.6H2O").replace(b"500 g", b"500"))
    page = text_of(visit.get("import", found.uuid))
    assert "2 things are wrong in the file: nothing is imported" in page
    assert "Import all of it" not in page
    assert "What the file makes" not in page
    rows = b"".join(visit.get("import", found.uuid, query="?as=csv").streaming_content).decode().splitlines()
    assert [row.split(",")[:2] for row in rows[1:]] == [["2", "Composition"], ["3", "Amount"]]


def test_a_large_file_is_left_to_a_job(visit: Visitor, line: Line, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(importing, "AT_ONCE", 1)
    found = uploaded(visit)
    page = visit.get("import", found.uuid)
    assert "a job checks all of them" in text_of(page)
    visit.post("import", found.uuid, step="import", **columns_of(page.content.decode()))
    assert "A job checks every row" in text_of(visit.get("import", found.uuid))
    run_next(now=list_imports_for(visit.member)[0].changed_at, worker="w")
    assert "1 new product, 0 revisions, 2 containers" in text_of(visit.get("import", found.uuid))


def test_the_example_holds_every_column_and_can_be_imported(visit: Visitor, line: Line) -> None:
    data: bytes = visit.get("import-example").content
    found = uploaded(visit, data, "example.csv")
    page = visit.get("import", found.uuid)
    fields = columns_of(page.content.decode())
    visit.post("import", found.uuid, step="look", add_places="on", **fields)
    assert "4 new products, 0 revisions, 6 containers" in text_of(visit.get("import", found.uuid))


def test_an_observer_sees_what_was_imported_and_imports_nothing(
    visit: Visitor, line: Line, observer: Membership
) -> None:
    found, reader = uploaded(visit), Visitor(observer)
    assert "Import all of it" not in text_of(reader.get("import", found.uuid))
    assert reader.post("import", found.uuid, step="import").status_code == 403
    assert f"{reader.address('imports')}?subject=register" not in reader.get("register").content.decode()
