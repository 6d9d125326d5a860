"""The register as a file, imported into another workshop as it is: the same products."""

from typing import Any

from chemicals.register.models import ProductRevision
from chemicals.register.selectors import list_current_revisions_for
from compliance.documents.export import Table, send
from compliance.web.views.register import COLUMNS
from tests.process.importing.register.shelf import Shelf

HEADING = (
    "product,supplier,form,density,ph_floor,composition,complete,hazard_classes,signal_word,pictograms,statements,"
    "reactivity,limits,gloves,un_number,shipping_name,transport_class,packing_group,supplier_telephone,sheet_date,"
    "sheet_language,transport_unclassified"
)
STRIP = (
    'Strip,Maker,liquid,1.35123,2.5,H2SO4 50 %; water 40-50 %,yes,"Skin Corr. 1A; Met. Corr. 1",Danger,GHS05 GHS07,'
    '"H314 Causes burns; H373 (liver; kidney)\nP280",acid,"0.1 mg/m3 (8 h; list, 2024); '
    'Sulfuric acid: 0.2 mg/m3 (15 min; list 2024)","nitrile\n0.4 mm",1830,"SULPHURIC ACID, SPENT",8 (6.1),II,\'+1 234,'
    "2024-05-06,de,"
)
ODD = "-Odd name,,solid,,,NaCl 25.5 %,,,,,,nothing,,,,,,,,,,yes"
RICH = (HEADING, STRIP, ODD, "Mist,Maker,gas" + "," * 19)


def fact_of(shelf: Shelf) -> list[Any]:
    """Return everything that the register says, without who and when."""
    left_out = ("id", "product_id", "created_at", "created_by_id", "safety_data_sheet_id")
    names = [field.attname for field in ProductRevision._meta.concrete_fields if field.attname not in left_out]
    return [
        (
            row.product.name,
            row.product.supplier,
            {name: getattr(row, name) for name in names},
            [(line.substance.name, line.substance.formula, line.typed, line.amount) for line in row.lines.all()],
            [(str(limit.substance or ""), limit.kind, limit.value, limit.source) for limit in row.limits.all()],
        )
        for row in list_current_revisions_for(shelf.member)
    ]


def export(shelf: Shelf, ending: str) -> bytes:
    """Return the file of the register's page."""
    table = Table("products", COLUMNS, list_current_revisions_for(shelf.member))
    sent = send(table, ending)
    return b"".join(sent.streaming_content)  # type: ignore[arg-type]  # it streams at once


def test_the_registers_own_file_makes_the_same_products(shelf: Shelf, other_shelf: Shelf) -> None:
    shelf.record(*RICH)
    for ending in ("csv", "xlsx"):
        other_shelf.record(data=export(shelf, ending), name=f"register.{ending}")
        assert fact_of(other_shelf) == fact_of(shelf)
    assert [row[2]["number"] for row in fact_of(other_shelf)] == [1, 1, 1]


def test_what_was_exported_agrees_with_what_is_here(shelf: Shelf) -> None:
    shelf.record(*RICH)
    done = shelf.record(data=export(shelf, "csv"))
    assert not any(done.made.values())
