"""What must never meet: told from what was poured in, wherever it came from."""

from datetime import datetime, timedelta
from uuid import uuid4

import pytest

from chemicals.journal.selectors import read_body
from chemicals.ledger.models import Vessel, VesselKind
from chemicals.ledger.services import create_vessel
from chemicals.process.inputs import (
    HeldRow,
    IngredientRow,
    Input,
    LevelInput,
    MakeUpInput,
    MoveInput,
    OpeningInput,
    ReceiptInput,
    RunInput,
    TopUpInput,
)
from chemicals.process.setup import TankInput, create_rack_type, create_route, create_tank
from chemicals.register.services import RevisionInput, create_product
from chemicals.science.quantity import parse
from chemicals.workshop.errors import InvalidInputError
from chemicals.workshop.models import Membership
from compliance.clearance.selectors import preview
from compliance.clearance.services import RefusedError, record


class Bench:
    """A worker at the bench: sets up vessels and pours."""

    def __init__(self, owner: Membership, now: datetime) -> None:
        self.owner, self.now = owner, now

    def bottle(self, name: str, *reacts_as: str) -> Vessel:
        """Buy a litre of a product that reacts as told."""
        revision = RevisionInput(form="liquid", density="1 g/mL", reactivity=reacts_as)
        product = create_product(actor=self.owner, now=self.now, name=name, supplier="", revision=revision).product
        vessel = create_vessel(
            actor=self.owner, now=self.now, kind=VesselKind.STOCK, name=f"{name} bottle", product=product
        )
        self.pour(ReceiptInput(vessel=vessel.uuid, amount=parse("1 L", "volume")))
        return vessel

    def tank(self, name: str, kind: str = "rinse") -> Vessel:
        """Put up a tank that holds nothing yet."""
        return create_tank(actor=self.owner, now=self.now, tank=TankInput(kind=kind, name=name)).vessel

    def water(self, name: str) -> Vessel:
        """Put up a tank of water."""
        vessel = self.tank(name)
        self.pour(MakeUpInput(tank=vessel.uuid, level=parse("10 L", "volume")))
        return vessel

    def pour(self, data: Input, *, already_happened: bool = False) -> str:
        """Record, and return the verdict that the journal keeps."""
        self.now += timedelta(minutes=1)
        done = record(actor=self.owner, now=self.now, key=uuid4(), data=data, already_happened=already_happened)
        return read_body(done.entry).clearance.verdict

    def made_from(self, name: str, stock: Vessel) -> Vessel:
        """Put up a tank of water with a little of a stock in it."""
        vessel = self.water(name)
        self.pour(TopUpInput(tank=vessel.uuid, source=stock.uuid, volume=parse("100 mL", "volume")))
        return vessel


@pytest.fixture
def bench(owner: Membership, now: datetime) -> Bench:
    """Return a bench in the workshop."""
    return Bench(owner, now)


@pytest.mark.parametrize(
    ("one", "other", "danger"),
    [
        ("acid", "cyanide", "hydrogen cyanide"),
        ("hypochlorite", "acid", "chlorine"),
        ("hypochlorite", "ammonia", "chloramines"),
        ("oxidiser", "cyanide", "cyanogen chloride"),
        ("sulfide", "acid", "hydrogen sulfide"),
        ("sulfite", "acid", "sulfur dioxide"),
        ("fluoride", "acid", "hydrogen fluoride"),
        ("nitric or chromic acid", "organic", "fire"),
        ("ammonia", "silver or gold", "explodes"),
        ("unknown", "cyanide", "hydrogen cyanide"),
    ],
)
def test_what_must_never_meet_is_refused_either_way_round_and_the_danger_named(
    bench: Bench, one: str, other: str, danger: str
) -> None:
    left, right = bench.bottle("Left", one), bench.bottle("Right", other)
    tank = bench.made_from("Tank", left)
    with pytest.raises(RefusedError, match=danger):
        bench.pour(TopUpInput(tank=tank.uuid, source=right.uuid, volume=parse("1 mL", "volume")))
    both = (IngredientRow(stock=right.uuid, amount=parse("1 mL", "volume")),)
    with pytest.raises(RefusedError, match=danger):
        bench.pour(MakeUpInput(tank=tank.uuid, ingredients=both))


