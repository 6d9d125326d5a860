"""Events of every kind: to their payload and back, for ever."""

import json
from collections.abc import Mapping
from dataclasses import dataclass, fields, replace
from datetime import UTC, datetime
from pathlib import Path
from typing import Any, ClassVar
from uuid import UUID

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from chemicals.books import canonical, events
from chemicals.books.canonical import GENESIS, CanonicalError, chain_hash, decode_body, encode_body
from chemicals.books.events import (
    CURRENT,
    EVENTS,
    Conversion,
    Count,
    Discharge,
    Dissolved,
    Event,
    Figure,
    Held,
    LevelReading,
    Measured,
    Move,
    Plating,
    Racks,
    Result,
    Run,
    Sample,
    Share,
    Spill,
    Strip,
    decode,
    encode,
)
from chemicals.books.fold import FOLDS
from tests.books.examples import DRUM, EXAMPLES, GOLDEN, body_of, golden_file
from tests.books.strategies import EVENTS_OF
from tests.books.words import WATER, copper_deposit, grams, litres, opening

KINDS = sorted(CURRENT)


def through_the_journal(event: Event) -> Event:
    """Return an event as it comes back from the bytes of its entry."""
    body = decode_body(encode_body(body_of(event)))
    return decode(body.kind, body.kind_version, body.payload)


@pytest.mark.parametrize("kind", EVENTS, ids=lambda kind: str(kind.KIND))
@settings(max_examples=40)
@given(data=st.data())
def test_any_event_comes_back_from_the_journal(kind: type[Event], data: st.DataObject) -> None:
    event = data.draw(EVENTS_OF[kind])
    assert through_the_journal(event) == event


@pytest.mark.parametrize("kind", KINDS)
def test_the_example_of_a_kind_comes_back(kind: str) -> None:
    assert through_the_journal(EXAMPLES[kind]) == EXAMPLES[kind]


@pytest.mark.parametrize("kind", KINDS)
def test_every_version_of_a_kind_has_a_golden_file(kind: str) -> None:
    wanted = {golden_file(kind, version) for version in range(1, CURRENT[kind].VERSION + 1)}
    assert wanted <= set(GOLDEN.iterdir())


def test_every_golden_file_belongs_to_a_kind() -> None:
    kinds = {golden_file(kind, version) for kind in KINDS for version in range(1, CURRENT[kind].VERSION + 1)}
    assert set(GOLDEN.iterdir()) == kinds


@pytest.mark.parametrize("path", sorted(GOLDEN.iterdir()), ids=lambda path: str(path.stem))
def test_golden_bytes_decode_and_are_written_the_same(path: Path) -> None:
    golden = json.loads(path.read_text(encoding="utf-8"))
    data = golden["body"].encode()
    body = decode_body(data)
    assert golden_file(body.kind, body.kind_version) == path
    assert encode_body(body) == data
    assert chain_hash(GENESIS, data).hex() == golden["hash"]
    event = decode(body.kind, body.kind_version, body.payload)
    assert body.kind == event.KIND
    if body.kind_version == event.VERSION:
        assert encode(event) == body.payload
        assert event == EXAMPLES[body.kind]


@pytest.mark.parametrize("kind", KINDS)
def test_a_missing_or_surplus_field_is_refused_by_name(kind: str) -> None:
    for part in ("observed", "used"):
        for name in encode(EXAMPLES[kind])[part]:
            payload = encode(EXAMPLES[kind])
            del payload[part][name]
            with pytest.raises(CanonicalError, match=f"missing \\['{name}'\\]"):
                decode(kind, CURRENT[kind].VERSION, payload)
        payload = encode(EXAMPLES[kind])
        payload[part]["colour"] = "blue"
        with pytest.raises(CanonicalError, match=r"surplus \['colour'\]"):
            decode(kind, CURRENT[kind].VERSION, payload)


@pytest.mark.parametrize("kind", KINDS)
def test_a_field_in_the_wrong_part_is_refused_by_name(kind: str) -> None:
    for part, other in (("observed", "used"), ("used", "observed")):
        for name in encode(EXAMPLES[kind])[part]:
            payload = encode(EXAMPLES[kind])
            payload[other][name] = payload[part].pop(name)
            with pytest.raises(CanonicalError, match=f"{kind}: {name} does not belong to what was {other}"):
                decode(kind, CURRENT[kind].VERSION, payload)


