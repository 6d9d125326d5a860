"""The page of an entry: as recorded, what followed in sentences, its history, its place in the chain."""

import hashlib
import json
from collections.abc import Mapping
from datetime import datetime, timedelta
from html import unescape
from typing import Any
from uuid import uuid4

import pytest

from chemicals.books import fold
from chemicals.books.events import CURRENT
from chemicals.books.fold.state import Holding, State
from chemicals.books.occurred import Occurred
from chemicals.journal.models import Entry
from chemicals.journal.services import add_attachment
from chemicals.ledger.selectors import Recomputing
from chemicals.process.inputs import AnalysisInput, LevelInput
from chemicals.science.quantity import parse
from chemicals.workshop.models import Membership
from compliance.clearance.services import record
from compliance.web import words
from compliance.web.recorded import Teller
from compliance.web.views import entries as entries_page
from compliance.web.words import Ends
from compliance.web.words.reasons import REASONS, reason
from tests.books import examples
from tests.books.examples import EXAMPLES
from tests.web.conftest import Line, Say, Visitor, text_of
from tests.web.kinds import VESSELS, record_all

ENDS = Ends({uuid: name for name, (uuid, _kind) in VESSELS.items()})


@pytest.fixture
def recorded(owner: Membership, now: datetime) -> Mapping[str, Entry]:
    """Return one entry of every kind."""
    return record_all(owner, now)


def page_of(visit: Visitor, entry: Entry) -> str:
    page = visit.get("entry", entry.uuid)
    assert page.status_code == 200
    return unescape(text_of(page))


@pytest.mark.parametrize("kind", CURRENT)
def test_an_entry_of_every_kind_tells_all_that_was_recorded(
    kind: str, visit: Visitor, recorded: Mapping[str, Entry]
) -> None:
    page = page_of(visit, recorded[kind])
    body = json.loads(bytes(recorded[kind].body))
    for typed in _all_typed(body["payload"]):
        assert typed in page
    for source in _all_sources(body["payload"]):
        assert source in page
    assert recorded[kind].uuid.hex[:8] in page
    assert bytes(recorded[kind].hash).hex()[:4] in page


def _all_typed(value: Any) -> list[str]:
    return _all(value, "typed")


def _all_sources(value: Any) -> list[str]:
    vessels = {uuid for uuid, _kind in VESSELS.values()}
    return [source for source in _all(value, "source") if source not in vessels]


def _all(value: Any, name: str) -> list[str]:
    if isinstance(value, dict):
        own = [value[name]] if isinstance(value.get(name), str) else []
        return own + [text for inner in value.values() for text in _all(inner, name)]
    return [text for inner in value for text in _all(inner, name)] if isinstance(value, list) else []


@pytest.mark.parametrize("path", sorted(examples.GOLDEN.glob("*.json")), ids=lambda path: path.stem)
def test_every_version_of_every_kind_can_be_told(path: Any) -> None:
    body = json.loads(json.loads(path.read_text())["body"])
    teller = Teller(body["payload"], ENDS, 7)
    told = [*teller.observed(), *teller.used()]
    assert told
    assert all(line.label and line.text for line in told)
    words_of_code = [line.label for line in told if "_" in line.label]
    assert words_of_code == []


def told_of(kind: str) -> dict[str, str]:
    """Return the lines of an example by their names, figures with their source."""
    body = examples.body_of(EXAMPLES[kind])
    teller = Teller(body.payload, ENDS, 7)
    lines = [*teller.observed(), *teller.used()]
    return {line.label: f"{line.text} ({line.source})" if line.source else line.text for line in lines}


def test_a_figure_stands_as_typed_as_understood_and_with_its_uncertainty() -> None:
    assert told_of("opening")["volume"] == "2.5 gal = 9.46 ± 0.10 L"
    assert told_of("receipt")["mass"] == "25 kg = 25.000 ± 0.010 kg"
    assert told_of("strip")["weight before"] == "85.0 g"
    assert told_of("run")["drag-out of Copper bath"] == "5.0 ± 1.5 mL (rack type 2)"
    assert told_of("run")["acid made"] == "10.36 ± 0.10 mmol / kC (oxygen at an inert anode)"
    assert told_of("day sheet")["racks"] == "Copper bath → Rinse, rack type 2, loads: 14"
    assert told_of("correction")["entry"] == "entry 7"
    assert told_of("correction")["difference"] == "copper, less than the books said, 12 g = 12.00 ± 0.50 g"
    assert told_of("treatment")["found in the filtrate"] == "copper, 1.8 mg/L = 1.80 ± 0.30 mg/L"


