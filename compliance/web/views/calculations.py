"""The calculations: one page for all of them, generated from their table."""

from dataclasses import dataclass
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


@dataclass(frozen=True)
class Cell:
    """One value of a result, as a page shows it: numbers stand to the right."""

    value: Any

    @property
    def is_number(self) -> bool:
        return isinstance(self.value, int | float)


@dataclass(frozen=True)
class Table:
    """A result in rows."""

    output: Output
    rows: list[list[Cell]]

    @property
    def heads(self) -> list[tuple[Output, bool]]:
        """Return each column, and whether numbers stand in it."""
        return [(column, cell.is_number) for column, cell in zip(self.output.columns, self.rows[0], strict=True)]


def _results(calculation: Calculation, values: dict[str, Any]) -> list[tuple[Output, str, Cell]]:
    """Return (description, name of the part, value) of each result that is no table, its parts one by one."""
    shown = [(output, values[output.name]) for output in calculation.outputs if not output.columns]
    return [
        (output, name, Cell(part))
        for output, value in shown
        if value is not None
        for name, part in _parts_of(value).items()
    ]


def _parts_of(value: Any) -> dict[str, Any]:
    if isinstance(value, list):
        return {str(number): part for number, part in enumerate(value, 1)}
    return value if isinstance(value, dict) else {"": value}


def _tables(calculation: Calculation, values: dict[str, Any]) -> list[Table]:
    """Return each result that is a table; a cell that names an input shows its label."""
    labels = {spec.name: spec.label for spec in calculation.inputs}
    return [
        Table(output, [[Cell(labels.get(str(cell), cell)) for cell in row.values()] for row in values[output.name]])
        for output in calculation.outputs
        if output.columns and values[output.name]
    ]
