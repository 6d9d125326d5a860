"""Vessels' ledgers, differences between two moments, closed periods, and how far the books have come."""

from uuid import uuid4

import pytest

from chemicals.jobs.models import Job
from chemicals.ledger import late, running
from chemicals.workshop.models import Membership
from tests.api.conftest import GRAM, LITRE, Caller, Shop, errors_of
from tests.api.test_access import Call
from tests.api.test_balance import plate


def test_each_line_of_a_ledger_is_the_one_before_and_what_came_and_went(api: Caller, shop: Shop) -> None:
    plate(api, shop)
    said = api.get(f"vessels/{shop.bath.uuid}/ledger/", {"component": "Cu"}).json()
    assert (said["vessel"]["name"], said["component"], said["page"], said["pages"]) == ("Copper bath", "Cu", 1, 1)
    assert [line["kind"] for line in said["lines"]] == ["opening", "run"]
    held = said["before"]["booked"]["base"]
    for line in said["lines"]:
        held += sum(movement["amount"]["base"] for movement in line["movements"])
        assert line["held"]["amount"]["base"] == line["held"]["booked"]["base"] == held
    assert said["after"]["amount"]["base"] == said["closing"]["amount"]["base"] == held
    assert said["opening"]["amount"]["base"] + said["came"]["base"] - said["went"]["base"] == held
    first, run = said["lines"]
    assert first["movements"][0]["end"] == {"vessel": None, "name": "opening"}
    assert first["held"]["concentration"]["text"] == "50 g/L"
    assert {move["end"]["name"] for move in run["movements"]} == {"parts", "Drag-out rinse"}
    assert {move["basis"] for move in run["movements"]} == {"observed", "assumed"}


def test_a_ledger_shows_what_the_vessel_holds_most_of_unless_something_else_is_asked(api: Caller, shop: Shop) -> None:
    plate(api, shop)
    assert api.get(f"vessels/{shop.bath.uuid}/ledger/").json()["component"] == "Cu"
    volume = api.get(f"vessels/{shop.bath.uuid}/ledger/", {"component": "volume"}).json()
    assert volume["lines"][0]["held"]["amount"] == {"base": 20 * LITRE, "sd": 0, "unit": "nL", "text": "20 L"}
    assert volume["lines"][0]["held"]["concentration"]["base"] is None
    assert errors_of(api.get(f"vessels/{shop.bath.uuid}/ledger/", {"component": "Au"}), 404)


def test_a_ledger_has_days_and_pages(api: Caller, shop: Shop, monkeypatch: pytest.MonkeyPatch) -> None:
    plate(api, shop)
    monkeypatch.setattr(running, "LINES", 1)
    address = f"vessels/{shop.bath.uuid}/ledger/"
    last = api.get(address, {"page": "2"}).json()
    assert ([line["kind"] for line in last["lines"]], last["page"], last["pages"]) == (["run"], 2, 2)
    january = api.get(address, {"start": "2026-01-01", "end": "2026-01-31"}).json()
    assert [line["kind"] for line in january["lines"]] == ["opening"]
    assert set(errors_of(api.get(address, {"start": "2026-02-02", "end": "2026-02-01"}), 400)) == {"end"}
    assert set(errors_of(api.get(address, {"page": "0", "start": "soon"}), 400)) == {"page", "start"}


def test_a_difference_is_explained_to_the_unit(api: Caller, shop: Shop) -> None:
    plate(api, shop)
    said = api.get("differences/", {"start": "2026-01-31", "end": "2026-02-28"}).json()
    assert [each["component"] for each in said["differences"]] == ["Cu", "volume", "gross mass"]
    for each in said["differences"]:
        explained = sum(row["amount"]["base"] for row in each["explained"])
        assert explained == each["value"]["base"] == each["booked"]["base"]
        assert each["before"]["base"] + explained == each["after"]["base"]
        assert sum(row["value"]["base"] for row in each["vessels"]) == explained
    copper = said["differences"][0]
    assert copper["before"]["base"] == 1000 * GRAM
    assert {(row["boundary"], row["kind"]) for row in copper["explained"]} == {("parts", "run")}
    assert [row["unit"] for row in (said["differences"][1]["value"], copper["value"])] == ["nL", "ug"]
    one = api.get("differences/", {"component": "volume"}).json()["differences"]
    assert [each["component"] for each in one] == ["volume"]
    assert errors_of(api.get("differences/", {"component": "Au"}), 404)