def test_a_concentration_in_an_opening_is_understood_as_the_mass_that_it_makes() -> None:
    held = {"component": "Cu", "amount": {"typed": "50 g/L", "unit": "g/L", "base": 10**9, "sd": None}}
    teller = Teller({"observed": {"held": [held]}, "used": {}}, ENDS)
    assert [line.text for line in teller.observed()] == ["copper, 50 g/L = 1 kg"]


def fold_example(kind: str) -> tuple[Any, list[str]]:
    """Return what an example causes where every vessel holds a bit of everything, and the sentences."""
    state, event = State(), EXAMPLES[kind]
    for uuid, _kind in VESSELS.values():
        for component, amount in (("volume", 20 * 10**9), ("gross mass", 22 * 10**9), ("Cu", 10**9), ("acid", 10**9)):
            state.put(uuid, component, Holding(amount, 10**14))
    folded = fold.fold_event(state, event)
    follows = words.Follows.from_event(event, folded.transfers, ENDS)
    return folded, [*follows.metals, *follows.others]


@pytest.mark.parametrize("kind", [kind.KIND for kind in fold.FOLDS])
def test_every_amount_that_follows_has_its_reason(kind: str) -> None:
    folded, sentences = fold_example(kind)
    assert folded.transfers
    assert [transfer for transfer in folded.transfers if not reason(EXAMPLES[kind], transfer)] == []
    assert len(sentences) == len(folded.transfers)


def test_what_posts_nothing_needs_no_reason() -> None:
    named = {kind for kind in CURRENT.values() for known in REASONS if issubclass(kind, known)}
    assert named == set(fold.FOLDS)


@pytest.mark.parametrize(
    ("kind", "sentence"),
    [
        ("run", "0.250 ± 0.075 g copper went from Copper bath to Rinse, assumed from the drag-out (rack type 2)."),
        ("run", "2.100 ± 0.071 g copper went from Copper bath to parts, observed by weighing before and after."),
        ("run", "2.086 ± 0.021 g copper went from Anodes to Copper bath, computed from current and time."),
        ("day sheet", "to parts, computed from the ampere-hours and the efficiency (as entered)."),
        (
            "run",
            "acid formed in Copper bath, assumed from what the current makes and uses up (oxygen at an inert anode).",
        ),
        ("receipt", "25.000 ± 0.010 kg weight in all went from supplier to Salt tub, observed as delivered."),
        (
            "make-up",
            "The liquid in Copper bath swelled by 800 ± 400 mL, assumed from the room that needs what dissolves",
        ),
        ("move", "1 L liquid went from Copper bath to Rinse, observed as measured."),
        ("discharge", "g copper went from Rinse to sewer, computed from the volume that moved."),
        ("count", "copper was missing in Salt tub, unaccounted, computed in proportion to what was counted."),
        ("weight reading", "weight in all more than booked was in Drum 7, unaccounted, computed from the weight."),
        ("acceptance", "unaccounted, computed from concentration and volume (titration)."),
        ("resin", "assumed from what it keeps of the liquid and of metal (as the supplier says)."),
        ("treatment", "copper went from Drum 7 to Sludge pail, computed from what was not found dissolved."),
        ("hand-over", "copper went from Drum 7 to receiver, computed from all that the books had there."),
        ("correction", "12.00 ± 0.50 g copper was missing in Copper bath, unaccounted, observed as corrected."),
    ],
)
def test_what_followed_is_a_sentence_with_its_basis_and_why(kind: str, sentence: str) -> None:
    said = "\n".join(fold_example(kind)[1])
    assert sentence in said


def test_the_page_says_what_followed(visit: Visitor, filled: Line) -> None:
    page = page_of(visit, Entry._base_manager.get(kind="drum off"))
    assert "5 L liquid went from Copper bath to Drum 7, observed as measured." in page
    assert "copper went from Copper bath to Drum 7, computed from the volume that moved." in page


def test_an_entry_tells_what_later_ones_say_of_it_and_they_what_they_speak_of(visit: Visitor, filled: Line) -> None:
    entry = Entry._base_manager.get(kind="drum off")
    visit.post("record", "cancellation", key=uuid4(), entry=entry.uuid, reason="typed twice", step="save")
    cancellation = Entry._base_manager.get(kind="cancellation")
    page = page_of(visit, entry)
    assert f"of entry {entry.sequence}: typed twice" in page[page.index("Later entries that speak of it") :]
    assert visit.address("entry", cancellation.uuid) in page
    page = page_of(visit, cancellation)
    assert visit.address("entry", entry.uuid) in page[page.index("It speaks of") :]
    assert "Cancel this entry" not in page


