"""The calculations of the science, one view for each: no workshop is asked for, a token is."""

from typing import Any, ClassVar

from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.science.calculation import Calculation
from chemicals.science.calculations import CALCULATIONS, calculate
from compliance.api.calculation_fields import CalculationsShape, build_answer, build_request
from compliance.api.views.base import ApiView


class CalculationsView(ApiView):
    """All calculations by name, each with an example that can be sent as it is."""

    shape = CalculationsShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return them in the order of the table."""
        return self.respond({"calculations": CALCULATIONS.values()})


class CalculationView(ApiView):
    """Base of the calculations."""

    statuses = (200,)
    calculation: ClassVar[Calculation]

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Return the results; everything that is wrong comes back at once."""
        return Response(calculate(self.calculation.name, request.data))


VIEWS: dict[str, type[CalculationView]] = {
    name: type(
        f"{name.title().replace('-', '')}View",
        (CalculationView,),
        {
            "calculation": calculation,
            "input_class": build_request(calculation),
            "shape": build_answer(calculation),
            "__doc__": calculation.help,
        },
    )
    for name, calculation in CALCULATIONS.items()
}
"""One view for each calculation, by its name."""
