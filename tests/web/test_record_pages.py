"""Recording on the pages: form, preview, saved; refused; already happened; pressed twice."""

import re
from typing import Any
from uuid import uuid4

import pytest

from chemicals.journal.models import Entry
from chemicals.ledger.selectors import read_contents
from chemicals.workshop.models import Membership
from tests.web.conftest import Line, Visitor, text_of


def run(line: Line, **changes: object) -> dict[str, object]:
    return {"key": uuid4(), "route": line.route.uuid, "current": "0.44 A", "time": "2 h 30 min", **changes}


def mix(line: Line, **changes: object) -> dict[str, object]:
    """Acid copper into the can for cyanide."""
    said = {"key": uuid4(), "source": line.bath.uuid, "target": line.cyanide_drum.vessel.uuid, "volume": "1 L"}
    return {**said, **changes}


def entries() -> int:
    return Entry._base_manager.count()


def test_the_preview_echoes_and_says_what_follows_and_writes_nothing(visit: Visitor, filled: Line) -> None:
    before = entries()
    page = visit.post("record", "run", **run(filled), step="preview")
    text = text_of(page)
    assert page.status_code == 200
    assert "150 min = 2.5 h" in text
    assert re.search(r"1\.304 ± 0\.0\d+ g copper goes from Copper bath to parts, computed\.", text)
    assert "Nothing that was recorded speaks against it." in text
    assert entries() == before


def test_what_was_previewed_is_saved_from_the_page_alone(visit: Visitor, filled: Line) -> None:
    page = visit.post("record", "run", **run(filled, parts="hinges"), step="preview")
    hidden = dict(re.findall(r'<input type="hidden" name="([^"]+)" value="([^"]*)">', page.content.decode()))
    hidden.pop("csrfmiddlewaretoken", None)
    saved = visit.post("record", "run", **hidden, step="save")
    entry = Entry._base_manager.latest("sequence")
    assert saved.status_code == 302
    assert saved.headers["Location"] == visit.address("entry", entry.uuid)
    text = text_of(visit.client.get(saved.headers["Location"]))
    assert "Recorded." in text
    assert "hinges, 0.44 A, 2 h 30 min" in text
    assert "copper went from Copper bath to parts, computed from current and time and the efficiency" in text


def test_going_back_loses_nothing_and_blames_nothing(visit: Visitor, filled: Line) -> None:
    page = visit.post("record", "run", **run(filled, parts="hinges", current="nonsense"), step="back")
    text = text_of(page)
    assert 'value="hinges"' in text
    assert 'value="nonsense"' in text
    assert "errorlist" not in text


def test_pressed_twice_it_is_recorded_once(visit: Visitor, filled: Line) -> None:
    said = run(filled)
    first, second = (visit.post("record", "run", **said, step="save") for _ in range(2))
    assert first.headers["Location"] == second.headers["Location"]
    assert Entry._base_manager.filter(kind="run").count() == 1
    assert "recorded already" in text_of(visit.client.get(second.headers["Location"]))


def test_the_same_key_for_something_else_is_a_conflict(visit: Visitor, filled: Line) -> None:
    said = run(filled)
    visit.post("record", "run", **said, step="save")
    page = visit.post("record", "run", **{**said, "time": "3 h"}, step="save")
    assert page.status_code == 409
    assert "Open a fresh form" in text_of(page)
    assert 'value="3 h"' in text_of(page)


def test_errors_come_all_at_once_each_linked_to_its_field(visit: Visitor, filled: Line) -> None:
    page = visit.post("record", "run", key=uuid4(), charge="1,500 Ah", current="0.44 V", step="preview")
    text = text_of(page)
    assert page.status_code == 400
    assert "3 things are wrong" in text
    assert (
        '<a href="#id_charge"> <strong>Ampere-hours</strong>: &quot;1,500&quot; is ambiguous: write 1500 or 1.5. </a>'
        in text
    )
    assert 'aria-describedby="id_charge_helptext id_charge_error"' in text
    assert 'value="1,500 Ah"' in text


def test_what_only_the_domain_can_tell_stands_beside_its_field_too(visit: Visitor, filled: Line) -> None:
    page = visit.post("record", "level-reading", key=uuid4(), vessel=filled.bath.uuid, volume="31 L", step="preview")
    assert page.status_code == 400
    assert '<a href="#id_volume"> <strong>Volume now</strong>: This is more than the vessel can hold.' in text_of(page)


def test_the_future_is_refused(visit: Visitor, filled: Line) -> None:
    said = {"key": uuid4(), "vessel": filled.bath.uuid, "volume": "19 L", "occurred_date": "2026-03-03"}
    page = visit.post("record", "level-reading", **said, step="save")
    assert page.status_code == 400
    assert "This lies in the future" in text_of(page)


