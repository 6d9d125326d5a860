"""Chemical formulas: molar mass and mass fractions.

A formula is element symbols with counts, brackets of three kinds, and parts joined by a hydrate mark (`.`, `·` or `*`),
each of which may begin with a number: CuSO4.5H2O, K4[Fe(CN)6]·3H2O. Counts are whole: after `O4` the dot joins, it is
no decimal point. Atomic weights are periodictable's: the abridged standard atomic weights of IUPAC 2021 (Prohaska and
others, Pure Appl. Chem. 94, 2022). Results are Decimals of eight significant digits: they go into the journal as text.
"""

import re
import unicodedata
from collections import Counter
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Context, Decimal
from functools import cache
from typing import Any, Final

from chemicals.science.errors import TextError
from chemicals.science.tables import read_table

BASIS: Final = "IUPAC abridged standard atomic weights 2021 (Pure Appl. Chem. 94, 2022)"
DIGITS: Final = Context(prec=8, rounding=ROUND_HALF_EVEN)
LONGEST: Final = 200  # characters
MOST: Final = 9999  # atoms of one kind, as many as a count of four digits

MESSAGES: Final = {
    "empty": "No formula is typed: write for example CuSO4.5H2O.",
    "too_long": "The formula is longer than 200 characters: write the formula of one substance.",
    "unknown_element": '"%(found)s" in "%(typed)s" is no element: write symbols such as Cu, O or Au, with capitals.',
    "unknown_symbol": '"%(found)s" is no element: write a symbol such as Cu or Au, with its capital.',
    "charge": '"%(typed)s" carries a charge: write the neutral substance, for example CuSO4 instead of Cu2+.',
    "brackets": 'The brackets of "%(typed)s" do not pair: close each bracket that opens, and no other.',
    "count": 'A count in "%(typed)s" is 0 or over 9999: write whole counts of 1 and more.',
    "syntax": '"%(found)s" in "%(typed)s" cannot be read: write symbols, whole counts, brackets, a dot before water.',
}


class FormulaError(TextError):
    """The text is no formula."""

    messages = MESSAGES


@dataclass(frozen=True)
class Formula:
    """The atoms of one formula unit, in the order in which the elements first appear."""

    typed: str
    atoms: tuple[tuple[str, int], ...]

    @property
    def molar_mass(self) -> Decimal:
        """Grams per mole."""
        return DIGITS.plus(self._mass())

    @property
    def mass_fractions(self) -> dict[str, Decimal]:
        """Grams of each element per gram of the substance."""
        whole = self._mass()
        return {symbol: DIGITS.divide(atomic_weight(symbol) * count, whole) for symbol, count in self.atoms}

    def _mass(self) -> Decimal:
        return sum((atomic_weight(symbol) * count for symbol, count in self.atoms), Decimal(0))


def _balanced() -> tuple[str, ...]:
    return tuple(row["symbol"] for row in read_table("elements"))


METALS: Final = _balanced()
"""Symbols of the metals that a workshop balances; arsenic, antimony and bismuth count with them."""


@cache
def _elements() -> dict[str, Any]:
    """Elements by symbol, without the neutron. Loaded on first use: importing periodictable costs 20 ms."""
    import periodictable

    return {element.symbol: element for element in periodictable.elements if element.number > 0}


def atomic_weight(symbol: str) -> Decimal:
    """Standard atomic weight. Raises FormulaError for a symbol that no element has."""
    element = _elements().get(symbol)
    if element is None:
        raise FormulaError("unknown_symbol", found=symbol)
    return Decimal(str(element.mass))


def element_name(symbol: str) -> str:
    """English name in small letters, `copper`. Raises FormulaError for a symbol that no element has."""
    atomic_weight(symbol)
    return str(_elements()[symbol].name)


