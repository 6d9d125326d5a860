"""What rows say of containers, and what is recorded of what is in them."""

from datetime import date, timedelta
from typing import Any

import pytest
from django_scopes import scope

from chemicals.books.clearance import NOT_ASKED
from chemicals.journal.models import Entry
from chemicals.journal.selectors import read_body
from chemicals.journal.verify import verify_chain
from chemicals.ledger.models import Holding, Vessel
from chemicals.ledger.verify import verify_projection
from chemicals.process.importing.files import add_import, find_map, read_table
from chemicals.process.models import Import, Subject
from chemicals.register.models import Product
from chemicals.register.services import RevisionInput, create_product
from chemicals.workshop.errors import ConflictError, NotPermittedError
from chemicals.workshop.models import Membership
from compliance.clearance.importing import RefusedImportError, preview_import, write_import
from tests.process.importing.register.shelf import Shelf
from tests.process.importing.sheets import lines
from tests.process.importing.story import close
from tests.process.shop import KG, Shop

HEADING = "product,form,composition,complete,density,container,place,amount,lot,received_on,opened_on,expires_on,count"


def held(shelf: Shelf, name: str) -> dict[str, Any]:
    """Return what a container holds, by component: amount and standard uncertainty."""
    with scope(workshop=shelf.member.workshop):
        rows = Holding.objects.filter(vessel__name=name).select_related("component")
        return {row.component.code: (row.amount, round(row.variance**0.5)) for row in rows if row.component.code}


def entries(shelf: Shelf) -> list[Entry]:
    with scope(workshop=shelf.member.workshop):
        return list(Entry.objects.order_by("sequence"))


def test_what_was_received_on_a_day_is_a_receipt(shelf: Shelf) -> None:
    done = shelf.record(
        HEADING, "Salt,solid,CuSO4.5H2O 98 %,yes,,Jar,Bench,2 kg,L-7,2026-01-12,2026-01-20,2027-01-31,", add_places=True
    )
    (entry,) = entries(shelf)
    body = read_body(entry)
    assert (entry.kind, body.payload["observed"]["lot"], entry.occurred_at.date()) == (
        "receipt", "L-7", date(2026, 1, 12),
    )  # fmt: skip
    assert (body.clearance.verdict, body.attachments) == (NOT_ASKED, (done.file.sha256,))
    assert body.clearance.reasons == (f"imported from row 2 of the file {done.file.sha256}: nobody was asked",)
    vessel = shelf.vessels()["Jar"]
    assert (vessel.place and vessel.place.name, vessel.product and vessel.product.name) == ("Bench", "Salt")
    assert (vessel.opened_on, vessel.expires_on, len(vessel.code)) == (date(2026, 1, 20), date(2027, 1, 31), 6)
    assert vessel.searched == f"jar\n{vessel.code.casefold()}"
    assert held(shelf, "Jar")["gross mass"] == (2 * KG, 0)


def test_what_is_there_without_a_day_is_what_would_have_been_received(shelf: Shelf) -> None:
    """An opening by the composition holds, and doubts, what a receipt of the same would."""
    rows = (
        "Acid,liquid,H2SO4 90-98 %,yes,1.8 g/mL,{},,2.5 L,,{},,,",
        "Salt,solid,CuSO4.5H2O 98 %,yes,,{},,1 kg,,{},,,",
        "Mix,liquid,NaCl 5 %,,,{},,1 L,,{},,,",
    )
    for number, row in enumerate(rows):
        shelf.record(HEADING, row.format(f"Received {number}", "2026-01-12"), row.format(f"Found {number}", ""))
        assert held(shelf, f"Found {number}") == held(shelf, f"Received {number}")
    assert [entry.kind for entry in entries(shelf)][:2] == ["receipt", "opening"]
    assert verify_chain(shelf.member.workshop) == []
    assert verify_projection(shelf.member.workshop) == []


def test_containers_alike_are_numbered_and_unnamed_ones_called_after_their_product(shelf: Shelf) -> None:
    shelf.record(HEADING, "Salt,solid,,,,,,1 kg,,,,,3", "Salt,,,,,Tub,,,,,,,2", "Salt,,,,,Tub 5,,,,,,,")
    assert list(shelf.vessels()) == ["Salt 1", "Salt 2", "Salt 3", "Tub 1", "Tub 2", "Tub 5"]
    assert len(entries(shelf)) == 3


def test_a_row_without_anything_of_a_container_makes_none(shelf: Shelf) -> None:
    shelf.record(HEADING, "Salt,solid,,,,,,,,,,,")
    assert (shelf.products(), shelf.vessels()) == (["Salt"], {})


@pytest.mark.parametrize(
    ("row", "column", "message"),
    [
        ("Jar,,0 g,,,,,", "amount", "Write how much is in it"),
        ("Jar,,-1 g,,,,,", "amount", "negative"),
        ("Jar,,5,,,,,", "amount", "no unit"),
        ("Jar,,,L1,,,,", "amount", "A lot and a day belong to what was received"),
        ("Jar,,1 g,L1,,,,", "lot", "Write the day, or leave the lot out"),
        ("Jar,,1 g,,2999-01-01,,,", "received_on", "This lies in the future"),
        ("Jar,,1 g,,,2999-01-01,,", "opened_on", "still to come"),
        ("Jar,,1 g,,,,soon,", "expires_on", '"soon" is no date'),
        ("Jar,Nowhere,,,,,,", "place", 'There is no place "Nowhere"'),
        ("Jar,,,,,,,0", "count", "no whole number"),
        (f"{'x' * 81},,,,,,,", "container", "too long"),
    ],
)
def test_what_a_container_cannot_be(shelf: Shelf, row: str, column: str, message: str) -> None:
    (found,) = shelf.wrong(HEADING, f"Salt,solid,,,,{row}")
    assert found[:2] == (2, column)
    assert message in found[2]


