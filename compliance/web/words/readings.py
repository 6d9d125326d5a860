"""Readings in words: what was read, the result as typed and as understood, the instrument and how sure it is."""

from collections.abc import Iterator

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from chemicals.books.events import Gauge, Result
from chemicals.process.inputs.readings import READINGS
from chemicals.process.readings import Taken
from chemicals.science.quantity import show
from chemicals.science.reading import MEASURED, READ, dimension_of
from compliance.web.words.amounts import in_one_unit

MORE_MEASURED = {
    "level": gettext_lazy("level"),
    "weight": gettext_lazy("weight"),
    "density": gettext_lazy("density"),
    "analysis": gettext_lazy("analysis"),
    "thickness": gettext_lazy("thickness"),
    "charge": gettext_lazy("ampere-hours"),
}


FACT_NAMES = {
    "mark": gettext_lazy("volume at the mark"),
    "bath_type": gettext_lazy("bath type"),
    "metal": gettext_lazy("metal that it plates"),
    "valence": gettext_lazy("valence"),
    "efficiency": gettext_lazy("current efficiency"),
    "efficiency_sd": gettext_lazy("uncertainty of the current efficiency"),
    "anode_kind": gettext_lazy("anode"),
    "anode": gettext_lazy("anode set"),
    "side_reaction": gettext_lazy("what happens besides at an inert anode"),
    "racks": gettext_lazy("rack build-up"),
    "rack_share": gettext_lazy("share that grows on racks"),
}
"""What of the set-up of a tank may change, in words."""


def quantity_name(quantity: str, shows: str = "") -> str:
    """Return what is measured; of a test strip what it shows."""
    return shows or str({**MORE_MEASURED, **READINGS}[quantity])


def result_amount(result: Result, quantity: str) -> str:
    """Return the result of a reading as it was understood."""
    dimension = dimension_of(quantity, result.unit)
    return span_amount(result.least, result.most, result.sd, dimension, READ[quantity].doubt or dimension)


def amount_of(taken: Taken) -> str:
    """Return what was read, as it was understood."""
    doubt = MEASURED[taken.quantity].doubt or taken.dimension
    return span_amount(taken.least, taken.most, taken.sd, taken.dimension, doubt)


def span_amount(least: int | None, most: int | None, sd: int | None, dimension: str, doubt: str) -> str:
    """Return a result in base units: "24 °C ± 0.5 K", "10 mg/L to 25 mg/L", "below 1 mg/L"."""
    if least is None or most is None:
        text = _("below %(end)s") if least is None else _("above %(end)s")
        said = text % {"end": show((most if least is None else least) or 0, dimension)}
    elif least < most:
        said = _("%(least)s to %(most)s") % {"least": show(least, dimension), "most": show(most, dimension)}
    elif sd and doubt == dimension and dimension != "ph":
        return in_one_unit(least, sd, dimension)
    else:
        said = show(least, dimension)
    return f"{said} ± {_doubt(sd, doubt)}" if sd else said


def _doubt(sd: int, dimension: str) -> str:
    return show(sd, dimension, digits=2).removeprefix("pH ")


def gauge_doubt(gauge: Gauge, measures: str) -> str:
    """Return how sure an instrument is, and when that was found: "0.1 L and 1 %, calibrated 2026-01-05"."""
    return ", ".join(filter(None, (" + ".join(_parts(gauge.sd, gauge.relative_sd, measures)), _calibrated(gauge))))


def _parts(sd: int, relative_sd: int, measures: str) -> Iterator[str]:
    doubt = MEASURED[measures].doubt
    if sd and doubt is not None:
        yield _doubt(sd, doubt)
    if relative_sd:
        yield _doubt(relative_sd, "fraction")


def _calibrated(gauge: Gauge) -> str:
    return _("calibrated %(day)s") % {"day": gauge.calibrated_on} if gauge.calibrated_on else ""
