"""The units people type in a plating shop, and their exact size in the base units of the books.

Pint holds the definitions (SI brochure; NIST Handbook 44, appendix C, for US customary units). data/units.csv only says
which spellings are taken for which unit, so that nothing typed is ever evaluated as an expression. Pint is imported on
the first conversion, not before: it costs 0.3 s, and most commands never convert.
"""

import unicodedata
from dataclasses import dataclass
from decimal import Context, Decimal, localcontext
from functools import cache
from typing import Any, Final

from chemicals.science.tables import read_table

PRECISION: Final = 50  # digits carried while converting; the results are whole numbers of at most 16 digits
FACTOR_DIGITS: Final = 24  # Pint composes its factors with 28 digits; the last ones are noise and are rounded off


@dataclass(frozen=True)
class Unit:
    """One unit of the table: its canonical text, how Pint calls it, how else people spell it."""

    name: str
    pint: str
    spellings: tuple[str, ...] = ()


@dataclass(frozen=True)
class Dimension:
    """What is measured, its base unit, and the units in which it is shown (unit, from how many base units), falling."""

    name: str
    noun: str
    base_unit: str
    base_pint: str
    example: str
    shown: tuple[tuple[str, int], ...]

    @property
    def units(self) -> tuple[Unit, ...]:
        """The units taken for it, smallest metric one first."""
        return _units()[self.name]


_ALL: Final = (
    Dimension("mass", "a mass", "ug", "ug", "2.5 g", (("kg", 10**9), ("g", 10**6), ("mg", 10**3), ("ug", 0))),
    Dimension("volume", "a volume", "nL", "nL", "2.5 L", (("L", 10**9), ("mL", 10**6), ("uL", 10**3), ("nL", 0))),
    Dimension(
        "amount_of_substance",
        "an amount of substance",
        "nmol",
        "nmol",
        "0.5 mol",
        (("mol", 10**9), ("mmol", 10**6), ("umol", 10**3), ("nmol", 0)),
    ),
    Dimension(
        "charge", "a charge", "uC", "uC", "1.5 Ah", (("Ah", 360_000_000), ("mAh", 3_600_000), ("C", 10**5), ("uC", 0))
    ),
    Dimension("current", "a current", "uA", "uA", "0.44 A", (("A", 10**5), ("mA", 10**3), ("uA", 0))),
    Dimension("time", "a time", "ms", "ms", "4 h", (("h", 3_600_000), ("min", 60_000), ("s", 1000), ("ms", 0))),
    Dimension(
        "concentration",
        "a concentration (mass per volume)",
        "ug/L",
        "ug/L",
        "60 g/L",
        (("g/L", 10**6), ("mg/L", 10**3), ("ug/L", 0)),
    ),
    Dimension(
        "molar_concentration",
        "a concentration (amount of substance per volume)",
        "nmol/L",
        "nmol/L",
        "0.2 mol/L",
        (("mol/L", 10**9), ("mmol/L", 10**6), ("umol/L", 10**3), ("nmol/L", 0)),
    ),
    Dimension(
        "air_concentration",
        "a concentration in air",
        "ng/m3",
        "ng/m**3",
        "0.05 mg/m3",
        (("g/m3", 10**9), ("mg/m3", 10**4), ("ug/m3", 10**3), ("ng/m3", 0)),
    ),
    Dimension("area", "an area", "mm2", "mm**2", "1.2 dm2", (("dm2", 10**4), ("cm2", 100), ("mm2", 0))),
    Dimension(
        "current_density",
        "a current density",
        "uA/dm2",
        "uA/dm**2",
        "1 A/dm2",
        (("A/dm2", 10**4), ("mA/dm2", 10**3), ("uA/dm2", 0)),
    ),
    Dimension(
        "density", "a density", "ug/mL", "ug/mL", "8.96 g/cm3", (("g/cm3", 10**4), ("mg/mL", 10**3), ("ug/mL", 0))
    ),
    Dimension("temperature", "a temperature", "mK", "mK", "20 degC", (("degC", 0),)),
    Dimension("fraction", "a fraction", "ppm", "ppm", "25 %", (("%", 10**3), ("ppm", 0))),
    Dimension(
        "conductivity",
        "a conductivity",
        "nS/cm",
        "nS/cm",
        "250 uS/cm",
        (("mS/cm", 10**6), ("uS/cm", 10**3), ("nS/cm", 0)),
    ),
    Dimension("ph", "a pH", "0.001 pH", "permille", "4.5 pH", (("pH", 0),)),
    Dimension("voltage", "a voltage", "uV", "uV", "3.5 V", (("V", 10**5), ("mV", 10**3), ("uV", 0))),
    Dimension("speed", "a speed", "um/s", "um/s", "0.5 m/s", (("m/s", 10**4), ("mm/s", 10**3), ("um/s", 0))),
    Dimension("surface_tension", "a surface tension", "uN/m", "uN/m", "45 mN/m", (("mN/m", 10**3), ("uN/m", 0))),
    Dimension("baume", "degrees Baumé", "0.001 degBe", "permille", "32 degBe", (("degBe", 0),)),
    Dimension(
        "rational_baume",
        "degrees Baumé (144.3)",
        "0.001 degBe",
        "permille",
        "32 rational degBe",
        (("rational degBe", 0),),
    ),
    Dimension("temperature_difference", "a difference of temperature", "mK", "mK", "0.5 K", (("K", 0),)),
    Dimension("flow", "a flow", "nL/h", "nL/h", "1 L/h", (("L/h", 10**9), ("mL/h", 10**6), ("nL/h", 0))),
    Dimension("length", "a length", "nm", "nm", "10 um", (("m", 10**9), ("mm", 10**6), ("um", 10**3), ("nm", 0))),
)