def test_two_ingredients_of_one_make_up_meet_each_other(bench: Bench) -> None:
    acid, cyanide = bench.bottle("Acid", "acid"), bench.bottle("Cyanide", "cyanide")
    rows = tuple(IngredientRow(stock=stock.uuid, amount=parse("1 mL", "volume")) for stock in (acid, cyanide))
    with pytest.raises(RefusedError, match="hydrogen cyanide"):
        bench.pour(MakeUpInput(tank=bench.tank("Bath", "bath").uuid, ingredients=rows))


def test_what_was_diluted_away_is_still_remembered(bench: Bench) -> None:
    cyanide, acid = bench.bottle("Cyanide", "cyanide"), bench.bottle("Acid", "acid")
    first, second, third = bench.made_from("First", cyanide), bench.water("Second"), bench.water("Third")
    for source, target in ((first, second), (second, third)):
        bench.pour(MoveInput(source=source.uuid, target=target.uuid, volume=parse("1 mL", "volume")))
    with pytest.raises(RefusedError, match="hydrogen cyanide"):
        bench.pour(TopUpInput(tank=third.uuid, source=acid.uuid, volume=parse("1 mL", "volume")))


def test_an_emptied_tank_remembers_nothing(bench: Bench) -> None:
    tank, acid = bench.made_from("Tank", bench.bottle("Cyanide", "cyanide")), bench.bottle("Acid", "acid")
    bench.pour(MoveInput(source=tank.uuid, target=bench.tank("Elsewhere").uuid))
    assert bench.pour(TopUpInput(tank=tank.uuid, source=acid.uuid, volume=parse("1 mL", "volume"))) == "allowed"


def test_opening_a_tank_anew_does_not_empty_it(bench: Bench) -> None:
    tank, acid = bench.made_from("Tank", bench.bottle("Cyanide", "cyanide")), bench.bottle("Acid", "acid")
    bench.pour(OpeningInput(vessel=tank.uuid, volume=parse("9 L", "volume"), complete=True))
    with pytest.raises(RefusedError, match="hydrogen cyanide"):
        bench.pour(TopUpInput(tank=tank.uuid, source=acid.uuid, volume=parse("1 mL", "volume")))


def test_a_load_drags_one_bath_into_the_next(bench: Bench, owner: Membership) -> None:
    acid, cyanide = bench.bottle("Acid", "acid"), bench.bottle("Cyanide", "cyanide")
    baths = [bench.made_from("Acid bath", acid), bench.water("Rinse"), bench.made_from("Cyanide bath", cyanide)]
    rack = create_rack_type(actor=owner, name="rack", drag_out=1_000_000)
    through_water = create_route(actor=owner, name="rinsed", rack=rack, vessels=baths[:2])
    straight = create_route(actor=owner, name="not rinsed", rack=rack, vessels=[baths[0], baths[2]])
    assert bench.pour(RunInput(route=through_water.uuid)) == "allowed"
    with pytest.raises(RefusedError, match="hydrogen cyanide"):
        bench.pour(RunInput(route=straight.uuid))


