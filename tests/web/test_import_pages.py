"""The pages of an import: upload, columns, what was understood, everything that is wrong, and then all of it."""

import re
from datetime import datetime
from pathlib import Path
from typing import Any

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django_scopes import scope
from pytest_django import Settings

from chemicals.jobs.services import run_next
from chemicals.journal.models import Entry
from chemicals.process.models import Import
from chemicals.process.selectors import list_imports_for
from chemicals.workshop.models import Membership
from compliance.clearance import importing
from compliance.web.views import imports
from tests.process.importing.sheets import lines, xlsx
from tests.web.conftest import Line, Visitor, text_of

GOOD = lines(
    "Date,What,Container,Amount,Note",
    "2026-01-05,receipt,Salt tub,5 lb,first",
    "2026-01-06 09:15,receipt,Salt tub,2 kg,second",
)


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


def send(visit: Visitor, data: bytes, name: str = "book.csv") -> Any:
    """Upload a file."""
    return visit.post("imports", file=SimpleUploadedFile(name, data))


def uploaded(visit: Visitor, data: bytes = GOOD, name: str = "book.csv") -> Import:
    """Upload a file and return what was made of it."""
    response = send(visit, data, name)
    found = list_imports_for(visit.member)[0]
    assert response.status_code == 302
    assert response.headers["Location"] == visit.address("import", found.uuid)
    return found


def columns_of(page: str) -> dict[str, str]:
    """Return what the form of a page would send."""
    fields = {}
    for name, options in re.findall(r'<select[^>]* name="([\w-]+)"[^>]*>(.*?)</select>', page, re.DOTALL):
        chosen = re.search(r'<option value="([^"]*)" selected', options)
        fields[name] = chosen[1] if chosen else ""
    seen = re.search(r'name="seen" value="(\w+)"', page)
    return {**fields, "seen": seen[1] if seen else ""}


def entries(member: Membership) -> list[Entry]:
    with scope(workshop=member.workshop):
        return list(Entry.objects.order_by("sequence"))


def test_the_page_takes_a_file_and_lists_those_there_are(visit: Visitor, line: Line) -> None:
    assert "No file yet." in text_of(visit.get("imports"))
    uploaded(visit)
    page = text_of(visit.get("imports"))
    assert "book.csv" in page
    assert "not imported yet" in page
    assert 'accept=".csv,.txt,.xlsx,text/csv"' in page


@pytest.mark.parametrize(
    ("data", "message"),
    [
        (b"", "This file is empty."),
        ("Gefäß\n".encode("cp1252"), "Save the file as CSV in UTF-8, or as XLSX."),
        (b"\x89PNG\r\n\x1a\n\x00", "This is neither a CSV nor an XLSX file."),
    ],
)
def test_what_cannot_be_read_is_said_beside_the_field(visit: Visitor, line: Line, data: bytes, message: str) -> None:
    response = send(visit, data)
    assert response.status_code == 400
    assert message in text_of(response)
    assert list(list_imports_for(visit.member)) == []


def test_a_file_is_needed(visit: Visitor, line: Line) -> None:
    response = visit.post("imports")
    assert response.status_code == 400
    assert "This is needed." in text_of(response)


