"""May this be done? asked of every verb that brings liquids together, fills a container, spills or discharges."""

from typing import Any

import pytest
from django_scopes import scope

from chemicals.books.clearance import Clearance
from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_body
from chemicals.workshop.errors import NotPermittedError
from chemicals.workshop.models import Membership
from compliance.clearance.selectors import Answer, preview
from compliance.clearance.services import RefusedError
from compliance.clearance.texts import (
    FIRST_STEPS,
    ONLY_IN_A_LICENSED_PLAN,
    SEWER,
    SPILL_STEPS,
    TREATMENT_CAUTIONS,
)
from compliance.waste import services as waste
from compliance.waste.models import WasteContainer
from tests.process.shop import KG, Shop

Said = dict[str, Any]


def clearance_of(entry: Entry) -> Clearance:
    return read_body(entry).clearance


def ask(shop: Shop, verb: str, **said: Any) -> Answer:
    return preview(shop.member, shop.now, shop.read(verb, **said), None).answer


def close(shop: Shop, name: str) -> None:
    with scope(workshop=shop.member.workshop):
        container = WasteContainer.objects.get(vessel__name=name)
    waste.close_container(actor=shop.member, now=shop.now, container=container, gross=10 * KG)


ASTRAY: list[tuple[str, Said]] = [
    ("drum-off", {"source": "Acid", "target": "Cyanide drum"}),
    ("drum-off", {"source": "Copper", "target": "Cyanide drum", "mass": "1 kg"}),
    ("spill", {"source": "Copper", "target": "Cyanide drum", "amount": "1 L"}),
    ("filter", {"tank": "Copper", "target": "Cyanide drum"}),
    ("carbon", {"tank": "Copper", "target": "Cyanide drum", "medium": "10 g"}),
    ("resin", {"tank": "Copper", "target": "Cyanide drum", "passed": "1 L"}),
    ("sludge", {"source": "Copper", "target": "Cyanide drum", "mass": "1 kg"}),
    ("clean-out", {"tank": "Copper", "target": "Cyanide drum"}),
    ("clean-out", {"tank": "Copper", "target": "Silver rinse"}),
    ("move", {"source": "Copper rinse", "target": "Silver rinse"}),
    ("day-sheet", {"racks": [{"route": "Copper line", "loads": 1}, {"route": "Astray", "loads": 1}]}),
    ("treatment", {"vessel": "Silver rinse", "reagents": [{"stock": "Acid", "amount": "1 mL"}]}),
    ("treatment", {"vessel": "Copper rinse", "filtrate": "Silver rinse"}),
    ("treatment", {"vessel": "Copper rinse", "sludge": "Cyanide drum"}),
    (
        "treatment",
        {"vessel": "Copper rinse", "reagents": [{"stock": "Lye", "amount": "1 L"}], "filtrate": "Cyanide drum"},
    ),
]


@pytest.mark.parametrize(("verb", "said"), ASTRAY)
def test_acid_never_meets_cyanide_by_any_verb(shop: Shop, verb: str, said: Said) -> None:
    with pytest.raises(RefusedError, match="hydrogen cyanide, a gas that kills"):
        shop.record(verb, **said)
    entry = shop.record(verb, happened=True, **said)
    assert entry.verdict == "incident"
    assert set(FIRST_STEPS) <= set(clearance_of(entry).reasons)


HOME: list[tuple[str, Said]] = [
    ("drum-off", {"source": "Acid", "target": "Sour drum", "volume": "1 L"}),
    ("drum-off", {"source": "Copper", "target": "Sour drum", "mass": "1 kg"}),
    ("filter", {"tank": "Copper", "target": "Filter"}),
    ("filter", {"tank": "Silver", "target": "Cyanide drum"}),
    ("sludge", {"source": "Copper", "target": "Sludge", "mass": "1 kg"}),
    ("clean-out", {"tank": "Silver", "target": "Cyanide drum", "water": "1 L"}),
    ("day-sheet", {"racks": [{"route": "Copper line", "loads": 8}], "charges": [{"bath": "Copper", "charge": "9 Ah"}]}),
    ("dummy", {"tank": "Copper", "target": "Recovery Cell", "charge": "1 Ah"}),
    ("strip", {"tank": "Copper", "metal": "Cu", "weight_before": "2 g", "weight_after": "1 g"}),
    ("sample", {"source": "Silver", "amount": "20 mL"}),
    ("count", {"vessel": "Acid", "amount": "19 L"}),
    ("weight-reading", {"vessel": "Sour drum", "mass": "1 kg"}),
]


