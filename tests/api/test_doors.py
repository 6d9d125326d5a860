"""The two doors: preview writes nothing, record writes once; amounts are echoed, nothing is guessed."""

from datetime import UTC, datetime, timedelta
from uuid import uuid4

import pytest
import time_machine
from django_scopes import scopes_disabled

from chemicals.journal.models import Entry
from chemicals.process.fields import describe
from chemicals.process.inputs import INPUTS
from tests.api.conftest import Caller, Shop, errors_of


def count_entries() -> int:
    """Return how many entries there are."""
    with scopes_disabled():
        return Entry.objects.count()


def open_bath(api: Caller, shop: Shop) -> None:
    """Start counting the bath and the rinse."""
    held = [{"metal": "Cu", "amount": "50 g/L"}]
    bath = api.record("opening", vessel=str(shop.bath.uuid), volume="20 L", held=held, complete=True)
    rinse = api.record("opening", vessel=str(shop.rinse.uuid), volume="20 L", complete=True)
    assert (bath.status_code, rinse.status_code) == (201, 201)


def test_every_verb_has_both_doors(api: Caller, shop: Shop) -> None:
    for verb, asked in INPUTS.items():
        wrong = {"wrong", *(name for name, kind in describe(asked) if kind.required)}
        assert set(errors_of(api.post(f"preview/{verb}", {"wrong": 1}), 400)) == wrong
        assert set(errors_of(api.post(f"record/{verb}", {"wrong": 1}, key=uuid4()), 400)) == wrong


def test_a_preview_says_what_would_follow_and_writes_nothing(api: Caller, shop: Shop) -> None:
    held = [{"metal": "Cu", "amount": "50 g/L"}, {"metal": "Ni", "amount": "2 g"}]
    response = api.post("preview/opening", {"vessel": str(shop.bath.uuid), "volume": "2.5 gal", "held": held})
    said = response.json()
    assert response.status_code == 200
    assert (said["allowed"], said["reasons"], said["occurred_at"]) == (True, [], None)
    assert said["echo"] == [
        {"field": "volume", "typed": "2.5 gal", "understood": "2.5 gal = 9.464 L"},
        {"field": "held.0.amount", "typed": "50 g/L", "understood": "50 g/L"},
        {"field": "held.1.amount", "typed": "2 g", "understood": "2 g"},
    ]
    volume = next(row for row in said["transfers"] if row["component"] == "volume")
    assert volume["amount"] == {"base": 9_463_529_460, "sd": 0, "unit": "nL", "text": "9.464 L"}
    assert volume["source"] == {"vessel": None, "name": "opening"}
    assert volume["target"] == {"vessel": str(shop.bath.uuid), "name": "Copper bath"}
    assert said["payload"]["observed"]["volume"]["typed"] == "2.5 gal"
    assert count_entries() == 0


def test_a_preview_tells_findings_by_code_and_in_words(api: Caller, shop: Shop) -> None:
    said = api.post("preview/move", {"source": str(shop.bath.uuid), "target": str(shop.rinse.uuid), "volume": "5 L"})
    findings = said.json()["findings"]
    assert {row["code"] for row in findings} >= {"unknown-level", "negative-content"}
    assert all(row["message"].endswith(".") for row in findings)


def test_a_vessel_shows_its_findings_with_their_entries(api: Caller, shop: Shop) -> None:
    moved = api.record("move", source=str(shop.bath.uuid), target=str(shop.rinse.uuid), volume="5 L").json()
    findings = api.get(f"vessels/{shop.rinse.uuid}/").json()["findings"]
    assert {row["code"] for row in findings} >= {"unknown-level"}
    assert {row["entry"] for row in findings} == {moved["uuid"]}
    assert {row["source"]["name"] for row in findings} == {"Copper bath"}
    assert api.get(f"vessels/{shop.stock.uuid}/").json()["findings"] == []