class TestUnknownLiquid:
    """What nobody can name counts as an acid and as a cyanide."""

    def test_meets_neither_acid_nor_cyanide(self, bench: Bench) -> None:
        drum = bench.tank("Legacy")
        bench.pour(OpeningInput(vessel=drum.uuid, volume=parse("5 L", "volume")))
        for kind in ("acid", "cyanide"):
            stock = bench.bottle(kind.title(), kind)
            with pytest.raises(RefusedError, match="hydrogen cyanide"):
                bench.pour(TopUpInput(tank=drum.uuid, source=stock.uuid, volume=parse("1 mL", "volume")))

    def test_keeps_its_mark_when_it_is_poured_into_something_known(self, bench: Bench) -> None:
        legacy, acid = bench.tank("Legacy"), bench.bottle("Brightener")
        bench.pour(OpeningInput(vessel=legacy.uuid, volume=parse("5 L", "volume")))
        known = bench.water("Known")
        bench.pour(MoveInput(source=legacy.uuid, target=known.uuid, volume=parse("1 L", "volume")))
        bench.pour(TopUpInput(tank=known.uuid, source=acid.uuid, volume=parse("1 mL", "volume")), already_happened=True)
        with pytest.raises(RefusedError, match="hydrogen cyanide"):
            bench.pour(
                TopUpInput(tank=known.uuid, source=bench.bottle("Acid", "acid").uuid, volume=parse("1 mL", "volume"))
            )

    def test_may_go_through_its_own_rinse_again_and_again(self, bench: Bench, owner: Membership) -> None:
        bath, rinse = bench.tank("Old bath", "bath"), bench.water("Its rinse")
        copper = HeldRow(metal="Cu", amount=parse("50 g/L", "concentration"))
        bench.pour(OpeningInput(vessel=bath.uuid, volume=parse("20 L", "volume"), held=(copper,), complete=True))
        rack = create_rack_type(actor=owner, name="rack", drag_out=1_000_000)
        route = create_route(actor=owner, name="route", rack=rack, vessels=[bath, rinse])
        assert [bench.pour(RunInput(route=route.uuid)) for _ in range(3)] == ["allowed"] * 3
        assert bench.pour(TopUpInput(tank=bath.uuid, source=rinse.uuid, volume=parse("1 L", "volume"))) == "allowed"

    def test_comes_out_of_a_vessel_that_the_books_call_empty(self, bench: Bench) -> None:
        ghost, tank = bench.tank("Ghost"), bench.made_from("Tank", bench.bottle("Acid", "acid"))
        bench.pour(LevelInput(vessel=ghost.uuid, volume=parse("2 L", "volume")))
        answer = preview(bench.owner, bench.now, MoveInput(source=ghost.uuid, target=tank.uuid), None).answer
        assert not answer.allowed
        assert "hydrogen cyanide" in answer.reasons[0]


def test_what_has_happened_already_is_an_incident_with_first_steps(bench: Bench) -> None:
    tank, acid = bench.made_from("Tank", bench.bottle("Cyanide", "cyanide")), bench.bottle("Acid", "acid")
    wrong = TopUpInput(tank=tank.uuid, source=acid.uuid, volume=parse("1 mL", "volume"))
    assert bench.pour(wrong, already_happened=True) == "incident"
    with pytest.raises(RefusedError, match="hydrogen cyanide"):
        bench.pour(wrong)


class TestUndeclaredProduct:
    """Of what nobody declared, nobody knows what it reacts as; that a sheet says nothing has to be said."""

    def test_counts_as_unknown(self, bench: Bench) -> None:
        tank, plain = bench.made_from("Tank", bench.bottle("Acid", "acid")), bench.bottle("Plain")
        with pytest.raises(RefusedError, match="hydrogen cyanide"):
            bench.pour(TopUpInput(tank=tank.uuid, source=plain.uuid, volume=parse("1 mL", "volume")))

    def test_declared_to_react_as_nothing_may_go_in(self, bench: Bench) -> None:
        tank, harmless = bench.made_from("Tank", bench.bottle("Acid", "acid")), bench.bottle("Sugar", "nothing")
        verdict = bench.pour(TopUpInput(tank=tank.uuid, source=harmless.uuid, volume=parse("1 mL", "volume")))
        assert verdict == "allowed"

    def test_nothing_and_something_are_not_declared_together(self, bench: Bench) -> None:
        with pytest.raises(InvalidInputError, match="not both"):
            bench.bottle("Both", "nothing", "acid")


@pytest.mark.parametrize(("poured", "held"), [("acid", "sulfite"), ("sulfite", "acid")])
def test_the_reason_says_which_vessel_holds_what(bench: Bench, poured: str, held: str) -> None:
    stock, tank = bench.bottle("Stock", poured), bench.made_from("Tank", bench.bottle("Other", held))
    with pytest.raises(RefusedError, match=rf"Stock bottle \({poured}\) and Tank \({held}\) must never meet"):
        bench.pour(TopUpInput(tank=tank.uuid, source=stock.uuid, volume=parse("1 mL", "volume")))


def test_an_undeclared_bottle_stays_refused_after_an_incident(bench: Bench) -> None:
    tank, plain = bench.made_from("Tank", bench.bottle("Acid", "acid")), bench.bottle("Plain")
    wrong = TopUpInput(tank=tank.uuid, source=plain.uuid, volume=parse("1 mL", "volume"))
    assert bench.pour(wrong, already_happened=True) == "incident"
    with pytest.raises(RefusedError, match="hydrogen cyanide"):
        bench.pour(wrong)
