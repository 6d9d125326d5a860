"""Classes, statements, pictograms and signal words against lists in print.

data/ghs_labels.csv: for each statement what a label shows (CLP annex III; acute toxicity as read in annex I table
3.1.3). data/classified_substances.csv: whole classifications with their labels, two of them read on International
Chemical Safety Cards, the rest from memory of CLP annex VI. data/pictograms_by_class.csv: which classes have which
pictogram, as a public list prints it. data/label_tables.csv: signal words and statements of CLP annex I, as read.
"""

import csv
from pathlib import Path

import pytest

from chemicals.science.ghs import find_class, find_contradictions, list_classes, standard_text

DATA = Path(__file__).parent / "data"


def rows(name: str) -> list[dict[str, str]]:
    return list(csv.DictReader((DATA / name).read_text(encoding="utf-8").splitlines()))


LABELS = rows("ghs_labels.csv")
CLASSIFIED = rows("classified_substances.csv")
PICTURED = rows("pictograms_by_class.csv")
TABLES = rows("label_tables.csv")


@pytest.mark.parametrize("row", LABELS, ids=lambda row: str(row["code"]))
def test_a_statement_has_its_words_pictograms_and_signal_words(row: dict[str, str]) -> None:
    words = row["statement"]
    if row["code"].startswith("H41"):
        words = words.replace("long-lasting", "long lasting")  # the standard has no hyphen there
    owners = [each for each in list_classes() if row["code"] in each.codes]
    assert standard_text(row["code"]) == words
    assert {code for each in owners for code in each.pictograms} == set(row["pictograms"].split())
    assert {each.signal_word for each in owners} - {""} == set(row["signal_words"].split())


def test_no_class_is_left_out_of_the_printed_list() -> None:
    printed = {row["code"] for row in LABELS}
    combined = {"H360Fd", "H360Df", "H361fd"}  # joined from two statements of the list (CLP annex III, memory)
    assert {code for each in list_classes() for code in each.codes} - printed == combined


@pytest.mark.parametrize("kind", sorted({row["class"] for row in PICTURED}))
def test_a_class_has_the_pictograms_of_the_printed_list(kind: str) -> None:
    known = find_class(kind)
    assert known is not None
    assert set(known.pictograms) == {row["pictogram"] for row in PICTURED if row["class"] == kind}


@pytest.mark.parametrize("row", TABLES, ids=lambda row: str(row["class"]))
def test_a_class_has_the_signal_word_and_the_statements_of_its_table(row: dict[str, str]) -> None:
    known = find_class(row["class"])
    assert known is not None
    assert (known.signal_word, set(known.codes)) == (row["signal_word"], set(row["statements"].split()))


def test_a_poster_that_gives_chronic_category_3_a_pictogram_is_wrong() -> None:
    # psse-stalowawola.pl, "Produkty chemiczne", lists chronic categories 1, 2, 3 under GHS09; the table has none for 3
    known = find_class("Aquatic Chronic 3")
    assert known is not None
    assert known.pictograms == frozenset()


@pytest.mark.parametrize("row", CLASSIFIED, ids=lambda row: str(row["name"]))
def test_a_printed_classification_goes_together(row: dict[str, str]) -> None:
    classes = row["classes"].split("; ")
    assert [kind for kind in classes if find_class(kind) is None] == []
    for entered in (classes, []):
        found = find_contradictions(
            classes=entered,
            statements=row["statements"].split(),
            signal_word=row["signal_word"],
            pictograms=row["pictograms"].split(),
        )
        assert found == ()


@pytest.mark.parametrize("row", CLASSIFIED, ids=lambda row: str(row["name"]))
def test_a_label_without_one_of_its_pictograms_is_pointed_out(row: dict[str, str]) -> None:
    pictograms = row["pictograms"].split()
    for missing in pictograms:
        found = find_contradictions(
            classes=row["classes"].split("; "),
            statements=row["statements"].split(),
            signal_word=row["signal_word"],
            pictograms=[code for code in pictograms if code != missing],
        )
        assert ("pictogram-missing", missing) in [(each.code, each.params.get("pictogram")) for each in found]
