"""Amounts as people type them, and the whole numbers of base units that the books keep.

    parse("2.5 gal", "volume").base == 9_463_529_460      nanolitres
    show(9_463_529_460, "volume") == "9.464 L"

What can be read in two ways is refused, never guessed. An error carries a code and its parameters besides the English
sentence, so that a face can translate `MESSAGES[code]`.
"""

import re
import unicodedata
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Context, Decimal, localcontext
from typing import Final

from chemicals.science import units
from chemicals.science.errors import TextError

LIMIT: Final = 10**15  # base units; the database checks the same bound
LONGEST: Final = 80  # characters

MESSAGES: Final = {
    "empty": "Nothing is typed: write a number and a unit, for example %(example)s.",
    "too_long": "This is longer than an amount can be: write a number and a unit, for example %(example)s.",
    "not_a_number": 'The number in "%(typed)s" cannot be read: write for example %(example)s.',
    "not_finite": '"%(typed)s" is not a finite number: write for example %(example)s.',
    "ambiguous": '"%(number)s" is ambiguous: write %(remedy)s.',
    "ambiguous_unit": '"%(unit)s" is ambiguous: write %(remedy)s.',
    "missing_unit": '"%(typed)s" has no unit: write for example %(example)s.',
    "unknown_unit": '"%(unit)s" is not a unit known here: write one of %(known)s.',
    "wrong_dimension": '"%(typed)s" is %(found)s; %(needed)s is needed, for example %(example)s.',
    "negative": '"%(typed)s" is negative: write zero or more.',
    "below_absolute_zero": '"%(typed)s" is below absolute zero: write a warmer temperature.',
    "too_large": '"%(typed)s" is more than can be recorded: write at most %(most)s.',
    "too_small": '"%(typed)s" is less than can be recorded: write 0 or at least %(least)s.',
}


class QuantityError(TextError):
    """The text is no amount of the needed kind."""

    messages = MESSAGES


@dataclass(frozen=True)
class Measure:
    """An amount as typed and, unrounded, in the base unit of its dimension. For calculations that store nothing."""

    typed: str
    value: Decimal
    unit: str
    exact: Decimal
    base_unit: str
    dimension: str


@dataclass(frozen=True)
class Quantity:
    """An amount as typed and as a whole number of base units, which is what the books keep."""

    typed: str
    value: Decimal
    unit: str
    base: int
    base_unit: str
    dimension: str


_NUMBER: Final = r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]+)?"
_PLAIN: Final = re.compile(_NUMBER)
_GROUPED: Final = re.compile(r"[+-]?[0-9]+(?:[.,'_ ][0-9]+)+")  # more separators than one decimal point
_RAISED: Final = re.compile(r"[0-9][⁰¹²³⁴⁵⁶⁷⁸⁹₀₁₂₃₄₅₆₇₈₉]")  # 10² is a hundred, and would be tidied into 102
_NOT_FINITE: Final = re.compile(r"[+-]?(?:nan|inf|infinity|∞)(?![a-z])", re.IGNORECASE)
_PARTS: Final = re.compile(rf"(?P<number>{_NUMBER})\s*(?P<unit>[a-zA-Z][a-zA-Z ]*)")
_IN_PARTS: Final = ("time", "mass")  # "4 h 30 min", "5 lb 3 oz"


def measure(text: str, dimension: str, *, default_unit: str | None = None, allow_negative: bool = False) -> Measure:
    """The amount that the text says, unrounded; a bare number is taken in `default_unit`. Raises QuantityError."""
    typed = _tidy(text)
    example = units.DIMENSIONS[dimension].example
    if _RAISED.search(text):
        raise QuantityError("not_a_number", typed=text.strip(), example=example)
    if not typed:
        raise QuantityError("empty", example=example)
    if len(typed) > LONGEST:
        raise QuantityError("too_long", example=example)
    if dimension == "ph":
        typed = re.sub(r"^pH\s*[:=]?\s*", "", typed, flags=re.IGNORECASE)
        default_unit = "pH"
    value, unit, exact = _add_parts(typed, dimension) or _one_part(typed, dimension, default_unit)
    _check_range(typed, dimension, value, exact, allow_negative=allow_negative)
    return Measure(text, value, unit.name, exact, units.DIMENSIONS[dimension].base_unit, dimension)


