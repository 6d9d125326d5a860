"""What the templates of the HTML twins need: frozen data, and beside it the same words and figures as on the PDF."""

from typing import Any, cast

from django.utils.translation import gettext as _

from compliance.documents import words
from compliance.documents.codes import code_svg
from compliance.documents.pictograms import INKS, parts
from compliance.documents.shapes import HazardData, ManifestContainerData, ManifestData, Pictogram, WasteLabelData


def twin_context(kind: str, data: dict[str, Any]) -> dict[str, Any]:
    """Template context of one paper."""
    side, path = code_svg(data["url"])
    own = _label(cast("WasteLabelData", data)) if kind == "waste-label" else _manifest(cast("ManifestData", data))
    return {
        "paper": data,
        "title": words.paper_title(kind, data),
        "code": {"side": side, "path": path},
        "cautions": [*data["cautions"], words.ask_locally()],
        "chain_groups": words.grouped(data["chain_head"]),
        "chain_meaning": words.chain_meaning(data["chain_sequence"]),
        "unknown": words.known(None),
        "no_hazards": words.no_hazards(),
        "no_contents": words.no_contents(),
        "nothing_to_avoid": words.nothing_to_avoid(),
        **own,
    }


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
    }


def _container(container: ManifestContainerData) -> dict[str, Any]:
    contents = [
        {**line, "amount": words.known(line["amount"]), "uncertainty": words.uncertainty(line["uncertainty"])}
        for line in container["contents"]
    ]
    return {
        "data": container,
        "gross": words.gross_kg(container["gross_kg"]),
        "hazards": _hazards(container["hazards"]),
        "contents": contents,
    }
