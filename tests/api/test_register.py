"""Substances, products and their revisions, vessels, tanks, rack types, routes, places."""

from uuid import uuid4

import pytest

from tests.api.conftest import Caller, Shop, errors_of


def test_a_workshop_tells_the_end_of_its_journal(api: Caller, shop: Shop) -> None:
    before = api.get("").json()
    assert (before["name"], before["time_zone"], before["role"]) == ("Alder Court", "Europe/Berlin", "owner")
    assert before["head"] == {"sequence": 0, "hash": "0" * 64}
    entry = api.record("opening", vessel=str(shop.bath.uuid), volume="20 L").json()
    assert api.get("").json()["head"] == {"sequence": 1, "hash": entry["hash"]}


def test_a_substance_is_created_with_its_cas_number_checked(api: Caller) -> None:
    made = api.post("substances/", {"name": "Nickel sulfate", "cas_number": "10101-97-0", "formula": "NiSO4.6H2O"})
    assert made.status_code == 201
    assert api.get(f"substances/{made.json()['uuid']}/").json() == made.json()
    wrong = api.post("substances/", {"name": "Nickel sulfate", "cas_number": "10101-97-1", "formula": "NiSO4.6Q"})
    assert set(errors_of(wrong, 400)) == {"name", "cas_number", "formula"}


def test_a_product_and_its_next_revision(api: Caller, shop: Shop) -> None:
    said = {
        "name": "Acid copper, ready made", "supplier": "Invented Supply", "form": "liquid", "density": "1.2 g/mL",
        "lines": [{"substance": str(shop.sulfate.uuid), "content": "200 g/L"}], "complete": False,
        "reactivity": ["acid"], "signal_word": "Danger", "pictograms": ["GHS05"], "statements": ["H314 Burns skin"],
        "sheet_date": "2025-05-01",
    }  # fmt: skip
    made = api.post("products/", said)
    first = made.json()
    assert made.status_code == 201
    assert (first["revision"], first["density"]["text"], first["complete"]) == (1, "1.2 g/cm³", False)
    line = {"substance": str(shop.sulfate.uuid), "name": shop.sulfate.name, "cas_number": "7758-99-8"}
    line |= {"formula": "CuSO4.5H2O", "content": "200 g/L", "per": "L"}
    assert first["lines"] == [{**line, "amount": 200_000_000, "sd": 0}]
    assert (first["safety_data_sheet"], first["sheet_date"]) == (None, "2025-05-01")
    address = f"products/{first['uuid']}/"
    second = api.post(address + "revisions/", {"form": "liquid"}).json()
    assert (second["revision"], second["lines"], second["complete"]) == (2, [], True)
    assert api.get(address).json() == second
    assert [row["revision"] for row in api.get(address + "revisions/").json()["results"]] == [2, 1]
    assert api.get(address + "revisions/").json()["results"][1] == first


def test_everything_on_a_sheet_comes_back_as_it_was_said(api: Caller, shop: Shop) -> None:
    limit = {"substance": str(shop.sulfate.uuid), "kind": "8 h", "value": "1 mg/m3", "source": "invented list"}
    whole = {"kind": "danger", "value": "50 ppm", "source": "invented list"}
    kept = {
        "gloves": "Nitrile", "un_number": "1830", "shipping_name": "SULPHURIC ACID", "transport_class": "8 (6.1)",
        "packing_group": "II", "sheet_language": "de-AT", "supplier_telephone": "000 222",
        "hazard_classes": ["Skin Corr. 1A"],
        "statements": ["H314", "P280 Wear gloves"], "signal_word": "Danger", "pictograms": ["GHS05"],
    }  # fmt: skip
    said = {"name": "Acid", "form": "liquid", "ph_floor": "3.5", "limits": [limit, whole], **kept}
    said["lines"] = [{"substance": str(shop.sulfate.uuid), "content": "20-30 %"}]
    made = api.post("products/", said)
    assert made.status_code == 201
    answer = made.json()
    assert {name: answer[name] for name in kept} == kept
    assert answer["limits"] == [limit, {"substance": None, **whole}]
    assert (answer["ph_floor"]["base"], answer["ph_floor"]["text"]) == (3500, "pH 3.5")
    assert (answer["lines"][0]["amount"], answer["lines"][0]["sd"]) == (250_000_000, 28_867_513)
    assert (answer["contradictions"], answer["transport_unclassified"]) == ([], False)


