"""Invented papers about vessels: labels, an emergency sheet, a list of chemicals. No real workshop, no real hazards."""

from typing import Any

Data = dict[str, Any]
HEAD = "9f86d081884c7d659a2feaa0c55ad015a3bf4f1b2b0b822cd15d6c15b0f00a08"
WORKSHOP = {
    "name": "Werkstatt Löwenzahn (invented)",
    "address": "Färbergasse 7\n99999 Beispielstadt",
    "telephone": "+49 000 123456",
}
ISSUED = {
    "workshop": WORKSHOP,
    "number": 12,
    "chain_head": HEAD,
    "chain_sequence": 128,
    "issued_at": "2026-03-02T16:00+01:00",
    "issued_by": "Jörg Ω. Example",
}
NOTHING_ENTERED = {"signal_word": "", "pictograms": [], "statements": []}


def avoid(**others: str) -> list[Data]:
    return [{"what": what, "gives": gives} for what, gives in others.items()]


def tank(**other: Any) -> Data:
    """A bath with three pictograms, four statements and a brightener of which nothing was entered."""
    label = {
        "sort": "tank",
        "name": "Acid copper 1",
        "contents": "saures Kupferbad, CuSO₄·5H₂O + Cl⁻",
        "code": "7K3M",
        "url": "http://bench.local:8000/c/7K3M",
        "facts": [{"what": "mark", "value": None}, {"what": "place", "value": "Plating bench"}],
        "hazards": {
            "signal_word": "Danger",
            "pictograms": ["GHS05", "GHS07", "GHS09"],
            "statements": [
                "H290 Kann gegenüber Metallen korrosiv sein.",
                "H302 Harmful if swallowed.",
                "H314 Causes severe skin burns and eye damage.",
                "H410 Very toxic to aquatic life with long lasting effects.",
            ],
        },
        "precautions": ["P280 Wear protective gloves and eye protection.", "P273 Avoid release to the environment."],
        "not_entered": ["brightener α-17"],
        "must_not_meet": avoid(cyanide="hydrogen cyanide", hypochlorite="chlorine"),
        "cautions": ["Gloves, goggles and apron; ventilation on."],
    }
    return label | other


def bottle(**other: Any) -> Data:
    """A bottle with one pictogram."""
    label = tank(
        sort="bottle",
        name="Schwefelsäure 96 %",
        contents="H₂SO₄ 95-97 %",
        code="QX29",
        url="http://bench.local:8000/c/QX29",
        facts=[
            {"what": "revision", "value": "3"},
            {"what": "lot", "value": "A-118"},
            {"what": "keeps until", "value": "2028-02-01"},
            {"what": "supplier", "value": "Invented Supplies"},
            {"what": "supplier's telephone", "value": "000 222"},
        ],
        hazards={"signal_word": "Danger", "pictograms": ["GHS05"], "statements": ["H314 Verursacht Verätzungen."]},
        precautions=["P280 Schutzhandschuhe tragen.", "P405 Unter Verschluss aufbewahren."],
        not_entered=[],
    )
    return label | other


def decanted(**other: Any) -> Data:
    """A spray bottle."""
    label = bottle(
        sort="secondary container",
        name="Isopropanol",
        contents=None,
        code="AB12",
        url="http://bench.local:8000/c/AB12",
        facts=[
            {"what": "note", "value": "1:10 in water"},
            {"what": "decanted", "value": "2026-03-02"},
            {"what": "decanted by", "value": "Jörg Ω"},
        ],
        hazards={"signal_word": "Danger", "pictograms": ["GHS02", "GHS07"], "statements": ["H225 Highly flammable."]},
        precautions=["P280 Wear eye protection."],
        must_not_meet=avoid(acid="", **{"nitric or chromic acid": "fire"}),
    )
    return label | other


def labels_of(*labels: Data, stock: str = "4 per A4", start: int = 1) -> Data:
    return {**ISSUED, "labels": list(labels), "stock": stock, "start": start}


