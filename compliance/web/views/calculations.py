"""The calculations: one page for all of them, generated from their table."""

from typing import Any

from django.http import Http404, HttpRequest, HttpResponse

from chemicals.science.calculation import Calculation
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
            context["results"] = _results(found, calculate(name, form.given()))
        except CalculationErrors as error:
            errors = [FieldError(each["field"], each["message"]) for each in error.errors]
            form.add_domain_errors(InvalidInputError(errors))
    status = 400 if form.is_bound and "results" not in context else 200
    return show(request, None, "web/calculation.html", status=status, **context)


def _results(calculation: Calculation, values: dict[str, Any]) -> list[tuple[Any, Any, list[tuple[str, Any]]]]:
    """Return (description, value, parts) of each result; a result in parts has no value of its own."""
    return [
        (output, None, list(value.items())) if isinstance(value, dict) else (output, value, [])
        for output in calculation.outputs
        if (value := values[output.name]) is not None
    ]