def test_a_record_answers_with_the_entry(api: Caller, shop: Shop) -> None:
    open_bath(api, shop)
    key = uuid4()
    response = api.record("run", key, route=str(shop.route.uuid), current="0.44 A", time="4 h", parts="bracket")
    said = response.json()
    assert response.status_code == 201
    assert (said["uuid"], said["sequence"], said["kind"], said["verdict"]) == (str(key), 3, "run", "allowed")
    assert said["recorded_by"]["name"] == "Olga"
    plated = [row for row in said["postings"] if row["end"]["name"] == "parts" and row["component"] == "Cu"]
    assert plated[0]["amount"]["text"].endswith(" g")
    assert api.get(f"entries/{key}/").json() == said
    previous = api.get("entries/").json()["results"][1]
    assert said["previous_hash"] == previous["hash"]


def test_a_bath_holds_what_was_recorded(api: Caller, shop: Shop) -> None:
    open_bath(api, shop)
    contents = api.get(f"vessels/{shop.bath.uuid}/").json()["contents"]
    assert contents["volume"]["amount"]["text"] == "20 L"
    assert contents["metals"][0]["component"] == "Cu"
    assert contents["metals"][0]["amount"]["base"] == 1_000_000_000
    assert contents["metals"][0]["concentration"]["text"] == "50 g/L"
    assert contents["incomplete"] is False
    with_no_list = api.record("opening", vessel=str(shop.stock.uuid), mass="1 kg")
    assert with_no_list.status_code == 201
    assert api.get(f"vessels/{shop.bath.uuid}/").json()["findings"] == []
    assert api.get(f"vessels/{shop.stock.uuid}/").json()["contents"]["incomplete"] is True


@pytest.mark.parametrize("amount", ["1,500 L", "1.500,5 L", "1 500 L", "20", "20 kg", "", "about 20 L"])
def test_an_amount_that_can_be_misread_is_refused(api: Caller, shop: Shop, amount: str) -> None:
    response = api.record("level-reading", vessel=str(shop.bath.uuid), volume=amount)
    assert any(word in errors_of(response, 400)["volume"] for word in ("write", "for example"))
    assert count_entries() == 0


def test_the_refusal_of_an_ambiguous_number_names_both_readings(api: Caller, shop: Shop) -> None:
    response = api.record("level-reading", vessel=str(shop.bath.uuid), volume="1,500 L")
    assert errors_of(response, 400)["volume"] == '"1,500" is ambiguous: write 1500 or 1.5.'


@pytest.mark.parametrize("amount", [20, 19.2, True, ["20 L"], {"value": 20}])
def test_an_amount_is_a_text_never_a_bare_number(api: Caller, shop: Shop, amount: object) -> None:
    response = api.record("level-reading", vessel=str(shop.bath.uuid), volume=amount)
    assert errors_of(response, 400)["volume"] == 'Write number and unit as one text, for example "19.2 L".'


def test_everything_that_is_wrong_comes_back_at_once(api: Caller, shop: Shop) -> None:
    held = [{"metal": "Cu", "amount": "50 A"}, {"metal": "Xx"}, "no row"]
    response = api.record(
        "opening", vessel="no uuid", volume="1,5 L", held=held, colour="blue", occurred_at="yesterday"
    )
    assert set(errors_of(response, 400)) == {
        "colour", "vessel", "volume", "held.0.amount", "held.1.metal", "held.1.amount", "held.2", "occurred_at",
    }  # fmt: skip


def test_what_the_domain_refuses_is_named_in_the_same_way(api: Caller, shop: Shop) -> None:
    held = [{"metal": "Cu", "amount": "50 g/L"}]
    response = api.record("opening", vessel=str(uuid4()), mass="1 kg", held=held)
    assert set(errors_of(response, 400)) == {"vessel", "held.0.amount"}


def test_a_record_needs_a_key(api: Caller, shop: Shop) -> None:
    missing = api.post("record/opening", {"vessel": str(shop.bath.uuid), "volume": "20 L"})
    assert "fresh uuid" in errors_of(missing, 400)["Idempotency-Key"]
    wrong = api.post("record/opening", {"vessel": str(shop.bath.uuid), "volume": "20 L"}, key="again")
    assert "Idempotency-Key" in errors_of(wrong, 400)
    assert count_entries() == 0