def thing(number: int, **other: Any) -> Data:
    known = {
        "name": f"Bottle {number}",
        "code": f"B{number:03d}",
        "kind": "stock container",
        "contents": "potassium cyanide",
        "amount": "1.5 kg",
        "doubt": "20 g",
        "hazards": {
            "signal_word": "Danger",
            "pictograms": ["GHS05", "GHS06", "GHS08", "GHS09"],
            "statements": ["H300+H310+H330 Fatal if swallowed, in contact with skin or if inhaled."],
        },
        "not_entered": [],
        "un_numbers": ["1680"],
        "must_not_meet": avoid(acid="hydrogen cyanide"),
        "with_water": ["EUH029 Contact with water liberates toxic gas."],
        "with_acid": ["hydrogen cyanide, a gas that kills within minutes"],
    }
    return known | other


def total(hazard: str, **other: Any) -> Data:
    known = {
        "hazard": hazard,
        "volume": "21 L",
        "volume_doubt": "0.3 L",
        "mass": "1.5 kg",
        "mass_doubt": None,
        "vessels": 3,
        "unknown": 0,
    }
    return known | other


def emergency_sheet(count: int = 2) -> Data:
    """A sheet with so many bottles in the cupboard, a bath of unknown volume, and acid beside cyanide."""
    bath = thing(
        0,
        name="Säurebad",
        code="7K3M",
        kind="bath",
        contents="sulfuric acid",
        amount=None,
        doubt=None,
        un_numbers=[],
        not_entered=["brightener α-17"],
        with_water=[],
        with_acid=[],
        must_not_meet=avoid(cyanide="hydrogen cyanide"),
    )
    bare = thing(99, name="Canister 9", contents=None, doubt=None, hazards=NOTHING_ENTERED, must_not_meet=[])
    apart = "acid (Säurebad) and cyanide (Bottle 1): hydrogen cyanide, a gas that kills within minutes"
    return {
        **ISSUED,
        "calls": [{"label": "Fire brigade", "call": "112"}, {"label": "Poison centre", "call": "+49 000 19240"}],
        "totals": [
            total("Skin Corr. 1B: skin corrosion and irritation"),
            total("H410 Very toxic to aquatic life", volume=None, volume_doubt=None, unknown=1),
        ],
        "shared": [{"sort": "bund", "name": "tray 1", "places": ["Bench", "Cupboard"], "together": [apart]}],
        "places": [
            {
                "name": "Cupboard",
                "bund": "tray 1",
                "exhaust_duct": "hood",
                "things": [thing(number) for number in range(1, count + 1)],
                "together": [],
            },
            {"name": None, "bund": "", "exhaust_duct": "", "things": [bath, bare], "together": [apart]},
        ],
        "left_out": 1,
        "cautions": ["Acid and cyanide stand apart: keep it so."],
        "url": "http://bench.local:8000/w/1/emergency/",
    }


def list_row(number: int, **other: Any) -> Data:
    known = {
        "name": [f"Kupfersulfat {number}", "Invented Supplies"],
        "classification": ["Danger", "Acute Tox. 4 oral, Eye Dam. 1", "H302, H318, H410"],
        "quantities": ["here: 1 to 10 kg", "used in twelve months: 10 to 100 kg"],
        "areas": ["Cupboard", "Plating bench"],
        "sheet": ["revision 2 of 2025-01-31 (de)"],
    }
    return known | other


def register_list(count: int = 3) -> Data:
    return {
        **ISSUED,
        "rule": {
            "provision": "Invented rule § 6",
            "asks_for": "name; classification; quantity range; work area; reference to the sheet",
            "source": "an invented source",
            "edition": "invented edition",
            "citation": "§ 6 as read in the workshop",
            "checked_on": "2026-02-01",
            "chosen_by": "Jörg Ω. Example",
        },
        "columns": ["name", "classification", "quantities", "areas", "sheet"],
        "rows": [*(list_row(number) for number in range(count)), list_row(count, areas=[], sheet=[])],
        "left_out": 4,
        "cautions": ["Not entered does not mean harmless."],
        "url": "http://bench.local:8000/w/1/register/list/",
    }
