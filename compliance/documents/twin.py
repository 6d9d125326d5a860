"""What the templates of the HTML twins need: frozen data, and beside it the same words and figures as on the PDF."""

from typing import Any, cast

from django.utils.translation import gettext as _

from compliance.documents import emergency_words, label_words, register_words, words
from compliance.documents.codes import code_svg
from compliance.documents.pictograms import INKS, parts
from compliance.documents.shapes import (
    EmergencyData,
    EmergencyThingData,
    HazardData,
    LabelsData,
    ManifestContainerData,
    ManifestData,
    Pictogram,
    RegisterData,
    WasteLabelData,
)
from compliance.documents.stock import ALL_STOCKS, find_stock
from compliance.documents.vessel_label import lay_out


def twin_context(kind: str, data: dict[str, Any]) -> dict[str, Any]:
    """Template context of one paper."""
    own = {
        "waste-label": lambda: _label(cast("WasteLabelData", data)),
        "manifest": lambda: _manifest(cast("ManifestData", data)),
        "labels": lambda: _labels(cast("LabelsData", data)),
        "emergency": lambda: describe_premises(data),
        "register": lambda: _register(cast("RegisterData", data)),
    }[kind]()
    return {
        "paper": data,
        "title": words.paper_title(kind, data),
        "code": _code(data["url"]) if "url" in data else None,
        "chain_groups": words.grouped(data["chain_head"]),
        "chain_meaning": words.chain_meaning(data["chain_sequence"]),
        "unknown": words.known(None),
        "no_hazards": words.no_hazards(),
        "no_contents": words.no_contents(),
        "nothing_to_avoid": words.nothing_to_avoid(),
        **own,
    }


def _code(url: str) -> dict[str, Any]:
    side, path = code_svg(url)
    return {"side": side, "path": path}


def symbol(code: Pictogram) -> dict[str, Any]:
    """A pictogram for inline SVG."""
    drawn = [{"path": part.path, "stroke": part.stroke, "colour": INKS[part.ink]} for part in parts(code)]
    return {"code": code, "name": words.symbol_name(code), "parts": drawn}


def _hazards(hazards: HazardData) -> dict[str, Any]:
    return {
        "entered": words.has_hazards(hazards),
        "symbols": [symbol(code) for code in hazards["pictograms"]],
        "signal_word": words.signal_word(hazards["signal_word"]),
        "statements": hazards["statements"],
    }


def _label(data: WasteLabelData) -> dict[str, Any]:
    return {
        "headline": words.label_title(data["hazards"]),
        "hazards": _hazards(data["hazards"]),
        "not_yet": _("not yet"),
        "cautions": [*data["cautions"], words.ask_locally()],
    }


def _manifest(data: ManifestData) -> dict[str, Any]:
    return {
        "no_consignment_note": words.no_consignment_note(),
        "mode": words.mode(data["drop_off"]["mode"]),
        "signatories": words.signatories(data["drop_off"]["mode"]),
        "never_together": words.never_together(data["containers"]),
        "load": words.load(data["containers"]),
        "containers": [_container(container) for container in data["containers"]],
        "none_stated": _("none stated"),
        "cautions": [*data["cautions"], words.ask_locally()],
    }


def _container(container: ManifestContainerData) -> dict[str, Any]:
    contents = [
        {**line, "amount": words.known(line["amount"]), "uncertainty": words.uncertainty(line["uncertainty"])}
        for line in container["contents"]
    ]
    return {
        "data": container,
        "nothing_listed": words.nothing_listed(container),
        "gross": words.gross_kg(container["gross_kg"]),
        "hazards": _hazards(container["hazards"]),
        "contents": contents,
    }


def _labels(data: LabelsData) -> dict[str, Any]:
    paper_size = data.get("paper_size", "A4")
    printed = lay_out(data, find_stock(data["stock"], data["start"], paper_size, ALL_STOCKS))
    return {
        "labels": [
            {
                "data": label,
                "number": f"{data['number']}.{index}",
                "title": label_words.vessel_label_title(label["sort"]),
                "contents": words.contents(label["contents"]),
                "code": _code(label["url"]),
                "facts": [(label_words.fact_name(fact), words.known(fact["value"])) for fact in label["facts"]],
                "hazards": _hazards(label["hazards"]),
                "not_entered": words.not_entered(label["not_entered"]) if label["not_entered"] else "",
                "avoid": [words.avoid(other) for other in label["must_not_meet"]],
                "cautions": label_words.cautions(label),
                "printed": label_words.shortened(each.printed),
            }
            for index, (label, each) in enumerate(zip(data["labels"], printed, strict=True), 1)
        ]
    }


def describe_premises(said: dict[str, Any]) -> dict[str, Any]:
    """What an emergency sheet says, in the words of the paper; ``said`` may lack what issuing fills in."""
    data = cast("EmergencyData", said)
    columns = emergency_words.total_columns()
    totals = [emergency_words.total_cells(total) for total in data["totals"]]
    return {
        "no_hazards": words.no_hazards(),
        "follow": emergency_words.follow_the_fire_brigade(),
        "calls": emergency_words.calls(data),
        "no_calls": "" if data["calls"] else emergency_words.no_calls(),
        "together": emergency_words.together(data),
        "nothing_together": emergency_words.nothing_together(),
        "cautions": emergency_words.cautions(data["cautions"]),
        "total_columns": columns,
        "totals": [list(zip(columns, cells, strict=True)) for cells in totals],
        "counted_whole": emergency_words.counted_whole(),
        "places": [
            {
                "name": emergency_words.place(place["name"]),
                "shared": emergency_words.bund_and_duct(place["bund"], place["exhaust_duct"]),
                "things": [_thing(thing) for thing in place["things"]],
            }
            for place in data["places"]
        ],
        "left_out": emergency_words.left_out(data["left_out"]),
    }


def _thing(thing: EmergencyThingData) -> dict[str, Any]:
    return {
        "data": thing,
        "contents": words.contents(thing["contents"]),
        "amount": emergency_words.amount(thing["amount"], thing["doubt"]),
        "hazards": _hazards(thing["hazards"]),
        "not_entered": words.not_entered(thing["not_entered"]) if thing["not_entered"] else "",
        "un_numbers": emergency_words.un_numbers(thing["un_numbers"]),
        "reactions": emergency_words.reactions(thing),
    }


def _register(data: RegisterData) -> dict[str, Any]:
    return {
        "after": register_words.columns_after(data["rule"]),
        "no_verdict": register_words.list_is_no_verdict(),
        "headings": [register_words.list_column(column) for column in data["columns"]],
        "rows": [[row[column] or [words.known(None)] for column in data["columns"]] for row in data["rows"]],
        "notes": register_words.notes(data),
    }
