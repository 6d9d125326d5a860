"""The table of calculations that a user may want by itself: CALCULATIONS, and `calculate` to run one by its name."""

from collections.abc import Mapping
from typing import Any, Final

from chemicals.science.calculation import Calculation, CalculationErrors, refuse
from chemicals.science.calculations.limit import LIMIT
from chemicals.science.calculations.metals import COMPOSITION, FARADAY
from chemicals.science.calculations.rinses import DRAG_OUT, RINSE, STATIC_RINSE
from chemicals.science.calculations.titrations import TITRATION

__all__ = ["CALCULATIONS", "Calculation", "CalculationErrors", "calculate"]

_TABLE: Final = (COMPOSITION, FARADAY, RINSE, STATIC_RINSE, DRAG_OUT, TITRATION, LIMIT)

CALCULATIONS: Final[Mapping[str, Calculation]] = {calculation.name: calculation for calculation in _TABLE}


def calculate(name: str, data: Any) -> dict[str, Any]:
    """Run the calculation of this name on the fields sent, and give its results ready for JSON.

    Raises CalculationErrors: an unknown name as field `name`, anything but an object as field `input`.
    """
    if name not in CALCULATIONS:
        raise refuse("name", f'"{name}" is no calculation: write one of {", ".join(CALCULATIONS)}.')
    if not isinstance(data, Mapping):
        raise refuse("input", "This is no JSON object: write the fields by name between braces.")
    return CALCULATIONS[name].run(data)