def test_the_same_key_and_content_is_written_once(api: Caller, shop: Shop) -> None:
    key = uuid4()
    first = api.record("opening", key, vessel=str(shop.bath.uuid), volume="20 L")
    again = api.record("opening", key, vessel=str(shop.bath.uuid), volume="20 L")
    assert (first.status_code, again.status_code) == (201, 200)
    assert first.json() == again.json()
    other = api.record("opening", key, vessel=str(shop.bath.uuid), volume="21 L")
    assert "This key was used for another record" in errors_of(other, 409)[""]
    assert count_entries() == 1


def test_what_must_never_meet_is_refused_with_its_reasons(api: Caller, shop: Shop) -> None:
    api.record("receipt", vessel=str(shop.acid_stock.uuid), amount="5 L")
    api.record("make-up", tank=str(shop.bath.uuid), ingredients=[{"stock": str(shop.acid_stock.uuid), "amount": "1 L"}])
    pour = {"source": str(shop.bath.uuid), "target": str(shop.drum.vessel.uuid)}
    seen = api.post("preview/drum-off", pour).json()
    assert seen["allowed"] is False
    assert "hydrogen cyanide" in seen["reasons"][0]
    refused = api.record("drum-off", **pour)
    assert "hydrogen cyanide" in errors_of(refused, 409)[""]
    assert refused.json()["reasons"] == seen["reasons"]
    assert count_entries() == 2


def test_what_has_happened_is_recorded_as_an_incident(api: Caller, shop: Shop) -> None:
    api.record("receipt", vessel=str(shop.acid_stock.uuid), amount="5 L")
    api.record("make-up", tank=str(shop.bath.uuid), ingredients=[{"stock": str(shop.acid_stock.uuid), "amount": "1 L"}])
    response = api.record(
        "drum-off", source=str(shop.bath.uuid), target=str(shop.drum.vessel.uuid), already_happened=True
    )
    assert response.status_code == 201
    assert response.json()["verdict"] == "incident"
    assert any("Everyone out" in reason for reason in response.json()["reasons"])


def test_a_day_stands_at_noon_of_the_workshop(api: Caller, shop: Shop) -> None:
    response = api.record("opening", vessel=str(shop.bath.uuid), volume="20 L", occurred_at="2026-01-15")
    assert (response.json()["occurred_at"], response.json()["precision"]) == ("2026-01-15T11:00:00Z", "day")


def test_a_moment_comes_with_its_offset(api: Caller, shop: Shop) -> None:
    said = {"vessel": str(shop.bath.uuid), "volume": "20 L"}
    response = api.record("opening", **said, occurred_at="2026-01-15T14:30+01:00")
    assert (response.json()["occurred_at"], response.json()["precision"]) == ("2026-01-15T13:30:00Z", "minute")
    naive = api.record("opening", **said, occurred_at="2026-01-15T14:30")
    assert "offset" in errors_of(naive, 400)["occurred_at"]
    ahead = api.record("opening", **said, occurred_at="2999-01-15T14:30Z")
    assert "future" in errors_of(ahead, 400)["occurred_at"]


@pytest.mark.parametrize(
    "when", ["0001-01-01", "0001-01-01T00:00+14:00", "9999-12-31", "2026-02-30", 20260115, "20260115"]
)
def test_times_that_cannot_be_are_refused(api: Caller, shop: Shop, when: object) -> None:
    response = api.record("opening", vessel=str(shop.bath.uuid), volume="20 L", occurred_at=when)
    assert "occurred_at" in errors_of(response, 400)


def test_without_a_time_it_happened_now(api: Caller, shop: Shop) -> None:
    before = datetime.now(UTC)
    said = api.record("opening", vessel=str(shop.bath.uuid), volume="20 L").json()
    assert before <= datetime.fromisoformat(said["occurred_at"]) <= datetime.now(UTC)


