"""From the rows of a file to what they say of products and containers: every error with its row and its column."""

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from datetime import date
from typing import Any

from chemicals.process.fields import AmountField, ChoiceField, TextField, WholeField
from chemicals.process.importing import values
from chemicals.process.importing.columns import ColumnMap, split_unit
from chemicals.process.importing.reading import NEEDED, Errors
from chemicals.process.importing.register.columns import (
    AMOUNT,
    CAS,
    COMPOSITION,
    CONTAINER,
    COUNT,
    EC,
    EXPIRES,
    FORMULA,
    LIMITS,
    LOT,
    OF_CONTAINER,
    OPENED,
    PART,
    PART_LABELS,
    PLACE,
    PRODUCT,
    RECEIVED,
    SUPPLIER,
)
from chemicals.process.importing.register.parts import Part, read_share, split_parts
from chemicals.process.importing.register.substances import Substances
from chemicals.process.importing.table import Cell, Row, Table
from chemicals.process.importing.values import CellError
from chemicals.register.inputs import LimitInput
from chemicals.register.models import Form, LimitKind
from chemicals.science.errors import TextError
from chemicals.science.ghs import PICTOGRAMS, SIGNAL_WORDS, list_classes
from chemicals.science.identity import read_cas_number, read_ec_number
from chemicals.science.quantity import Quantity
from chemicals.science.reactivity import REACTS_AS
from chemicals.workshop.texts import tidy

MOST_ALIKE = 100
"""Containers that one row may name."""

FORM = ChoiceField("", choices=tuple(Form.choices))
AMOUNT_KIND = AmountField("", dimensions=("mass", "volume"), example="1 kg")
LOT_KIND, ALIKE_KIND = TextField("", longest=60), WholeField("", least=1, most=MOST_ALIKE)

_CODE = r"(?:EUH|H|P)\d{3}"
_LIMIT = re.compile(r"(?:(?P<of>.+): )?(?P<value>[^()]+) \((?P<kind>[^;()]+); (?P<source>.+)\)")
"""An exposure limit as the register's own file has it: "nickel: 0.05 mg/m3 (ceiling; list, 2024)"."""


@dataclass(frozen=True)
class Holder:
    """What a row says of a container, or of several alike."""

    name: str = ""
    place: str = ""
    amount: Quantity | None = None
    lot: str = ""
    received_on: date | None = None
    opened_on: date | None = None
    expires_on: date | None = None
    count: int = 1


@dataclass(frozen=True)
class Said:
    """What a row says: a product by name and supplier, by target what it is, and perhaps a container.

    ``shown`` are the cells as they were typed, ``broken`` the targets of those that could not be read.
    """

    row: int
    name: str
    supplier: str
    product: Mapping[str, Any]
    holder: Holder | None
    shown: Mapping[str, str] = field(default_factory=dict)
    broken: frozenset[str] = frozenset()


class Reader:
    """Reads the rows of one file by one column map."""

    def __init__(self, table: Table, chosen: ColumnMap, substances: Substances) -> None:
        self.chosen, self.substances, self.errors = chosen, substances, Errors()
        self.columns = {target: heading for heading, target in chosen.used.items()}
        self._places = [
            (place, heading, split_unit(heading)[1], chosen.used[heading])
            for place, heading in enumerate(table.headings)
            if heading in chosen.used
        ]

    def read(self, row: Row) -> Said | None:
        """Return what a row says as far as it can be read; None without a product. What is wrong is noted."""
        if row.problem:
            self.errors.add(row.number, "", row.problem)
            return None
        said: dict[str, Any] = {}
        shown: dict[str, str] = {}
        broken = set()
        parts: dict[int, dict[str, str]] = {}
        for place, heading, unit, target in self._places:
            cell = _unguarded(row.cells[place])
            if cell == "":
                continue
            shown[target] = str(cell)
            part = PART.fullmatch(target)
            try:
                if part is not None:
                    parts.setdefault(int(part[1]), {})[part[2]] = self._read_part(part[2], cell, unit)
                else:
                    said[target] = READERS[target](self, cell, unit)
            except CellError as error:
                broken.add(COMPOSITION if part else target)
                self.errors.add(row.number, heading, str(error))
        if parts and self._are_whole(row.number, parts, broken):
            said[COMPOSITION] = [Part(**parts[number]) for number in sorted(parts)]
        if PRODUCT not in shown:
            self.errors.add(row.number, self.columns[PRODUCT], NEEDED)
        if PRODUCT not in said or SUPPLIER in broken:
            return None
        name, supplier = said.pop(PRODUCT), said.pop(SUPPLIER, "")
        holder = {target: said.pop(target) for target in OF_CONTAINER if target in said}
        if CONTAINER in holder:
            holder["name"] = holder.pop(CONTAINER)
        return Said(row.number, name, supplier, said, Holder(**holder) if holder else None, shown, frozenset(broken))

    def _read_part(self, name: str, cell: Cell, unit: str) -> str:
        return _line(cell) if name == "name" else read_share(cell, unit, self.chosen.decimal)

    def _are_whole(self, row: int, parts: Mapping[int, Mapping[str, str]], broken: set[str]) -> bool:
        """Say whether every part of a composition has its substance and its content; note what is missing."""
        missing = [
            f"part {number} {name}" for number in sorted(parts) for name in PART_LABELS if name not in parts[number]
        ]
        for target in missing if COMPOSITION not in broken else ():
            self.errors.add(row, self.columns[target], NEEDED)
        broken |= {COMPOSITION} if missing else set()
        return COMPOSITION not in broken

    def read_day(self, cell: Cell, _unit: str) -> date:
        """Return a day."""
        return values.read_day(cell, self.chosen.dates)

    def read_composition(self, cell: Cell, unit: str) -> list[Part]:
        """Return substances by name, with their contents; a bare figure is taken in the unit of the heading."""
        text = values.read_name(cell)
        alone = f"{text} {unit}" if unit and re.fullmatch(r"[\d.,]+", text) else text
        return split_parts(alone, self.chosen.decimal, self.substances.is_known)


