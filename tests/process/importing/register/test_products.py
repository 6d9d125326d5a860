"""What rows say of products: new ones, those that are here, what must agree, which substance is meant."""

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django_scopes import scope

from chemicals.register.models import Substance
from chemicals.register.services import create_substance
from tests.process.importing.register.shelf import Shelf


def shares(shelf: Shelf, name: str) -> list[tuple[str, str]]:
    return [(line.substance.name, line.typed) for line in shelf.product(name).lines.all()]


def substances(shelf: Shelf) -> dict[str, Substance]:
    with scope(workshop=shelf.member.workshop):
        return {row.name: row for row in Substance.objects.all()}


def test_everything_that_a_row_may_say_of_a_product(shelf: Shelf) -> None:
    shelf.record(
        "product,supplier,form,density,ph_floor,composition,complete,hazard_classes,signal_word,pictograms,statements,"
        "reactivity,limits,gloves,un_number,shipping_name,transport_class,packing_group,supplier_telephone,sheet_date,"
        "sheet_language",
        'Strip,Maker,liquid,1.35,2.5,H2SO4 50 %; water 40-50 %,yes,"skin corr. 1a; Met. Corr. 1",danger,"ghs05, GHS07",'
        '"H314 Causes burns; H290\nP280; P260",acid,"0.1 mg/m3 (8 h; list, 2024); 0.2 mg/m3 (15 min; list; 2024)",'
        "nitrile; 0.4 mm,UN 1830,SULPHURIC ACID,8,ii,'+1 234,2024-05-06,DE",
    )
    row = shelf.product("Strip")
    assert (row.product.supplier, row.form, row.density, row.ph_floor) == ("Maker", "liquid", 1_350_000, 2_500)
    assert shares(shelf, "Strip") == [("Sulfuric acid", "50 %"), ("water", "40-50 %")]
    assert (row.hazard_classes, row.signal_word) == (["Skin Corr. 1A", "Met. Corr. 1"], "Danger")
    assert (row.pictograms, row.complete, row.reactivity) == (["GHS05", "GHS07"], True, ["acid"])
    assert row.statements == ["H314 Causes burns", "H290", "P280", "P260"]
    assert [(limit.kind, limit.value, limit.source) for limit in row.limits.all()] == [
        ("8 h", "0.1 mg/m3", "list, 2024"),
        ("15 min", "0.2 mg/m3", "list; 2024"),
    ]
    assert (row.un_number, row.transport_class, row.packing_group) == ("1830", "8", "II")
    assert (row.supplier_telephone, str(row.sheet_date), row.sheet_language) == ("+1 234", "2024-05-06", "de")


def test_what_nobody_said_is_not_known(shelf: Shelf) -> None:
    shelf.record("product,form", "Soap,liquid")
    row = shelf.product("Soap")
    assert (row.complete, row.density, row.reactivity, row.sheet_date) == (False, None, [], None)


def test_rows_of_one_product_agree(shelf: Shelf) -> None:
    assert shelf.wrong("product,form,density", "Soap,liquid,1.1", "Soap,,", "Soap,liquid,1.2") == [
        (4, "density", 'Row 2 says "1.1" of the same product. Make them agree, or leave one empty.')
    ]
    shelf.record("product,form,density", "Soap,,1.1 g/mL", "Soap,liquid,")
    assert (shelf.product("Soap").form, shelf.product("Soap").density) == ("liquid", 1_100_000)


def test_what_agrees_with_the_register_is_not_written_again(shelf: Shelf) -> None:
    said = ("product,form,composition,statements", "Soap,liquid,NaOH 5 %,H314; H290")
    shelf.record(*said)
    shelf.record("product,statements,composition", "Soap,H290;H314,NaOH 5.0%")
    assert shelf.product("Soap").number == 1