def parse(text: str, dimension: str, *, default_unit: str | None = None, allow_negative: bool = False) -> Quantity:
    """The amount that the text says, rounded half-even to a whole number of base units.

    `dimension` is a key of `units.DIMENSIONS`; a bare number is taken in `default_unit`, and without one it is refused.
    Raises QuantityError: a non-zero amount under one base unit, or one over 10**15, cannot be recorded.
    """
    found = measure(text, dimension, default_unit=default_unit, allow_negative=allow_negative)
    if found.exact and abs(found.exact) < 1:
        raise QuantityError("too_small", typed=_tidy(text), least=show(1, dimension))
    with localcontext(Context(prec=units.PRECISION)):
        base = int(found.exact.to_integral_value(ROUND_HALF_EVEN))
    if abs(base) > LIMIT:
        raise QuantityError("too_large", typed=_tidy(text), most=show(LIMIT, dimension))
    return Quantity(text, found.value, found.unit, base, found.base_unit, dimension)


def _tidy(text: str) -> str:
    """One form for what looks alike: kinds of spaces, minus signs and apostrophes, superscripts, full-width digits."""
    return " ".join(unicodedata.normalize("NFKC", text).replace("−", "-").replace("’", "'").split())


def read_number(text: str, example: str = "1.5") -> Decimal:
    """A bare number, read as strictly as the number of an amount. Raises QuantityError."""
    typed = _tidy(text)
    number, rest = _number(typed, example)
    if rest or _RAISED.search(text) or (number and abs(number.adjusted()) > 30):
        raise QuantityError("not_a_number", typed=typed, example=example)
    return number


def _number(typed: str, example: str) -> tuple[Decimal, str]:
    """The number with which the text begins, and what follows it."""
    if _NOT_FINITE.match(typed):
        raise QuantityError("not_finite", typed=typed, example=example)
    if grouped := _GROUPED.match(typed):
        _refuse_grouping(grouped[0])
    number = _PLAIN.match(typed)
    if not number or re.match(r"[0-9.,'_]", typed[number.end() :]):
        raise QuantityError("not_a_number", typed=typed, example=example)
    return Decimal(number[0]) or Decimal(0), typed[number.end() :].strip()  # a zero keeps no exponent


def _one_part(typed: str, dimension: str, default_unit: str | None) -> tuple[Decimal, units.Unit, Decimal]:
    example = units.DIMENSIONS[dimension].example
    value, word = _number(typed, example)
    if not word and default_unit is None:
        raise QuantityError("missing_unit", typed=typed, example=example)
    unit = _unit(typed, word or default_unit or "", dimension)
    return value, unit, _convert(typed, value, unit, dimension)


def _add_parts(typed: str, dimension: str) -> tuple[Decimal, units.Unit, Decimal] | None:
    """ "4 h 30 min" as 270 min; None if the text is not a sum of falling units."""
    parts = list(_PARTS.finditer(typed)) if dimension in _IN_PARTS else []
    if len(parts) < 2 or "".join(part[0] for part in parts) != typed:
        return None
    found = [(Decimal(part["number"]), _unit(typed, part["unit"], dimension)) for part in parts]
    bases = [_convert(typed, value, unit, dimension) for value, unit in found]
    sizes = [units.to_base(Decimal(1), unit, dimension) for _, unit in found]
    if sizes != sorted(set(sizes), reverse=True) or any(part["number"].startswith(("+", "-")) for part in parts):
        return None
    exact = sum(bases, Decimal(0))
    return Decimal(_plain(exact / sizes[-1], 12)), found[-1][1], exact


def _unit(typed: str, word: str, dimension: str) -> units.Unit:
    """The unit that the word spells in this dimension. Raises QuantityError for every other word."""
    known = units.DIMENSIONS[dimension]
    if unit := units.find(word, dimension):
        return unit
    if remedy := units.AMBIGUOUS.get(units.key(word)):
        raise QuantityError("ambiguous_unit", unit=word, remedy=remedy)
    if found := units.find_elsewhere(word):
        raise QuantityError("wrong_dimension", typed=typed, found=found.noun, needed=known.noun, example=known.example)
    raise QuantityError("unknown_unit", unit=word, known=", ".join(pretty(unit.name) for unit in known.units))


