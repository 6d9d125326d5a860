"""Waste on the pages: may this go in here, closing, labels, drop-offs, manifest."""

from typing import Any
from uuid import uuid4

import pytest

from chemicals.journal.models import Entry
from chemicals.ledger.selectors import read_contents
from chemicals.workshop.models import Membership
from compliance.documents.models import Paper
from compliance.dropoffs.models import DropOff, Receiver
from compliance.waste.models import WasteContainer, WasteStream
from tests.web.conftest import Line, Visitor, text_of


def ask(visit: Visitor, drum: WasteContainer, source: object, **headers: str) -> Any:
    return visit.client.get(visit.address("may-go-in", drum.vessel.uuid), {"source": str(source)}, headers=headers)


def test_may_this_go_in_here_answers_allowed(visit: Visitor, filled: Line) -> None:
    page = text_of(ask(visit, filled.drum, filled.bath.uuid))
    assert "Copper bath into Drum 7" in page
    assert "allowed" in page
    assert f"?source={filled.bath.uuid}&amp;target={filled.drum.vessel.uuid}" in page
    assert "NEVER" not in page


def test_expired_stock_is_asked_for_too_after_the_tanks(visit: Visitor, filled: Line) -> None:
    page = text_of(ask(visit, filled.drum, filled.tub.uuid))
    assert "Salt tub into Drum 7" in page
    assert page.index(">Copper bath (") < page.index(">Rinse (") < page.index(">Salt tub (")
    assert "NEVER" in text_of(ask(visit, filled.cyanide_drum, filled.tub.uuid))


def test_may_this_go_in_here_answers_never_and_writes_nothing(visit: Visitor, filled: Line) -> None:
    before = Entry._base_manager.count()
    page = text_of(ask(visit, filled.cyanide_drum, filled.bath.uuid))
    assert "NEVER" in page
    assert "hydrogen cyanide" in page
    assert Entry._base_manager.count() == before


def test_with_htmx_only_the_answer_comes(visit: Visitor, filled: Line) -> None:
    page = ask(visit, filled.cyanide_drum, filled.bath.uuid, **{"HX-Request": "true"})
    assert "NEVER" in text_of(page)
    assert "<html" not in text_of(page)
    nothing = ask(visit, filled.cyanide_drum, "", **{"HX-Request": "true"})
    assert (nothing.status_code, text_of(nothing)) == (200, "<p>Choose what it comes from.</p>")


def test_nothing_chosen_is_told(visit: Visitor, filled: Line) -> None:
    page = ask(visit, filled.drum, "")
    assert page.status_code == 400
    assert "Choose one from the list." in text_of(page)


def close(visit: Visitor, drum: WasteContainer, gross: str = "7.5 kg") -> Any:
    return visit.post("close-container", drum.vessel.uuid, gross=gross)


def test_a_container_is_closed_with_its_weight(visit: Visitor, filled: Line) -> None:
    assert close(visit, filled.drum, "heavy").status_code == 400
    assert close(visit, filled.drum).status_code == 302
    page = text_of(visit.get("waste-container", filled.drum.vessel.uuid))
    assert "7.5 kg" in page
    assert "May this go in here?" not in page
    again = close(visit, filled.drum)
    assert again.status_code == 409
    assert "closed already" in text_of(again)


def test_the_label_is_issued_once_however_often_it_is_pressed(visit: Visitor, filled: Line) -> None:
    key = uuid4()
    pages = [visit.post("issue-label", filled.drum.vessel.uuid, key=key) for _ in range(2)]
    paper = Paper._base_manager.get()
    assert {page.headers["Location"] for page in pages} == {visit.address("paper", paper.uuid)}
    twin = visit.get("paper", paper.uuid)
    assert "Copper rinse" in text_of(twin)
    assert visit.address("paper-pdf", paper.uuid) in text_of(twin)
    pdf = visit.get("paper-pdf", paper.uuid)
    assert pdf.content.startswith(b"%PDF-")
    assert pdf.headers["Content-Disposition"] == 'inline; filename="waste-label-1.pdf"'
    assert visit.address("paper", paper.uuid) in text_of(visit.get("waste-container", filled.drum.vessel.uuid))
    assert visit.post("issue-label", filled.drum.vessel.uuid, key="old").status_code == 400


