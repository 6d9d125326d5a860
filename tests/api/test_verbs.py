"""Every newer verb through both doors: what is needed, what follows, what is refused, what is answered for."""

from datetime import datetime, timedelta
from typing import Any
from uuid import uuid4

import pytest
import time_machine

from compliance.clearance.texts import SEWER, SPILL_STEPS, TREATMENT_CAUTIONS
from tests.api.conftest import GRAM, LITRE, Caller, Json, Shop, errors_of

Said = dict[str, Any]


class Line:
    """The shop with something in every vessel, and something to keep solids in."""

    def __init__(self, api: Caller, shop: Shop) -> None:
        self.api = api
        self.bath, self.rinse = str(shop.bath.uuid), str(shop.rinse.uuid)
        self.stock, self.drum, self.route = str(shop.stock.uuid), str(shop.drum.vessel.uuid), str(shop.route.uuid)
        held = [{"metal": "Cu", "amount": "50 g/L"}, {"metal": "acid", "amount": "1.2 mol/L"}]
        product = str(shop.product.uuid)
        self.say("opening", vessel=self.bath, volume="20 L", held=held, complete=True, product=product)
        self.say("opening", vessel=self.rinse, volume="10 L", complete=True)
        self.say("receipt", vessel=self.stock, amount="2 kg")
        self.kept = {
            kind: str(api.post("vessels/", {"kind": kind, "name": f"The {kind}"}).json()["uuid"])
            for kind in ("filter", "carbon", "resin", "recovery cell", "racks", "sludge")
        }

    def say(self, verb: str, **said: Json) -> Json:
        """Record, and return the entry."""
        response = self.api.record(verb, **said)
        assert response.status_code == 201, response.json()
        return response.json()

    def sentences(self) -> dict[str, Said]:
        """Return one thing that can be said of each newer verb, as short as it may be."""
        bath, rinse, kept = self.bath, self.rinse, self.kept
        return {
            "count": {"vessel": self.stock, "amount": "1.9 kg"},
            "weight-reading": {"vessel": self.stock, "mass": "1.9 kg"},
            "density-reading": {"vessel": bath, "density": "1.13 g/mL"},
            "reading": {"vessel": bath, "quantity": "temperature", "result": "24 °C"},
            "sample": {"source": bath, "amount": "20 mL"},
            "spill": {"source": rinse, "amount": "1 L"},
            "move": {"source": bath, "target": rinse, "mass": "1 kg"},
            "day-sheet": {"charges": [{"bath": bath, "charge": "8 Ah"}]},
            "dummy": {"tank": bath, "charge": "1 Ah"},
            "strip": {"tank": bath, "metal": "Cu", "weight_before": "2 g", "weight_after": "1 g"},
            "filter": {"tank": bath, "target": kept["filter"]},
            "carbon": {"tank": bath, "target": kept["carbon"], "medium": "60 g"},
            "resin": {"tank": rinse, "target": kept["resin"], "passed": "5 L"},
            "sludge": {"source": bath, "target": kept["sludge"], "mass": "1 kg"},
            "clean-out": {"tank": bath, "target": rinse, "water": "1 L"},
            "treatment": {"vessel": bath, "consumed": [{"species": "acid"}]},
        }


@pytest.fixture
def line(api: Caller, shop: Shop) -> Line:
    """Return the line."""
    return Line(api, shop)


VERBS = [
    "count", "weight-reading", "density-reading", "reading", "sample", "spill", "move", "day-sheet", "dummy", "strip",
    "filter", "carbon", "resin", "sludge", "clean-out", "treatment",
]  # fmt: skip


@pytest.mark.parametrize("verb", VERBS)
def test_a_vessel_and_one_number_are_enough_and_a_retry_writes_nothing(line: Line, now: datetime, verb: str) -> None:
    key, said = uuid4(), line.sentences()[verb]
    seen = line.api.post(f"preview/{verb}", said)
    assert seen.status_code == 200, seen.json()
    first = line.api.record(verb, key, **said)
    assert first.status_code == 201, first.json()
    assert first.json()["kind"].replace(" ", "-") == verb
    assert first.json()["verdict"] == seen.json()["verdict"]
    assert len(first.json()["postings"]) == 2 * len(seen.json()["transfers"])
    with time_machine.travel(now + timedelta(hours=2)):
        again = line.api.record(verb, key, **said)
    assert (again.status_code, again.json()) == (200, first.json())


def test_the_sentences_are_of_every_verb_here(line: Line) -> None:
    assert list(line.sentences()) == VERBS


def test_species_are_counted_in_moles(line: Line) -> None:
    bath = line.api.get(f"vessels/{line.bath}/").json()["contents"]["metals"]
    acid = next(row for row in bath if row["component"] == "acid")
    assert acid["amount"] == {"base": 24 * 10**9, "sd": 0, "unit": "nmol", "text": "24 mol"}
    assert (acid["concentration"]["unit"], acid["concentration"]["text"]) == ("nmol/L", "1.2 mol/L")


def test_a_spill_tells_its_first_steps_and_is_an_incident(line: Line) -> None:
    said = line.sentences()["spill"]
    seen = line.api.post("preview/spill", said).json()
    assert (seen["allowed"], seen["verdict"], seen["first_steps"]) == (True, "incident", list(SPILL_STEPS))
    assert line.say("spill", **said)["reasons"] == list(SPILL_STEPS)