def test_contradictions_are_answered_and_nothing_is_refused(api: Caller) -> None:
    said = {"name": "Acid", "form": "liquid", "hazard_classes": ["Skin Corr. 1A"], "signal_word": "Warning"}
    made = api.post("products/", said)
    assert made.status_code == 201
    assert made.json()["contradictions"] == [
        {"code": "statement-missing", "message": "Skin Corr. 1A calls for H314, which is not among the statements."},
        {"code": "signal-word", "message": "Skin Corr. 1A calls for the signal word Danger; entered is Warning."},
        {"code": "pictogram-missing", "message": "Skin Corr. 1A calls for GHS05, which is not among the pictograms."},
    ]


def test_a_wrong_sheet_is_named_by_its_fields(api: Caller, shop: Shop) -> None:
    said = {"name": "Acid", "form": "liquid"}
    shape = api.post("products/", {**said, "hazard_classes": ["Skin Corr. 9"], "packing_group": "IV"})
    assert set(errors_of(shape, 400)) == {"hazard_classes.0", "packing_group"}
    limit = {"kind": "8 h", "value": "5", "source": "list"}
    wrong = {"un_number": "12", "transport_class": "10", "sheet_language": "German", "ph_floor": "15"}
    found = api.post("products/", {**said, **wrong, "limits": [limit]})
    assert set(errors_of(found, 400)) == {*wrong, "limits.0.value"}
    absent = api.post("products/", {**said, "limits": [{**limit, "substance": str(uuid4())}]})
    assert set(errors_of(absent, 400)) == {"limits.0.substance"}


def test_a_substance_tells_what_follows_from_its_formula_and_is_corrected(api: Caller) -> None:
    made = api.post("substances/", {"name": "Gold salt", "formula": "KAu(CN)2", "synonyms": ["PGC"]}).json()
    metals = made["makeup"]["metals"]
    assert made["makeup"]["molar_mass"].startswith("288.10")  # Wikipedia, Potassium dicyanoaurate: 288.101 g/mol
    assert [(each["metal"], each["fraction"][:5]) for each in metals] == [("Au", "0.683")]
    address = f"substances/{made['uuid']}/"
    changed = api.post(address + "change", {"cas_number": "13967-50-5", "ec_number": "237-748-4"})
    assert changed.status_code == 200
    assert changed.json() == {**made, "cas_number": "13967-50-5", "ec_number": "237-748-4"}
    assert api.get(address).json() == changed.json()
    wrong = api.post(address + "change", {"cas_number": "13967-50-4", "ec_number": "237-748-5", "name": ""})
    assert set(errors_of(wrong, 400)) == {"name"}
    wrong = api.post(address + "change", {"cas_number": "13967-50-4", "ec_number": "237-748-5"})
    assert set(errors_of(wrong, 400)) == {"cas_number", "ec_number"}


def test_the_usual_substances_are_added_once(api: Caller, shop: Shop) -> None:
    added = api.post("substances/usual")
    assert added.status_code == 201
    names = {row["name"] for row in added.json()["added"]}
    assert {"Nickel sulfate hexahydrate", "Potassium gold cyanide"} <= names
    assert "Copper sulfate pentahydrate" not in names
    assert api.post("substances/usual").json() == {"added": []}