def test_a_name_stands_once(shelf: Shelf) -> None:
    shelf.record(HEADING, "Salt,solid,,,,Jar,,,,,,,")
    found = shelf.wrong(HEADING, "Salt,,,,,Jar,,,,,,,", "Salt,,,,,Tub,,,,,,,", "Salt,,,,,Tub,,,,,,,")
    assert [(row, column) for row, column, _ in found] == [(2, "container"), (4, "container")]
    assert "is here already" in found[0][2]
    assert found[1][2].startswith("Row 3 names")


def test_places_are_added_only_where_that_was_chosen(shelf: Shelf) -> None:
    rows = (HEADING, "Salt,solid,,,,A,Bench,,,,,,", "Salt,,,,,B,Bench,,,,,,")
    assert [row for row, _, _ in shelf.wrong(*rows)] == [2, 3]
    done = shelf.record(*rows, add_places=True)
    assert done.made["places"] == 1
    (found,) = shelf.wrong(HEADING, "Salt,,,,,C,bench,,,,,,", add_places=True)
    assert 'There is a place "Bench"' in found[2]


def test_a_day_in_a_closed_period_is_refused_with_another_way(empty_shop: Shop) -> None:
    shelf = Shelf(empty_shop.member, empty_shop.now)
    close(empty_shop)
    (found,) = shelf.wrong(HEADING, "Soap,liquid,,,,Jar 9,,1 L,,2026-01-05,,,")
    assert found[:2] == (2, "received_on")
    assert "The books are closed" in found[2]
    shelf.record(HEADING, "Soap,liquid,,,,Jar 9,,1 L,,,,,")
    assert empty_shop.is_proved()


# --- all or nothing, once ---


def nothing_is_there(shelf: Shelf) -> bool:
    with scope(workshop=shelf.member.workshop):
        return not (Product.objects.exists() or Vessel.objects.exists() or Entry.objects.exists())


def test_one_wrong_row_keeps_all_of_them_out(shelf: Shelf) -> None:
    with pytest.raises(RefusedImportError) as refused:
        shelf.record(HEADING, "Salt,solid,,,,Jar,,1 kg,,,,,", "Soap,plasma,,,,,,,,,,,")
    assert [error.field for error in refused.value.errors] == ["rows.3.form"]
    assert nothing_is_there(shelf)


def test_a_failure_at_the_end_leaves_nothing_behind(shelf: Shelf, monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(*args: object) -> None:
        raise RuntimeError("the lights went out")

    with monkeypatch.context() as patch:
        patch.setattr("chemicals.process.services.project_entries", fail)
        with pytest.raises(RuntimeError):
            shelf.record(HEADING, "Salt,solid,,,,Jar,Bench,1 kg,,,,,", add_places=True)
    assert nothing_is_there(shelf)
    shelf.record(HEADING, "Salt,solid,,,,Jar,Bench,1 kg,,,,,", add_places=True)
    assert list(shelf.vessels()) == ["Jar"]


def test_the_same_file_is_imported_once(shelf: Shelf) -> None:
    first = shelf.record(HEADING, "Salt,solid,,,,,,1 kg,,,,,")
    again = shelf.record(HEADING, "Salt,solid,,,,,,1 kg,,,,,", name="again.csv")
    assert (again, again.imported_at) == (first, shelf.now)
    assert list(shelf.vessels()) == ["Salt 1"]


def kept(shelf: Shelf, *rows: str, subject: Subject = Subject.REGISTER) -> Import:
    """Upload a file."""
    return add_import(actor=shelf.member, now=shelf.now, name="x.csv", data=lines(*rows), subject=subject)


def test_a_register_that_changed_meanwhile_takes_nothing(shelf: Shelf) -> None:
    rows = (HEADING, "Salt,solid,,,,Jar,,1 kg,,,,,")
    plan, found = shelf.read(*rows).made, kept(shelf, *rows)
    revision = RevisionInput(form="liquid")
    create_product(actor=shelf.member, now=shelf.now, name="Salt", supplier="", revision=revision)
    with pytest.raises(ConflictError, match="Somebody wrote to the register meanwhile"):
        write_import(actor=shelf.member, now=shelf.now, upload=found, made=plan)
    assert shelf.vessels() == {}


def test_the_same_bytes_may_be_entries_and_the_register(shelf: Shelf) -> None:
    one, other = (kept(shelf, "product,form", "Salt,solid", subject=subject) for subject in Subject)
    assert one != other
    assert one.file == other.file


def test_an_observer_imports_nothing(shelf: Shelf, observer: Membership) -> None:
    found = kept(shelf, "product,form", "Salt,solid")
    plan = preview_import(shelf.member, shelf.now, found, find_map(found, read_table(found))).made
    with pytest.raises(NotPermittedError):
        write_import(actor=observer, now=shelf.now + timedelta(days=1), upload=found, made=plan)
    with pytest.raises(NotPermittedError):
        Shelf(observer, shelf.now).record("product,form", "Soap,solid")
    assert nothing_is_there(shelf)