def _unguarded(cell: Cell) -> Cell:
    """Return a text without the apostrophe that this program's own files put before what looks like a formula."""
    return cell[1:] if isinstance(cell, str) and cell[:2] in ("'=", "'+", "'-", "'@") else cell


def _line(cell: Cell) -> str:
    return tidy(values.read_name(cell))


def _read_list(cell: Cell, known: Mapping[str, str], between: str = r"[;\n]") -> tuple[str, ...]:
    """Return the words of a list in their usual spelling; one that is not known as it is, to be refused later."""
    words = (word.strip() for word in re.split(between, _line(cell)))
    return tuple(known.get(word.casefold(), word) for word in words if word)


def _read_statements(cell: Cell) -> tuple[str, ...]:
    """Return the statements: a semicolon or a line break ends one where the code of the next follows."""
    found = re.split(rf"\s*[;\n]\s*(?={_CODE})", _line(cell))
    return tuple(re.sub(r"\s*\n\s*", " ", text).rstrip("; ") for text in found if text.strip("; \n"))


def _read_signal_word(cell: Cell) -> str:
    return {word.casefold(): word for word in SIGNAL_WORDS}.get(_line(cell).casefold(), _line(cell))


def _read_packing_group(cell: Cell) -> str:
    return _line(cell).upper()


def _read_limits(reader: Reader, cell: Cell, _unit: str) -> tuple[LimitInput, ...]:
    """Return exposure limits, each as value, kind and source: "0.05 mg/m3 (ceiling; list, 2024)"."""
    kinds = {word.casefold(): value for value, label in LimitKind.choices for word in (value, str(label))}
    limits = []
    for text in filter(None, (part.strip() for part in re.split(r"(?<=\))\s*;|\n", _line(cell)))):
        found = _LIMIT.fullmatch(text)
        if found is None or found["kind"].strip().casefold() not in kinds:
            known = ", ".join(kind for kind, _ in LimitKind.choices)
            raise CellError(
                f'"{text[:80]}" is no exposure limit. Write it as 0.05 mg/m3 (8 h; the list it stands in); '
                f"the word before the semicolon is one of: {known}."
            )
        substance = None if found["of"] is None else reader.substances.find(found["of"])
        limits.append(LimitInput(kinds[found["kind"].strip().casefold()], found["value"], found["source"], substance))
    return tuple(limits)


CLASSES = {each.kind.casefold(): each.kind for each in list_classes()}
PICTURES = {code.casefold(): code for code in PICTOGRAMS}
REACTIONS = {word.casefold(): code for code, meaning in REACTS_AS.items() for word in (code, str(meaning))}


def _figure(reader: Reader, cell: Cell, unit: str) -> str:
    return values.read_figure(cell, unit, reader.chosen.decimal)


def _plain(read: Callable[[Cell], Any]) -> Callable[[Reader, Cell, str], Any]:
    return lambda _reader, cell, _unit: read(cell)


def _number(read: Callable[[str], str]) -> Callable[[Reader, Cell, str], Any]:
    def read_cell(_reader: Reader, cell: Cell, _unit: str) -> str:
        try:
            return read(_line(cell))
        except TextError as error:
            raise CellError(error.message) from error

    return read_cell


TEXTS = (
    PRODUCT, SUPPLIER, FORMULA, CONTAINER, PLACE, "gloves", "un_number", "shipping_name", "transport_class",
    "supplier_telephone", "sheet_language",
)  # fmt: skip
"""What is read as it stands, to be checked with the product."""

READERS: Mapping[str, Callable[[Reader, Cell, str], Any]] = {
    **dict.fromkeys(TEXTS, _plain(_line)),
    **dict.fromkeys(("complete", "transport_unclassified"), _plain(values.read_flag)),
    **dict.fromkeys(("sheet_date", RECEIVED, OPENED, EXPIRES), Reader.read_day),
    **dict.fromkeys(("density", "ph_floor"), _figure),
    CAS: _number(read_cas_number),
    EC: _number(read_ec_number),
    "form": _plain(lambda cell: values.read_choice(FORM, cell)),
    COMPOSITION: Reader.read_composition,
    "hazard_classes": _plain(lambda cell: _read_list(cell, CLASSES)),
    "pictograms": _plain(lambda cell: _read_list(cell, PICTURES, r"[\s;,]")),
    "reactivity": _plain(lambda cell: _read_list(cell, REACTIONS)),
    "statements": _plain(_read_statements),
    "signal_word": _plain(_read_signal_word),
    "packing_group": _plain(_read_packing_group),
    LIMITS: _read_limits,
    AMOUNT: lambda reader, cell, unit: values.read_amount_cell(AMOUNT_KIND, cell, unit, reader.chosen.decimal),
    LOT: _plain(lambda cell: values.read_text(LOT_KIND, cell)),
    COUNT: _plain(lambda cell: values.read_whole(ALIKE_KIND, cell)),
}
"""How a cell is read, by what it says."""
