"""What is read at a tank, in which dimension, and results as people say them: a number, a range, "below 0.5 mg/L"."""

import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

from chemicals.science.errors import TextError
from chemicals.science.quantity import Quantity, QuantityError, parse
from chemicals.science.units import DIMENSIONS, find

PH, TEMPERATURE, CONDUCTIVITY, VOLTAGE, AIR_SPEED, SURFACE_TENSION, TEST_STRIP = (
    "pH", "temperature", "conductivity", "voltage", "air speed", "surface tension", "test strip",
)  # fmt: skip
LEVEL, WEIGHT, DENSITY, ANALYSIS, THICKNESS, CHARGE = (
    "level", "weight", "density", "analysis", "thickness", "charge",
)  # fmt: skip


@dataclass(frozen=True)
class Measurable:
    """What can be measured: in which dimensions it is told, and in which an uncertainty is (None: as a share only)."""

    dimensions: tuple[str, ...]
    doubt: str | None
    example: str


READ: Final = {
    PH: Measurable(("ph",), "ph", "4.2"),
    TEMPERATURE: Measurable(("temperature",), "temperature_difference", "24 °C"),
    CONDUCTIVITY: Measurable(("conductivity",), "conductivity", "250 uS/cm"),
    VOLTAGE: Measurable(("voltage",), "voltage", "3.5 V"),
    AIR_SPEED: Measurable(("speed",), "speed", "0.5 m/s"),
    SURFACE_TENSION: Measurable(("surface_tension",), "surface_tension", "45 mN/m"),
    TEST_STRIP: Measurable(("concentration", "molar_concentration", "fraction"), None, "10 to 25 mg/L"),
}
"""What is kept as it was read: nothing else follows from it."""

MEASURED: Final = {
    LEVEL: Measurable(("volume",), "volume", "19.2 L"),
    WEIGHT: Measurable(("mass",), "mass", "22.4 kg"),
    DENSITY: Measurable(("density",), "density", "1.18 g/mL"),
    ANALYSIS: Measurable(("concentration", "molar_concentration"), None, "52.5 g/L"),
    **READ,
    THICKNESS: Measurable(("length",), "length", "12 um"),
    CHARGE: Measurable(("charge",), "charge", "1.8 Ah"),
}
"""All that an instrument may measure."""


def dimension_of(quantity: str, unit: str) -> str:
    """Return in which of its dimensions a quantity was told, by the unit."""
    return next(name for name in MEASURED[quantity].dimensions if find(unit, name))


class ReadingError(TextError):
    """A result cannot be read."""

    messages = {
        "ends_swapped": '"%(typed)s" ends before it begins. Write the lower end first.',
        "two_kinds": '"%(typed)s" has two ends of different kinds. Write both in the same unit.',
    }


@dataclass(frozen=True)
class Span:
    """A result as typed and in base units: a number has two equal ends; without ``least`` it is below ``most``."""

    typed: str
    unit: str
    dimension: str
    least: int | None
    most: int | None

    @property
    def value(self) -> int | None:
        """Return the number, if it is one."""
        return self.least if self.least == self.most else None

    @property
    def middle(self) -> int:
        """Return the number, the middle of a range, or the one end there is."""
        ends = [end for end in (self.least, self.most) if end is not None]
        return sum(ends) // len(ends)


_BELOW: Final = re.compile(r"(?:<|≤|below|under|less than|not detected below)\s*(?=\S)", re.IGNORECASE)
_ABOVE: Final = re.compile(r"(?:>|≥|above|over|more than)\s*(?=\S)", re.IGNORECASE)
_RANGE: Final = re.compile(r"(?P<low>[+-]?[\d.]+)(?P<unit>[^\d]*?)\s*(?:to|…|\.\.\.?|–|-)\s*(?P<high>[+-]?\d.*)")


def parse_span(text: str, dimensions: Sequence[str], *, example: str = "") -> Span:
    """Return what a result says in one of the dimensions.

    Raises QuantityError or ReadingError. A range may leave the unit of its lower end out.
    """
    typed = " ".join(text.split())
    for pattern, is_below in ((_BELOW, True), (_ABOVE, False)):
        if found := pattern.match(typed):
            end = parse_in(typed[found.end() :], dimensions, example=example)
            ends = (None, end.base) if is_below else (end.base, None)
            return Span(typed, end.unit, end.dimension, *ends)
    try:
        number = parse_in(typed, dimensions, example=example)
    except QuantityError:
        found = _RANGE.fullmatch(re.sub(r"^pH\s*", "", typed) if tuple(dimensions) == ("ph",) else typed)
        if found is None:
            raise
        return _range(typed, found, dimensions)
    return Span(typed, number.unit, number.dimension, number.base, number.base)


def _range(typed: str, found: re.Match[str], dimensions: Sequence[str]) -> Span:
    high = parse_in(found["high"], dimensions)
    low = parse_in(f"{found['low']} {found['unit'].strip() or high.unit}", dimensions)
    if low.dimension != high.dimension:
        raise ReadingError("two_kinds", typed=typed)
    if low.base >= high.base:
        raise ReadingError("ends_swapped", typed=typed)
    return Span(typed, high.unit, high.dimension, low.base, high.base)


def parse_in(text: str, dimensions: Sequence[str], *, example: str = "", default_unit: str | None = None) -> Quantity:
    """Return an amount in the first of the dimensions that it fits; one error that speaks of all of them."""
    refused: list[QuantityError] = []
    for dimension in dimensions:
        try:
            return parse(text, dimension, default_unit=default_unit)
        except QuantityError as error:
            refused.append(error)
    first = refused[0]
    if first.code == "wrong_dimension":
        needed = " or ".join(DIMENSIONS[dimension].noun for dimension in dimensions)
        raise QuantityError(
            first.code, **{**first.params, "needed": needed, "example": example or first.params["example"]}
        )
    if first.code == "unknown_unit":
        known = ", ".join(error.params["known"] for error in refused if "known" in error.params)
        raise QuantityError(first.code, **{**first.params, "known": known})
    raise first
