"""From the drum to the drop-off: streams, containers, labels, receivers, manifest; papers and files."""

import hashlib
from typing import Any
from uuid import uuid4

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from chemicals.journal import files
from tests.api.conftest import Caller, Shop, errors_of

PDF = b"%PDF-1.4\n1 0 obj <<>> endobj\n"


def upload(api: Caller, data: bytes, name: str = "sheet.pdf") -> Any:
    """Send a file."""
    return api.client.post(api.path("attachments/"), {"file": SimpleUploadedFile(name, data)}, format="multipart")


def fill_drum(api: Caller, shop: Shop) -> str:
    """Put up a drum for copper rinse, drum the rinse off into it, and return its uuid."""
    said = {"name": "Copper rinse", "origin": "Copper line", "code": "11 01 11*", "reactivity": ["nothing"]}
    said |= {"statements": ["H412 Harms"]}
    stream = api.post("waste-streams/", said).json()
    drum = api.post(
        "waste-containers/",
        {"name": "Drum 2", "stream": stream["uuid"], "capacity": "30 L", "material": "HDPE", "tare": "1.2 kg"},
    ).json()
    held = [{"metal": "Cu", "amount": "2 g/L"}]
    api.record("opening", vessel=str(shop.rinse.uuid), volume="20 L", held=held, complete=True)
    poured = api.record("drum-off", source=str(shop.rinse.uuid), target=drum["vessel"]["uuid"])
    assert poured.status_code == 201
    return str(drum["vessel"]["uuid"])


def test_the_way_of_a_drum(api: Caller, shop: Shop) -> None:
    drum = fill_drum(api, shop)
    open_one = api.get(f"waste-containers/{drum}/").json()
    assert (open_one["volume"]["text"], open_one["closed_at"], open_one["gross"]) == ("20 L", None, None)
    assert open_one["stream"]["name"] == "Copper rinse"
    closed = api.post(f"waste-containers/{drum}/close", {"gross": "22.4 kg"})
    assert (closed.status_code, closed.json()["gross"]["text"]) == (200, "22.4 kg")
    assert closed.json()["closed_at"] is not None
    said = {"receiver": str(shop.receiver.uuid), "planned_for": "2026-04-01", "mode": "picked up", "containers": [drum]}
    draft = api.post("drop-offs/", said)
    assert (draft.status_code, draft.json()["state"], draft.json()["manifest"]) == (201, "draft", None)
    address = f"drop-offs/{draft.json()['uuid']}/"
    assert api.get(f"waste-containers/{drum}/").json()["drop_off"] == draft.json()["uuid"]
    packed = api.post(address + "pack").json()
    assert (packed["state"], packed["manifest"]["number"]) == ("packed", 1)
    assert api.get(address).json() == packed
    gone = api.post(address + "hand-over", {"occurred_at": "2026-03-02T16:03+01:00"})
    assert (gone.status_code, gone.json()["state"]) == (200, "handed over")
    kinds = [row["kind"] for row in api.get("entries/").json()["results"]]
    assert kinds[0] == "hand-over"
    assert api.get(f"vessels/{drum}/").json()["contents"]["volume"]["amount"]["base"] == 0


def test_what_cannot_be_done_now_is_a_conflict(api: Caller, shop: Shop) -> None:
    drum = fill_drum(api, shop)
    light = api.post(f"waste-containers/{drum}/close", {"gross": "1 kg"})
    assert "less than the empty container" in errors_of(light, 400)["gross"]
    draft = {"receiver": str(shop.receiver.uuid), "planned_for": "2026-04-01", "containers": [drum]}
    assert "not closed" in errors_of(api.post("drop-offs/", draft), 400)["containers"]
    api.post(f"waste-containers/{drum}/close", {"gross": "22.4 kg"})
    assert "closed already" in errors_of(api.post(f"waste-containers/{drum}/close", {"gross": "22 kg"}), 409)[""]
    address = f"drop-offs/{api.post('drop-offs/', draft).json()['uuid']}/"
    assert "Pack it first" in errors_of(api.post(address + "hand-over"), 409)[""]
    packed = api.post(address + "pack").json()
    assert api.post(address + "pack").json() == packed
    assert api.post(address + "hand-over").status_code == 200
    assert errors_of(api.post(address + "hand-over"), 409)


def test_what_a_draft_names_must_be_there(api: Caller) -> None:
    said = {"receiver": str(uuid4()), "planned_for": "2026-04-01", "containers": [str(uuid4())]}
    assert set(errors_of(api.post("drop-offs/", said), 400)) == {"receiver", "containers.0"}
    container = {"name": "Drum", "stream": str(uuid4()), "place": str(uuid4())}
    assert set(errors_of(api.post("waste-containers/", container), 400)) == {"stream", "place"}