DIMENSIONS: Final = {dimension.name: dimension for dimension in _ALL}

# Units that the trade reads in two ways, and what to write instead.
AMBIGUOUS: Final = {
    "ton": "t (1000 kg), short ton or long ton",
    "tons": "t (1000 kg), short ton or long ton",
    "gr": "g (gram) or grain",
    "grs": "g (gram) or grain",
    "m": "min (minute) or m (metre)",
}

_SYMBOLS: Final = str.maketrans({"μ": "u", "°": "deg", "^": "", "*": "", "·": "", "⋅": "", "_": "", ".": "", " ": ""})


def key(text: str) -> str:
    """A unit's spelling without what does not matter: spaces, dots, `^`, superscripts, the two micro signs."""
    return unicodedata.normalize("NFKC", text).replace(" per ", "/").translate(_SYMBOLS)


@cache
def _units() -> dict[str, tuple[Unit, ...]]:
    found: dict[str, list[Unit]] = {name: [] for name in DIMENSIONS}
    for row in read_table("units"):
        spellings = tuple(row["spellings"].split("; ")) if row["spellings"] else ()
        found[row["dimension"]].append(Unit(row["unit"], row["pint"], spellings))
    return {name: tuple(rows) for name, rows in found.items()}


@cache
def _words(dimension: str) -> tuple[dict[str, Unit], dict[str, Unit]]:
    """Every spelling as written, and again without regard to case."""
    exact = {key(word): unit for unit in DIMENSIONS[dimension].units for word in (unit.name, *unit.spellings)}
    return exact, {word.casefold(): unit for word, unit in exact.items()}


def find(text: str, dimension: str) -> Unit | None:
    """The unit of this dimension that the text spells, or None. Case is forgiven, but for a capital M: mega."""
    exact, folded = _words(dimension)
    word = key(text)
    return exact.get(word) or (None if word.startswith("M") else folded.get(word.casefold()))


def find_elsewhere(text: str) -> Dimension | None:
    """The first dimension that knows this unit, to tell a wrong dimension from an unknown unit."""
    return next((dimension for dimension in _ALL if find(text, dimension.name)), None)


@cache
def _registry() -> Any:
    from pint import UnitRegistry

    return UnitRegistry(non_int_type=Decimal)


@cache
def _line(pint: str, base_pint: str) -> tuple[Decimal, Decimal]:
    """Slope and offset from a unit to the base unit; the offset is 0 but for degC and degF."""
    quantity = _registry().Quantity
    clean = Context(prec=FACTOR_DIGITS)
    with localcontext(Context(prec=PRECISION)):
        offset = Decimal(quantity(Decimal(0), pint).to(base_pint).magnitude)
        slope = Decimal(quantity(Decimal(1), pint).to(base_pint).magnitude) - offset
    return clean.plus(slope), clean.plus(offset)


def to_base(value: Decimal, unit: Unit, dimension: str) -> Decimal:
    """The amount in the dimension's base unit, unrounded."""
    slope, offset = _line(unit.pint, DIMENSIONS[dimension].base_pint)
    with localcontext(Context(prec=PRECISION)):
        return value * slope + offset
