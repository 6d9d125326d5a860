"""The mechanism of the calculations: one dataclass says what goes in, one what comes out, one function does the work.

A page, an API endpoint and a command are generated from the same description, so a calculation is written once. The
fields of the input dataclass are annotated with `quantity`, `number`, `integer`, `choice` or `text`, those of the
output dataclass with `Output`. What a user sends is read by them, and everything that is wrong is reported at once,
each error with the name of its field and the remedy.
"""

import dataclasses
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from decimal import Decimal
from functools import cached_property
from typing import Any, TypedDict, get_type_hints

from chemicals.science.formula import FormulaError
from chemicals.science.quantity import QuantityError, measure, pretty, read_number
from chemicals.science.units import find, to_base


class FieldError(TypedDict):
    """One thing that is wrong: the field's name, and a sentence that names the remedy."""

    field: str
    message: str


class InputError(ValueError):
    """What was sent for one field is out of its bounds or of the wrong kind; the text names the remedy."""


class CalculationErrors(ValueError):  # noqa: N818  (it carries all of them)
    """Everything that is wrong with the input, at once."""

    def __init__(self, errors: list[FieldError]) -> None:
        self.errors = errors
        super().__init__("; ".join(f"{error['field']}: {error['message']}" for error in errors))


def refuse(name: str, message: str) -> CalculationErrors:
    """The error of a single field, for a function that finds it while it calculates."""
    return CalculationErrors([{"field": name, "message": message}])


@dataclass(frozen=True)
class InputField:
    """What a face must know of one input.

    `kind` is quantity, number, integer, choice or text. `unit` is the unit in which a bare number is taken and in which
    the function gets the amount; `minimum` and `maximum` are in this unit, and `above` excludes the minimum itself. A
    field left out takes its `default`; without one it is refused if `required`, else the function gets None.
    """

    kind: str
    label: str
    help: str
    example: str
    read: Callable[[str, "InputField"], Any] = dataclasses.field(repr=False)
    dimension: str = ""
    unit: str = ""
    minimum: float | None = None
    maximum: float | None = None
    above: bool = False
    choices: tuple[str, ...] = ()
    required: bool = True
    default: str | None = None
    name: str = ""


@dataclass(frozen=True)
class Output:
    """What a face must know of one result: label, meaning, and the unit as a person reads it."""

    label: str
    help: str
    unit: str = ""
    name: str = ""


def quantity(
    dimension: str,
    unit: str,
    label: str,
    help: str,
    example: str,
    *,
    above_zero: bool = True,
    maximum: float | None = None,
    optional: bool = False,
    default: str | None = None,
) -> InputField:
    """An amount with a unit, or a bare number in `unit`; the function gets it as a float in `unit`."""
    return InputField(
        kind="quantity",
        label=label,
        help=help,
        example=example,
        read=_read_quantity,
        dimension=dimension,
        unit=unit,
        minimum=0,
        maximum=maximum,
        above=above_zero,
        required=not optional and default is None,
        default=default,
    )


def number(label: str, help: str, example: str, *, minimum: float | None = None) -> InputField:
    """A bare number; the function gets a float."""
    return InputField("number", label, help, example, _read_number, minimum=minimum)


def integer(
    label: str,
    help: str,
    example: str,
    *,
    minimum: int,
    maximum: int,
    optional: bool = False,
) -> InputField:
    """A whole number; the function gets an int."""
    spec = InputField("integer", label, help, example, _read_integer, minimum=minimum, maximum=maximum)
    return dataclasses.replace(spec, required=not optional)


def choice(label: str, help: str, choices: tuple[str, ...], *, default: str) -> InputField:
    """One of the named words."""
    spec = InputField("choice", label, help, default, _read_choice, choices=choices)
    return dataclasses.replace(spec, required=False, default=default)


def text(label: str, help: str, example: str, read: Callable[[str], Any]) -> InputField:
    """A word that `read` understands, or refuses with FormulaError."""
    return InputField("text", label, help, example, lambda typed, _: read(typed))


def _read_quantity(typed: str, spec: InputField) -> float:
    unit = find(spec.unit, spec.dimension)
    if unit is None:
        raise LookupError(f"{spec.unit} is no unit of {spec.dimension}")
    exact = measure(typed, spec.dimension, default_unit=spec.unit, allow_negative=True).exact
    return _in_bounds(float(exact / to_base(Decimal(1), unit, spec.dimension)), typed, spec)


def _read_number(typed: str, spec: InputField) -> float:
    return _in_bounds(float(read_number(typed, spec.example)), typed, spec)


def _read_integer(typed: str, spec: InputField) -> int:
    value = read_number(typed, spec.example)
    if value != int(value):
        raise InputError(f'"{typed}" is not a whole number: write for example {spec.example}.')
    _in_bounds(float(value), typed, spec)
    return int(value)