def test_a_treatment_tells_its_cautions(line: Line) -> None:
    seen = line.api.post("preview/treatment", line.sentences()["treatment"]).json()
    assert (seen["allowed"], seen["verdict"], seen["cautions"]) == (True, "allowed", list(TREATMENT_CAUTIONS))


def test_a_discharge_needs_somebody_who_answers_for_it(line: Line) -> None:
    said = {"source": line.rinse, "volume": "1 L"}
    seen = line.api.post("preview/discharge", said).json()
    assert (seen["allowed"], seen["verdict"], seen["reasons"]) == (False, "overridden", [SEWER])
    refused = line.api.record("discharge", **said)
    assert errors_of(refused, 409)[""] == SEWER
    assert refused.json()["reasons"] == [SEWER]
    done = line.say("discharge", **said, already_happened=True)
    assert (done["verdict"], done["reasons"]) == ("overridden", [SEWER])


def test_acid_into_a_container_for_cyanide_is_refused(line: Line, shop: Shop) -> None:
    acid = str(shop.acid_stock.uuid)
    line.say("receipt", vessel=acid, amount="2 L")
    line.say("top-up", tank=line.bath, source=acid, volume="1 L")
    for verb, said in {
        "filter": {"tank": line.bath, "target": line.drum},
        "sludge": {"source": line.bath, "target": line.drum, "mass": "1 kg"},
        "clean-out": {"tank": line.bath, "target": line.drum},
        "drum-off": {"source": acid, "target": line.drum, "mass": "100 g"},
        "treatment": {"vessel": line.bath, "filtrate": line.drum},
    }.items():
        assert "hydrogen cyanide" in line.api.record(verb, **said).json()["reasons"][0], verb


WRONG: dict[str, tuple[Said, set[str]]] = {
    "count": ({"vessel": "x", "amount": "1 Ah", "sd": "much"}, {"vessel", "amount", "sd"}),
    "weight-reading": ({"vessel": str(uuid4()), "mass": "22 kg", "tare": "23 kg"}, {"vessel", "mass"}),
    "density-reading": ({"density": 1.18, "sd": None}, {"vessel", "density"}),
    "sample": ({"source": str(uuid4()), "amount": "1,500 mL"}, {"amount"}),
    "spill": ({"amount": "a lot", "target": "x"}, {"source", "amount", "target"}),
    "discharge": ({"volume": "1 kg"}, {"source", "volume"}),
    "day-sheet": (
        {"racks": [{"loads": 0}, {"route": "x", "loads": "four"}, 7], "charges": [{"charge": "1 L"}]},
        {
            "racks.0.route", "racks.0.loads", "racks.1.route", "racks.1.loads", "racks.2", "charges.0.bath",
            "charges.0.charge",
        },
    ),
    "dummy": ({"metal": "Xx", "current": "1 V"}, {"tank", "metal", "current"}),
    "strip": ({"metal": "O", "weight_after": "1"}, {"tank", "metal", "weight_after"}),
    "filter": (
        {"solution": "1 kg", "taken": [{"metal": "Qq", "amount": "1 A"}]},
        {"tank", "target", "solution", "taken.0.metal", "taken.0.amount"},
    ),
    "sludge": ({"held": [{"metal": 5}]}, {"source", "target", "mass", "held.0.metal", "held.0.amount"}),
    "treatment": (
        {"reagents": [{}], "dissolved": [{"metal": "Cu", "result": "1 g"}], "consumed": [{"species": "copper"}]},
        {"vessel", "reagents.0.stock", "reagents.0.amount", "dissolved.0.result", "consumed.0.species"},
    ),
    "correction": (
        {"entry": "x", "changes": [{"metal": "volume", "change": "much", "amount": "1 L"}]},
        {"entry", "vessel", "changes.0.change", "reason"},
    ),
}  # fmt: skip


@pytest.mark.parametrize("verb", WRONG)
def test_everything_that_is_wrong_comes_back_at_once(line: Line, verb: str) -> None:
    said, fields = WRONG[verb]
    for response in (line.api.post(f"preview/{verb}", said), line.api.record(verb, **said)):
        assert set(errors_of(response, 400)) == fields


def test_what_only_the_workshop_knows_is_refused_by_field_too(line: Line) -> None:
    inert = line.api.record("analysis", vessel=line.bath, metal="Na2SO4", result="5 g/L")
    assert "declare the substance inert" in errors_of(inert, 400)["metal"]
    line.api.post("substances/", {"name": "Glauber's salt", "formula": "Na2SO4", "inert": True})
    assert line.say("analysis", vessel=line.bath, metal="Na2SO4", result="5 g/L")["kind"] == "analysis"


def test_a_day_sheet_follows_the_racks_and_the_ampere_hours(line: Line) -> None:
    done = line.say(
        "day-sheet",
        racks=[{"route": line.route, "loads": 3}],
        charges=[{"bath": line.bath, "charge": "10 Ah"}],
    )
    parts = [row for row in done["postings"] if row["end"]["name"] == "parts"]
    copper = sum(row["amount"]["base"] for row in parts if row["component"] == "Cu")
    assert copper == pytest.approx(11.855 * GRAM, rel=1e-3)  # 1.1855 g/Ah, and what clings to the racks
    assert sum(row["amount"]["base"] for row in parts if row["component"] == "volume") == 3 * LITRE // 100
