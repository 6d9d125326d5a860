"""The calculations: one page for all of them, generated from their table."""

from typing import Any

from django.http import Http404, HttpRequest, HttpResponse

from chemicals.science.calculation import Calculation, Output
from chemicals.science.calculations import CALCULATIONS, CalculationErrors, calculate
from chemicals.workshop.errors import FieldError, InvalidInputError
from compliance.web.door import show, signed_in
from compliance.web.forms.calculation import CalculationForm


@signed_in()
def index(request: HttpRequest) -> HttpResponse:
    """List the calculations."""
    return show(request, None, "web/calculations.html", calculations=CALCULATIONS.values())


@signed_in()
def calculation(request: HttpRequest, name: str) -> HttpResponse:
    """Show the form of a calculation, and its results below; the address holds what was asked."""
    found = CALCULATIONS.get(name)
    if found is None:
        raise Http404("no such calculation")
    form = CalculationForm(found, request.GET or None)
    context: dict[str, Any] = {"calculation": found, "form": form}
    if form.is_bound:
        try:
            values = calculate(name, form.given())
            context |= {"results": _results(found, values), "tables": _tables(found, values)}
        except CalculationErrors as error:
            errors = [FieldError(each["field"], each["message"]) for each in error.errors]
            form.add_domain_errors(InvalidInputError(errors))
    status = 400 if form.is_bound and "results" not in context else 200
    return show(request, None, "web/calculation.html", status=status, **context)


def _results(calculation: Calculation, values: dict[str, Any]) -> list[tuple[Output, Any, list[tuple[Any, Any]]]]:
    """Return (description, value, parts) of each result that is no table; parts are shown in place of the value."""
    shown = [(output, values[output.name]) for output in calculation.outputs if not output.columns]
    return [(output, value, _parts_of(value)) for output, value in shown if value is not None]


def _parts_of(value: Any) -> list[tuple[Any, Any]]:
    if isinstance(value, dict):
        return list(value.items())
    return list(enumerate(value, 1)) if isinstance(value, list) else []


def _tables(calculation: Calculation, values: dict[str, Any]) -> list[tuple[Output, list[list[Any]]]]:
    """Return (description, rows) of each result that is a table; a cell that names an input shows its label."""
    labels = {spec.name: spec.label for spec in calculation.inputs}
    return [
        (output, [[labels.get(str(cell), cell) for cell in row.values()] for row in values[output.name]])
        for output in calculation.outputs
        if output.columns and values[output.name]
    ]
