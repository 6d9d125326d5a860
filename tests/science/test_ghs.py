"""Hazards of a sheet against each other: what is pointed out, and what is not."""

import re

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chemicals.science.ghs import (
    MESSAGES,
    PICTOGRAMS,
    SIGNAL_WORDS,
    find_class,
    find_contradictions,
    find_very_toxic,
    list_classes,
    split_codes,
    split_statement,
    standard_text,
)

KINDS = [each.kind for each in list_classes()]


def codes(classes: str = "", statements: str = "", word: str = "", pictograms: str = "") -> list[str]:
    """Codes of what is pointed out; classes part by a semicolon, the rest by blanks."""
    found = find_contradictions(
        classes=[each.strip() for each in classes.split(";") if each.strip()],
        statements=statements.split(),
        signal_word=word,
        pictograms=pictograms.split(),
    )
    return [each.code for each in found]


def sentences(classes: str, statements: str, word: str, pictograms: str) -> list[str]:
    found = find_contradictions(
        classes=classes.split("; "), statements=statements.split(), signal_word=word, pictograms=pictograms.split()
    )
    return [each.message for each in found]


@pytest.mark.parametrize(
    ("classes", "statements", "word", "pictograms"),
    [
        ("", "", "", ""),
        ("Skin Corr. 1B", "H314", "Danger", "GHS05"),
        ("Skin Corr. 1A; Met. Corr. 1", "H314 H290", "Danger", "GHS05"),
        ("Acute Tox. 4 oral; Eye Dam. 1; Aquatic Chronic 1", "H302 H318 H410", "Danger", "GHS05 GHS07 GHS09"),
        ("Skin Irrit. 2; Eye Dam. 1", "H315 H318", "Danger", "GHS05"),  # corrosion takes the place of irritation
        ("Acute Tox. 3 oral; Skin Irrit. 2", "H301 H315", "Danger", "GHS06"),  # the skull of the exclamation mark
        ("Resp. Sens. 1; Skin Sens. 1", "H334 H317", "Danger", "GHS08"),
        ("Skin Corr. 1B; Eye Dam. 1", "H314", "Danger", "GHS05"),  # H314 says the eyes as well
        ("Aquatic Acute 1; Aquatic Chronic 1", "H410", "Warning", "GHS09"),  # H410 says the acute one as well
        ("Carc. 1A", "H350i", "Danger", "GHS08"),
        ("STOT SE 3", "H336", "Warning", "GHS07"),
        ("Met. Corr. 1; Skin Irrit. 2", "H290 H315", "Warning", "GHS05 GHS07"),  # corrodes metals only: left to choice
        ("Met. Corr. 1; Skin Irrit. 2", "H290 H315", "Warning", "GHS05"),
        ("STOT SE 1; STOT SE 3", "H370 H335", "Danger", "GHS08 GHS07"),  # several categories, by organ
        ("Aerosol 1", "H222 H229", "Danger", "GHS02"),
        ("Expl. 1.1; Ox. Sol. 2", "H201 H272", "Danger", "GHS01"),  # the flame over circle is left to choice
        ("Expl. 1.1; Ox. Sol. 2", "H201 H272", "Danger", "GHS01 GHS03"),
        ("Flam. Gas 1A; Press. Gas (Comp.)", "H220 H280", "Danger", "GHS02"),
        ("Aquatic Chronic 3", "H412", "", ""),
        ("Acute Tox. 3 oral; Acute Tox. 3 inhalation", "H301+H331", "Danger", "GHS06"),
        ("Eye Irrit. 2", "H319 P280 P305+P351+P338 EUH066", "Warning", "GHS07"),
        ("", "H314", "Danger", "GHS05"),  # nobody entered classes: the statement stands for them
        ("", "H242", "Warning", "GHS02"),  # of type E or F
        ("", "H242", "Danger", "GHS02"),  # of type C or D
        ("ED HH 1", "EUH380", "Danger", ""),
    ],
)
def test_what_goes_together_is_not_pointed_out(classes: str, statements: str, word: str, pictograms: str) -> None:
    assert codes(classes, statements, word, pictograms) == []


