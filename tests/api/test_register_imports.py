"""Imports of the register by the API: what a file makes, every error by row and column, all of it or nothing."""

from pathlib import Path
from typing import Any

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from pytest_django import Settings

from tests.api.conftest import Caller, Shop, errors_of
from tests.process.importing.sheets import lines

GOOD = lines(
    "Product,Physical form,Composition,Hazard classes,Container,Place,Amount",
    "Green salt,solid,NiSO4.6H2O 98 %,Carc. 1A,Green tub,Cellar,2 kg",
)


@pytest.fixture(autouse=True)
def attachments_folder(tmp_path: Path, settings: Settings) -> None:
    settings.ATTACHMENTS = tmp_path


def uploaded(api: Caller, data: bytes = GOOD) -> dict[str, Any]:
    """Upload a file of the register; return it with its columns."""
    said = {"file": SimpleUploadedFile("shelf.csv", data), "subject": "register"}
    response = api.client.post(api.path("imports/"), said, format="multipart")
    assert response.status_code == 201, response.json()
    found: dict[str, Any] = api.get(f"imports/{response.json()['uuid']}/").json()
    return found


def test_a_file_of_the_register_is_shown_with_its_columns(api: Caller, shop: Shop) -> None:
    found = uploaded(api)
    assert (found["subject"], found["made"]) == ("register", {})
    assert found["mapping"]["columns"]["Hazard classes"] == "hazard_classes"
    assert {"product", "part 1 name", "received_on"} <= set(found["targets"])


def test_a_preview_says_what_the_file_makes_and_writes_nothing(api: Caller, shop: Shop) -> None:
    found = uploaded(api)
    chosen = {"columns": found["mapping"]["columns"], "add_places": True}
    before = len(api.get("products/").json()["results"])
    said = api.post(f"imports/{found['uuid']}/preview", chosen).json()
    assert said["makes"] == {"products": 1, "revisions": 0, "containers": 1, "substances": 1, "places": 1}
    assert (said["rows"], said["entries"], said["wrong"], said["first"]) == (1, 1, 0, [])
    assert (said["substances"], said["places"]) == (["Nickel sulfate hexahydrate"], ["Cellar"])
    (row,) = said["rows_of_register"]
    assert (row["product"], row["state"], row["composition"]) == (
        "Green salt", "new", ["Nickel sulfate hexahydrate 98 %"],
    )  # fmt: skip
    (held,) = row["containers"]
    assert (held["name"], held["place"], held["amount"]["understood"]) == ("Green tub", "Cellar", "2 kg")
    assert {remark["row"] for remark in said["remarks"]} == {2}
    assert len(api.get("products/").json()["results"]) == before


def test_all_of_it_is_recorded_once(api: Caller, shop: Shop) -> None:
    found = uploaded(api)
    chosen = {"columns": found["mapping"]["columns"], "add_places": True}
    first = api.post(f"imports/{found['uuid']}/record", chosen)
    assert (first.status_code, first.json()["made"]["products"]) == (201, 1)
    again = api.post(f"imports/{found['uuid']}/record", chosen)
    assert (again.status_code, again.json()["imported_at"]) == (200, first.json()["imported_at"])


def test_everything_that_is_wrong_is_said_by_row_and_column(api: Caller, shop: Shop) -> None:
    found = uploaded(api, GOOD.replace(b"solid", b"plasma"))
    response = api.post(f"imports/{found['uuid']}/record", {"columns": found["mapping"]["columns"]})
    assert set(errors_of(response, 400)) == {"rows.2.Physical form", "rows.2.Place"}


def test_another_kind_of_file_is_refused(api: Caller, shop: Shop) -> None:
    said = {"file": SimpleUploadedFile("shelf.csv", GOOD), "subject": "recipes"}
    response = api.client.post(api.path("imports/"), said, format="multipart")
    assert "subject" in errors_of(response, 400)
