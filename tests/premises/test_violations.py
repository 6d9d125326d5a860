"""What stands together and must not, limits of places against hand-worked figures, and what nobody knows."""

from collections.abc import Sequence
from datetime import date, timedelta
from typing import Any

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scope

from chemicals.ledger.models import Vessel
from chemicals.ledger.selectors import Contents, Held
from chemicals.register.models import ProductRevision
from chemicals.science.quantity import Quantity, QuantityError, parse
from chemicals.workshop.errors import InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership, Place
from chemicals.workshop.services import change_place, create_place
from compliance.premises.lines import (
    AssessmentInput,
    KeepApartInput,
    LimitInput,
    add_keep_apart,
    add_limit,
    change_limit,
    note_assessment,
    remove_line,
)
from compliance.premises.models import Measure, QuantityLimit
from compliance.premises.selectors import Standing, list_standing_for
from compliance.premises.violation_words import remedies, sentence, speaks
from compliance.premises.violations import Violation, list_violations_for
from compliance.premises.weighing import Amount, amount_in
from tests.premises.conftest import ACID, CYANIDE, place
from tests.process.shop import Shop

READ_ON = date(2026, 2, 1)


def amount(text: str) -> Quantity:
    try:
        return parse(text, "volume")
    except QuantityError:
        return parse(text, "mass")


def limit(shop: Shop, where: str, sort: str, most: str, *, checked_on: date = READ_ON) -> QuantityLimit:
    said = LimitInput(sort=sort, amount=amount(most), citation="house rule 1", checked_on=checked_on)
    return add_limit(actor=shop.member, now=shop.now, place=found_place(shop, where), limit=said)


def found_place(shop: Shop, name: str) -> Place:
    with scope(workshop=shop.member.workshop):
        return Place.objects.get(name=name)


def violations(shop: Shop, *codes: str) -> list[Violation]:
    return [each for each in list_violations_for(shop.member, shop.now) if not codes or each.code in codes]


def put(shop: Shop, name: str, where: str) -> None:
    with scope(workshop=shop.member.workshop):
        Vessel.objects.filter(name=name).update(place=found_place(shop, where))


def names(vessels: Sequence[Vessel]) -> list[str]:
    return [vessel.name for vessel in vessels]


def test_acid_and_cyanide_over_one_bund(filled: Shop) -> None:
    """The acids on the bench and the cyanide on the shelf share the tray; the salt on the shelf is an acid as well."""
    here, across = violations(filled, "must-never-meet")
    assert (here.reach, names(here.ones), names(here.others)) == ("place", ["Salt jar"], ["Jar 3"])
    assert [each.name for each in here.places] == ["Shelf"]
    assert (across.reach, across.shared) == ("bund", "tray")
    assert [each.name for each in across.places] == ["Bench", "Shelf"]
    assert (names(across.ones), names(across.others)) == (["Acid bottle", "Copper bath"], ["Jar 3"])
    assert sentence(across) == (
        "acid (Acid bottle, Copper bath) and cyanide (Jar 3) must never meet: hydrogen cyanide, a gas that kills "
        "within minutes."
    )
    assert speaks(across) == "What must never meet shares no place, bund or exhaust duct."


def test_a_pair_is_told_once_where_it_is_nearest(filled: Shop) -> None:
    change_place(
        actor=filled.member, place=found_place(filled, "Shelf"), name="Shelf", bund="tray", exhaust_duct="hood"
    )
    assert [each.reach for each in violations(filled, "must-never-meet")] == ["place", "bund"]
    change_place(actor=filled.member, place=found_place(filled, "Shelf"), name="Shelf", exhaust_duct="hood")
    assert [each.reach for each in violations(filled, "must-never-meet")] == ["place", "duct"]
    change_place(actor=filled.member, place=found_place(filled, "Shelf"), name="Shelf", bund="own")
    put(filled, "Salt jar", "Bench")
    assert violations(filled, "must-never-meet") == []


def test_two_jars_of_one_product_are_told_beside_another_one_alone(filled: Shop) -> None:
    """Hydrofluoric acid is both an acid and a fluoride: two jars of it tell nothing new, other acids beside it do."""
    pickle = filled.product("Pickle", {"HF": "5 %"}, **{**ACID, "reactivity": ("acid", "fluoride")})
    for name in ("Pickle 1", "Pickle 2"):
        filled.holder(name, pickle)
        put(filled, name, "Bench")
    told = [each for each in violations(filled, "must-never-meet") if "fluoride" in each.first + each.second]
    assert [(each.reach, names(each.ones), names(each.others)) for each in told] == [
        ("place", ["Pickle 1", "Pickle 2"], ["Acid bottle", "Copper bath"]),
        ("bund", ["Pickle 1", "Pickle 2"], ["Salt jar"]),
    ]