@pytest.mark.parametrize(
    ("classes", "statements", "word", "pictograms", "expected"),
    [
        ("Skin Corr. 1B", "", "Danger", "GHS05", ["statement-missing"]),
        ("Aerosol 1", "H222", "Danger", "GHS02", ["statement-missing"]),
        ("Skin Corr. 1B", "H314 H302", "Danger", "GHS05", ["class-missing"]),
        ("Skin Corr. 1A; Skin Corr. 1B", "H314", "Danger", "GHS05", ["two-categories"]),
        ("Skin Corr. 1B; Skin Irrit. 2", "H314 H315", "Danger", "GHS05", ["two-categories"]),
        ("Skin Corr. 1B", "H314 H399", "Danger", "GHS05", ["statement-unknown"]),
        ("Skin Corr. 1B", "H314", "Warning", "GHS05", ["signal-word"]),
        ("Skin Corr. 1B", "H314", "", "GHS05", ["signal-word"]),
        ("Skin Irrit. 2", "H315", "Danger", "GHS07", ["signal-word-extra"]),
        ("Skin Irrit. 2", "H315", "Warning", "", ["pictogram-missing"]),
        ("Skin Irrit. 2", "H315", "Warning", "GHS07 GHS05", ["pictogram-extra"]),
        ("Skin Irrit. 2; Eye Dam. 1", "H315 H318", "Danger", "GHS05 GHS07", ["pictogram-gives-way"]),
        ("Acute Tox. 3 oral; STOT SE 3", "H301 H335", "Danger", "GHS06 GHS07", ["pictogram-gives-way"]),
        ("Org. Perox. B", "H241", "Danger", "GHS01", ["pictogram-missing"]),
        ("", "", "Danger", "GHS05", ["signal-word-extra", "pictogram-extra"]),
        ("", "H314", "Warning", "GHS07", ["signal-word", "pictogram-missing", "pictogram-extra"]),
        ("Aquatic Chronic 3", "H412", "Warning", "GHS09", ["signal-word-extra", "pictogram-extra"]),
    ],
)
def test_what_does_not_go_together_is_pointed_out(
    classes: str, statements: str, word: str, pictograms: str, expected: list[str]
) -> None:
    assert codes(classes, statements, word, pictograms) == expected


def test_a_contradiction_says_what_calls_for_what() -> None:
    assert sentences("Skin Corr. 1B; Acute Tox. 4 oral", "H302", "Warning", "GHS05") == [
        "Skin Corr. 1B calls for H314, which is not among the statements.",
        "Skin Corr. 1B calls for the signal word Danger; entered is Warning.",
        "Acute Tox. 4 oral calls for GHS07, which is not among the pictograms.",
    ]


@pytest.mark.parametrize("kind", KINDS)
def test_every_class_with_all_that_it_calls_for_agrees_with_itself(kind: str) -> None:
    known = find_class(kind)
    assert known is not None
    assert known.signal_word in SIGNAL_WORDS
    assert known.pictograms <= set(PICTOGRAMS)
    found = find_contradictions(
        classes=[kind], statements=known.codes, signal_word=known.signal_word, pictograms=sorted(known.pictograms)
    )
    assert found == ()


@pytest.mark.parametrize("kind", KINDS)
def test_every_class_alone_lacks_what_it_calls_for(kind: str) -> None:
    known = find_class(kind)
    assert known is not None
    found = {each.code for each in find_contradictions(classes=[kind], statements=[], signal_word="", pictograms=[])}
    expected = {"statement-missing"}
    expected |= {"signal-word"} if known.signal_word else set()
    expected |= {"pictogram-missing"} if known.pictograms else set()
    assert found == expected


