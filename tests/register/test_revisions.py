"""What stands on a sheet, in a revision: kept as typed, read where figures follow, refused by field, pointed out."""

from datetime import datetime
from decimal import Decimal
from typing import Any

import pytest
from django_scopes import scope

from chemicals.register.checks import read_limit
from chemicals.register.models import ProductRevision, Substance
from chemicals.register.selectors import build_recipe, get_current_revision
from chemicals.register.services import LimitInput, LineInput, RevisionInput, create_product, create_substance
from chemicals.workshop.errors import InvalidInputError, NotPermittedError
from chemicals.workshop.models import Membership


@pytest.fixture
def salt(worker: Membership) -> Substance:
    return create_substance(actor=worker, name="Copper sulfate", formula="CuSO4.5H2O")


def create(member: Membership, now: datetime, **said: Any) -> ProductRevision:
    revision = RevisionInput(**({"form": "liquid"} | said))
    made = create_product(actor=member, now=now, name="Etchant", supplier="", revision=revision)
    return get_current_revision(made.product)


def test_a_range_is_its_middle_with_its_uncertainty(worker: Membership, now: datetime, salt: Substance) -> None:
    """20 to 30 % (JCGM 100:2008, 4.3.7): 250 g/kg, u = 100 / sqrt(12) = 28.87 g/kg; of copper a 0.2545th."""
    made = create(worker, now, lines=(LineInput(salt, " 20–30 % "),))
    with scope(workshop=worker.workshop):
        line = made.lines.get()
    assert (line.typed, line.amount, line.per) == ("20–30 %", 250_000_000, "kg")
    assert line.sd == pytest.approx(28_867_513, abs=1)
    share = build_recipe(made).shares[0]
    assert share.component == "Cu"
    assert Decimal(share.sd) / share.amount == pytest.approx(Decimal(line.sd) / line.amount, rel=Decimal("1e-6"))


def test_parts_may_add_up_to_more_than_all_only_where_they_must(
    worker: Membership, now: datetime, salt: Substance
) -> None:
    water, acid = (create_substance(actor=worker, name=name) for name in ("Water", "Sulfuric acid"))
    lines = (LineInput(salt, "1-5 %"), LineInput(acid, "< 5 %"), LineInput(water, ">= 95 %"))
    assert create(worker, now, lines=lines).number == 1
    with pytest.raises(InvalidInputError, match="more than 100 %"):
        create_product(
            actor=worker, now=now, name="Too much", supplier="",
            revision=RevisionInput(form="liquid", lines=(LineInput(salt, "6-8 %"), LineInput(water, ">= 95 %"))),
        )  # fmt: skip


SHEET = {
    "ph_floor": "3.5",
    "hazard_classes": ("Skin Corr. 1B", "Met. Corr. 1", "Skin Corr. 1B"),
    "signal_word": "Danger",
    "pictograms": ("GHS05", "GHS05"),
    "statements": ("H314, H290", "P280 Wear gloves"),
    "gloves": "Nitrile\r\n0.4 mm",
    "un_number": "UN 1760",
    "shipping_name": " CORROSIVE LIQUID, N.O.S. ",
    "transport_class": "8 (6.1)",
    "packing_group": "II",
    "sheet_language": "de-at",
    "supplier_telephone": " +49 000 222 ",
}


def test_what_stands_on_the_sheet_is_kept(worker: Membership, now: datetime, salt: Substance) -> None:
    limits = (LimitInput("8 h", "0.05 mg/m3", "sheet, section 8", salt), LimitInput("danger", "50 ppm", "sheet"))
    made = create(worker, now, limits=limits, **SHEET)
    assert (made.ph_floor, made.hazard_classes) == (3500, ["Skin Corr. 1B", "Met. Corr. 1"])
    assert (made.statements, made.pictograms) == (["H314", "H290", "P280 Wear gloves"], ["GHS05"])
    assert (made.gloves, made.sheet_language) == ("Nitrile\n0.4 mm", "de-AT")
    assert made.supplier_telephone == "+49 000 222"
    transport = (made.un_number, made.shipping_name, made.transport_class, made.packing_group)
    assert transport == ("1760", "CORROSIVE LIQUID, N.O.S.", "8 (6.1)", "II")
    assert made.contradictions == ()
    with scope(workshop=worker.workshop):
        rows = [(row.substance, row.kind, row.value, row.source) for row in made.limits.all()]
    assert rows == [(salt, "8 h", "0.05 mg/m3", "sheet, section 8"), (None, "danger", "50 ppm", "sheet")]