def test_dangers_of_one_load_are_reasons(api: Caller, shop: Shop) -> None:
    acid = api.post("waste-streams/", {"name": "Acid rinse", "origin": "Pickle", "reactivity": ["acid"]}).json()
    can = api.post("waste-containers/", {"name": "Acid can", "stream": acid["uuid"]}).json()["vessel"]["uuid"]
    drums = [can, str(shop.drum.vessel.uuid)]
    for drum in drums:
        api.post(f"waste-containers/{drum}/close", {"gross": "20 kg"})
    said = {"receiver": str(shop.receiver.uuid), "planned_for": "2026-04-01", "containers": drums}
    draft = api.post("drop-offs/", said).json()
    refused = api.post(f"drop-offs/{draft['uuid']}/pack")
    assert "must not go in one load" in errors_of(refused, 409)[""]
    assert "hydrogen cyanide" in refused.json()["reasons"][0]


def test_a_label_is_issued_once_for_a_key(api: Caller, shop: Shop) -> None:
    address, key = f"waste-containers/{fill_drum(api, shop)}/label", uuid4()
    first = api.post(address, key=key)
    again = api.post(address, key=key)
    assert (first.status_code, first.json()["kind"], first.json()["number"]) == (201, "waste-label", 1)
    assert again.json() == first.json()
    assert api.post(address, key=uuid4()).json()["number"] == 2
    assert "Idempotency-Key" in errors_of(api.post(address), 400)


def test_a_paper_gives_the_same_bytes_each_time(api: Caller, shop: Shop) -> None:
    paper = api.post(f"waste-containers/{fill_drum(api, shop)}/label", key=uuid4()).json()
    first, second = (api.get(f"papers/{paper['uuid']}.pdf") for _ in range(2))
    assert first.headers["Content-Type"] == "application/pdf"
    assert first.headers["Content-Disposition"] == 'attachment; filename="waste-label-1.pdf"'
    assert first.content == second.content
    assert hashlib.sha256(first.content).hexdigest() == paper["pdf_sha256"]
    detail = api.get(f"papers/{paper['uuid']}/").json()
    assert detail["content"]["number"] == 1
    assert api.get(f"entries/{detail['entry']}/").json()["kind"] == "paper"


def test_a_file_is_kept_by_its_bytes(api: Caller) -> None:
    made = upload(api, PDF)
    sha256 = hashlib.sha256(PDF).hexdigest()
    assert made.status_code == 201
    assert (made.json()["sha256"], made.json()["media_type"], made.json()["size"]) == (sha256, "application/pdf", 29)
    assert upload(api, PDF, "other name.pdf").json() == made.json()
    fetched = api.get(f"attachments/{sha256}")
    assert (fetched.status_code, fetched.content, fetched.headers["Content-Type"]) == (200, PDF, "application/pdf")
    assert fetched.headers["Content-Disposition"] == 'attachment; filename="sheet.pdf"'
    assert fetched.headers["X-Content-Type-Options"] == "nosniff"
    assert errors_of(api.get(f"attachments/{'0' * 64}"), 404)


def test_a_sheet_belongs_to_a_revision_and_a_photograph_to_an_entry(api: Caller, shop: Shop) -> None:
    sheet = upload(api, PDF).json()["sha256"]
    photograph = upload(api, b"\xff\xd8\xff\xe0 picture", "spill.jpg").json()
    assert photograph["media_type"] == "image/jpeg"
    made = api.post("products/", {"name": "Salt", "form": "solid", "safety_data_sheet": sheet})
    assert made.json()["safety_data_sheet"] == sheet
    wrong = api.post("products/", {"name": "Salz", "form": "solid", "safety_data_sheet": photograph["sha256"]})
    assert "PDF" in errors_of(wrong, 400)["safety_data_sheet"]
    files_of = [photograph["sha256"]]
    entry = api.record("opening", vessel=str(shop.bath.uuid), volume="20 L", attachments=files_of)
    assert entry.json()["attachments"] == files_of


@pytest.mark.parametrize("data", [b"MZ program", b"<html>", b"", b"GIF89a"])
def test_only_some_kinds_of_file_are_kept(api: Caller, data: bytes) -> None:
    assert errors_of(upload(api, data), 400)["file"]


def test_an_upload_is_multipart(api: Caller) -> None:
    assert "Content-Type" in errors_of(api.post("attachments/", {"file": "sheet"}), 415)
    none = api.client.post(api.path("attachments/"), {"other": "x"}, format="multipart")
    assert set(errors_of(none, 400)) == {"file", "other"}


def test_a_file_that_was_changed_on_disk_is_not_given_out(api: Caller) -> None:
    sha256 = upload(api, PDF + b"for this test").json()["sha256"]
    files.path_of(sha256).write_bytes(b"%PDF- changed")
    assert "Restore it from a backup" in errors_of(api.get(f"attachments/{sha256}"), 500)[""]
    files.path_of(sha256).unlink()
    assert "is missing" in errors_of(api.get(f"attachments/{sha256}"), 500)[""]