def test_a_stream_and_a_container_are_added(visit: Visitor) -> None:
    said = {"name": "Spent rinse", "origin": "rinsing", "reactivity": ["acid"], "statements": "H411 Toxic"}
    assert visit.post("add-stream", **said).status_code == 302
    stream = WasteStream._base_manager.get()
    assert (stream.reactivity, stream.statements) == (["acid"], ["H411 Toxic"])
    said = {"name": "Drum 1", "stream": str(stream.uuid), "capacity": "25 L", "tare": "1.2 kg", "material": "HDPE"}
    assert visit.post("add-container", **said).status_code == 302
    drum = WasteContainer._base_manager.get()
    assert (drum.tare, drum.vessel.capacity) == (1_200_000_000, 25_000_000_000)
    assert visit.post("add-stream", name="Spent rinse", origin="").status_code == 400


def draft(visit: Visitor, *drums: WasteContainer) -> DropOff:
    visit.post("add-receiver", name="County collection point", reference="K-1")
    receiver = Receiver._base_manager.get()
    chosen = [str(drum.vessel.uuid) for drum in drums]
    said = {"receiver": receiver.uuid, "mode": "brought", "planned_for": "2026-03-05", "containers": chosen}
    page = visit.post("add-drop-off", **said)
    assert page.status_code == 302, text_of(page)
    return DropOff._base_manager.get()


def test_a_drum_goes_to_the_collection_point_with_its_manifest(visit: Visitor, filled: Line) -> None:
    close(visit, filled.drum)
    drop_off = draft(visit, filled.drum)
    assert visit.post("hand-over-drop-off", drop_off.uuid).status_code == 409
    assert visit.post("pack-drop-off", drop_off.uuid).status_code == 302
    drop_off.refresh_from_db()
    assert drop_off.manifest is not None
    assert "no legal consignment note" in text_of(visit.get("paper", drop_off.manifest.uuid))
    page = text_of(visit.get("drop-off", drop_off.uuid))
    assert visit.address("paper-pdf", drop_off.manifest.uuid) in page
    said = {"occurred_date": "2026-03-02", "occurred_time": "16:01"}
    assert visit.post("hand-over-drop-off", drop_off.uuid, **said).status_code == 302
    entry = Entry._base_manager.get(kind="hand-over")
    assert entry.occurred_at.isoformat() == "2026-03-02T15:01:00+00:00"
    assert all(metal.amount == 0 for metal in read_contents(filled.drum.vessel).metals)
    visit.post("pack-drop-off", drop_off.uuid)
    assert Paper._base_manager.count() == 1
    assert "handed over" in text_of(visit.get("waste"))


def test_what_must_not_share_a_load_is_not_packed(visit: Visitor, filled: Line) -> None:
    close(visit, filled.drum)
    close(visit, filled.cyanide_drum)
    drop_off = draft(visit, filled.drum, filled.cyanide_drum)
    page = visit.post("pack-drop-off", drop_off.uuid)
    assert page.status_code == 409
    assert "NEVER" in text_of(page)
    assert "must not go in one load" in text_of(page)


def test_a_drop_off_needs_a_closed_container(visit: Visitor, filled: Line) -> None:
    assert "Nothing waits for a drop-off" in text_of(visit.get("add-drop-off"))
    visit.post("add-receiver", name="County collection point")
    said = {"receiver": Receiver._base_manager.get().uuid, "mode": "brought", "planned_for": "2026-03-05"}
    assert visit.post("add-drop-off", **said).status_code == 400
    assert visit.post("add-drop-off", **said, containers=[str(filled.drum.vessel.uuid)]).status_code == 400


@pytest.mark.parametrize("name", ["close-container", "issue-label"])
def test_an_observer_changes_nothing(observer: Membership, filled: Line, name: str) -> None:
    page = Visitor(observer).post(name, filled.drum.vessel.uuid, gross="7 kg", key=uuid4())
    assert page.status_code == 403
    assert not Paper._base_manager.exists()


def test_a_full_container_is_told_on_the_first_page(visit: Visitor, filled: Line) -> None:
    vessel = filled.drum.vessel
    vessel.capacity = 6_000_000_000
    vessel.save()
    page = text_of(visit.get("today"))
    assert "nearly full" in page
    assert "83 % full: 5 L of 6 L" in page