def test_everything_wrong_with_a_product_is_named(api: Caller, shop: Shop) -> None:
    shape = api.post("products/", {"form": "plasma", "pictograms": ["GHS10"], "reactivity": ["lava"], "density": 1.2})
    assert set(errors_of(shape, 400)) == {"name", "form", "pictograms.0", "reactivity.0", "density"}
    lines = [{"substance": str(uuid4()), "content": "98 %"}, {"substance": str(shop.sulfate.uuid), "content": "98 %"}]
    absent = api.post("products/", {"name": "Salt", "form": "solid", "lines": lines, "safety_data_sheet": "ab" * 32})
    assert set(errors_of(absent, 400)) == {"lines.0.substance", "safety_data_sheet"}
    many = api.post("products/", {"name": "Salt", "form": "solid", "lines": [lines[1]], "density": "1,5 g/mL",
                                  "statements": ["burns"]})  # fmt: skip
    assert set(errors_of(many, 400)) == {"density", "statements"}
    more = api.post("products/", {"name": "Salt", "form": "solid", "lines": [{**lines[1], "content": "1,5 g/L"}]})
    assert set(errors_of(more, 400)) == {"lines.0.content"}


def test_the_same_product_of_the_same_supplier_is_revised_not_repeated(api: Caller, shop: Shop) -> None:
    again = api.post("products/", {"name": "Blue salt", "supplier": "Invented Supply", "form": "solid"})
    assert "Revise it" in errors_of(again, 400)["name"]


def test_a_stock_container_is_set_up_for_a_product(api: Caller, shop: Shop) -> None:
    said = {"kind": "stock", "name": "Jar 2", "product": str(shop.product.uuid), "place": str(shop.place.uuid)}
    made = api.post("vessels/", {**said, "capacity": "1 gal"}).json()
    assert made["capacity"] == {"base": 3_785_411_784, "sd": 0, "unit": "nL", "text": "3.785 L"}
    assert (made["place"]["name"], made["product"]["name"], len(made["code"])) == ("Plating bench", "Blue salt", 6)
    contents = api.get(f"vessels/{made['uuid']}/").json()["contents"]
    assert contents == {"volume": None, "mass": None, "metals": [], "incomplete": False}
    tank = api.post("vessels/", {"kind": "bath", "name": "Bath"})
    assert set(errors_of(tank, 400)) == {"kind"}
    absent = api.post("vessels/", {**said, "name": "Jar 3", "product": str(uuid4()), "place": str(uuid4())})
    assert set(errors_of(absent, 400)) == {"product", "place"}


def test_a_bath_is_set_up_with_the_figures_of_its_runs(api: Caller, shop: Shop) -> None:
    anode = api.post("vessels/", {"kind": "anode", "name": "Copper anodes", "product": str(shop.product.uuid)}).json()
    said = {
        "kind": "bath", "name": "Second bath", "capacity": "25 L", "mark": "20 L", "bath_type": "bright acid copper",
        "metal": "Cu", "valence": 2, "efficiency": "97.5 %", "efficiency_sd": "2 %", "anode_kind": "soluble",
        "anode": anode["uuid"],
    }  # fmt: skip
    made = api.post("tanks/", said)
    tank = made.json()
    assert made.status_code == 201
    assert (tank["efficiency"]["base"], tank["efficiency"]["text"]) == (975_000, "97.5 %")
    assert (tank["mark"]["text"], tank["metal"], tank["valence"]) == ("20 L", "Cu", 2)
    assert tank["anode"] == {"uuid": anode["uuid"], "name": "Copper anodes"}
    assert api.get(f"tanks/{tank['vessel']['uuid']}/").json() == tank


def test_a_chromium_bath_is_set_up_with_rack_build_up_and_what_it_uses_up(api: Caller, shop: Shop) -> None:
    racks = api.post("vessels/", {"kind": "racks", "name": "Build-up"}).json()
    said = {
        "kind": "bath", "name": "Chromium", "metal": "Cr", "valence": 6, "efficiency": "15 %", "anode_kind": "inert",
        "side_reaction": "chromium(VI)", "racks": racks["uuid"], "rack_share": "4 %",
    }  # fmt: skip
    tank = api.post("tanks/", said).json()
    assert (tank["side_reaction"], tank["rack_share"]["text"]) == ("chromium(VI)", "4 %")
    assert tank["racks"] == {"uuid": racks["uuid"], "name": "Build-up"}
    wrong = {
        **said,
        "name": "Second",
        "metal": "Cu",
        "valence": 2,
        "racks": str(shop.rinse.uuid),
        "rack_share": "100 %",
    }
    assert set(errors_of(api.post("tanks/", wrong), 400)) == {"side_reaction", "racks", "rack_share"}
    assert set(errors_of(api.post("tanks/", {**said, "name": "Third", "racks": str(uuid4())}), 400)) == {"racks"}


