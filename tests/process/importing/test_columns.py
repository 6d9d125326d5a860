"""What columns may say, what headings suggest, and which column maps cannot be."""

import pytest

from chemicals.process.fields import RowsField, describe
from chemicals.process.importing.columns import (
    COMMA,
    DAY_FIRST,
    GENERAL,
    VERBS,
    ColumnMap,
    as_json,
    check_map,
    find_field,
    from_json,
    guess,
    list_targets,
    split_unit,
)
from chemicals.workshop.errors import InvalidInputError


def wrong(chosen: ColumnMap, *headings: str) -> dict[str, str]:
    return {error.field: error.message for error in check_map(chosen, headings or tuple(chosen.columns))}


def test_every_field_of_every_verb_can_be_said_by_a_column() -> None:
    for verb, data in VERBS.items():
        targets = set(list_targets([verb])) - set(GENERAL)
        plain = {name for name, kind in describe(data) if not isinstance(kind, RowsField)}
        groups = {name for name, kind in describe(data) if isinstance(kind, RowsField)}
        assert plain <= targets
        assert {target.partition(" ")[0] for target in targets - plain} == groups
        assert all(find_field(verb, target) is not None for target in targets)


def test_no_verb_has_a_field_of_the_name_of_a_general_target() -> None:
    for verb in VERBS:
        assert [target for target in GENERAL if find_field(verb, target) is not None] == []


def test_what_was_a_mistake_cannot_be_imported() -> None:
    assert not {"cancellation", "correction"} & set(VERBS)
    assert {"opening", "run", "day-sheet", "analysis", "acceptance", "hand-over"} <= set(VERBS)


@pytest.mark.parametrize(
    ("heading", "parts"),
    [
        ("Amount [g]", ("Amount", "g")),
        ("Amount (mL)", ("Amount", "mL")),
        ("Drag-out [mL/load] ", ("Drag-out [mL/load] ", "")),
        ("Amount", ("Amount", "")),
        ("held 1 amount [g/L]", ("held 1 amount", "g/L")),
    ],
)
def test_a_unit_in_brackets_ends_a_heading(heading: str, parts: tuple[str, str]) -> None:
    assert split_unit(heading) == parts


@pytest.mark.parametrize(
    ("heading", "target"),
    [
        ("Date", "when"),
        ("WHEN", "when"),
        ("Time", "clock"),
        ("Time [h]", "time"),
        ("Kind", "verb"),
        ("key", "key"),
        ("weight_before", "weight_before"),
        ("Weight before [g]", "weight_before"),
        ("Ampere-hours", "charge"),
        ("held 1 metal", "held 1 metal"),
        ("held-2-amount (g/L)", "held 2 amount"),
        ("held 99 amount", ""),
        ("Remarks", ""),
        ("(column 4)", ""),
    ],
)
def test_headings_suggest_what_they_say(heading: str, target: str) -> None:
    assert guess([heading]).columns == {heading: target}


def test_two_headings_are_not_taken_for_the_same() -> None:
    assert guess(["Date", "Day"]).columns == {"Date": "when", "Day": ""}


def test_headings_mean_what_they_meant_in_the_last_import() -> None:
    kept = ColumnMap({"Tag": "when", "Wanne": "vessel", "Alt": "lot"}, "receipt", DAY_FIRST, COMMA)
    assert guess(["Tag", "Wanne", "Amount"], kept) == ColumnMap(
        {"Tag": "when", "Wanne": "vessel", "Amount": "amount"}, "receipt", DAY_FIRST, COMMA
    )


def test_the_last_verb_is_not_taken_where_a_column_says_it() -> None:
    assert guess(["Date", "Verb"], ColumnMap({"Date": "when"}, "receipt")).verb == ""


def test_a_column_map_is_kept_as_it_is_written() -> None:
    chosen = ColumnMap({"Tag": "when", "Note": "", "Was": "vessel"}, "receipt", DAY_FIRST, COMMA)
    said = as_json(chosen)
    assert said == {
        "verb": "receipt",
        "dates": "day first",
        "decimal": "comma",
        "columns": {"Tag": "when", "Was": "vessel"},
    }
    assert as_json(from_json(said)) == said
    assert from_json({"columns": {"Date": "when"}}) == ColumnMap({"Date": "when"})


@pytest.mark.parametrize(
    "said", [None, [], "x", {"column": {}}, {"columns": []}, {"columns": {"Date": 1}}, {"verb": None, "columns": {}}]
)
def test_another_shape_of_a_column_map_is_refused(said: object) -> None:
    with pytest.raises(InvalidInputError) as refused:
        from_json(said)
    assert [error.field for error in refused.value.errors] == ["mapping"]


def test_everything_that_cannot_be_is_said_at_once() -> None:
    chosen = ColumnMap(
        {"Date": "when", "Day": "when", "Old": "lot", "What": "verb", "Odd": "colour", "V": "vessel"}, "receipt"
    )
    found = wrong(chosen, "Date", "Day", "What", "Odd", "V")
    assert set(found) == {"Date", "Day", "Old", "What", "Odd", "mapping"}
    assert found["Old"] == "There is no such column in the file."
    assert 'Two columns say "when"' in found["Date"]
    assert "colour" in found["Odd"]
    assert found["What"].startswith("Either this column says what happened")
    assert 'No column says "Amount"' in found["mapping"]


@pytest.mark.parametrize(
    ("chosen", "message"),
    [
        (ColumnMap({"A": "vessel", "B": "amount"}, "receipt"), "No column says when it happened."),
        (ColumnMap({"A": "when"}), "No column says what happened."),
        (ColumnMap({"A": "when"}, "cancellation"), '"cancellation" cannot be imported.'),
        (ColumnMap({"A": "when", "B": "verb"}, dates="y/m/d"), '"y/m/d" is no choice.'),
        (ColumnMap({"A": "when", "B": "verb"}, decimal="dot"), '"dot" is no choice.'),
    ],
)
def test_what_every_row_needs_must_be_said(chosen: ColumnMap, message: str) -> None:
    assert wrong(chosen)["mapping"].startswith(message)


def test_an_acceptance_needs_no_time_of_its_own() -> None:
    assert wrong(ColumnMap({"A": "analysis"}, "acceptance")) == {}


def test_a_field_of_any_verb_may_be_said_where_a_column_says_the_verb() -> None:
    assert wrong(ColumnMap({"A": "when", "B": "verb", "C": "charge", "D": "held 3 metal"})) == {}


def test_a_heading_means_what_it_means_with_the_verbs_that_happened() -> None:
    """A container is what is handed over, and the vessel into which something was received."""
    assert guess(["Container"], verbs=["receipt"]).columns == {"Container": "vessel"}
    assert guess(["Container"], verbs=["hand-over"]).columns == {"Container": "container"}
    assert guess(["Route"], verbs=["receipt"]).columns == {"Route": ""}