def test_what_differs_is_refused_with_what_stands_there(shelf: Shelf) -> None:
    shelf.record("product,form,composition,density", "Soap,liquid,NaOH 5 %,1.1")
    assert shelf.wrong("product,form,composition,density", "Soap,solid,NaOH 6 %,1.10 g/mL") == [
        (2, "form", 'In the register it says "liquid". Choose that rows revise what is here, or leave this empty.'),
        (2, "composition", ('In the register it says "Sodium hydroxide 5 %". '
         "Choose that rows revise what is here, or leave this empty.")),
    ]  # fmt: skip


def test_rows_revise_where_that_was_chosen_and_keep_what_they_do_not_say(shelf: Shelf) -> None:
    shelf.record("product,form,composition,density,gloves", "Soap,liquid,NaOH 5 %,1.1234,nitrile")
    done = shelf.record("product,composition", "Soap,NaOH 6 %; NaCl 1 %", revise=True)
    row = shelf.product("Soap")
    assert done.made == {"products": 0, "revisions": 1, "containers": 0, "substances": 1, "places": 0}
    assert (row.number, row.form, row.density, row.gloves) == (2, "liquid", 1_123_400, "nitrile")
    assert shares(shelf, "Soap") == [("Sodium hydroxide", "6 %"), ("Sodium chloride", "1 %")]
    assert done.first is done.last is None


@pytest.mark.parametrize(
    ("row", "column"), [("soap,Maker", "product"), ("SOAP,maker", "product"), ("Soap,", "supplier")]
)
def test_what_nearly_is_a_product_of_the_register_is_refused(shelf: Shelf, row: str, column: str) -> None:
    shelf.record("product,supplier,form", "Soap,Maker,liquid")
    assert [(number, where) for number, where, _ in shelf.wrong("product,supplier,form", f"{row},liquid")] == [
        (2, column)
    ]


def test_another_suppliers_product_is_another_product(shelf: Shelf) -> None:
    shelf.record("product,supplier,form", "Soap,Maker,liquid")
    shelf.record("product,supplier,form", "Soap,Another,solid")
    assert shelf.products() == ["Soap", "Soap"]


def test_names_that_differ_in_spelling_only_within_a_file_are_refused(shelf: Shelf) -> None:
    (found,) = shelf.wrong("product,form", "Soap,liquid", "soap,liquid")
    assert found[:2] == (3, "product")


# --- which substance is meant ---


def test_a_substance_is_known_by_name_synonym_number_and_formula(shelf: Shelf) -> None:
    create_substance(
        actor=shelf.member, name="Blue stone", cas_number="7758-99-8", formula="CuSO4.5H2O", synonyms=["vitriol"]
    )
    names = ("blue stone", "Vitriol", "7758-99-8", "CuSO4.5H2O", "CuSO4·5H2O", "Copper sulfate pentahydrate")
    shelf.record("product,form,composition", *(f"P{n},solid,{name} 98 %" for n, name in enumerate(names)))
    assert list(substances(shelf)) == ["Blue stone"]


def test_a_usual_substance_is_taken_over_with_its_formula(shelf: Shelf) -> None:
    done = shelf.record("product,form,composition", "Salt,solid,Nickel sulfate hexahydrate 98 %")
    (row,) = substances(shelf).values()
    assert (row.formula, row.cas_number, done.made["substances"]) == ("NiSO4.6H2O", "10101-97-0", 1)


def test_a_name_of_two_substances_is_refused(shelf: Shelf) -> None:
    for name in ("Fine salt", "Coarse salt"):
        create_substance(actor=shelf.member, name=name, formula="NaCl")
    (found,) = shelf.wrong("product,form,composition", "Salt,solid,NaCl 98 %")
    assert '"NaCl" means more than one substance: "Coarse salt", "Fine salt"' in found[2]


def test_a_product_of_one_substance_is_told_by_its_number(shelf: Shelf) -> None:
    understood = shelf.read(
        "product,form,cas_number,ec_number,formula,composition", "Odd salt,solid,7647-14-5,231-598-3,NaCl,",
        "New salt,solid,1310-58-3,,,95 %", "Unheard,solid,71-43-2,200-753-7,C6H6,> 99 %",
    )  # fmt: skip
    assert [row.name for row in understood.made.substances] == ["Sodium chloride", "Potassium hydroxide", "Unheard"]
    assert next(row.message for row in understood.remarks) == ("How much of it is in the product is not said: 0-100 %.")
    assert [row.ec_number for row in understood.made.substances] == ["231-598-3", "", "200-753-7"]


