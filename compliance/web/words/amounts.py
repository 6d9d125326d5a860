"""Amounts of components in words: grams, litres, millimoles, with the digits that their uncertainty leaves."""

from decimal import Context, Decimal

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy, pgettext_lazy

from chemicals.books import events
from chemicals.books.fold.state import EVERY
from chemicals.ledger.components import dimension_of, name_of
from chemicals.science.quantity import show
from chemicals.science.units import find, to_base

UNKNOWN = gettext_lazy("unknown")
LIQUID = pgettext_lazy("what moved", "liquid")
WEIGHT = pgettext_lazy("what moved", "weight in all")
SPECIES = {
    events.FREE_CYANIDE: gettext_lazy("free cyanide"),
    events.CHROMIUM_VI: gettext_lazy("chromium(VI)"),
    events.ACID: gettext_lazy("acid"),
    events.ALKALI: gettext_lazy("alkali"),
    events.AMMONIA: gettext_lazy("ammonia"),
    events.SULFITE: gettext_lazy("sulfite"),
}
TENTH_OF_A_GRAM, GRAM = 10**5, 10**6
MILLIMOLES = {"amount_of_substance": "mmol", "molar_concentration": "mmol/L"}
DIGITS = 4
"""Significant digits of an amount of which no uncertainty is stated."""


def amount(base: int | None, component: str) -> str:
    """Return an amount of a component: grams, litres, millimoles, or the word unknown."""
    return with_uncertainty(base, 0, component)


def with_uncertainty(base: int | None, sd: int, component: str) -> str:
    """Return an amount and its standard uncertainty: "0.830 ± 0.020 g"."""
    return str(UNKNOWN) if base is None else in_one_unit(base, sd, dimension_of(component))


def in_one_unit(base: int, sd: int, dimension: str) -> str:
    """Return base units of any dimension with their standard uncertainty, both in the unit that suits the larger.

    The uncertainty has two significant digits and the amount ends where it ends (JCGM 100:2008, 7.2.6), but shows one
    digit at least.
    """
    shown = show(base, dimension)
    larger = max(abs(base), sd)
    word = _preferred_unit(larger, dimension) or show(larger, dimension).partition(" ")[2]
    unit = find(word, dimension)
    if unit is None or (not sd and shown.endswith(f" {word}")):
        return shown
    size = to_base(Decimal(1), unit, dimension)
    value = Decimal(base) / size
    if not sd:
        return f"{_tidy(Context(prec=DIGITS).plus(value))} {word}"
    doubt = Context(prec=2).plus(Decimal(sd) / size)
    last = min(_last_place(doubt), value.adjusted()) if base else _last_place(doubt)
    return f"{value.quantize(Decimal(1).scaleb(last)):f} ± {doubt:f} {word}"


def _preferred_unit(base: int, dimension: str) -> str:
    """Return the unit in which the trade thinks: parts of a gram down to a tenth, millimoles always."""
    if dimension in MILLIMOLES:
        return MILLIMOLES[dimension]
    return "g" if dimension == "mass" and TENTH_OF_A_GRAM <= base < GRAM else ""


def _last_place(number: Decimal) -> int:
    exponent = number.as_tuple().exponent
    return exponent if isinstance(exponent, int) else 0


def _tidy(number: Decimal) -> str:
    text = f"{number:f}"
    return text.rstrip("0").rstrip(".") if "." in text else text


def signed(base: int | None, sd: int, component: str) -> str:
    """Return an amount with its sign, for what came (+) and what left (−)."""
    if base is None:
        return str(UNKNOWN)
    sign = "+" if base > 0 else "−" if base < 0 else ""
    return f"{sign}{with_uncertainty(abs(base), sd, component)}"


def component_name(component: str) -> str:
    """Return a component as people say it: copper, free cyanide, liquid, weight in all; a solute by its formula."""
    if component == events.VOLUME:
        return str(LIQUID)
    if component == events.GROSS_MASS:
        return str(WEIGHT)
    if component == EVERY:
        return _("anything else")
    return str(SPECIES[component]) if component in SPECIES else name_of(component)