def test_a_bath_and_its_own_rinse_share_a_bench(shop: Shop) -> None:
    """A gilding bath that is both an acid and a cyanide: the rinse remembers nothing else than the bath."""
    gold = shop.product("Gold salt", {"KCN": "1 %"}, **{**CYANIDE, "reactivity": ("acid", "cyanide")})
    shop.holder("Gold jar", gold)
    shop.tank("Gold bath", "2 L", kind="bath", place=found_place(shop, "Bench"))
    shop.record("receipt", days_ago=9, vessel="Gold jar", amount="1 kg")
    shop.record(
        "make-up", days_ago=8, tank="Gold bath", ingredients=[{"stock": "Gold jar", "amount": "9 g"}], level="2 L"
    )
    shop.record("opening", days_ago=8, vessel="Rinse", volume="10 L", complete=True)
    shop.record("move", days_ago=7, source="Gold bath", target="Rinse", volume="10 mL")
    for name in ("Acid bottle", "Jar 3", "Gold jar"):
        put(shop, name, "Shelf")
    change_place(actor=shop.member, place=found_place(shop, "Bench"), name="Bench")
    assert [each for each in violations(shop, "must-never-meet") if "Bench" in map(str, each.places)] == []
    put(shop, "Acid bottle", "Bench")
    (found,) = [each for each in violations(shop, "must-never-meet") if "Bench" in map(str, each.places)]
    assert (names(found.ones), names(found.others)) == (["Acid bottle"], ["Gold bath", "Rinse"])


def test_what_nobody_declared_is_said_once_for_each_place(filled: Shop) -> None:
    bare = filled.product("Brown bottle", {}, form="liquid")
    for number in range(3):
        filled.holder(f"Old bottle {number}", bare)
        put(filled, f"Old bottle {number}", "Bench")
    assert [names(each.ones) for each in violations(filled, "not-known")] == [[f"Old bottle {n}" for n in range(3)]]
    (entered,) = violations(filled, "hazards-not-entered")
    assert sentence(entered) == (
        "The hazards of 3 containers here are not entered: Old bottle 0, Old bottle 1, Old bottle 2."
    )
    assert [each.is_remark for each in violations(filled)][-2:] == [True, True]
    assert len(violations(filled, "must-never-meet")) == 2


def test_where_nobody_said_where_it_stands(filled: Shop) -> None:
    with scope(workshop=filled.member.workshop):
        Vessel.objects.filter(name="Jar 3").update(place=None)
    (remark,) = violations(filled)
    assert (remark.code, names(remark.ones), remark.place) == ("place-not-stated", ["Jar 3"], None)


@pytest.mark.parametrize(
    ("sort", "most", "verdict"),
    [
        ("hazard class: Skin corrosion/irritation", "30 L", None),  # 1.5 L of acid and 20 L of bath: 21.5 L
        ("hazard class: Skin corrosion/irritation", "21 L", "over-limit"),
        ("pictogram: GHS05", "21.5 L", None),
        ("reacts as: acid", "21.4 L", "over-limit"),
        ("everything", "31 L", "over-limit"),
        ("pictogram: GHS06", "0 g", None),  # the cyanide stands on the shelf
    ],
)
def test_every_vessel_counts_whole(filled: Shop, sort: str, most: str, verdict: str | None) -> None:
    filled.record("opening", days_ago=7, vessel="Rinse", volume="10 L", complete=True)
    limit(filled, "Bench", sort, most)
    found = [each.code for each in violations(filled, "over-limit", "limit-undecided")]
    assert found == ([] if verdict is None else [verdict])


def test_the_verdict_heeds_the_uncertainty(filled: Shop) -> None:
    """250 g, sd 10 g: at 5 % the limit must lie 16.4 g beyond (JCGM 106, 1.645 standard uncertainties)."""
    filled.record("count", days_ago=1, vessel="Jar 3", amount="250 g", sd="10 g")
    for most, code in (
        ("267 g", []),
        ("266 g", ["limit-undecided"]),
        ("234 g", ["limit-undecided"]),
        ("233 g", ["over-limit"]),
    ):
        row = limit(filled, "Shelf", "reacts as: cyanide", most)
        found = violations(filled, "over-limit", "limit-undecided")
        assert [each.code for each in found] == code, most
        remove_line(actor=filled.member, row=row)
    limit(filled, "Shelf", "reacts as: cyanide", "260 g")
    (found_one,) = violations(filled, "limit-undecided")
    assert sentence(found_one) == (
        "Undecided whether it is within the limit: what reacts as cyanide, 250 g, give or take 10 g, limit 260 g."
    )
    assert remedies(found_one) == ["The sum is too unsure to tell: measure what stands there."]


