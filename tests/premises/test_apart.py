"""What stands together and must not: by sorts, whatever the order, and never fewer for what is put beside it."""

from itertools import combinations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from compliance.premises.apart import Stander, find_apart
from compliance.premises.hazards import Part
from compliance.premises.sorts import EVERYTHING, Nature, list_sorts, nature_of, reacting

ACID, CYANIDE = reacting("acid"), reacting("cyanide")


def stander(name: str, *kinds: str, recipe: str = "", place: int = 1, bund: str = "", **said: bool) -> Stander:
    """Return a vessel of what reacts as some kinds; without a recipe it is like no other."""
    nature = Nature(frozenset({EVERYTHING, *map(reacting, kinds)}))
    return Stander(name, place, bund, "", nature, frozenset((recipe or name).split("+")), **said)


def names(found: tuple[list[Stander], list[Stander]]) -> tuple[list[str], list[str]]:
    return [each.name for each in found[0]], [each.name for each in found[1]]


def test_an_acid_and_a_cyanide_stand_together() -> None:
    here = [stander("vinegar", "acid"), stander("jar", "cyanide"), stander("soap")]
    assert names(find_apart(here, ACID, CYANIDE)) == (["vinegar"], ["jar"])


def test_the_same_product_twice_is_no_meeting() -> None:
    here = [stander("jar 1", "acid", "fluoride", recipe="HF"), stander("jar 2", "acid", "fluoride", recipe="HF")]
    assert names(find_apart(here, ACID, reacting("fluoride"))) == ([], [])


def test_another_acid_beside_what_is_both() -> None:
    here = [stander("jar", "acid", "fluoride", recipe="HF"), stander("bottle", "acid")]
    assert names(find_apart(here, ACID, reacting("fluoride"))) == (["bottle"], ["jar"])


def test_a_tank_and_its_own_rinse_are_no_meeting_but_two_tanks_are() -> None:
    gilding = stander("bath", "acid", "cyanide", recipe="gold+salt", in_line=True, is_bath=True)
    rinse = stander("rinse", "acid", recipe="salt", in_line=True)
    other = stander("other", "acid", recipe="salt", in_line=True, is_bath=True)
    shared = stander("shared", "acid", recipe="salt+pickle", in_line=True)
    assert names(find_apart([gilding, rinse], ACID, CYANIDE)) == ([], [])
    assert names(find_apart([gilding, other], ACID, CYANIDE)) == (["other"], ["bath"])
    assert names(find_apart([gilding, shared], ACID, CYANIDE)) == (["shared"], ["bath"])


def test_its_own_bottle_is_no_rinse() -> None:
    gilding = stander("bath", "acid", "cyanide", recipe="gold+salt", in_line=True, is_bath=True)
    assert names(find_apart([gilding, stander("bottle", "acid", recipe="salt")], ACID, CYANIDE)) == (
        ["bottle"],
        ["bath"],
    )


def test_what_shares_something_nearer_is_told_there() -> None:
    here = [stander("a", "acid", place=1), stander("c", "cyanide", place=1), stander("d", "cyanide", place=2)]
    assert names(find_apart(here, ACID, CYANIDE, lambda each: each.place)) == (["a"], ["d"])


KINDS = st.sets(st.sampled_from(["acid", "cyanide", "fluoride"]), max_size=3)
VESSELS = st.lists(
    st.builds(
        lambda number, kinds, recipe, place, in_line, is_bath: (number, kinds, recipe, place, in_line, is_bath),
        st.integers(0, 99),
        KINDS,
        st.sets(st.sampled_from("abc"), min_size=1),
        st.integers(1, 3),
        st.booleans(),
        st.booleans(),
    ),
    max_size=9,
    unique_by=lambda row: row[0],
)


def build(rows: list[tuple[int, set[str], set[str], int, bool, bool]]) -> list[Stander]:
    return [
        stander(str(number), *kinds, recipe="+".join(sorted(recipe)), place=place, in_line=line, is_bath=line and bath)
        for number, kinds, recipe, place, line, bath in rows
    ]


def by_pairs(here: list[Stander], *, across: bool) -> tuple[set[str], set[str]]:
    """Return what looking at every pair finds: slow, and plain to see."""
    ones, others = set(), set()
    for pair in combinations(here, 2):
        for one, other in (pair, pair[::-1]):
            together = not across or one.place != other.place
            if ACID in one.nature.sorts and CYANIDE in other.nature.sorts and together and not one.is_like(other):
                ones.add(one.name)
                others.add(other.name)
    return ones, others


@pytest.mark.parametrize("across", [False, True])
@given(rows=VESSELS, order=st.randoms())
def test_it_finds_what_looking_at_every_pair_finds_in_any_order(
    across: bool,  # noqa: FBT001  (one of the two cases)
    rows: list[object],
    order: object,
) -> None:
    here = build(rows)  # type: ignore[arg-type]
    cell = (lambda each: each.place) if across else None
    expected = by_pairs(here, across=across)
    order.shuffle(here)  # type: ignore[attr-defined]
    found = names(find_apart(here, ACID, CYANIDE, cell))
    assert (set(found[0]), set(found[1])) == expected


@given(VESSELS, VESSELS)
def test_another_container_never_takes_a_meeting_away(rows: list[object], more: list[object]) -> None:
    here = build(rows)  # type: ignore[arg-type]
    beside = [*here, *(each for each in build(more) if each.name not in {other.name for other in here})]  # type: ignore[arg-type]
    before, after = names(find_apart(here, ACID, CYANIDE)), names(find_apart(beside, ACID, CYANIDE))
    assert set(before[0]) <= set(after[0])
    assert set(before[1]) <= set(after[1])


def test_a_vessel_is_of_every_sort_of_everything_in_it() -> None:
    parts = [Part("acid", "Danger", ("GHS05",), (), ("Skin Corr. 1A",)), Part("salt", "", ("GHS09",), ("H272",))]
    nature = nature_of(parts, {"acid", "unknown"})
    assert nature.sorts == {
        EVERYTHING,
        "hazard class: Skin corrosion/irritation",
        "hazard class: Oxidising liquids",
        "hazard class: Oxidising solids",
        "pictogram: GHS05",
        "pictogram: GHS09",
        "reacts as: acid",
    }
    assert nature.hazards_known
    assert nature.may_be("reacts as: cyanide")
    assert not nature.may_be("pictogram: GHS06")
    assert nature.sorts <= set(list_sorts())


def test_of_what_nobody_entered_nothing_can_be_ruled_out() -> None:
    nature = nature_of([Part("it")], {"nothing"})
    assert nature.may_be("hazard class: Flammable liquids")
    assert not nature.may_be("reacts as: acid")
    assert not nature.may_be(EVERYTHING)