@pytest.mark.parametrize(
    "payload", [{}, {"observed": {}}, {"observed": {}, "used": {}, "more": {}}, {"observed": [], "used": {}}]
)
def test_a_payload_has_two_parts(payload: dict[str, Any]) -> None:
    with pytest.raises(CanonicalError, match="the parts observed and used"):
        decode("move", 2, payload)


@pytest.mark.parametrize(("kind", "version"), [("teleport", 1), ("move", 3), ("move", 0), ("move", -1)])
def test_an_unknown_kind_or_version_is_refused(kind: str, version: int) -> None:
    with pytest.raises(CanonicalError, match=f"does not know {kind} version {version}"):
        decode(kind, version, encode(EXAMPLES["move"]))


def test_an_older_version_is_lifted_step_by_step(monkeypatch: pytest.MonkeyPatch) -> None:
    """Version 1 had no words, version 2 had them without a language."""

    @dataclass(frozen=True)
    class Note(Event):
        KIND: ClassVar[str] = "note"
        VERSION: ClassVar[int] = 3
        words: str
        language: str

    def to_2(payload: dict[str, Any]) -> dict[str, Any]:
        return {**payload, "observed": {"words": "nothing said"}}

    def to_3(payload: dict[str, Any]) -> dict[str, Any]:
        return {**payload, "observed": {**payload["observed"], "language": "en"}}

    monkeypatch.setattr(events, "CURRENT", {**CURRENT, "note": Note})
    upcasters = {("note", 1): to_2, ("note", 2): to_3}
    old: Mapping[str, Any] = {"observed": {}, "used": {}}
    assert decode("note", 1, old, upcasters) == Note("nothing said", "en")
    assert decode("note", 2, {"observed": {"words": "hm"}, "used": {}}, upcasters) == Note("hm", "en")
    assert decode("note", 3, encode(Note("hm", "de")), upcasters) == Note("hm", "de")
    assert old == {"observed": {}, "used": {}}


def test_an_old_level_reading_was_of_a_volume_and_by_nothing_that_was_named() -> None:
    old = json.loads(golden_file("level reading", 1).read_text(encoding="utf-8"))["body"]
    found = decode("level reading", 1, decode_body(old.encode()).payload)
    assert isinstance(found, LevelReading)
    assert (found.volume.typed, found.hot, found.marks, found.instrument, found.gauge) == ("9.2", False, (), None, None)


@pytest.mark.parametrize(
    ("least", "most", "told"),
    [(None, None, "this is needed"), (2, 1, "less than 2"), (-1, 3, "less than nothing")],
)
def test_a_result_has_one_end_at_least_and_the_lower_one_first(least: int | None, most: int | None, told: str) -> None:
    with pytest.raises(CanonicalError, match=told):
        Result("as typed", "mg/L", least, most, None)


def test_every_step_between_versions_has_its_upcaster() -> None:
    steps = {(kind, version) for kind in KINDS for version in range(1, CURRENT[kind].VERSION)}
    assert set(events.UPCASTERS) == steps


def test_what_was_observed_and_what_was_used_stand_apart() -> None:
    payload = encode(EXAMPLES["receipt"])
    assert sorted(payload["observed"]) == ["lot", "mass", "vessel", "volume"]
    assert sorted(payload["used"]) == ["recipe"]


@pytest.mark.parametrize("kind", KINDS)
def test_an_event_names_the_vessels_it_may_change(kind: str) -> None:
    event = EXAMPLES[kind]
    assert all(UUID(vessel) for vessel in event.vessels())  # no boundary among them
    assert bool(event.vessels()) is (type(event) in FOLDS or kind in ("analysis", "reading"))


def test_an_event_names_the_entry_it_speaks_of() -> None:
    about = {kind for kind in KINDS if EXAMPLES[kind].about() is not None}
    assert about == {"acceptance", "cancellation", "correction", "period reopening"}


def changed(kind: str, **others: Any) -> Any:
    """Return the example of a kind with other fields."""
    example: Any = EXAMPLES[kind]
    return type(example)(**{field.name: getattr(example, field.name) for field in fields(example)} | others)


NEW_YEAR = datetime(2027, 1, 1, tzinfo=UTC)


