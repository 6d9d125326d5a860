"""Waste streams and containers: put up, filled, closed, labelled."""

from datetime import datetime
from typing import Any
from uuid import uuid4

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scope

from chemicals.workshop.errors import ConflictError, InvalidInputError, NotFoundError, NotPermittedError
from chemicals.workshop.models import Membership
from compliance.clearance.services import RefusedError
from compliance.documents.selectors import read_data
from compliance.waste import services as waste
from compliance.waste.models import WasteContainer
from compliance.waste.selectors import (
    get_container_for,
    get_stream_for,
    list_containers_for,
    list_streams_for,
    read_fill,
)
from tests.process.shop import KG, L, Shop


def close(shop: Shop, drum: WasteContainer, gross: int = 12 * KG) -> WasteContainer:
    return waste.close_container(actor=shop.member, now=shop.now, container=drum, gross=gross)


def label(shop: Shop, drum: WasteContainer) -> dict[str, Any]:
    drum.refresh_from_db()
    paper = waste.issue_label(actor=shop.member, now=shop.now, key=uuid4(), container=drum)
    return read_data(paper)


def test_a_container_fills_up(shop: Shop) -> None:
    drum = shop.drum("Drum", capacity=12 * L)
    shop.record("drum-off", days_ago=2, source="Rinse", target="Drum", volume="4 L")
    with scope(workshop=shop.member.workshop):
        fill = read_fill(list_containers_for(shop.member).get())
    assert (fill.volume, fill.capacity, fill.percent) == (4 * L, 12 * L, 33)
    assert shop.holds(drum.vessel)["Cu"] == 2_000_000
    shop.record("drum-off", days_ago=1, source="Rinse", target="Drum")
    assert shop.holds(drum.vessel)["volume"] == 10 * L
    assert shop.findings() == []


def test_what_would_run_over_is_refused_before_and_recorded_after(shop: Shop) -> None:
    shop.drum("Drum", capacity=6 * L)
    shop.record("drum-off", days_ago=2, source="Rinse", target="Drum", volume="4 L")
    with pytest.raises(RefusedError, match=r"holds 4 L of at most 6 L: 3 L more would run over"):
        shop.record("drum-off", source="Rinse", target="Drum", volume="3 L")
    with pytest.raises(RefusedError, match=r"6 L more would run over"):
        shop.record("drum-off", source="Rinse", target="Drum")
    entry = shop.record("drum-off", source="Rinse", target="Drum", volume="3 L", happened=True)
    assert entry.verdict == "incident"
    shop.drum("Next", capacity=6 * L)
    shop.record("drum-off", source="Rinse", target="Next", volume="3 L")


def test_nothing_goes_into_a_closed_container(shop: Shop) -> None:
    drum = shop.drum("Drum")
    shop.record("drum-off", days_ago=2, source="Rinse", target="Drum", volume="4 L")
    close(shop, drum)
    with pytest.raises(RefusedError, match="Drum is closed and weighed"):
        shop.record("drum-off", source="Rinse", target="Drum", volume="1 L")
    late = shop.record("drum-off", days_ago=1, source="Rinse", target="Drum", volume="1 L")
    assert late.verdict == "allowed"  # it was open then, and only the record is late


def test_an_incident_without_danger_sends_nobody_out(shop: Shop) -> None:
    from chemicals.journal.selectors import read_body

    close(shop, shop.drum("Drum"))
    entry = shop.record("drum-off", source="Rinse", target="Drum", volume="1 L", happened=True)
    (reason,) = read_body(entry).clearance.reasons
    assert reason.startswith("Drum is closed and weighed")


def test_closing_keeps_the_weight_once(shop: Shop, now: datetime) -> None:
    drum = shop.drum("Drum", tare=KG)
    with pytest.raises(InvalidInputError, match="less than the empty container") as caught:
        close(shop, drum, gross=KG - 1)
    assert caught.value.errors[0].field == "gross"
    closed = close(shop, drum)
    assert (closed.gross, closed.closed_at) == (12 * KG, now)
    with pytest.raises(ConflictError, match="closed already"):
        close(shop, drum)


def test_the_label_says_what_is_inside_and_since_when(shop: Shop) -> None:
    drum = shop.drum("Drum", material="polyethylene")
    shop.record("drum-off", days_ago=2, source="Rinse", target="Drum", volume="4 L")
    said = label(shop, drum)
    assert said["container"] == {
        "code": drum.vessel.code,
        "name": "Drum",
        "material": "polyethylene",
        "volume": "4 L",
    }
    assert [(row["name"], row["amount"]) for row in said["contents"]] == [("copper (Cu)", "2 g")]
    assert (said["first_drop"], said["full"]) == ("2026-02-28", None)
    assert said["must_not_meet"]
    assert "cyanide" in " ".join(said["must_not_meet"])
    close(shop, drum)
    assert label(shop, drum)["full"] == "2026-03-02"