def test_null_is_the_same_as_left_out(api: Caller, shop: Shop) -> None:
    response = api.record(
        "opening", vessel=str(shop.bath.uuid), volume="20 L", mass=None, held=None, product=None, complete=None,
        occurred_at=None, already_happened=None, attachments=None,
    )  # fmt: skip
    assert response.status_code == 201
    assert response.json()["payload"]["observed"]["complete"] is False


def test_files_go_with_the_entry_if_they_were_uploaded(api: Caller, shop: Shop) -> None:
    said = {"vessel": str(shop.bath.uuid), "volume": "20 L", "attachments": ["ab" * 32]}
    assert "Upload it first" in errors_of(api.record("opening", **said), 400)["attachments"]


def test_an_entry_is_cancelled_once(api: Caller, shop: Shop) -> None:
    first = api.record("opening", vessel=str(shop.bath.uuid), volume="20 L").json()
    cancelled = api.record("cancellation", entry=first["uuid"], reason="wrong tank")
    assert cancelled.json()["about"] == first["uuid"]
    now = api.get(f"entries/{first['uuid']}/").json()
    assert (now["cancelled"], now["postings"]) == (True, [])
    again = api.record("cancellation", entry=first["uuid"], reason="wrong tank")
    assert "cancelled already" in errors_of(again, 409)[""]


def test_an_analysis_is_accepted(api: Caller, shop: Shop) -> None:
    open_bath(api, shop)
    said = {"metal": "Cu", "result": "200 g/L", "sd": "2 g/L", "expressed_as": "CuSO4.5H2O"}
    analysis = api.record("analysis", vessel=str(shop.bath.uuid), **said)
    assert analysis.json()["postings"] == []
    accepted = api.record("acceptance", analysis=analysis.json()["uuid"])
    assert accepted.status_code == 201
    metals = api.get(f"vessels/{shop.bath.uuid}/").json()["contents"]["metals"]
    assert metals[0]["concentration"]["text"] == "50.9 g/L"


def test_a_retry_gets_its_entry_even_if_the_same_would_be_refused_by_now(api: Caller, shop: Shop) -> None:
    open_bath(api, shop)
    key, pour = uuid4(), {"source": str(shop.rinse.uuid), "target": str(shop.drum.vessel.uuid), "volume": "1 L"}
    first = api.record("drum-off", key, **pour)
    assert first.status_code == 201
    api.record("receipt", vessel=str(shop.acid_stock.uuid), amount="5 L")
    sour = api.record("top-up", tank=str(shop.rinse.uuid), source=str(shop.acid_stock.uuid), volume="1 L")
    assert sour.status_code == 201
    assert api.record("drum-off", **pour).status_code == 409
    again = api.record("drum-off", key, **pour)
    assert (again.status_code, again.json()["uuid"]) == (200, str(key))


@pytest.mark.parametrize("verb", ["opening", "level-reading", "analysis", "run", "top-up", "drum-off", "move"])
def test_every_verb_can_be_retried_later(api: Caller, shop: Shop, now: datetime, verb: str) -> None:
    open_bath(api, shop)
    bath, rinse = str(shop.bath.uuid), str(shop.rinse.uuid)
    said = {
        "opening": {"vessel": str(shop.stock.uuid), "mass": "1 kg", "product": str(shop.product.uuid)},
        "level-reading": {"vessel": bath, "volume": "19 L"},
        "analysis": {"vessel": bath, "metal": "Cu", "result": "51 g/L"},
        "run": {"route": str(shop.route.uuid), "current_density": "1 A/dm2", "time": "1 h"},
        "top-up": {"tank": bath},
        "drum-off": {"source": rinse, "target": str(shop.drum.vessel.uuid)},
        "move": {"source": rinse, "target": bath, "volume": "1 L"},
    }[verb]
    key = uuid4()
    first = api.record(verb, key, **said)
    with time_machine.travel(now + timedelta(hours=3)):
        again = api.record(verb, key, **said)
    assert (first.status_code, again.status_code) == (201, 200)
    assert again.json() == first.json()
