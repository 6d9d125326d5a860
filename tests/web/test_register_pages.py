"""The register and the tanks on the pages: substances, products, revisions, sheets, containers, the line."""

import re
from uuid import UUID

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.http import HttpResponse
from django_scopes import scopes_disabled

from chemicals.ledger.models import Vessel, VesselKind
from chemicals.process.models import RackType, Route, Tank
from chemicals.process.setup import SOLID_HOLDERS
from chemicals.register.models import Product, Substance
from chemicals.register.selectors import get_current_revision
from chemicals.workshop.models import Membership
from compliance.web.forms import fields
from tests.web.conftest import LITRE, Line, Visitor, text_of

SHEET = b"%PDF-1.4\ninvented sheet\n"


def product_of(page: HttpResponse) -> Product:
    found = re.search(r"/register/([0-9a-f-]{36})/", page.headers["Location"])
    assert found is not None
    return Product._base_manager.get(uuid=UUID(found[1]))


def said(substance: Substance, **changes: object) -> dict[str, object]:
    sheet = SimpleUploadedFile("nickel salt, Überzug.pdf", SHEET, "application/pdf")
    return {
        "name": "Green salt",
        "supplier": "Invented Supply",
        "form": "solid",
        "lines-1-substance": substance.uuid,
        "lines-1-content": "98 %",
        "complete": "on",
        "signal_word": "Danger",
        "pictograms": ["GHS07", "GHS08"],
        "statements": "H302 Harmful if swallowed\r\nH350i May cause cancer by inhalation",
        "reactivity": ["acid"],
        "sheet": sheet,
        "sheet_date": "2025-05-01",
        **changes,
    }


def sulfate() -> Substance:
    return Substance._base_manager.create(
        workshop_id=Membership.objects.values_list("workshop_id", flat=True)[0],
        name="Nickel sulfate",
        formula="NiSO4.6H2O",
    )


def test_a_product_is_added_with_composition_hazards_and_sheet(visit: Visitor) -> None:
    product = product_of(visit.post("add-product", **said(sulfate())))
    with scopes_disabled():
        revision = get_current_revision(product)
        assert [line.typed for line in revision.lines.all()] == ["98 %"]
        assert revision.statements == ["H302 Harmful if swallowed", "H350i May cause cancer by inhalation"]
        assert (revision.reactivity, revision.pictograms) == (["acid"], ["GHS07", "GHS08"])
        sheet = revision.safety_data_sheet
    assert sheet is not None
    file = visit.get("file", sheet.sha256)
    assert file.content == SHEET
    assert file.headers["Content-Type"] == "application/pdf"
    assert file.headers["Content-Disposition"].startswith("attachment; ")
    page = text_of(visit.get("product", product.uuid))
    assert "health hazard" in page
    assert "an acid, or anything with a pH below 7" in page


def test_all_that_is_wrong_with_a_product_comes_at_once(visit: Visitor) -> None:
    wrong = said(
        sulfate(), name="", statements="poisonous", sheet=SimpleUploadedFile("sheet.txt", b"hello"), density="heavy"
    )
    page = visit.post("add-product", **wrong)
    assert page.status_code == 400
    assert "#id_name" in text_of(page)
    page = visit.post("add-product", **{**wrong, "name": "Green salt", "sheet": ""})
    targets = set(re.findall(r'href="(#id_[a-z_0-9-]+)"', text_of(page)))
    assert {"#id_density", "#id_statements"} <= targets
    assert not Product._base_manager.exists()


def test_what_is_chosen_besides_words_is_named_and_folded_unless_it_is_wrong(visit: Visitor, line: Line) -> None:
    plain, chosen, wrong = (
        text_of(visit.get("register", query=query))
        for query in ("", "?signal_word=Danger&keeps=soon", "?place=nowhere")
    )
    assert "<summary> Choose more closely </summary>" in plain
    assert '<span class="mark note">Keeps until, Signal word</span>' in chosen
    for page, is_open in ((plain, False), (chosen, False), (wrong, True)):
        assert ("<details open> <summary> Choose more closely" in page) == is_open


def test_a_wrong_content_stands_at_its_row(visit: Visitor) -> None:
    page = visit.post("add-product", **said(sulfate(), sheet="", **{"lines-1-content": "1,500 g/L"}))
    assert "#id_lines-1-content" in text_of(page)


def test_the_next_revision_begins_with_this_one_and_keeps_its_sheet(visit: Visitor) -> None:
    substance = sulfate()
    product = product_of(visit.post("add-product", **said(substance)))
    form = visit.get("revise-product", product.uuid).content.decode()
    assert 'value="98 %"' in form
    assert "H350i" in form
    visit.post("revise-product", product.uuid, **said(substance, **{"lines-1-content": "99 %", "sheet": ""}))
    with scopes_disabled():
        revision = get_current_revision(product)
        assert (revision.number, [line.typed for line in revision.lines.all()]) == (2, ["99 %"])
        assert revision.safety_data_sheet is not None


