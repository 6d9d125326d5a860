"""The units people type in a plating shop, and their exact size in the base units of the books.

Pint holds the definitions (SI brochure; NIST Handbook 44, appendix C, for US customary units). This table only says
which spellings are taken for which unit, so that nothing typed is ever evaluated as an expression. Pint is imported on
the first conversion, not before: it costs 0.3 s, and most commands never convert.
"""

import unicodedata
from collections.abc import Iterator
from dataclasses import dataclass, field
from decimal import Context, Decimal, localcontext
from functools import cache
from typing import Any, Final

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
    """What is measured: its base unit, its units, and how it is shown: (unit, base units in it, used from), falling."""

    name: str
    noun: str
    base_unit: str
    base_pint: str
    example: str
    shown: tuple[tuple[str, int, int], ...]
    units: tuple[Unit, ...] = field(repr=False)


def _units(text: str) -> tuple[Unit, ...]:
    """Read `name = pint expression = spelling, spelling` lines."""
    rows = (line.split("=") for line in text.strip().splitlines())
    return tuple(
        Unit(name.strip(), pint.strip(), tuple(word.strip() for rest in more for word in rest.split(",")))
        for name, pint, *more in rows
    )


_ALL: Final = (
    Dimension(
        "mass",
        "a mass",
        "ug",
        "ug",
        "2.5 g",
        (("kg", 10**9, 10**9), ("g", 10**6, 10**6), ("mg", 10**3, 10**3), ("ug", 1, 0)),
        _units("""
            ug = ug = mcg, microgram, micrograms
            mg = mg = milligram, milligrams
            g = g = gram, grams, gramme, grammes
            kg = kg = kilo, kilos, kilogram, kilograms
            t = tonne = tonne, tonnes, metric ton, metric tons
            oz = ounce = ounce, ounces, oz av
            lb = pound = lbs, pound, pounds
            ozt = troy_ounce = troy oz, troy ounce, troy ounces, oz t
            dwt = pennyweight = pennyweight, pennyweights
            ct = carat = carat, carats
            grain = grain = grains
            short ton = short_ton = short tons
            long ton = long_ton = long tons
        """),
    ),
    Dimension(
        "volume",
        "a volume",
        "nL",
        "nL",
        "2.5 L",
        (("L", 10**9, 10**9), ("mL", 10**6, 10**6), ("uL", 10**3, 10**3), ("nL", 1, 0)),
        _units("""
            nL = nL
            uL = uL = microlitre, microlitres, microliter, microliters
            mL = mL = millilitre, millilitres, milliliter, milliliters, cc, cm3, ccm
            cL = cL = centilitre, centilitres, centiliter, centiliters
            dL = dL
            L = L = litre, litres, liter, liters, dm3
            m3 = m**3 = cubic metre, cubic metres, cubic meter, cubic meters
            gal = gallon = gallon, gallons, US gal, US gallon, US gallons, gal US
            imperial_gallon = imperial_gallon = imp gal, imperial gal, imperial gallon, imperial gallons, gal imp
            qt = quart = quart, quarts
            pt = pint = pint, pints
            fl oz = fluid_ounce = fl. oz, fluid ounce, fluid ounces, US fl oz
            ft3 = ft**3 = cu ft, cubic foot, cubic feet
            in3 = in**3 = cu in, cubic inch, cubic inches
        """),
    ),
    Dimension(
        "amount_of_substance",
        "an amount of substance",
        "nmol",
        "nmol",
        "0.5 mol",
        (("mol", 10**9, 10**9), ("mmol", 10**6, 10**6), ("umol", 10**3, 10**3), ("nmol", 1, 0)),
        _units("""
            nmol = nmol
            umol = umol
            mmol = mmol
            mol = mol = mole, moles
            kmol = kmol
        """),
    ),
    Dimension(
        "charge",
        "a charge",
        "uC",
        "uC",
        "1.5 Ah",
        (("Ah", 3_600_000_000, 360_000_000), ("mAh", 3_600_000, 3_600_000), ("C", 10**6, 10**5), ("uC", 1, 0)),
        _units("""
            uC = uC
            mC = mC
            C = C = coulomb, coulombs, A s
            kC = kC
            mAh = mA*h = milliampere hour, milliampere hours
            A min = A*min = amp min, ampere minute, ampere minutes, amp minute, amp minutes
            Ah = A*h = amp hour, amp hours, ampere hour, ampere hours, A-h, amp-hour, amp-hours, ampere-hour
        """),
    ),
    Dimension(
        "current",
        "a current",
        "uA",
        "uA",
        "0.44 A",
        (("A", 10**6, 10**5), ("mA", 10**3, 10**3), ("uA", 1, 0)),
        _units("""
            uA = uA
            mA = mA = milliamp, milliamps, milliampere, milliamperes
            A = A = amp, amps, ampere, amperes
            kA = kA
        """),
    ),
    Dimension(
        "time",
        "a time",
        "ms",
        "ms",
        "4 h",
        (("h", 3_600_000, 3_600_000), ("min", 60_000, 60_000), ("s", 1000, 1000), ("ms", 1, 0)),
        _units("""
            ms = ms = millisecond, milliseconds
            s = s = sec, secs, second, seconds
            min = min = mins, minute, minutes
            h = h = hr, hrs, hour, hours
            d = day = day, days
            week = week = weeks
        """),
    ),
    Dimension(
        "concentration",
        "a concentration (mass per volume)",
        "ug/L",
        "ug/L",
        "60 g/L",
        (("g/L", 10**6, 10**6), ("mg/L", 10**3, 10**3), ("ug/L", 1, 0)),
        _units("""
            ug/L = ug/L = mcg/L
            mg/L = mg/L = g/m3
            g/L = g/L = mg/mL, kg/m3, g/dm3, g per litre, g per liter, grams per litre, grams per liter
            kg/L = kg/L = g/mL, g/cm3
            oz/gal = ounce/gallon = oz per gallon, ounces per gallon
            ozt/gal = troy_ounce/gallon = troy oz/gal, troy ounces per gallon
            dwt/gal = pennyweight/gallon = pennyweight/gallon
            lb/gal = pound/gallon = pounds per gallon
        """),
    ),
    Dimension(
        "area",
        "an area",
        "mm2",
        "mm**2",
        "1.2 dm2",
        (("dm2", 10**4, 10**4), ("cm2", 100, 100), ("mm2", 1, 0)),
        _units("""
            mm2 = mm**2 = sq mm, mm sq
            cm2 = cm**2 = sq cm, cm sq
            dm2 = dm**2 = sq dm, dm sq
            m2 = m**2 = sq m, square metre, square metres, square meter, square meters
            in2 = in**2 = sq in, square inch, square inches
            ft2 = ft**2 = sq ft, square foot, square feet
        """),
    ),
    Dimension(
        "current_density",
        "a current density",
        "uA/dm2",
        "uA/dm**2",
        "1 A/dm2",
        (("A/dm2", 10**6, 10**4), ("mA/dm2", 10**3, 10**3), ("uA/dm2", 1, 0)),
        _units("""
            uA/dm2 = uA/dm**2
            mA/dm2 = mA/dm**2
            A/dm2 = A/dm**2 = ASD
            mA/cm2 = mA/cm**2
            A/cm2 = A/cm**2
            A/m2 = A/m**2
            A/ft2 = A/ft**2 = ASF, A/sq ft, amps per square foot
            A/in2 = A/in**2 = A/sq in
        """),
    ),
    Dimension(
        "density",
        "a density",
        "ug/mL",
        "ug/mL",
        "8.96 g/cm3",
        (("g/cm3", 10**6, 10**4), ("mg/mL", 10**3, 10**3), ("ug/mL", 1, 0)),
        _units("""
            ug/mL = ug/mL
            mg/mL = mg/mL
            g/L = g/L
            kg/m3 = kg/m**3
            g/cm3 = g/cm**3 = g/cc
            g/mL = g/mL
            kg/L = kg/L = kg/dm3
            lb/gal = pound/gallon
        """),
    ),
    Dimension(
        "temperature",
        "a temperature",
        "mK",
        "mK",
        "20 degC",
        (("degC", 1000, 0),),
        _units("""
            degC = degC = C, deg C, celsius
            degF = degF = F, deg F, fahrenheit
            K = K = kelvin, degK
        """),
    ),
    Dimension(
        "fraction",
        "a fraction",
        "ppm",
        "ppm",
        "25 %",
        (("%", 10**4, 10**3), ("ppm", 1, 0)),
        _units("""
            1 = dimensionless
            % = percent = percent, per cent, pct
            permille = permille = ‰, per mille
            ppm = ppm
        """),
    ),
    Dimension(
        "conductivity",
        "a conductivity",
        "nS/cm",
        "nS/cm",
        "250 uS/cm",
        (("mS/cm", 10**6, 10**6), ("uS/cm", 10**3, 10**3), ("nS/cm", 1, 0)),
        _units("""
            nS/cm = nS/cm
            uS/cm = uS/cm
            mS/cm = mS/cm
            S/cm = S/cm
            mS/m = mS/m
            S/m = S/m
        """),
    ),
    Dimension("ph", "a pH", "0.001 pH", "permille", "4.5", (("pH", 1000, 0),), _units("pH = dimensionless")),
    Dimension(
        "voltage",
        "a voltage",
        "uV",
        "uV",
        "3.5 V",
        (("V", 10**6, 10**5), ("mV", 10**3, 10**3), ("uV", 1, 0)),
        _units("""
            uV = uV
            mV = mV = millivolt, millivolts
            V = V = volt, volts
        """),
    ),
    Dimension(
        "length",
        "a length",
        "nm",
        "nm",
        "10 um",
        (("m", 10**9, 10**9), ("mm", 10**6, 10**6), ("um", 10**3, 10**3), ("nm", 1, 0)),
        _units("""
            nm = nm
            um = um = micron, microns, micrometre, micrometres, micrometer, micrometers
            mm = mm = millimetre, millimetres, millimeter, millimeters
            cm = cm = centimetre, centimetres, centimeter, centimeters
            dm = dm
            m = m = metre, metres, meter, meters
            uin = microinch = microinch, microinches
            thou = thou = mil, mils
            in = inch = inch, inches
            ft = foot = foot, feet
        """),
    ),
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


def _spellings(dimension: Dimension) -> Iterator[tuple[str, Unit]]:
    for unit in dimension.units:
        for spelling in (unit.name, *unit.spellings):
            yield key(spelling), unit


_EXACT: Final = {name: dict(_spellings(dimension)) for name, dimension in DIMENSIONS.items()}
_FOLDED: Final = {name: {word.casefold(): unit for word, unit in words.items()} for name, words in _EXACT.items()}


def find(text: str, dimension: str) -> Unit | None:
    """The unit of this dimension that the text spells, or None. Case is forgiven, but for a capital M: mega."""
    word = key(text)
    exact = _EXACT[dimension].get(word)
    if exact or word.startswith("M"):
        return exact
    return _FOLDED[dimension].get(word.casefold())


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