def test_what_nobody_measured_is_neither_full_nor_nothing(filled: Shop) -> None:
    more = filled.holder("Acid bottle 2")
    with scope(workshop=filled.member.workshop):
        more.product = Vessel.objects.get(name="Acid bottle").product
        more.place, more.capacity = found_place(filled, "Bench"), 10**12
        more.save()
    limit(filled, "Bench", "hazard class: Skin corrosion/irritation", "100 L")
    (found,) = violations(filled, "limit-undecided")
    assert "at least 21.5 L" in sentence(found)
    assert remedies(found) == ["The amount in 1 container is unknown: count it."]
    limit(filled, "Bench", "hazard class: Skin corrosion/irritation", "20 L")
    assert [each.code for each in violations(filled, "over-limit")] == ["over-limit"]


def holding(litres: str, density: int | None, *, kind: str = "stock", products: int = 1) -> Standing:
    """Return a vessel of which the volume alone is known."""
    contents = Contents(Held("volume", parse(litres, "volume").base, 10**6), None, (), incomplete=False)
    return Standing(Vessel(kind=kind), contents, (ProductRevision(density=density),) * products)


def test_litres_become_kilograms_by_the_density_of_one_product_alone() -> None:
    """1.5 L of 1.84 g/mL are 2.76 kg; 1 mL of them 1.84 g."""
    assert amount_in(holding("1.5 L", 1_840_000), Measure.MASS) == Amount(2_760_000_000, 1_840_000)
    for unweighed in (
        holding("1.5 L", None),
        holding("1.5 L", 1_840_000, kind="bath"),
        holding("1.5 L", 1_840_000, products=2),
    ):
        assert amount_in(unweighed, Measure.MASS) == Amount(None, elsewise=True)


def test_a_limit_in_kilograms_of_litres_that_nobody_weighed_is_undecided(filled: Shop) -> None:
    thin = filled.product("Thin acid", {"H2SO4": "100 g/L"}, **{**ACID, "density": ""})
    filled.holder("Thin bottle", thin)
    put(filled, "Thin bottle", "Shelf")
    filled.record("receipt", days_ago=2, vessel="Thin bottle", amount="1 L")
    limit(filled, "Shelf", "pictogram: GHS05", "100 kg")
    (undecided,) = violations(filled, "limit-undecided")
    assert remedies(undecided) == [
        "1 amount is not known in the unit of the limit: enter its product's density, or measure it so."
    ]


def test_what_may_belong_to_a_sort_decides_only_where_it_matters(filled: Shop) -> None:
    bare = filled.product("Brown bottle", {}, form="liquid")
    filled.holder("Old bottle", bare)
    put(filled, "Old bottle", "Bench")
    filled.record("receipt", days_ago=2, vessel="Old bottle", amount="1 L")
    limit(filled, "Bench", "pictogram: GHS05", "23 L")
    assert violations(filled, "limit-undecided", "over-limit") == []
    limit(filled, "Bench", "pictogram: GHS05", "22 L")
    (found,) = violations(filled, "limit-undecided")
    assert remedies(found) == ["1 more container may belong to it: enter its hazards and what it reacts as."]


def test_a_line_that_nobody_compared_for_a_year_is_stale(filled: Shop) -> None:
    day = filled.now.date()
    row = limit(filled, "Shelf", "everything", "1 g", checked_on=day - timedelta(days=365))
    assert not violations(filled, "over-limit")[0].is_stale
    said = LimitInput(sort="everything", amount=amount("1 g"), citation="it", checked_on=day - timedelta(days=366))
    change_limit(actor=filled.member, now=filled.now, row=row, limit=said)
    (found,) = violations(filled, "over-limit")
    assert found.is_stale
    assert "Nobody compared this line for a year: read the rule again." in remedies(found)
    assert speaks(found) == "Your line: it, compared on 2025-03-01."


def keep_apart(shop: Shop, first: str, second: str, reach: str) -> None:
    said = KeepApartInput(first=first, second=second, reach=reach, citation="house rule 2", checked_on=READ_ON)
    add_keep_apart(actor=shop.member, now=shop.now, line=said)


def test_the_workshops_own_line_keeps_apart(filled: Shop) -> None:
    keep_apart(filled, "pictogram: GHS09", "hazard class: Skin corrosion/irritation", "place")
    assert [names(each.ones) for each in violations(filled, "keep-apart")] == [["Copper bath"]]
    assert names(violations(filled, "keep-apart")[0].others) == ["Acid bottle"]
    keep_apart(filled, "pictogram: GHS06", "hazard class: Skin corrosion/irritation", "bund")
    found = violations(filled, "keep-apart")[0]
    assert (names(found.ones), names(found.others)) == (["Jar 3"], ["Acid bottle", "Copper bath"])
    assert "your own line keeps them apart" in sentence(found)