def test_a_substance_is_checked(visit: Visitor) -> None:
    page = visit.post("add-substance", name="Nickel sulfate", formula="NiSO4.6H2O", cas_number="10101-97-1")
    assert page.status_code == 400
    assert "check digit" in text_of(page)
    assert visit.post("add-substance", name="Nickel sulfate", formula="NiSO4.6H2O").status_code == 302


def test_a_bath_is_set_up_with_figures_as_typed(visit: Visitor, line: Line) -> None:
    visit.post("add-anode", name="Anodes")
    anode = Vessel._base_manager.get(name="Anodes")
    figures = {"capacity": "8 gal", "mark": "20 L", "metal": "Cu", "valence": "2", "efficiency": "98 %"}
    page = visit.post("add-tank", "bath", name="Bath 2", anode_kind="soluble", anode=anode.uuid, **figures)
    assert page.status_code == 302
    tank = Tank._base_manager.get(vessel__name="Bath 2")
    assert (tank.vessel.capacity, tank.mark, tank.efficiency) == (30_283_294_272, 20 * LITRE, 980_000)
    assert tank.anode == anode


def test_a_bath_is_set_up_with_rack_build_up_and_side_reaction(visit: Visitor, line: Line) -> None:
    made = visit.post("add-holder", kind="racks", name="Build-up")
    racks = Vessel._base_manager.get(name="Build-up")
    assert made.headers["Location"] == visit.address("vessel", racks.uuid)
    figures = {"metal": "Ni", "valence": "2", "anode_kind": "inert", "side_reaction": "acid", "rack_share": "4 %"}
    assert visit.post("add-tank", "bath", name="Nickel", racks=racks.uuid, **figures).status_code == 302
    tank = Tank._base_manager.get(vessel__name="Nickel")
    assert (tank.side_reaction, tank.racks, tank.rack_share) == ("acid", racks, 40_000)
    page = text_of(visit.get("vessel", tank.vessel.uuid))
    assert "acid is made (acid bath)" in page
    assert f'<a href="{visit.address("vessel", racks.uuid)}">Build-up</a>, 4 %' in page
    wrong = visit.post("add-tank", "bath", name="Second", racks=racks.uuid, rack_share="120 %", side_reaction="acid")
    assert set(re.findall(r'href="#id_([a-z_]+)"', text_of(wrong))) == {"racks", "rack_share", "side_reaction"}


@pytest.mark.parametrize("kind", SOLID_HOLDERS)
def test_what_stands_for_solids_is_set_up_and_listed(visit: Visitor, line: Line, kind: VesselKind) -> None:
    visit.post("add-holder", kind=kind, name="The new one", capacity="10 L")
    page = text_of(visit.get("tanks"))
    assert f"<h2>{kind.label.capitalize()}</h2>" in page
    assert "The new one" in page
    assert visit.post("add-holder", kind="bath", name="No holder").status_code == 400


def test_a_substance_is_declared_inert(visit: Visitor) -> None:
    assert visit.post("add-substance", name="Glauber's salt", formula="Na2SO4", inert="on").status_code == 302
    assert "reacts with nothing here" in text_of(visit.get("substances"))
    page = visit.post("add-substance", name="Acid", formula="H2SO4", inert="on")
    assert "This brings acid, which reacts." in text_of(page)


def test_what_does_not_fit_together_is_told(visit: Visitor, line: Line) -> None:
    page = visit.post("add-tank", "bath", name="Bath 2", metal="Cu", mark="30 L", capacity="20 L", anode_kind="soluble")
    assert set(re.findall(r'href="#id_([a-z_]+)"', text_of(page))) == {"valence", "mark", "anode"}
    assert visit.get("add-tank", "kettle").status_code == 404


def test_a_rack_type_and_a_route_are_added(visit: Visitor, line: Line) -> None:
    assert visit.post("add-rack-type", name="Rack 2", area="4.4 dm2", drag_out="12 mL").status_code == 302
    rack = RackType._base_manager.get(name="Rack 2")
    assert (rack.area, rack.drag_out, rack.drag_out_sd) == (44_000, 12_000_000, 300_000)
    steps = {"vessels-0-tank": line.bath.uuid, "vessels-2-tank": line.rinse.uuid}
    assert visit.post("add-route", name="Route 2", rack=rack.uuid, **steps).status_code == 302
    route = Route._base_manager.get(name="Route 2")
    with scopes_disabled():
        assert [step.vessel for step in route.steps.all()] == [line.bath, line.rinse]
    page = visit.post("add-route", name="Route 3", rack=rack.uuid)
    assert "at least one tank" in text_of(page)


def test_things_of_another_workshop_are_not_found(stranger: Membership, line: Line) -> None:
    visitor = Visitor(stranger)
    assert visitor.get("product", line.salt.uuid).status_code == 404
    assert visitor.get("vessel", line.bath.uuid).status_code == 404
    assert visitor.get("waste-container", line.drum.vessel.uuid).status_code == 404


def test_a_file_too_large_for_a_sheet_is_refused(visit: Visitor, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(fields, "LARGEST_FILE", len(SHEET) - 1)
    page = visit.post("add-product", **said(sulfate()))
    assert page.status_code == 400
    assert "larger than 20 MB" in text_of(page)