@pytest.mark.parametrize(("verb", "said"), HOME)
def test_what_goes_where_it_belongs_is_allowed(shop: Shop, verb: str, said: Said) -> None:
    assert clearance_of(shop.record(verb, **said)) == Clearance("allowed")


class TestWhatAMediumRemembers:
    """What was in one tank's liquid carries it into the next."""

    def test_a_filter_of_the_acid_line_is_not_used_on_the_cyanide_line(self, shop: Shop) -> None:
        shop.record("filter", days_ago=1, tank="Copper", target="Filter")
        with pytest.raises(RefusedError, match="hydrogen cyanide"):
            shop.record("filter", tank="Silver", target="Filter")

    def test_a_bath_of_which_nobody_knows_meets_its_own_filter_again_and_again(self, shop: Shop) -> None:
        shop.tank("Legacy", kind="bath")
        shop.record("opening", days_ago=2, vessel="Legacy", volume="10 L")
        assert shop.record("filter", days_ago=1, tank="Legacy", target="Filter").verdict == "allowed"
        assert shop.record("filter", tank="Legacy", target="Filter").verdict == "allowed"
        with pytest.raises(RefusedError, match="hydrogen cyanide"):
            shop.record("filter", tank="Copper", target="Filter")


class TestTreatment:
    """Arithmetic, not permission."""

    def test_shows_its_cautions_and_keeps_that_they_were_shown(self, shop: Shop) -> None:
        said: Said = {"vessel": "Copper rinse", "reagents": [{"stock": "Lye", "amount": "1 L"}], "sludge": "Sludge"}
        answer = ask(shop, "treatment", **said)
        assert (answer.allowed, answer.cautions, answer.reasons) == (True, TREATMENT_CAUTIONS, ())
        told = " ".join(answer.cautions)
        for word in ("not permission", "heats", "Gas", "water", "permit", "complexants"):
            assert word in told
        assert clearance_of(shop.record("treatment", **said)) == Clearance("allowed", TREATMENT_CAUTIONS)

    def test_cyanide_meets_an_oxidiser_in_a_licensed_plan_only(self, shop: Shop) -> None:
        said: Said = {"vessel": "Silver rinse", "reagents": [{"stock": "Bleach", "amount": "1 L"}]}
        with pytest.raises(RefusedError, match="cyanogen chloride") as refused:
            shop.record("treatment", **said)
        assert ONLY_IN_A_LICENSED_PLAN in refused.value.reasons
        assert shop.record("treatment", happened=True, **said).verdict == "incident"

    def test_reagents_meet_each_other(self, shop: Shop) -> None:
        rows = [{"stock": stock, "amount": "1 mL"} for stock in ("Acid", "Bleach")]
        answer = ask(shop, "treatment", vessel="Copper rinse", reagents=rows)
        assert any("Bleach" in reason and "Acid" in reason and "chlorine" in reason for reason in answer.dangers)
        assert ONLY_IN_A_LICENSED_PLAN not in answer.reasons


class TestSpill:
    """Nobody spills on purpose: it is recorded at once, as an incident."""

    def test_is_an_incident_with_first_steps_though_nobody_says_that_it_happened(self, shop: Shop) -> None:
        answer = ask(shop, "spill", source="Copper", amount="1 L")
        assert (answer.allowed, answer.happened, answer.first_steps) == (True, True, SPILL_STEPS)
        entry = shop.record("spill", source="Copper", amount="1 L", target="Sour drum")
        assert clearance_of(entry) == Clearance("incident", SPILL_STEPS)

    def test_out_of_a_closed_container_it_is_recorded_too(self, shop: Shop) -> None:
        shop.record("drum-off", days_ago=1, source="Copper", target="Sour drum", volume="5 L")
        close(shop, "Sour drum")
        assert shop.record("spill", source="Sour drum", amount="1 L").verdict == "incident"