def test_what_must_never_meet_is_refused_with_the_danger_named(visit: Visitor, filled: Line) -> None:
    before = entries()
    page = visit.post("record", "drum-off", **mix(filled), step="preview")
    text = text_of(page)
    assert "NEVER" in text
    assert "hydrogen cyanide" in text
    assert "Everyone out" in text
    assert 'value="save"' not in text
    assert visit.post("record", "drum-off", **mix(filled), step="save").status_code == 409
    assert entries() == before


def test_what_has_happened_already_is_recorded_as_an_incident(visit: Visitor, filled: Line) -> None:
    saved = visit.post("record", "drum-off", **mix(filled), step="incident")
    entry = Entry._base_manager.latest("sequence")
    assert (saved.status_code, entry.verdict) == (302, "incident")
    text = text_of(visit.client.get(saved.headers["Location"]))
    assert "hydrogen cyanide" in text
    assert "Everyone out" in text
    today = text_of(visit.get("today"))
    assert "Incidents" in today
    assert today.index("Incidents") < today.index("What happened last")


def test_what_only_has_no_room_is_refused_without_alarm(visit: Visitor, filled: Line) -> None:
    said = {"key": uuid4(), "source": filled.bath.uuid, "target": filled.drum.vessel.uuid, "volume": "24 L"}
    page = visit.post("record", "drum-off", **said, step="preview")
    text = text_of(page)
    assert "Not this way" in text
    assert "NEVER" not in text
    assert "Everyone out" not in text
    assert "It has already happened" in text


def test_saying_it_has_happened_makes_no_incident_of_what_is_allowed(visit: Visitor, filled: Line) -> None:
    visit.post("record", "run", **run(filled), step="incident")
    assert Entry._base_manager.latest("sequence").verdict == "allowed"


def test_another_row_is_added_without_judging(visit: Visitor, filled: Line) -> None:
    page = visit.post("record", "make-up", key=uuid4(), more="ingredients", **{"ingredients-0-amount": "3 g"})
    text = text_of(page)
    assert page.status_code == 200
    assert 'name="ingredients-5-amount"' in text
    assert 'value="3 g"' in text
    assert "errorlist" not in text


def test_an_hour_that_came_twice_is_asked_then_taken(visit: Visitor, filled: Line) -> None:
    said: dict[str, Any] = {"vessel": filled.bath.uuid, "volume": "14 L", "occurred_date": "2025-10-26"}
    asked = visit.post("record", "level-reading", key=uuid4(), **said, occurred_time="02:30", step="save")
    assert asked.status_code == 400
    assert "Which of the two" in text_of(asked)
    saved = visit.post(
        "record", "level-reading", key=uuid4(), **said, occurred_time="02:30", occurred_which="second", step="save"
    )
    assert saved.status_code == 302
    assert Entry._base_manager.latest("sequence").occurred_at.isoformat() == "2025-10-26T01:30:00+00:00"


def test_an_analysis_is_accepted_from_the_page_of_its_tank(visit: Visitor, filled: Line) -> None:
    said = {"key": uuid4(), "vessel": filled.bath.uuid, "metal": "Cu", "result": "52 g/L", "sd": "0.5 g/L"}
    visit.post("record", "analysis", **said, step="save")
    analysis = Entry._base_manager.latest("sequence")
    page = text_of(visit.get("vessel", filled.bath.uuid))
    address = visit.address("record", "acceptance") + f"?analysis={analysis.uuid}"
    assert address in page
    assert f'value="{analysis.uuid}" selected' in text_of(visit.client.get(address))
    saved = visit.post("record", "acceptance", key=uuid4(), analysis=analysis.uuid, step="save")
    assert saved.status_code == 302
    contents = read_contents(filled.bath)
    assert contents.metals[0].concentration == 52 * 10**6
    assert address not in text_of(visit.get("vessel", filled.bath.uuid))


def test_a_cancelled_entry_stays_readable_and_is_marked(visit: Visitor, filled: Line) -> None:
    entry = Entry._base_manager.get(kind="drum off")
    page = text_of(visit.get("entry", entry.uuid))
    assert visit.address("record", "cancellation") + f"?entry={entry.uuid}" in page
    saved = visit.post("record", "cancellation", key=uuid4(), entry=entry.uuid, reason="typed twice", step="save")
    assert saved.status_code == 302
    page = text_of(visit.get("entry", entry.uuid))
    assert "The books are worked out as if it had not been." in page
    assert "Cancel this entry" not in page
    assert 'class="gone"' in text_of(visit.get("entries"))


@pytest.mark.parametrize("verb", ["run", "drum-off"])
def test_an_observer_records_nothing(observer: Membership, filled: Line, verb: str) -> None:
    before, visitor = entries(), Visitor(observer)
    assert visitor.get("record", verb).status_code == 403
    page = visitor.post("record", verb, **run(filled), step="save")
    assert page.status_code == 403
    assert "Observers only read" in text_of(page)
    assert entries() == before


def test_an_unknown_verb_is_not_found(visit: Visitor, line: Line) -> None:
    assert visit.get("record", "transmutation").status_code == 404