_PAIRS: Final = {"(": ")", "[": "]", "{": "}"}
_TOKEN: Final = re.compile(
    r"(?P<open>[(\[{])|(?P<close>[)\]}])(?P<times>[0-9]*)|(?P<symbol>[A-Z][a-z]?)(?P<count>[0-9]*)"
)
_PART: Final = re.compile(r"(?P<factor>[0-9]*)(?P<rest>.+)")
_DOT: Final = re.compile(r"[.·⋅∙•*]")
_WATER: Final = re.compile(r"(?P<count>[0-9]*)H2O")
_CHARGE: Final = re.compile(r"\^|[0-9]*[+-][0-9]*$|[+-]\)?$")


def parse_formula(text: str) -> Formula:
    """The formula that the text says. Raises FormulaError, which names what cannot be read."""
    typed = "".join(unicodedata.normalize("NFKC", text.strip()).split())
    if not typed:
        raise FormulaError("empty")
    if len(typed) > LONGEST:
        raise FormulaError("too_long")
    if _CHARGE.search(typed):
        raise FormulaError("charge", typed=typed)
    atoms: Counter[str] = Counter()
    for number, part in enumerate(_DOT.split(typed)):
        found = _PART.fullmatch(part)
        if not found or (number == 0 and found["factor"]):
            raise FormulaError("syntax", found=part or ".", typed=typed)
        _add(atoms, _read_part(found["rest"], typed), _count(found["factor"], typed))
    if max(atoms.values()) > MOST:
        raise FormulaError("count", typed=typed)
    return Formula(typed, tuple(atoms.items()))


def _read_part(part: str, typed: str) -> Counter[str]:
    """The atoms of one part. Open brackets wait on a stack, each with the mark that must close it."""
    stack: list[tuple[str, Counter[str]]] = [("", Counter())]
    position = 0
    while position < len(part):
        token = _TOKEN.match(part, position)
        if token is None:
            raise FormulaError("syntax", found=part[position:], typed=typed)
        position = token.end()
        if token["open"]:
            stack.append((_PAIRS[token["open"]], Counter()))
        elif token["close"]:
            closes, inner = stack.pop()
            if closes != token["close"] or not inner:
                raise FormulaError("brackets", typed=typed)
            _add(stack[-1][1], inner, _count(token["times"], typed))
        else:
            _add(stack[-1][1], Counter({_known(token["symbol"], typed): 1}), _count(token["count"], typed))
    if len(stack) > 1:
        raise FormulaError("brackets", typed=typed)
    return stack[0][1]


def _add(total: Counter[str], atoms: Counter[str], times: int) -> None:
    for symbol, count in atoms.items():
        total[symbol] += count * times


def _count(digits: str, typed: str) -> int:
    if len(digits) > 4 or digits.startswith("0"):
        raise FormulaError("count", typed=typed)
    return int(digits or "1")


def _known(symbol: str, typed: str) -> str:
    if symbol not in _elements():
        raise FormulaError("unknown_element", found=symbol, typed=typed)
    return symbol


def molar_mass(text: str) -> Decimal:
    """Grams per mole, eight significant digits. Raises FormulaError."""
    return parse_formula(text).molar_mass


def mass_fractions(text: str) -> dict[str, Decimal]:
    """Grams of each element per gram of the substance, eight significant digits. Raises FormulaError."""
    return parse_formula(text).mass_fractions


def split_water(text: str) -> tuple[Formula, int]:
    """The formula without its crystal water, and how many molecules of water go with it. Raises FormulaError.

    `CuSO4.5H2O` is CuSO4 with five; `CuSO4` has none, and so has water itself.
    """
    first, *rest = _DOT.split(parse_formula(text).typed)
    counts = [_WATER.fullmatch(part) for part in rest]
    if not all(counts):
        return parse_formula(text), 0
    return parse_formula(first), sum(int(found["count"] or 1) for found in counts if found)


def metal_fraction(text: str, element: str) -> Decimal:
    """Grams of one element per gram of the substance; 0 if it holds none. Raises FormulaError."""
    atomic_weight(element)
    return mass_fractions(text).get(element, Decimal(0))