class TestSewer:
    """No permit line is adopted here, so that a person answers for it."""

    def test_is_refused_until_somebody_answers_for_it(self, shop: Shop) -> None:
        with pytest.raises(RefusedError) as refused:
            shop.record("discharge", source="Copper rinse", volume="1 L")
        assert refused.value.reasons == (SEWER,)
        entry = shop.record("discharge", source="Copper rinse", volume="1 L", happened=True)
        assert clearance_of(entry) == Clearance("overridden", (SEWER,))

    def test_what_gives_gas_with_acid_is_a_danger_there(self, shop: Shop) -> None:
        answer = ask(shop, "discharge", source="Silver rinse")
        assert "Silver rinse (cyanide) may meet acid in the sewer, which gives hydrogen cyanide" in answer.dangers[0]
        assert answer.questions == (SEWER,)
        assert shop.record("discharge", source="Silver rinse", happened=True).verdict == "incident"


class TestContainers:
    """What is full takes no more; what is closed takes nothing and gives nothing."""

    FILLING: list[tuple[str, Said]] = [
        ("drum-off", {"source": "Copper", "volume": "1 L"}),
        ("filter", {"tank": "Copper"}),
        ("sludge", {"source": "Copper", "mass": "1 kg"}),
        ("clean-out", {"tank": "Copper"}),
        ("treatment", {"vessel": "Copper rinse", "filtrate": "Sour drum"}),
        ("spill", {"source": "Copper", "amount": "1 L"}),
    ]

    @pytest.mark.parametrize(("verb", "said"), FILLING)
    def test_nothing_goes_into_a_closed_one(self, shop: Shop, verb: str, said: Said) -> None:
        close(shop, "Sour drum")
        target = {} if verb == "treatment" else {"target": "Sour drum"}
        answer = ask(shop, verb, **said, **target)
        assert [reason for reason in answer.obstacles if "Sour drum is closed and weighed" in reason]
        assert answer.dangers == ()

    @pytest.mark.parametrize(
        ("verb", "said"),
        [
            ("drum-off", {"source": "Lye", "target": "Sour drum", "mass": "15.5 kg"}),
            ("drum-off", {"source": "Acid", "target": "Sour drum"}),
            ("clean-out", {"tank": "Copper", "target": "Sour drum", "water": "5 L"}),
        ],
    )
    def test_nothing_runs_over(self, shop: Shop, verb: str, said: Said) -> None:
        shop.record("drum-off", days_ago=1, source="Copper rinse", target="Sour drum", volume="6 L")
        assert "would run over" in ask(shop, verb, **said).obstacles[0]

    @pytest.mark.parametrize(
        ("verb", "said"),
        [
            ("sample", {"source": "Sour drum", "amount": "20 mL"}),
            ("move", {"source": "Sour drum", "target": "Other drum"}),
            ("sludge", {"source": "Sour drum", "target": "Sludge", "mass": "1 kg"}),
            ("treatment", {"vessel": "Sour drum", "consumed": [{"species": "acid"}]}),
            ("discharge", {"source": "Sour drum"}),
        ],
    )
    def test_nothing_comes_out_of_a_closed_one(self, shop: Shop, verb: str, said: Said) -> None:
        shop.drum("Other drum")
        shop.record("drum-off", days_ago=1, source="Copper", target="Sour drum", volume="5 L")
        assert ask(shop, verb, **said).obstacles == ()
        close(shop, "Sour drum")
        assert "Take nothing out of it" in ask(shop, verb, **said).obstacles[0]


def test_an_observer_answers_for_nothing(shop: Shop, observer: Membership) -> None:
    shop.member = observer
    with pytest.raises(NotPermittedError):
        shop.record("discharge", source="Copper rinse", volume="1 L", happened=True)