def test_what_is_unknown_is_null_and_a_word(api: Caller, shop: Shop) -> None:
    api.record("opening", vessel=str(shop.drum.vessel.uuid), volume="5 L", occurred_at="2026-02-01")
    plate(api, shop)
    copper = api.get("differences/", {"component": "Cu"}).json()["differences"][0]
    assert (copper["value"]["base"], copper["value"]["text"]) == (None, "unknown")
    assert copper["booked"]["base"] > 0
    ledger = api.get(f"vessels/{shop.drum.vessel.uuid}/ledger/", {"component": "Cu"}).json()
    assert ledger["closing"]["amount"]["base"] is None
    assert ledger["closing"]["booked"]["base"] == 0


def test_an_owner_closes_a_period_and_opens_it_again(api: Caller, shop: Shop) -> None:
    plate(api, shop)
    key = uuid4()
    closed = api.post("periods/", {"until": "2026-02-01"}, key=key)
    assert closed.status_code == 201
    period = closed.json()
    assert (period["after"], period["until"], period["sequence"]) == (None, "2026-01-31T23:00:00Z", 3)
    assert (period["closed_by"]["name"], period["reopened_by"]) == ("Olga", None)
    assert api.post("periods/", {"until": "2026-02-01"}, key=key).json() == period
    whole = api.get(f"periods/{period['uuid']}/").json()
    assert {key: whole[key] for key in period} == period
    held = {(row["vessel"]["name"], row["component"]): row["amount"]["text"] for row in whole["holdings"]}
    assert held["Copper bath", "Cu"] == "1 kg"
    assert api.get("books/").json()["closed_until"] == "2026-01-31T23:00:00Z"
    early = api.record("level-reading", vessel=str(shop.bath.uuid), volume="19 L", occurred_at="2026-01-20")
    assert "The books are closed" in errors_of(early, 400)["occurred_at"]
    opened = api.post(f"periods/{period['uuid']}/reopen", {"reason": "A drum was forgotten."}, key=uuid4())
    assert opened.status_code == 200
    assert opened.json()["reopened_by"] is not None
    assert api.get("periods/").json()["results"] == [opened.json()]
    assert api.get("books/").json()["closed_until"] is None


def test_what_cannot_be_closed_or_opened_is_named(api: Caller, shop: Shop) -> None:
    plate(api, shop)
    assert set(errors_of(api.post("periods/", {"until": "2026-02-01"}), 400)) == {"Idempotency-Key"}
    assert "future" in errors_of(api.post("periods/", {"until": "2026-03-09"}, key=uuid4()), 400)["until"]
    period = api.post("periods/", {"until": "2026-02-01"}, key=uuid4()).json()
    assert "already" in errors_of(api.post("periods/", {"until": "2026-01-20"}, key=uuid4()), 400)["until"]
    assert set(errors_of(api.post(f"periods/{period['uuid']}/reopen", {}, key=uuid4()), 400)) == {"reason"}
    assert errors_of(api.get(f"periods/{uuid4()}/"), 404)


def test_closing_and_opening_is_the_owners(api: Caller, call: Call, worker: Membership, shop: Shop) -> None:
    plate(api, shop)
    wim = call(worker)
    assert "Only an owner" in errors_of(wim.post("periods/", {"until": "2026-02-01"}, key=uuid4()), 403)[""]
    period = api.post("periods/", {"until": "2026-02-01"}, key=uuid4()).json()
    answer = wim.post(f"periods/{period['uuid']}/reopen", {"reason": "Because."}, key=uuid4())
    assert "Only an owner" in errors_of(answer, 403)[""]
    assert wim.get("periods/").json()["results"] == [period]


def test_while_a_late_entry_is_worked_in_every_answer_says_so(
    api: Caller, shop: Shop, monkeypatch: pytest.MonkeyPatch
) -> None:
    plate(api, shop)
    nothing = {"stands_to": None, "done": 0, "total": 0, "failed": False, "closed_until": None}
    assert api.get("books/").json() == nothing
    monkeypatch.setattr(late, "LATE_LIMIT", 0)
    api.record("level-reading", vessel=str(shop.bath.uuid), volume="19.9 L", occurred_at="2026-01-20")
    Job.objects.update(progress_done=1, progress_total=3)
    stands = "2026-01-20T11:00:00Z"
    assert api.get("books/").json() == nothing | {"stands_to": stands, "done": 1, "total": 3}
    bath = f"vessels/{shop.bath.uuid}/"
    for address in (bath, f"{bath}ledger/", "differences/", "balances/Cu/"):
        assert api.get(address).json()["stands_to"] == stands
    behind = api.post("periods/", {"until": "2026-02-01"}, key=uuid4())
    assert "being recomputed" in errors_of(behind, 409)[""]