def test_an_analysis_offers_its_acceptance_until_there_is_one(visit: Visitor, filled: Line, say: Say) -> None:
    analysis = say(AnalysisInput(vessel=filled.bath.uuid, metal="Cu", result=parse("50 g/L", "concentration")))
    accept = visit.address("record", "acceptance")
    assert accept in page_of(visit, analysis)
    visit.post("record", "acceptance", key=uuid4(), analysis=analysis.uuid, step="save")
    page = page_of(visit, analysis)
    assert accept not in page
    assert "acceptance" in page[page.index("Later entries that speak of it") :]


def test_the_reasons_of_what_was_overridden_stand_on_the_page(visit: Visitor, recorded: Mapping[str, Entry]) -> None:
    page = page_of(visit, recorded["move"])
    assert "overridden" in page
    assert "The owner said so." in page


def test_a_day_is_said_to_be_no_more_than_a_day(visit: Visitor, recorded: Mapping[str, Entry]) -> None:
    assert "the day alone is known" in page_of(visit, recorded["day sheet"])
    assert "the day alone is known" not in page_of(visit, recorded["run"])


def test_an_entry_has_its_place_in_the_chain_and_in_time(
    visit: Visitor, filled: Line, owner: Membership, now: datetime
) -> None:
    late = record(
        actor=owner,
        now=now,
        key=uuid4(),
        data=LevelInput(vessel=filled.rinse.uuid, volume=parse("9 L", "volume")),
        occurred=Occurred(now - timedelta(days=1)),
    ).entry
    page = page_of(visit, late)
    chain = page[page.index("Place in the chain") :]
    assert "5 of 5" in chain
    assert "recorded before it</dt> <dd> <a" in chain
    assert "none: it is the last one" in chain
    assert "happened before it</dt> <dd> nothing that is recorded" in chain
    first = Entry._base_manager.get(sequence=1)
    assert visit.address("entry", first.uuid) in chain
    assert bytes(late.previous_hash).hex()[:4] in chain
    assert "none: it is the first one" in page_of(visit, first)
    assert visit.address("entry", late.uuid) in page_of(visit, first)


def test_while_the_books_are_worked_out_anew_the_page_says_so(
    visit: Visitor, filled: Line, now: datetime, monkeypatch: pytest.MonkeyPatch
) -> None:
    entry, words_of_it = Entry._base_manager.get(kind="drum off"), "The books are being worked out anew"
    assert words_of_it not in page_of(visit, entry)
    for until, told in ((now - timedelta(days=1), True), (now + timedelta(days=1), False)):
        recomputing = Recomputing(until, uuid4(), done=1, total=2, failed=False)
        monkeypatch.setattr(entries_page, "get_recomputed_to", lambda workshop, found=recomputing: found)
        assert (words_of_it in page_of(visit, entry)) is told


def test_files_of_an_entry_are_named_with_their_hash(visit: Visitor, owner: Membership, now: datetime) -> None:
    sheet = add_attachment(actor=owner, now=now, name="photo of the scale.png", data=b"\x89PNG\r\n\x1a\n 85.0 g")
    recorded = record_all(owner, now, attachments=(sheet.sha256,))
    page = page_of(visit, recorded["strip"])
    assert "photo of the scale.png" in page
    assert f"SHA-256 {sheet.sha256}" in page
    assert visit.address("file", sheet.sha256) in page


def test_an_entry_alone_comes_with_the_bytes_that_its_hash_proves(visit: Visitor, filled: Line) -> None:
    entry = Entry._base_manager.get(kind="drum off")
    about, line, rest = visit.get("entry", entry.uuid, query="?as=jsonl").getvalue().split(b"\n")
    raw = line.removeprefix(b'{"body":').partition(b',"previous_hash":')[0]
    found = json.loads(line)
    digest = hashlib.sha256(b"\x01" + bytes.fromhex(found["previous_hash"]) + raw).hexdigest()
    assert (digest, rest) == (bytes(entry.hash).hex(), b"")
    assert json.loads(about)["about"]["only"] == f"entry {entry.uuid}"


def test_a_page_of_an_entry_takes_the_same_queries_however_much_there_is(
    visit: Visitor, filled: Line, say: Say, django_assert_num_queries: Any
) -> None:
    entry = Entry._base_manager.get(kind="drum off")
    visit.get("entry", entry.uuid)
    with django_assert_num_queries(18):
        visit.get("entry", entry.uuid)
    for number in range(3):
        say(LevelInput(vessel=filled.bath.uuid, volume=parse(f"{14 - number} L", "volume")))
    visit.post("record", "cancellation", key=uuid4(), entry=entry.uuid, reason="typed twice", step="save")
    with django_assert_num_queries(18):
        visit.get("entry", entry.uuid)
