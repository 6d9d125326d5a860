"""What columns of the register mean, by their headings and by what was chosen."""

from chemicals.process.importing.columns import ColumnMap, as_json, from_json
from chemicals.process.importing.register.columns import check_register_map, guess_register, list_register_targets
from compliance.web.views.register import COLUMNS


def test_the_headings_of_the_registers_own_file_are_known() -> None:
    headings = [column.heading for column in COLUMNS]
    left_out = {heading for heading, target in guess_register(headings).columns.items() if not target}
    assert left_out == {"revision", "since", "contradictions", "sheet sha256"}


def test_names_labels_and_other_words_are_headings() -> None:
    found = guess_register(
        ["Product", "CAS", "Amount [g]", "Stands", "part 2 content", "Composition 1: substance", "X"]
    )
    assert list(found.columns.values()) == [
        "product", "cas_number", "amount", "place", "part 2 content", "part 1 name", "",
    ]  # fmt: skip


def test_headings_mean_what_they_meant_in_the_last_file() -> None:
    kept = ColumnMap({"Stoff": "product"}, dates="day first", revise=True)
    found = guess_register(["Stoff", "Product"], kept)
    assert (found.columns, found.dates, found.revise) == ({"Stoff": "product", "Product": ""}, "day first", True)


def test_what_rows_may_do_is_kept_with_the_columns() -> None:
    chosen = ColumnMap({"A": "product"}, revise=True, add_places=True)
    assert from_json(as_json(chosen)) == chosen
    assert "revise" not in as_json(ColumnMap({"A": "product"}))


def test_everything_that_cannot_be_is_said_at_once() -> None:
    chosen = ColumnMap(
        {"A": "supplier", "B": "supplier", "C": "vessel", "D": "composition", "E": "part 1 content", "Z": "lot"}, "run"
    )
    found = {(error.field, error.message) for error in check_register_map(chosen, ["A", "B", "C", "D", "E"])}
    assert {field for field, _ in found} == {"A", "B", "C", "E", "Z", "mapping"}
    assert ("mapping", "No column says the name of the product. Choose one.") in found
    assert ("E", "The composition has a column of its own. Leave one of the two out.") in found


def test_a_substance_needs_its_content() -> None:
    chosen = ColumnMap({"A": "product", "B": "part 1 name"})
    assert [error.field for error in check_register_map(chosen, ["A", "B"])] == ["B"]


def test_every_target_has_a_label() -> None:
    assert all(str(label) for label in list_register_targets().values())