@pytest.mark.parametrize(
    ("build", "field"),
    [
        (lambda: Measured("-1", "g", -1), r"Measured\.base"),
        (lambda: Measured("1", "g", 1, -1), r"Measured\.sd"),
        (lambda: Figure(-1, 0, "guess"), r"Figure\.base"),
        (lambda: Figure(1, -1, "guess"), r"Figure\.sd"),
        (lambda: Share("Cu", -1, 0, "kg"), r"Share\.amount"),
        (lambda: Share("Cu", 1, -1, "kg"), r"Share\.sd"),
        (lambda: Share("Cu", 1, 0, "gal"), r"Share\.per: 'gal'"),
        (lambda: replace(copper_deposit(), valence=0), r"Deposit\.valence"),
        (lambda: replace(copper_deposit(), molar_mass="copper"), r"Deposit\.molar_mass"),
        (lambda: replace(copper_deposit(), molar_mass="NaN"), r"Deposit\.molar_mass"),
        (lambda: replace(copper_deposit(), faraday="0"), r"Deposit\.faraday"),
        (
            lambda: replace(opening("bath", Cu=grams(1)), held=opening("bath", Cu=grams(1)).held * 2),
            r"Opening\.held: Cu",
        ),
        (lambda: replace(opening("bath"), held=(Held("volume", grams(1)),)), r"Opening\.held: volume"),
        (lambda: LevelReading("bath", grams(1), "the moon", WATER), r"LevelReading\.lost_to"),
        (lambda: Count("can", None, None), r"Count\.volume or mass: this is needed"),
        (lambda: Count("can", litres(1), grams(1)), r"Count: only one of volume, mass"),
        (lambda: Move("bath", "rinse", litres(1), grams(1)), r"Move: only one of volume, mass"),
        (lambda: Sample("bath", "parts"), r"Sample\.target: 'parts'"),
        (lambda: Spill("bath", "sewer"), r"Spill\.target: 'sewer' cannot stand here"),
        (lambda: Discharge("bath", "drum"), r"Discharge\.target: 'drum'"),
        (lambda: Strip("parts", "bath", "Cu", None, None), r"Strip\.weight_before: this is needed"),
        (lambda: Strip("racks", "bath", "Cu", grams(1), None), r"Strip\.weight_after: it goes with weight_before"),
        (lambda: Racks(("bath",), "large", 0), r"Racks\.loads: 0 is not between 1 and 1000"),
        (lambda: Plating(copper_deposit(), None, "racks", None, ()), r"Plating\.rack_share: it goes with racks"),
        (lambda: changed("make-up", dissolved=()), r"MakeUp\.dissolved: 0 stand there, 2 are needed"),
        (lambda: changed("day sheet", platings=()), r"DaySheet\.platings: 0 stand there, 1 are needed"),
        (lambda: changed("day sheet", drag_out=((),)), r"DaySheet\.drag_out: 0 stand there, 2 are needed"),
        (lambda: changed("treatment", sludge=DRUM), r"Treatment\.sludge"),
        (lambda: changed("treatment", consumed=("acid", "acid")), r"Treatment\.consumed: acid"),
        (lambda: changed("treatment", consumed=("Cu",)), r"Treatment\.consumed: 'Cu' is none of free cyanide"),
        (lambda: changed("treatment", dissolved=(Dissolved("volume", litres(1)),)), r"Treatment\.dissolved: volume"),
        (lambda: changed("carbon", taken=(Held("gross mass", grams(1)),)), r"Carbon\.taken: gross mass"),
        (lambda: changed("sludge", held=(Held("gross mass", grams(1)),)), r"Sludge\.held: gross mass"),
        (lambda: Conversion("Cr", WATER, made=True), r"Conversion\.species: 'Cr'"),
        (lambda: changed("period closing", after=NEW_YEAR), r"PeriodClosing\.until"),
    ],
)
def test_figures_that_cannot_be_are_refused_by_name(build: Any, field: str) -> None:
    with pytest.raises(CanonicalError, match=field):
        build()


@pytest.mark.parametrize("kind", KINDS)
def test_the_fields_of_an_event_cannot_be_changed(kind: str) -> None:
    event = EXAMPLES[kind]
    name = fields(event)[0].name  # type: ignore[arg-type]  # every event is a dataclass
    with pytest.raises(AttributeError):
        setattr(event, name, "other")


def test_bytes_are_the_same_whatever_the_order_of_fields() -> None:
    payload = encode(EXAMPLES["run"])
    turned = {part: dict(reversed(values.items())) for part, values in reversed(payload.items())}
    assert canonical.dump(turned) == canonical.dump(payload)


def test_a_run_says_what_it_drags_out_of_each_tank() -> None:
    with pytest.raises(CanonicalError, match=r"Run\.drag_out: 0 stand there, 1 are needed"):
        Run("knobs", ("bath",), None, None, None, None, None, None, "rack", ())