def test_a_number_that_is_not_that_of_the_substance_is_refused(shelf: Shelf) -> None:
    create_substance(actor=shelf.member, name="Salt", cas_number="7647-14-5", ec_number="231-598-3")
    found = shelf.wrong(
        "product,form,cas_number,ec_number,composition",
        "A,solid,7647-14-5,200-753-7,",
        "B,solid,,,98 %",
        "C,solid,7647-14-5,,NaOH 2 %; NaCl 3 %",
        "D,solid,7647-14-6,,",
    )
    assert [(row, column) for row, column, _ in found] == [
        (2, "ec_number"), (3, "composition"), (4, "cas_number"), (5, "cas_number"),
    ]  # fmt: skip


def test_a_number_agrees_with_a_composition_that_is_here(shelf: Shelf) -> None:
    shelf.record("product,form,composition", "Salt,solid,NaCl 98 %")
    shelf.record("product,cas_number", "Salt,7647-14-5")
    assert shares(shelf, "Salt") == [("Sodium chloride", "98 %")]


def test_a_composition_may_stand_in_numbered_columns(shelf: Shelf) -> None:
    rows = ("product,form,part 1 name,part 1 content [%],part 2 name,part 2 content [g/L]",
            "Mix,liquid,NaCl,5,NaOH,250")  # fmt: skip
    shelf.record(*rows)
    assert shares(shelf, "Mix") == [("Sodium chloride", "5 %"), ("Sodium hydroxide", "250 g/L")]
    found = shelf.wrong(rows[0], "Other,solid,NaCl,,NaOH,2", "Third,solid,NaCl,5,NaOH,2 kg", ",,,,,")
    assert [error[:2] for error in found] == [(2, "part 1 content [%]"), (3, "part 2 content [g/L]")]
    assert [column for _, column, _ in shelf.wrong(rows[0], "Other,solid,NaCl,5,NaOH,250")] == ["part 2 content [g/L]"]


def test_contradictions_are_remarks_and_stop_nothing(shelf: Shelf) -> None:
    understood = shelf.read("product,form,hazard_classes,signal_word", "Acid,liquid,Skin Corr. 1A,Warning")
    assert understood.wrong == 0
    assert {remark.row for remark in understood.remarks} == {2}
    assert any("signal word" in remark.message for remark in understood.remarks)


def test_a_new_substance_that_sounds_like_one_is_a_remark(shelf: Shelf) -> None:
    create_substance(actor=shelf.member, name="Nickel sulfamate")
    (remark,) = shelf.read("product,form,composition", "Bath,liquid,nickel sulphamate 60 %").remarks
    assert '"Nickel sulfamate" is here already: is it the same?' in remark.message


def test_one_error_says_that_no_column_tells_the_form(shelf: Shelf) -> None:
    assert [error[:2] for error in shelf.wrong("product", "A", "B", "C")] == [(0, "Physical form")]


def test_queries_do_not_grow_with_rows(shelf: Shelf) -> None:
    heading = "product,form,cas_number,composition,container,place,amount"
    shelf.record(heading, *(f"Old {n},solid,,NaCl {n} %,,," for n in range(1, 4)))

    def count(number: int) -> int:
        old = [f"Old {n},solid,,NaCl {n} %,Pot {n},,5 g" for n in range(1, number + 1)]
        new = [f"New {n},solid,,Thing {n} 5 %,Jar {n},Room {n},1 kg" for n in range(number)]
        with CaptureQueriesContext(connection) as queries:
            understood = shelf.read(heading, *old, *new, add_places=True)
        assert understood.wrong == 0
        return len(queries)

    assert count(1) == count(3)