@pytest.mark.parametrize("kind", ["filter", "carbon", "resin", "recovery cell", "racks", "sludge"])
def test_what_stands_for_solids_is_set_up_by_its_kind(api: Caller, shop: Shop, kind: str) -> None:
    made = api.post("vessels/", {"kind": kind, "name": "It", "place": str(shop.place.uuid), "capacity": "10 L"})
    assert (made.status_code, made.json()["kind"], made.json()["product"]) == (201, kind, None)
    wrong = api.post("vessels/", {"kind": kind, "name": "Other", "product": str(shop.product.uuid)})
    assert set(errors_of(wrong, 400)) == {"product"}


def test_a_substance_may_be_declared_inert(api: Caller) -> None:
    made = api.post("substances/", {"name": "Glauber's salt", "formula": "Na2SO4", "inert": True})
    assert made.json()["inert"] is True
    wrong = api.post("substances/", {"name": "Prussic salt", "formula": "NaCN", "inert": True})
    assert "free cyanide" in errors_of(wrong, 400)["inert"]


def test_what_a_tank_lacks_is_named(api: Caller, shop: Shop) -> None:
    wrong = api.post("tanks/", {"kind": "bath", "name": "Bath", "metal": "Cu", "capacity": "5 L", "mark": "6 L",
                                "anode_kind": "soluble"})  # fmt: skip
    assert set(errors_of(wrong, 400)) == {"valence", "mark", "anode"}
    assert "neither a bath nor a rinse" in errors_of(api.get(f"tanks/{shop.stock.uuid}/"), 404)[""]


def test_rack_types_and_routes(api: Caller, shop: Shop) -> None:
    rack = api.post("rack-types/", {"name": "Rings", "drag_out": "15 mL", "drag_out_sd": "20 %", "area": "0.44 dm2"})
    assert rack.status_code == 201
    assert (rack.json()["drag_out"]["text"], rack.json()["area"]["base"]) == ("15 mL", 4400)
    assert api.get(f"rack-types/{rack.json()['uuid']}/").json() == rack.json()
    vessels = [str(shop.bath.uuid), str(shop.rinse.uuid)]
    route = api.post("routes/", {"name": "Rings, copper", "rack": rack.json()["uuid"], "vessels": vessels})
    assert [step["vessel"]["name"] for step in route.json()["steps"]] == ["Copper bath", "Drag-out rinse"]
    assert api.get(f"routes/{route.json()['uuid']}/").json() == route.json()
    absent = {"name": "Nowhere", "rack": str(uuid4()), "vessels": [vessels[0], str(uuid4())]}
    assert set(errors_of(api.post("routes/", absent), 400)) == {"rack", "vessels.1"}
    twice = {"name": "Twice", "rack": rack.json()["uuid"], "vessels": [vessels[0], vessels[0]]}
    assert set(errors_of(api.post("routes/", twice), 400)) == {"vessels"}


def test_a_place_is_created_once(api: Caller) -> None:
    made = api.post("places/", {"name": "Cupboard", "bund": "south", "exhaust_duct": "1"})
    assert api.get(f"places/{made.json()['uuid']}/").json() == made.json()
    assert "name" in errors_of(api.post("places/", {"name": "Cupboard"}), 400)


@pytest.mark.parametrize("address", ["places", "substances", "products", "tanks", "rack-types", "routes", "receivers"])
def test_a_thing_that_is_not_there_is_404(api: Caller, address: str) -> None:
    assert errors_of(api.get(f"{address}/{uuid4()}/"), 404)