def test_an_empty_container_had_no_first_drop(shop: Shop) -> None:
    drum = shop.drum("Drum")
    assert label(shop, drum)["first_drop"] is None
    shop.record("opening", days_ago=3, vessel="Drum", volume="0 L", complete=True)
    assert label(shop, drum)["first_drop"] is None
    shop.record("drum-off", days_ago=1, label="drop", source="Rinse", target="Drum", volume="4 L")
    assert label(shop, drum)["first_drop"] == "2026-03-01"
    shop.record("cancellation", entry="drop", reason="It went into another drum.")
    assert label(shop, drum)["first_drop"] is None


def test_the_days_of_a_label_are_the_workshops(stranger: Membership) -> None:
    """23:30 in New York is the next day in UTC."""
    late = datetime.fromisoformat("2026-03-02T23:30:00-05:00")
    shop = Shop(stranger, late)
    shop.tank("Rinse", "10 L")
    shop.record("opening", days_ago=1, vessel="Rinse", volume="10 L", complete=True)
    drum = shop.drum("Drum")
    shop.record("drum-off", source="Rinse", target="Drum", volume="1 L")
    assert label(shop, drum)["first_drop"] == "2026-03-02"


def test_a_stream_nobody_declared_must_meet_nothing(shop: Shop) -> None:
    drum = shop.drum("Drum", reactivity=())
    assert label(shop, drum)["must_not_meet"] == ["anything: nobody declared what it reacts as"]


STREAM: dict[str, Any] = {"name": "Spent rinse", "origin": "copper plating"}


@pytest.mark.parametrize(
    ("changes", "fields"),
    [
        ({"name": " "}, {"name"}),
        ({"origin": ""}, {"origin"}),
        ({"name": "", "origin": ""}, {"name", "origin"}),
        ({"name": "x" * 81}, {"name"}),
        ({"name": "a\x07b"}, {"name"}),
        ({"origin": "one\ntwo"}, {"origin"}),
        ({"reactivity": ("water",)}, {"reactivity"}),
        ({"signal_word": "Caution"}, {"signal_word"}),
        ({"pictograms": ("GHS10",)}, {"pictograms"}),
        ({"statements": ("Harmful",)}, {"statements"}),
        ({"statements": ("H302 a\x00b",)}, {"statements"}),
    ],
)
def test_a_stream_is_refused_by_field(worker: Membership, changes: dict[str, Any], fields: set[str]) -> None:
    with pytest.raises(InvalidInputError) as caught:
        waste.create_stream(actor=worker, stream=waste.StreamInput(**(STREAM | changes)))
    assert {error.field for error in caught.value.errors} == fields
    assert list(list_streams_for(worker)) == []


def test_two_streams_have_two_names(worker: Membership) -> None:
    waste.create_stream(actor=worker, stream=waste.StreamInput(**STREAM))
    with pytest.raises(InvalidInputError, match="Choose another name"):
        waste.create_stream(actor=worker, stream=waste.StreamInput(**(STREAM | {"name": " Spent rinse "})))


@pytest.mark.parametrize(
    ("said", "field"),
    [
        ({"name": ""}, "name"),
        ({"capacity": 0}, "capacity"),
        ({"tare": -1}, "tare"),
        ({"material": "x" * 61}, "material"),
    ],
)
def test_a_container_is_refused_by_field(shop: Shop, said: dict[str, Any], field: str) -> None:
    stream = waste.create_stream(actor=shop.member, stream=waste.StreamInput(**STREAM))
    with pytest.raises(InvalidInputError) as caught:
        waste.create_container(actor=shop.member, now=shop.now, stream=stream, **({"name": "Drum"} | said))
    assert [error.field for error in caught.value.errors] == [field]
    with scope(workshop=shop.member.workshop):
        assert not WasteContainer.objects.exists()


def test_observers_and_strangers(shop: Shop, observer: Membership, stranger: Membership) -> None:
    drum = shop.drum("Drum")
    for member, error in ((observer, NotPermittedError), (stranger, NotPermittedError)):
        with pytest.raises(error):
            waste.create_container(actor=member, now=shop.now, name="x", stream=drum.stream)
        with pytest.raises(error):
            waste.close_container(actor=member, now=shop.now, container=drum, gross=1)
        with pytest.raises(error):
            waste.issue_label(actor=member, now=shop.now, key=uuid4(), container=drum)
    assert get_container_for(observer, drum.vessel.uuid) == drum
    with pytest.raises(NotFoundError):
        get_container_for(stranger, drum.vessel.uuid)
    with pytest.raises(NotFoundError):
        get_stream_for(stranger, drum.stream.uuid)


def test_lists_ask_twice_whatever_their_length(shop: Shop) -> None:
    counts: list[int] = []
    for name in ("One", "Two", "Three"):
        shop.drum(name)
        with CaptureQueriesContext(connection) as queries, scope(workshop=shop.member.workshop):
            assert [read_fill(row).volume for row in list_containers_for(shop.member)] == [0] * (len(counts) + 1)
        counts.append(len(queries))
    assert counts == [2, 2, 2]