def test_what_was_assessed_is_shown_as_such_until_the_day_is_over(filled: Shop, worker: Membership) -> None:
    said: dict[str, Any] = {
        "first": "reacts as: cyanide",
        "second": "reacts as: acid",
        "reach": "bund",
        "shared": "tray",
        "assessed_by": "Olga",
        "until": filled.now.date(),
        "reason": "Two inner trays.",
    }
    with pytest.raises(NotPermittedError):
        note_assessment(actor=worker, now=filled.now, assessment=AssessmentInput(**said))
    note_assessment(actor=filled.member, now=filled.now, assessment=AssessmentInput(**said))
    here, across = violations(filled, "must-never-meet")
    assert (here.reach, here.is_assessed, here.is_alarm) == ("place", False, True)
    assert (across.reach, across.is_assessed, across.is_alarm) == ("bund", True, False)
    later = list_violations_for(filled.member, filled.now + timedelta(days=1))
    assert [(each.assessment is not None, each.is_assessed) for each in later if each.reach == "bund"] == [
        (True, False)
    ]


def test_everything_that_is_wrong_with_a_line_is_said_at_once(filled: Shop) -> None:
    said = LimitInput(sort="gremlins", amount=parse("5 cm2", "area"), citation=" ", checked_on=date(2030, 1, 1))
    with pytest.raises(InvalidInputError) as caught:
        add_limit(actor=filled.member, now=filled.now, place=found_place(filled, "Shelf"), limit=said)
    assert {error.field for error in caught.value.errors} == {"sort", "amount", "citation", "checked_on"}
    same = KeepApartInput(first="everything", second="everything", reach="room", citation="x", checked_on=READ_ON)
    with pytest.raises(InvalidInputError) as caught:
        add_keep_apart(actor=filled.member, now=filled.now, line=same)
    assert {error.field for error in caught.value.errors} == {"second", "reach"}
    nowhere = AssessmentInput(
        first="everything", second="x", reach="duct", assessed_by="", until=date(2026, 1, 1), reason=""
    )
    with pytest.raises(InvalidInputError) as caught:
        note_assessment(actor=filled.member, now=filled.now, assessment=nowhere)
    assert {error.field for error in caught.value.errors} == {"second", "shared", "assessed_by", "until", "reason"}


def test_only_an_owner_writes_lines(filled: Shop, worker: Membership, stranger: Membership) -> None:
    said = LimitInput(sort="everything", amount=amount("1 L"), citation="x", checked_on=READ_ON)
    for actor in (worker, stranger):
        with pytest.raises(NotPermittedError):
            add_limit(actor=actor, now=filled.now, place=found_place(filled, "Shelf"), limit=said)


def test_the_same_queries_for_one_place_and_for_three(shop: Shop) -> None:
    limit(shop, "Bench", "everything", "1 L")
    with CaptureQueriesContext(connection) as few:
        violations(shop)
    for number in range(3):
        where = place(shop, f"Room {number}", bund="tray")
        jar = shop.product(f"Cyanide {number}", {"KCN": "98 %"}, **CYANIDE)
        shop.holder(f"Box {number}", jar)
        put(shop, f"Box {number}", where.name)
        limit(shop, where.name, "reacts as: cyanide", "1 kg")
    with CaptureQueriesContext(connection) as many:
        assert len(violations(shop)) > 3
    assert len(few) == len(many) <= 11


def test_near_a_place_is_what_shares_it_or_its_bund_or_duct(filled: Shop) -> None:
    def near(*names: str) -> list[str]:
        places = [found_place(filled, name) for name in names]
        return [each.vessel.name for each in list_standing_for(filled.member, near=places)]

    everything = [each.vessel.name for each in list_standing_for(filled.member)]
    room = place(filled, "Attic", exhaust_duct="chimney")
    filled.holder("Lone box", filled.product("Lone salt", {"NaCl": "99 %"}))
    put(filled, "Lone box", room.name)
    assert near("Attic") == ["Lone box"]
    assert "Lone box" not in near("Shelf")
    assert {"Jar 3", "Salt jar"} < set(near("Shelf")) <= set(everything), "and what is over the same tray"
    assert near() == []
    change_place(actor=filled.member, place=room, name="Attic", bund="tray", exhaust_duct="")
    assert near("Attic") == near("Shelf")
    whole = violations(filled, "must-never-meet")
    beside = list_violations_for(
        filled.member, filled.now, list_standing_for(filled.member, near=[found_place(filled, "Shelf")])
    )
    assert [sentence(each) for each in beside if each.code == "must-never-meet"] == [sentence(each) for each in whole]


def test_another_workshop_is_not_looked_at(filled: Shop, stranger: Membership) -> None:
    create_place(actor=stranger, name="Shelf", bund="tray")
    assert list_violations_for(stranger, filled.now) == []
