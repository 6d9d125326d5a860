"""Imports of past records by the API: keep, preview, record; every error by row and column."""

from datetime import datetime
from pathlib import Path
from typing import Any
from uuid import uuid4

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django_scopes import scope
from pytest_django import Settings

from chemicals.jobs.services import run_next
from chemicals.journal.models import Entry
from chemicals.workshop.models import Membership
from compliance.clearance import importing
from tests.api.conftest import Caller, Shop, errors_of
from tests.api.test_access import Call
from tests.process.importing.sheets import lines, xlsx

GOOD = lines(
    "Date,What,Vessel,Amount [g],Remark",
    '2026-01-05,receipt,"Blue salt, jar 1",500,first',
    '2026-01-06 09:15,receipt,"Blue salt, jar 1",1.5 kg,second',
)
COLUMNS = {"Date": "when", "What": "verb", "Vessel": "vessel", "Amount [g]": "amount"}


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


def send(api: Caller, data: bytes = GOOD, name: str = "book.csv") -> Any:
    """Upload a file."""
    return api.client.post(api.path("imports/"), {"file": SimpleUploadedFile(name, data)}, format="multipart")


def uploaded(api: Caller, data: bytes = GOOD, name: str = "book.csv") -> str:
    """Return the identifier of an uploaded file."""
    response = send(api, data, name)
    assert response.status_code == 201, response.json()
    found: str = response.json()["uuid"]
    return found


def count(shop: Shop) -> int:
    with scope(workshop=shop.workshop):
        return Entry.objects.count()


def test_a_file_is_kept_and_listed(api: Caller, shop: Shop) -> None:
    uuid = uploaded(api)
    assert uploaded(api, name="the same.csv") == uuid
    (row,) = api.get("imports/").json()["results"]
    assert (row["uuid"], row["name"], row["imported_at"], row["waits"]) == (uuid, "book.csv", None, False)
    assert api.get(f"attachments/{row['sha256']}").content == GOOD


def test_a_file_is_shown_with_its_columns_and_what_they_seem_to_mean(api: Caller, shop: Shop) -> None:
    said = api.get(f"imports/{uploaded(api)}/").json()
    assert said["headings"] == ["Date", "What", "Vessel", "Amount [g]", "Remark"]
    assert said["mapping"] == {"verb": "", "dates": "iso", "decimal": "point", "columns": COLUMNS}
    assert {"when", "key", "vessel", "held 1 metal"} <= set(said["targets"])
    assert (said["unread"], said["errors"]) == ([], [])


def test_a_preview_says_how_rows_are_understood_and_writes_nothing(api: Caller, shop: Shop) -> None:
    said = api.post(f"imports/{uploaded(api)}/preview", {"columns": COLUMNS}).json()
    assert (said["rows"], said["entries"], said["wrong"], said["all_read"]) == (2, 2, 0, True)
    first, second = said["first"]
    assert (first["row"], first["verb"], first["precision"]) == (2, "receipt", "day")
    assert first["echo"] == [{"field": "amount", "typed": "500", "understood": "500 g"}]
    assert second["occurred_at"] == "2026-01-06T08:15:00Z"
    assert second["payload"]["observed"]["mass"]["base"] == 1_500_000_000
    assert count(shop) == 0


def test_all_rows_are_recorded_once(api: Caller, shop: Shop) -> None:
    uuid = uploaded(api)
    first = api.post(f"imports/{uuid}/record", {"columns": COLUMNS})
    assert first.status_code == 201
    assert (first.json()["first"], first.json()["last"]) == (1, 2)
    again = api.post(f"imports/{uuid}/record", {"columns": COLUMNS})
    assert again.status_code == 200
    assert again.json() == first.json()
    assert count(shop) == 2
    entry = api.get("entries/").json()["results"][0]
    assert entry["verdict"] == "not asked"


def test_what_was_shown_can_be_sent_back_as_it_is(api: Caller, shop: Shop) -> None:
    uuid = uploaded(api)
    assert api.post(f"imports/{uuid}/record", api.get(f"imports/{uuid}/").json()["mapping"]).status_code == 201


def test_every_error_has_its_row_and_column(api: Caller, shop: Shop) -> None:
    data = lines("Date,What,Vessel,Amount [g]", "2026-13-01,receipt,Nowhere,NaN", ",,,")
    uuid = uploaded(api, data)
    errors = api.post(f"imports/{uuid}/preview", {"columns": COLUMNS}).json()["errors"]
    assert [(row["row"], row["column"]) for row in errors] == [(2, "Date"), (2, "Vessel"), (2, "Amount [g]")]
    refused = errors_of(api.post(f"imports/{uuid}/record", {"columns": COLUMNS}), 400)
    assert set(refused) == {"rows.2.Date", "rows.2.Vessel", "rows.2.Amount [g]"}
    assert count(shop) == 0


@pytest.mark.parametrize(
    ("said", "field"),
    [
        ({"columns": {"Date": "when"}}, "mapping"),
        ({"columns": {**COLUMNS, "Price": "lot"}}, "columns.Price"),
        ({"columns": {**COLUMNS, "Remark": "colour"}}, "columns.Remark"),
        ({}, "columns"),
        ({"columns": []}, "columns"),
        ({"columns": {"Date": 7}}, "columns.Date"),
        ({"columns": dict.fromkeys(map(str, range(201)), "when")}, "columns"),
        ({"columns": COLUMNS, "verb": "melt"}, "verb"),
        ({"columns": COLUMNS, "dates": "y/m/d"}, "dates"),
        ({"columns": COLUMNS, "decimal": "dot"}, "decimal"),
        ({"columns": COLUMNS, "colour": "red"}, "colour"),
    ],
)
def test_a_wrong_column_map_is_refused_by_name(api: Caller, shop: Shop, said: Any, field: str) -> None:
    assert field in errors_of(api.post(f"imports/{uploaded(api)}/record", said), 400)


@pytest.mark.parametrize("data", [b"", b"\x00\x01", "Gefäß".encode("cp1252"), xlsx([[]])])
def test_what_is_no_table_is_refused(api: Caller, shop: Shop, data: bytes) -> None:
    assert "file" in errors_of(send(api, data), 400)


def test_a_file_is_needed(api: Caller, shop: Shop) -> None:
    response = api.client.post(api.path("imports/"), {}, format="multipart")
    assert "file" in errors_of(response, 400)


def test_a_large_file_is_left_to_a_job(api: Caller, shop: Shop, now: datetime, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(importing, "AT_ONCE", 1)
    uuid = uploaded(api)
    left = api.post(f"imports/{uuid}/record", {"columns": COLUMNS})
    assert (left.status_code, left.json()["waits"], count(shop)) == (202, True, 0)
    run_next(now=now.replace(year=2027), worker="w")
    said = api.get(f"imports/{uuid}/").json()
    assert (said["waits"], said["first"], said["last"]) == (False, 1, 2)


def test_an_observer_and_a_stranger_import_nothing(
    api: Caller, call: Call, shop: Shop, observer: Membership, stranger: Membership
) -> None:
    uuid = uploaded(api)
    reader = call(observer)
    assert reader.get(f"imports/{uuid}/").status_code == 200
    assert send(reader).status_code == 403
    assert reader.post(f"imports/{uuid}/record", {"columns": COLUMNS}).status_code == 403
    other = call(stranger)
    assert other.get(f"imports/{uuid}/").status_code == 404
    assert other.post(f"imports/{uuid}/record", {"columns": COLUMNS}).status_code == 404
    assert api.post(f"imports/{uuid4()}/record", {"columns": COLUMNS}).status_code == 404
    assert count(shop) == 0