@given(
    classes=st.lists(st.sampled_from(KINDS), max_size=4),
    statements=st.lists(st.sampled_from(["H302", "H314", "H319", "H400", "EUH032", "P280", "H999"]), max_size=4),
    word=st.sampled_from(SIGNAL_WORDS),
    pictograms=st.lists(st.sampled_from(PICTOGRAMS), max_size=4),
)
def test_every_contradiction_has_its_sentence_and_stands_there_once(
    classes: list[str], statements: list[str], word: str, pictograms: list[str]
) -> None:
    found = find_contradictions(classes=classes, statements=statements, signal_word=word, pictograms=pictograms)
    messages = [each.message for each in found]
    assert {each.code for each in found} <= set(MESSAGES)
    assert all(messages)
    assert len(messages) == len(set(messages))


@pytest.mark.parametrize(
    ("line", "statements"),
    [
        ("H302, H315; H319", ["H302", "H315", "H319"]),
        ("H300 + H310 H314", ["H300+H310", "H314"]),
        ("H302 Harmful if swallowed", ["H302 Harmful if swallowed"]),
        ("harmful", ["harmful"]),
        ("EUH032", ["EUH032"]),
    ],
)
def test_a_line_of_codes_is_one_statement_for_each(line: str, statements: list[str]) -> None:
    assert split_codes(line) == statements


def test_a_statement_begins_with_its_codes() -> None:
    assert split_statement("H300 + H310: Fatal") == (("H300", "H310"), "Fatal")
    assert split_statement("H360FD May damage") == (("H360FD",), "May damage")
    assert split_statement("H3020 What") == ((), "H3020 What")
    assert split_statement("Fatal if swallowed") == ((), "Fatal if swallowed")


def test_the_standard_s_words_stand_in_for_a_code_without_text() -> None:
    assert standard_text("H302") == "Harmful if swallowed"
    assert standard_text("H300+H310") == "Fatal if swallowed or in contact with skin"
    assert standard_text("H302+H319") == "Harmful if swallowed. Causes serious eye irritation"
    assert [standard_text(typed) for typed in ("H302 as typed", "H999", "nothing")] == ["", "", ""]


def test_every_statement_of_a_class_has_its_words() -> None:
    assert [code for each in list_classes() for code in each.codes if not standard_text(code)] == []
    assert all(re.fullmatch(r"(EU)?H\d{3}[A-Za-z]{0,2}", code) for each in list_classes() for code in each.codes)


@pytest.mark.parametrize(
    ("statements", "classes", "found"),
    [
        ("H300 Fatal if swallowed.", "", ("H300",)),
        ("H300+H310+H330 Fatal if swallowed, in contact with skin or if inhaled.", "", ("H300", "H310", "H330")),
        ("H310", "Acute Tox. 1 dermal", ("Acute Tox. 1 dermal", "H310")),
        ("", "Acute Tox. 2 inhalation", ("Acute Tox. 2 inhalation",)),
        ("H301 Toxic if swallowed.", "Acute Tox. 3 oral", ()),
        ("H302", "Acute Tox. 4 oral", ()),
        ("H400; EUH032 Contact with acids liberates very toxic gas.", "Aquatic Acute 1", ()),
        ("P310 Immediately call a doctor.", "", ()),
        ("", "", ()),
    ],
)
def test_very_toxic_is_fatal_by_any_way_in(statements: str, classes: str, found: tuple[str, ...]) -> None:
    """UN GHS table 3.1.3: categories 1 and 2 carry H300, H310, H330 (from memory)."""
    assert find_very_toxic(statements.split("; "), [classes] if classes else []) == found


def test_very_toxic_are_the_classes_that_call_for_a_fatal_statement() -> None:
    fatal = {each.kind for each in list_classes() if {"H300", "H310", "H330"} & set(each.codes)}
    assert {kind for kind in KINDS if find_very_toxic([], [kind])} == fatal
    assert len(fatal) == 6