def _read_choice(typed: str, spec: InputField) -> str:
    if typed not in spec.choices:
        raise InputError(f'"{typed}" is not a choice: write one of {", ".join(spec.choices)}.')
    return typed


def _in_bounds(value: float, typed: str, spec: InputField) -> float:
    unit = f" {pretty(spec.unit)}" if spec.unit not in {"", "1"} else ""
    if spec.above and value <= 0:
        raise InputError(f'"{typed}" is not more than 0: write for example {spec.example}.')
    if spec.minimum is not None and value < spec.minimum:
        raise InputError(f'"{typed}" is too little: write at least {spec.minimum:.10g}{unit}.')
    if spec.maximum is not None and value > spec.maximum:
        raise InputError(f'"{typed}" is too much: write at most {spec.maximum:.10g}{unit}.')
    return value


@dataclass(frozen=True)
class ExactlyGiven:
    """A rule between fields: of these, exactly so many are given and the others left out."""

    names: tuple[str, ...]
    count: int

    @property
    def message(self) -> str:
        """The rule as a sentence."""
        listed = f"{', '.join(self.names[:-1])} and {self.names[-1]}"
        return f"Of {listed}, give exactly {self.count} and leave out the rest."

    def errors(self, given: set[str]) -> list[FieldError]:
        """What is wrong with the given names: each that is missing, or the last one if there are too many."""
        found = [name for name in self.names if name in given]
        if len(found) > self.count:
            return [{"field": found[-1], "message": self.message}]
        if len(found) < self.count:
            return [{"field": name, "message": self.message} for name in self.names if name not in given]
        return []


@dataclass(frozen=True)
class Calculation:
    """One row of the table of calculations: what it is called, what goes in, what comes out, and who works it out."""

    name: str
    title: str
    help: str
    input_type: type
    output_type: type
    function: Callable[[Any], Any]
    example: Mapping[str, Any]
    rules: tuple[ExactlyGiven, ...] = ()

    @cached_property
    def inputs(self) -> tuple[InputField, ...]:
        """The input fields in the order of a form."""
        return tuple(dataclasses.replace(spec, name=name) for name, spec in _annotations(self.input_type))

    @cached_property
    def outputs(self) -> tuple[Output, ...]:
        """The results in the order in which they are shown."""
        return tuple(dataclasses.replace(spec, name=name) for name, spec in _annotations(self.output_type))

    def run(self, data: Mapping[str, Any]) -> dict[str, Any]:
        """The results by name, ready for JSON. Raises CalculationErrors with everything that is wrong."""
        result = self.function(self._read(data))
        return {spec.name: _for_json(getattr(result, spec.name)) for spec in self.outputs}

    def _read(self, data: Mapping[str, Any]) -> Any:
        sent = {name: value for name, value in data.items() if not _left_out(value)}
        values: dict[str, Any] = {}
        errors: list[FieldError] = []
        for spec in self.inputs:
            try:
                values[spec.name] = _read_one(sent.get(spec.name, spec.default), spec)
            except (InputError, QuantityError, FormulaError) as error:
                errors.append({"field": spec.name, "message": str(error)})
        for rule in self.rules:
            errors += rule.errors(set(sent))
        errors += self._unknown(data)
        if errors:
            raise CalculationErrors(errors)
        return self.input_type(**values)

    def _unknown(self, data: Mapping[str, Any]) -> list[FieldError]:
        known = [spec.name for spec in self.inputs]
        message = f"There is no such field: leave it out. There are {', '.join(known)}."
        return [{"field": str(name), "message": message} for name in data if name not in known]


def _annotations(owner: type) -> list[tuple[str, Any]]:
    hints = get_type_hints(owner, include_extras=True)
    return [(field.name, hints[field.name].__metadata__[0]) for field in dataclasses.fields(owner)]


def _left_out(value: Any) -> bool:
    return value is None or (isinstance(value, str) and not value.strip())


def _read_one(sent: Any, spec: InputField) -> Any:
    if sent is None and not spec.required:
        return None
    if sent is None:
        raise InputError(f"This field is needed: write for example {spec.example}.")
    if isinstance(sent, bool) or not isinstance(sent, str | int | float | Decimal):
        raise InputError(f"This is neither text nor a number: write for example {spec.example}.")
    if isinstance(sent, int) and sent.bit_length() > 256:
        raise InputError(f"This number has too many digits: write for example {spec.example}.")
    return spec.read(str(sent).strip(), spec)


def _for_json(value: Any) -> Any:
    if isinstance(value, Decimal):
        return float(value)
    if isinstance(value, dict):
        return {key: _for_json(inner) for key, inner in value.items()}
    return value