def test_contradictions_are_pointed_out_and_kept_as_they_are(worker: Membership, now: datetime) -> None:
    made = create(worker, now, **{**SHEET, "signal_word": "Warning", "pictograms": ()})
    assert [each.code for each in made.contradictions] == ["signal-word", "pictogram-missing"]
    assert (made.signal_word, made.pictograms) == ("Warning", [])


@pytest.mark.parametrize(
    ("said", "fields"),
    [
        ({"ph_floor": "acid"}, ["ph_floor"]),
        ({"ph_floor": "14.5"}, ["ph_floor"]),
        ({"ph_floor": "-1"}, ["ph_floor"]),
        ({"hazard_classes": ("Skin Corr. 9",)}, ["hazard_classes"]),
        ({"statements": ("H" * 301,)}, ["statements", "statements"]),
        ({"statements": [f"P280 {number}" for number in range(61)]}, ["statements"]),
        ({"gloves": "x" * 1001}, ["gloves"]),
        ({"gloves": "a\x00b"}, ["gloves"]),
        ({"un_number": "183"}, ["un_number"]),
        ({"un_number": "acid"}, ["un_number"]),
        ({"shipping_name": "x" * 201}, ["shipping_name"]),
        ({"shipping_name": "a\nb"}, ["shipping_name"]),
        ({"transport_class": "10"}, ["transport_class"]),
        ({"packing_group": "IV"}, ["packing_group"]),
        ({"transport_unclassified": True, "un_number": "1830"}, ["transport_unclassified"]),
        ({"sheet_language": "German"}, ["sheet_language"]),
        ({"limits": (LimitInput("8 h", "5", "sheet"),)}, ["limits.0.value"]),
        ({"limits": (LimitInput("8 h", "5 g", "sheet"),)}, ["limits.0.value"]),
        ({"limits": (LimitInput("8 h", "0 mg/m3", "sheet"),)}, ["limits.0.value"]),
        ({"limits": (LimitInput("8 h", "1 ppm", "ok"), LimitInput("daily", "", ""))},
         ["limits.1.kind", "limits.1.value", "limits.1.source"]),
        ({"un_number": "1", "packing_group": "V", "ph_floor": "x"}, ["un_number", "packing_group", "ph_floor"]),
    ],
)  # fmt: skip
def test_a_sheet_is_refused_by_field(
    worker: Membership, now: datetime, said: dict[str, Any], fields: list[str]
) -> None:
    with pytest.raises(InvalidInputError) as caught:
        create(worker, now, **said)
    assert [each.field for each in caught.value.errors] == fields
    assert all(each.message for each in caught.value.errors)


def test_a_limit_is_a_mass_in_air_or_a_fraction() -> None:
    assert read_limit("0.05 mg/m3").exact == 50_000
    assert read_limit("6 µg/m³").exact == 6000
    assert (read_limit("0.9 ppm").exact, read_limit("0.9 ppm").dimension) == (Decimal("0.9"), "fraction")


def test_a_limit_names_only_substances_of_this_workshop(
    worker: Membership, stranger: Membership, now: datetime
) -> None:
    theirs = create_substance(actor=stranger, name="Theirs")
    with pytest.raises(NotPermittedError):
        create(worker, now, limits=(LimitInput("8 h", "1 ppm", "sheet", theirs),))
