"""What a column of a file of the register may say, and a first guess by its heading."""

import re
from collections.abc import Iterator, Mapping, Sequence
from typing import Final

from django.utils.text import format_lazy
from django.utils.translation import gettext_lazy as _

from chemicals.process.fields import Text
from chemicals.process.importing.columns import MOST_NUMBERED, ColumnMap, check_columns, fold, split_unit
from chemicals.workshop.errors import FieldError

PRODUCT, SUPPLIER, COMPOSITION = "product", "supplier", "composition"
CAS, EC, FORMULA, LIMITS = "cas_number", "ec_number", "formula", "limits"
CONTAINER, PLACE, AMOUNT, LOT, COUNT = "container", "place", "amount", "lot", "count"
RECEIVED, OPENED, EXPIRES = "received_on", "opened_on", "expires_on"

OF_PRODUCT: Final[Mapping[str, Text]] = {
    PRODUCT: _("Product"),
    SUPPLIER: _("Supplier"),
    "form": _("Physical form"),
    "density": _("Density"),
    "ph_floor": _("Lowest pH"),
    COMPOSITION: _("Composition"),
    CAS: _("CAS number, of a product of one substance"),
    EC: _("EC number, of a product of one substance"),
    FORMULA: _("Formula, of a product of one substance"),
    "complete": _("The composition names every metal"),
    "hazard_classes": _("Hazard classes"),
    "signal_word": _("Signal word"),
    "pictograms": _("Pictograms"),
    "statements": _("Hazard statements"),
    "reactivity": _("Reacts as"),
    LIMITS: _("Exposure limits"),
    "gloves": _("Gloves"),
    "un_number": _("UN number"),
    "shipping_name": _("Proper shipping name"),
    "transport_class": _("Class for transport"),
    "packing_group": _("Packing group"),
    "transport_unclassified": _("Not classified for transport"),
    "supplier_telephone": _("Supplier's telephone"),
    "sheet_language": _("Language of the sheet"),
    "sheet_date": _("Date of the sheet"),
}
"""Targets that speak of the product, by the names of `RevisionInput` where they go into one as they are."""

OF_CONTAINER: Final[Mapping[str, Text]] = {
    CONTAINER: _("Container"),
    PLACE: _("Place"),
    AMOUNT: _("Amount in it"),
    LOT: _("Lot"),
    RECEIVED: _("Received on"),
    OPENED: _("Opened on"),
    EXPIRES: _("Keeps until"),
    COUNT: _("Containers alike"),
}

PART = re.compile(r"part (\d{1,2}) (name|content)")
PART_LABELS: Final[Mapping[str, Text]] = {"name": _("substance"), "content": _("content")}

OTHER_NAMES: Final[Mapping[str, str]] = {
    **dict.fromkeys(("name", "product name", "chemical"), PRODUCT),
    **dict.fromkeys(("form",), "form"),
    **dict.fromkeys(("cas", "cas number", "cas no"), CAS),
    **dict.fromkeys(("ec", "ec number", "ec no"), EC),
    **dict.fromkeys(("formula",), FORMULA),
    **dict.fromkeys(("names every metal",), "complete"),
    **dict.fromkeys(("statements", "hazard and precautionary statements"), "statements"),
    **dict.fromkeys(("un", "un no"), "un_number"),
    **dict.fromkeys(("transport class",), "transport_class"),
    **dict.fromkeys(("telephone",), "supplier_telephone"),
    **dict.fromkeys(("sheet language", "language"), "sheet_language"),
    **dict.fromkeys(("sheet date", "date of sheet"), "sheet_date"),
    **dict.fromkeys(("vessel", "bottle", "jar"), CONTAINER),
    **dict.fromkeys(("location", "stands"), PLACE),
    **dict.fromkeys(("amount", "quantity"), AMOUNT),
    **dict.fromkeys(("batch", "lot number"), LOT),
    **dict.fromkeys(("received", "date received"), RECEIVED),
    **dict.fromkeys(("opened", "date opened"), OPENED),
    **dict.fromkeys(("expires", "expires on", "expiry", "expiry date", "best before"), EXPIRES),
    **dict.fromkeys(("number of containers", "count"), COUNT),
}
"""Headings by which they are known, besides their own names and labels; those of the register's own file among them."""


def list_register_targets(most: int = 3) -> dict[str, Text]:
    """Return what a column may say, with its label; ``most`` numbered parts of the composition."""
    parts = {
        f"part {number} {name}": format_lazy("{} {}: {}", OF_PRODUCT[COMPOSITION], number, label)
        for number in range(1, most + 1)
        for name, label in PART_LABELS.items()
    }
    return {**OF_PRODUCT, **parts, **OF_CONTAINER}


def is_register_target(target: str) -> bool:
    """Say whether a column may say this."""
    part = PART.fullmatch(target)
    return target in OF_PRODUCT or target in OF_CONTAINER or bool(part and 1 <= int(part[1]) <= MOST_NUMBERED)


def guess_register(headings: Sequence[str], kept: ColumnMap | None = None) -> ColumnMap:
    """Return what the headings say; those of an earlier import mean what they meant then."""
    kept = kept or ColumnMap({})
    labels = {fold(str(label)): target for target, label in list_register_targets(MOST_NUMBERED).items()}
    columns: dict[str, str] = {}
    for heading in headings:
        target = kept.used.get(heading) or _guess_target(heading, labels)
        columns[heading] = "" if target in columns.values() else target
    return ColumnMap(columns, "", kept.dates, kept.decimal, kept.revise, kept.add_places)


def _guess_target(heading: str, labels: Mapping[str, str]) -> str:
    words = fold(split_unit(heading)[0])
    for target in (words, words.replace(" ", "_")):
        if is_register_target(target):
            return target
    return OTHER_NAMES.get(words) or labels.get(words, "")


def check_register_map(chosen: ColumnMap, headings: Sequence[str]) -> list[FieldError]:
    """Return everything that is wrong with a column map, by heading (or ``mapping``, where no single one is meant)."""
    return [*check_columns(chosen, headings, is_register_target), *_check_parts(chosen)]


def _check_parts(chosen: ColumnMap) -> Iterator[FieldError]:
    said = chosen.used.values()
    if chosen.verb:
        yield FieldError("mapping", "Nothing happens in a file of the register. Leave the verb out.")
    if PRODUCT not in said:
        yield FieldError("mapping", "No column says the name of the product. Choose one.")
    for heading, target in chosen.used.items():
        part = PART.fullmatch(target)
        if part is not None and COMPOSITION in said:
            yield FieldError(heading, "The composition has a column of its own. Leave one of the two out.")
        elif part is not None and f"part {part[1]} {'content' if part[2] == 'name' else 'name'}" not in said:
            yield FieldError(heading, "A substance needs a content beside it. Choose the column of the other, too.")
