"""Merging what was entered of several things: nothing is lost, nothing is said twice, nothing is made up."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.science.ghs import PICTOGRAMS, SIGNAL_WORDS, list_classes, split_statement
from chemicals.science.reactivity import REACTS_AS, UNKNOWN, find_dangers
from compliance.premises.hazards import (
    Part,
    find_together,
    list_avoided,
    list_hazards,
    list_with_acid,
    list_with_water,
    merge,
    order_of_hazard,
)


def part(name: str = "it", *statements: str, word: str = "", pictograms: tuple[str, ...] = ()) -> Part:
    return Part(name, word, pictograms, statements)


def test_the_strongest_signal_word_and_every_pictogram_stay() -> None:
    merged = merge([part(word="Warning", pictograms=("GHS07", "GHS09")), part(word="Danger", pictograms=("GHS05",))])
    assert merged.signal_word == "Danger"
    assert merged.pictograms == ("GHS05", "GHS07", "GHS09")


def test_a_statement_stands_once_by_its_code_and_keeps_its_text_as_typed() -> None:
    merged = merge(
        [
            part("a", "H314 Causes severe skin burns and eye damage.", "H302", "P280 Wear gloves"),
            part("b", "H302 Harmful if swallowed.", "H314 causes severe skin  burns and eye damage", "EUH071"),
        ]
    )
    assert merged.statements == (
        "H302 Harmful if swallowed.",
        "H314 Causes severe skin burns and eye damage.",
        "EUH071",
    )
    assert merged.precautions == ("P280 Wear gloves",)


def test_a_code_alone_is_told_in_the_standards_words() -> None:
    """H302: UN GHS, annex 3. A code that nobody knows here stays a code."""
    merged = merge([part("a", "H302", "H999", "H314 Verursacht Verätzungen.")])
    assert merged.data["statements"] == ["H302 Harmful if swallowed", "H314 Verursacht Verätzungen.", "H999"]
    assert merged.statements == ("H302", "H314 Verursacht Verätzungen.", "H999")


def test_one_code_with_two_meanings_keeps_both() -> None:
    """H372 names the organ, which each sheet says for its own product (UN GHS, annex 3: state all organs affected)."""
    merged = merge([part("a", "H372 Damages the thyroid."), part("b", "H372 Damages the lungs.")])
    assert merged.statements == ("H372 Damages the thyroid.", "H372 Damages the lungs.")


def test_what_nobody_entered_is_named() -> None:
    merged = merge([part("acid", "H314"), part("brightener"), part("brightener"), part("wetter")])
    assert merged.not_entered == ("brightener", "wetter")


def test_nothing_merged_is_nothing_entered() -> None:
    assert merge([]).data == {"signal_word": "", "pictograms": [], "statements": []}
    assert merge([part("x")]).not_entered == ("x",)


CODES = st.sampled_from(["H302", "H314", "H317", "EUH032", "P280", "P301+P330", "H300+H310"])
PARTS = st.lists(
    st.builds(
        Part,
        name=st.sampled_from("abc"),
        signal_word=st.sampled_from(SIGNAL_WORDS),
        pictograms=st.lists(st.sampled_from(PICTOGRAMS), max_size=3, unique=True).map(tuple),
        statements=st.lists(st.builds("{} {}".format, CODES, st.sampled_from(["", "One.", "two"])), max_size=4).map(
            tuple
        ),
    ),
    max_size=4,
)


@given(parts=PARTS)
def test_merging_loses_no_code_no_pictogram_and_no_word(parts: list[Part]) -> None:
    merged = merge(parts)
    codes = {split_statement(text)[0] for each in parts for text in each.statements}
    assert {split_statement(text)[0] for text in (*merged.statements, *merged.precautions)} == codes
    assert set(merged.pictograms) == {code for each in parts for code in each.pictograms}
    assert all(SIGNAL_WORDS.index(merged.signal_word) >= SIGNAL_WORDS.index(each.signal_word) for each in parts)
    assert all(text in {t for each in parts for t in each.statements} for text in merged.statements)


@given(parts=PARTS, seed=st.randoms())
def test_the_order_of_pouring_changes_no_code(parts: list[Part], seed: object) -> None:
    mixed = list(parts)
    seed.shuffle(mixed)  # type: ignore[attr-defined]
    one, other = merge(parts), merge(mixed)
    assert (one.signal_word, one.pictograms) == (other.signal_word, other.pictograms)
    assert sorted(split_statement(text)[0] for text in one.statements) == sorted(
        split_statement(text)[0] for text in other.statements
    )


def test_totals_speak_of_classes_or_else_of_statements() -> None:
    classed = Part("a", classes=("Acute Tox. 1 oral", "Skin Corr. 1A"), statements=("H300", "H314"))
    bare = part("b", "H411 Toxic to aquatic life.", "P273 Avoid release.")
    hazards = list_hazards([classed, bare, classed])
    assert hazards[-1] == "H411 Toxic to aquatic life."
    assert [hazard.partition(":")[0] for hazard in hazards[:2]] == ["Acute Tox. 1 oral", "Skin Corr. 1A"]
    assert len(hazards) == 3


def test_totals_stand_in_the_order_of_the_standard() -> None:
    kinds = [each.kind for each in list_classes()]
    assert sorted([*reversed(kinds), "H411"], key=order_of_hazard) == [*kinds, "H411"]


@pytest.mark.parametrize("kind", [kind for kind in REACTS_AS if kind != UNKNOWN])
def test_what_is_avoided_is_what_is_dangerous_together(kind: str) -> None:
    avoided = {other["what"] for other in list_avoided(frozenset({kind}))}
    assert avoided == {other for other in REACTS_AS if other != UNKNOWN and any(find_dangers({kind}, {other}))}


def test_of_what_nobody_declared_everything_is_avoided() -> None:
    assert [other["what"] for other in list_avoided(frozenset({UNKNOWN}))] == ["anything"]
    both = list_avoided(frozenset({"cyanide", UNKNOWN}))
    assert both[0] == {"what": "acid", "gives": "hydrogen cyanide"}
    assert both[-1] == {"what": "anything else", "gives": "nobody declared what all of it reacts as"}


def test_water_and_acid_are_told_by_statements_and_by_what_was_declared() -> None:
    statements = ("H300 Fatal.", "EUH032 Contact with acids liberates very toxic gas.", "EUH014 Reacts with water.")
    assert list_with_water(statements) == ["EUH014 Reacts with water."]
    assert list_with_acid(statements, frozenset({"cyanide", UNKNOWN})) == [
        "hydrogen cyanide, a gas that kills within minutes",
        "EUH032 Contact with acids liberates very toxic gas.",
    ]
    assert list_with_acid(("H314",), frozenset({"acid"})) == []


def test_things_that_stand_together_are_named_with_the_danger() -> None:
    found = find_together(
        [("Bottle", frozenset({"acid"})), ("Jar", frozenset({"cyanide"})), ("Tank", frozenset({"acid"}))]
    )
    assert found == ["acid (Bottle, Tank) and cyanide (Jar): hydrogen cyanide, a gas that kills within minutes"]


def test_a_thing_does_not_stand_together_with_itself() -> None:
    assert find_together([("Pickle", frozenset({"acid", "fluoride"}))]) == []
    assert find_together([("Pickle", frozenset({"acid", "fluoride"})), ("Water", frozenset({"nothing"}))]) == []


def test_many_names_are_cut_and_unknowns_stand_by_themselves() -> None:
    acids = [(f"A{number}", frozenset({"acid"})) for number in range(7)]
    found = find_together([*acids, ("Jar", frozenset({"cyanide"})), ("Mystery", frozenset({UNKNOWN}))])
    assert found[0].startswith("acid (A0, A1, A2, A3 and 3 more) and cyanide (Jar)")
    assert found[-1] == "Mystery: nobody declared what all of it reacts as; keep acid and cyanide away"
    assert find_together([("Mystery", frozenset({UNKNOWN}))]) == []
