"""What a person may say of any verb, drawn from the description that its form is made from."""

import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from decimal import Decimal
from random import Random
from typing import Any

from chemicals.ledger.models import VesselKind
from chemicals.process.fields import (
    AmountField,
    ChoiceField,
    ComponentField,
    FieldKind,
    FlagField,
    InstrumentField,
    MomentField,
    ReferenceField,
    RowsField,
    TextField,
    VesselField,
    WholeField,
    describe,
    read_amount,
)
from chemicals.science.quantity import QuantityError

Words = dict[str, Any]

FACTORS = (1, 1, 1, Decimal("0.1"), Decimal("0.001"), 3, 0, 10**5)
"""An amount is as in the example, a bit of it, nothing, or a unit was mistaken."""

EXAMPLES = {
    "mass": "400 g",
    "volume": "2 L",
    "amount_of_substance": "40 mmol",
    "concentration": "45 g/L",
    "molar_concentration": "30 mmol/L",
    "fraction": "2 %",
}
"""For fields in which an amount may be of another dimension than that of its example."""

COMPONENTS = ("Cu", "Zn", "NaCl", "free cyanide")
FORMULAS = {"Cu": "CuSO4.5H2O", "Zn": "ZnO", "free cyanide": "NaCN"}
TEXTS = {"result": ("4.2", "24 °C", "3.5 V", "10 to 25 mg/L", "much"), "sd": ("0.1", "2 %")}
"""For texts in which something must be read."""
BARELY = 3
"""One in so many fields that may be left empty is filled in, of those that few people fill in."""


@dataclass(frozen=True)
class Names:
    """What there is to speak of, by name; entries by label."""

    vessels: Mapping[VesselKind, Sequence[str]]
    others: Mapping[str, Sequence[str]]
    """What a reference names -> names."""


def draw_words(chance: Random, kind: type[Any], names: Names, now: datetime) -> Words | None:
    """Return words for the fields of an input, None if there is nothing yet that it must speak of.

    KeyError for a kind of field or reference that is not known here.
    """
    words: Words = {}
    for name, field in describe(kind):
        if field.required or chance.randrange(BARELY if field.detail else 2) == 0:
            words[name] = _draw_word(chance, name, field, names, now)
            if field.required and words[name] is None:
                return None
    words = {name: word for name, word in words.items() if word is not None}
    if words.get("expressed_as"):
        words["expressed_as"] = FORMULAS.get(words.get("metal", ""), "")
    return words


def _draw_word(chance: Random, name: str, field: FieldKind, names: Names, now: datetime) -> Any:
    """Return a word for a field, None if there is nothing to speak of."""
    match field:
        case AmountField():
            word: Any = _draw_amount(chance, field)
        case VesselField():
            word = _pick(chance, [name for kind in field.kinds for name in names.vessels.get(kind, ())])
        case InstrumentField():  # instruments are called after what they measure
            word = _pick(chance, [name for name in names.others[field.to] if name in field.measures])
        case ReferenceField():
            word = _pick(chance, names.others[field.to])
        case ComponentField():
            word = _pick(chance, COMPONENTS)
        case ChoiceField():
            known = [value for value, _ in field.choices]
            word = _pick(chance, [value for value in known if value in COMPONENTS] or known)
        case RowsField():
            rows = [draw_words(chance, field.of, names, now) for _ in range(chance.randint(1, 2))]
            word = [row for row in rows if row is not None]
        case _:
            word = OTHERS[type(field)](chance, name, field, now)
    return word


OTHERS: Mapping[type[FieldKind], Callable[[Random, str, Any, datetime], Any]] = {
    WholeField: lambda chance, _name, field, _now: chance.randint(field.least, min(field.most, field.least + 5)),
    TextField: lambda chance, name, _field, _now: chance.choice(TEXTS.get(name, (f"a {name}",))),
    FlagField: lambda chance, _name, _field, _now: chance.random() < 0.5,
    MomentField: lambda chance, _name, _field, now: now - timedelta(hours=chance.randint(-1, 30)),
}


def _pick(chance: Random, names: Sequence[str]) -> str | None:
    return chance.choice(names) if names else None


def _draw_amount(chance: Random, field: AmountField) -> str:
    others = [EXAMPLES[dimension] for dimension in field.dimensions if dimension in EXAMPLES]
    example = chance.choice([field.example, field.example, *others])
    number, unit = re.fullmatch(r"([\d.]+) ?(.*)", example).groups()  # type: ignore[union-attr]
    typed = f"{Decimal(number) * chance.choice(FACTORS):f} {unit}"
    try:
        read_amount(field, typed)
    except QuantityError:  # more than can be typed
        return example
    return typed