def test_a_file_of_more_than_fifty_megabytes_is_refused(
    visit: Visitor, line: Line, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("compliance.web.forms.imports.LARGEST_FILE", 10)
    assert "This file is larger than 50 MB. Split it." in text_of(send(visit, GOOD))


def test_the_first_rows_are_shown_as_they_were_understood(visit: Visitor, line: Line) -> None:
    found = uploaded(visit)
    page = text_of(visit.get("import", found.uuid))
    assert "row 2" in page
    assert "5 lb = 2.268 kg" in page
    assert "Container: <strong>Salt tub</strong>" in page
    assert "2026-01-06 09:15" in page
    assert "Import 2 entries" in page
    assert "2 rows were read." in page
    assert entries(visit.member) == []


def test_each_column_is_shown_with_its_first_cells_and_a_guess(visit: Visitor, line: Line) -> None:
    page = text_of(visit.get("import", uploaded(visit).uuid))
    assert "For example: Salt tub · Salt tub" in page
    sent = columns_of(page)
    assert [sent[f"column-{place}"] for place in range(5)] == ["when", "verb", "vessel", "amount", ""]


def test_from_columns_to_entries(visit: Visitor, line: Line) -> None:
    """ "Container" is the label of a vessel in some verbs and means others in others: it is chosen by hand."""
    found = uploaded(visit)
    form = columns_of(text_of(visit.get("import", found.uuid)))
    looked = visit.post("import", found.uuid, **{**form, "column-4": "lot", "step": "look"})
    assert looked.headers["Location"] == visit.address("import", found.uuid)
    page = text_of(visit.get("import", found.uuid))
    form = columns_of(page)
    assert form["column-4"] == "lot"
    done = visit.post("import", found.uuid, **form, step="import")
    assert done.status_code == 302
    assert [entry.kind for entry in entries(visit.member)] == ["receipt", "receipt"]
    page = text_of(visit.get("import", found.uuid))
    assert "entries 1 to 2" in page
    assert "Imported." in page
    assert "To take one back, cancel it." in page
    again = visit.post("import", found.uuid, **form, step="import")
    assert again.status_code == 302
    assert len(entries(visit.member)) == 2


def test_columns_that_were_changed_are_looked_at_before_anything_is_imported(visit: Visitor, line: Line) -> None:
    found = uploaded(visit)
    form = columns_of(text_of(visit.get("import", found.uuid)))
    changed = visit.post("import", found.uuid, **{**form, "column-4": "lot", "step": "import"})
    assert changed.status_code == 302
    assert entries(visit.member) == []
    page = text_of(visit.get("import", found.uuid))
    assert "Lot: <strong>first</strong>" in page


def test_all_mistakes_stand_in_one_table_with_row_and_column(visit: Visitor, line: Line) -> None:
    data = lines(
        "Date,What,Vessel,Amount",
        "2026-01-05,receipt,Salt tub,NaN kg",
        "2026-02-30,receipt,Salt tab,1 kg",
        "2026-01-05,receipt,Salt tub,1 kg",
    )
    found = uploaded(visit, data)
    page = text_of(visit.get("import", found.uuid))
    assert "3 things are wrong in the file: nothing is imported" in page
    assert "NaN kg&quot; is not a finite number" in page
    assert "There is no vessel &quot;Salt tab&quot;. Did you mean &quot;Salt tub&quot;?" in page
    assert 'value="import"' not in page
    form = columns_of(page)
    refused = visit.post("import", found.uuid, **form, step="import")
    assert refused.status_code == 400
    assert "3 things are wrong in the file" in text_of(refused)
    assert entries(visit.member) == []


def test_more_mistakes_than_a_page_holds_are_a_file(
    visit: Visitor, line: Line, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(imports, "SHOWN_ERRORS", 2)
    found = uploaded(visit, lines("Date,What,Vessel,Amount", *["2026-01-05,receipt,Nowhere,1 kg"] * 5))
    page = text_of(visit.get("import", found.uuid))
    assert "5 things are wrong" in page
    assert page.count("There is no vessel") == 2
    assert "no vessel &quot;Nowhere&quot;" in page
    assert "3 more stand in the list that you can download." in page
    response = visit.get("import", found.uuid, query="?as=csv")
    rows = b"".join(response.streaming_content).decode("utf-8-sig").splitlines()
    assert rows[0] == "row,column,message"
    assert [row.partition(",")[0] for row in rows[1:]] == ["2", "3", "4", "5", "6"]


def test_a_file_without_rows_says_so(visit: Visitor, line: Line) -> None:
    page = text_of(visit.get("import", uploaded(visit, b"Date,What\n").uuid))
    assert "There is no row below the headings." in page


def test_two_hundred_columns_can_be_chosen_from(visit: Visitor, line: Line) -> None:
    found = uploaded(visit, lines(",".join(f"C{n}" for n in range(200)), ",".join("x" * 200)))
    page = visit.get("import", found.uuid).content.decode()
    assert len(columns_of(page)) == 3 + 200 + 1
    assert "No column says when it happened." in page


def test_a_spreadsheet_says_which_of_its_sheets_are_not_read(visit: Visitor, line: Line) -> None:
    rows = [["Date", "What", "Vessel", "Amount [kg]"], ["2026-01-05", "receipt", "Salt tub", "=1+1"]]
    page = text_of(visit.get("import", uploaded(visit, xlsx(rows, others=("Prices",)), "book.xlsx").uuid))
    assert "Only the first sheet is read, not: Prices." in page
    assert "A formula stands here." in page
    assert "a formula, or an error" in page


def test_what_stands_in_a_file_is_text_and_never_markup(visit: Visitor, line: Line) -> None:
    data = lines("Date,<script>alert(1)</script>", "<b>x</b>,<img src=x>")
    page = visit.get("import", uploaded(visit, data, "<i>.csv").uuid).content.decode()
    assert "<script>alert" not in page
    assert "<img src=x>" not in page
    assert "<i>.csv" not in page
    assert "&lt;img src=x&gt;" in page


def test_one_verb_for_every_row_offers_what_that_verb_asks(visit: Visitor, line: Line) -> None:
    found = uploaded(visit, lines("Date,Container,Amount", "2026-01-05,Salt tub,1 kg"))
    form = columns_of(text_of(visit.get("import", found.uuid)))
    visit.post("import", found.uuid, **{**form, "verb": "receipt", "column-1": "vessel", "step": "look"})
    page = text_of(visit.get("import", found.uuid))
    assert "Import one entry" in page
    assert '<option value="lot"' in page
    assert '<option value="route"' not in page


def test_a_column_cannot_say_what_is_not_in_the_list(visit: Visitor, line: Line) -> None:
    found = uploaded(visit)
    form = columns_of(text_of(visit.get("import", found.uuid)))
    response = visit.post("import", found.uuid, **{**form, "column-2": "colour", "step": "look"})
    assert response.status_code == 400
    assert "Choose one from the list." in text_of(response)


def test_the_numbers_and_dates_of_other_countries_are_chosen(visit: Visitor, line: Line) -> None:
    found = uploaded(visit, lines("Tag;Vessel;Amount [kg]", "5.1.2026;Salt tub;1,5"))
    form = columns_of(text_of(visit.get("import", found.uuid)))
    said = {"verb": "receipt", "dates": "day first", "decimal": "comma", "column-0": "when", "step": "look"}
    visit.post("import", found.uuid, **{**form, **said})
    page = text_of(visit.get("import", found.uuid))
    assert "2026-01-05" in page
    assert "1.5 kg" in page


def test_a_large_file_is_left_to_a_job(
    visit: Visitor, line: Line, monkeypatch: pytest.MonkeyPatch, now: datetime
) -> None:
    for module in (importing, imports):
        monkeypatch.setattr(module, "AT_ONCE", 1)
    bad = lines("Date,What,Vessel,Amount", "2026-01-05,receipt,Salt tub,5 lb", "2026-01-05,receipt,Nowhere,5 lb")
    found = uploaded(visit, bad)
    page = text_of(visit.get("import", found.uuid))
    assert "Import all rows" in page
    assert "The first 1 rows were read; a job checks all of them before anything is recorded." in page
    visit.post("import", found.uuid, **columns_of(page), step="import")
    assert "A job checks every row and records all of them, or none." in text_of(visit.get("import", found.uuid))
    run_next(now=now.replace(year=2027), worker="w")
    page = text_of(visit.get("import", found.uuid))
    assert "One thing is wrong in the file" in page
    assert "There is no vessel &quot;Nowhere&quot;" in page
    assert entries(visit.member) == []


def test_an_observer_reads_and_imports_nothing(visit: Visitor, line: Line, observer: Membership) -> None:
    found = uploaded(visit)
    reader = Visitor(observer)
    assert 'type="file"' not in reader.get("imports").content.decode()
    page = text_of(reader.get("import", found.uuid))
    assert "5 lb = 2.268 kg" in page
    assert "Import 2 entries" not in page
    assert reader.post("import", found.uuid, step="import").status_code == 403
    assert send(reader, GOOD).status_code == 403


def test_a_stranger_finds_no_import(visit: Visitor, line: Line, stranger: Membership) -> None:
    found = uploaded(visit)
    other = Visitor(stranger)
    assert other.get("import", found.uuid).status_code == 404
    other.member = visit.member
    assert other.get("import", found.uuid).status_code == 404


def test_the_list_is_a_file_too(visit: Visitor, line: Line) -> None:
    uploaded(visit)
    response = visit.get("imports", query="?as=csv")
    assert b"book.csv" in b"".join(response.streaming_content)