def _convert(typed: str, value: Decimal, unit: units.Unit, dimension: str) -> Decimal:
    """The exact amount in base units, after refusing exponents with which no arithmetic is possible."""
    if value and value.adjusted() > 30:
        raise QuantityError("too_large", typed=typed, most=show(LIMIT, dimension))
    if value and value.adjusted() < -30:
        raise QuantityError("too_small", typed=typed, least=show(1, dimension))
    return units.to_base(value, unit, dimension)


def _check_range(typed: str, dimension: str, value: Decimal, exact: Decimal, *, allow_negative: bool) -> None:
    if dimension == "temperature":
        if exact < 0:
            raise QuantityError("below_absolute_zero", typed=typed)
    elif value < 0 and not allow_negative:
        raise QuantityError("negative", typed=typed)


def _refuse_grouping(number: str) -> None:
    """Refuse "1,500", "1,5", "1 500", "1.500,5" and their like, and say how to write each possible meaning."""
    marks = [mark for mark in number if mark in ".,'_ "]
    if marks == ["."]:
        return
    readings = [str(int("".join(filter(str.isdigit, number)) or "0"))]
    before, after = re.split(r"[.,'_ ]", number.lstrip("+-"))[0], re.split(r"[.,'_ ]", number)[-1]
    whole = re.sub(r"[^0-9]", "", number[: -len(after) - 1])
    as_decimal = f"{int(whole)}.{after}".rstrip("0").rstrip(".")
    if len(marks) == 1:
        comma_can_group = len(after) == 3 and len(before) <= 3 and not before.startswith("0")
        readings = [*readings, as_decimal] if comma_can_group or marks != [","] else [as_decimal]
    elif marks[-1] != marks[-2]:
        readings = [as_decimal]
    sign = "-" if number.startswith("-") else ""
    raise QuantityError("ambiguous", number=number, remedy=" or ".join(sign + reading for reading in readings))


def pretty(unit: str) -> str:
    """A unit as a person reads it: ug/dm2 as µg/dm², degC as °C."""
    if unit == "imperial_gallon":
        return "imp gal"
    text = re.sub(r"^u(?=[a-zA-Z])", "µ", unit).replace("deg", "°")
    return re.sub(r"(?<=[a-z])[23]", lambda power: "²³"[int(power[0]) - 2], text)


def show(base: int, dimension: str, *, digits: int = 4) -> str:
    """Whole base units in a readable unit: at least `digits` significant digits, no trailing zeros, no grouping."""
    if dimension == "temperature":
        return f"{_plain(Decimal(base - 273_150) / 1000, digits)} °C"
    rounded = abs(Context(prec=digits).plus(Decimal(base)))
    known = units.DIMENSIONS[dimension]
    name = next(
        name for name, least in known.shown if (rounded >= least if base else known.example.endswith(f" {name}"))
    )
    unit = next(unit for unit in known.units if unit.name == name)
    number = _plain(Decimal(base) / units.to_base(Decimal(1), unit, dimension), digits)
    return f"pH {number}" if dimension == "ph" else f"{number} {pretty(name)}"


def spell(base: int, dimension: str) -> str:
    """Return base units as a text that is read as exactly so many, for a form to begin with. No temperatures, no pH."""
    known = units.DIMENSIONS[dimension]
    name = next(name for name, least in known.shown if (abs(base) >= least if base else known.example.endswith(name)))
    unit = next(unit for unit in known.units if unit.name == name)
    number = f"{(Decimal(base) / units.to_base(Decimal(1), unit, dimension)).normalize():f}"
    return f"{number} {name}"


def _round(value: Decimal, digits: int) -> Decimal:
    """To so many significant digits, but never coarser than to a whole number."""
    if not value:
        return Decimal(0)
    places = max(0, digits - 1 - value.adjusted())
    return value.quantize(Decimal(1).scaleb(-places), ROUND_HALF_EVEN)


def _plain(value: Decimal, digits: int = 4) -> str:
    text = f"{_round(value, digits):f}"
    return text.rstrip("0").rstrip(".") if "." in text else text


def echo(quantity: Quantity) -> str:
    """What was understood, shown before saving: "2.5 gal = 9.464 L"; once only if both sides say the same."""
    number = f"{quantity.value:f}"
    typed = f"pH {number}" if quantity.dimension == "ph" else f"{number} {pretty(quantity.unit)}"
    shown = show(quantity.base, quantity.dimension)
    return typed if typed == shown or not quantity.base else f"{typed} = {shown}"
