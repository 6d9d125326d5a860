"""The mechanism of the calculations: one dataclass says what goes in, one what comes out, one function does the work.

A page, an API endpoint and a command are generated from the same description, so a calculation is written once. The
fields of the input dataclass are annotated with `quantity`, `number`, `integer`, `choice`, `text`, `deviation` or
`group`, those of the output dataclass with `Output`; a list of dataclasses is a table with their outputs as columns.
What a user sends is read by them, and everything that is wrong is reported at once, each error with the name of its
field (`sd.volume` for the part of a group) and the remedy.
"""

import dataclasses
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from decimal import Decimal
from functools import cached_property
from typing import Any, Final, Protocol, TypedDict, get_args, get_origin, get_type_hints

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

    `kind` is the name of the function that made it. `unit` is the unit in which a bare number is taken and in which the
    function gets the amount; `minimum` and `maximum` are in this unit, and `above` excludes the minimum itself. A field
    left out takes its `default`; without one it is refused if `required`, else the function gets None. The `parts` of a
    group are the fields of its dataclass `owner`.
    """

    kind: str
    label: str
    help: str
    example: str
    read: Callable[[Any, "InputField"], Any] = dataclasses.field(repr=False)
    dimension: str = ""
    unit: str = ""
    minimum: float | None = None
    maximum: float | None = None
    above: bool = False
    choices: tuple[str, ...] = ()
    required: bool = True
    default: str | None = None
    name: str = ""
    parts: tuple["InputField", ...] = ()
    owner: type | None = None


@dataclass(frozen=True)
class Output:
    """What a face must know of one result: label, meaning, unit as a person reads it, and the columns of a table."""

    label: str
    help: str
    unit: str = ""
    name: str = ""
    columns: tuple["Output", ...] = ()


BASIS: Final = Output("Basis", "The law or published source used.")
"""The last output of every calculation."""


@dataclass(frozen=True)
class Deviation:
    """A standard uncertainty: an amount in the unit of its field, or a share of the value."""

    amount: float
    relative: bool = False

    def of(self, value: float) -> float:
        """The standard uncertainty of this value, in its unit."""
        return abs(value) * self.amount if self.relative else self.amount


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


def choice(label: str, help: str, choices: tuple[str, ...], *, default: str | None = None) -> InputField:
    """One of the named words; without a default it must be chosen."""
    spec = InputField("choice", label, help, default or choices[0], _read_choice, choices=choices)
    return dataclasses.replace(spec, required=default is None, default=default)


def text(label: str, help: str, example: str, read: Callable[[str], Any]) -> InputField:
    """A word that `read` understands, or refuses with FormulaError."""
    return InputField("text", label, help, example, lambda typed, _: read(typed))


def deviation(dimension: str, unit: str, label: str, example: str) -> InputField:
    """The standard uncertainty of an amount, in its own unit or in percent of it; the function gets a Deviation."""
    bare = f"A bare number is in {pretty(unit)}" if unit != "1" else "A bare number counts as it stands"
    spec = InputField("deviation", label, f'{bare}; "0.2 %" is a share of the value.', example, _read_deviation)
    return dataclasses.replace(spec, dimension=dimension, unit=unit, minimum=0, required=False)


def group(label: str, help: str, owner: type) -> InputField:
    """Fields under one name, none of which is needed; the function gets an `owner`, whose fields are annotated."""
    return InputField("group", label, help, "{}", _read_group, required=False, parts=_described(owner), owner=owner)


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


def _read_deviation(typed: str, spec: InputField) -> Deviation:
    try:
        parts_per_million = measure(typed, "fraction", allow_negative=True).exact
    except QuantityError:
        return Deviation(_read_quantity(typed, spec))
    return Deviation(_in_bounds(float(parts_per_million) / 1e6, typed, spec), relative=True)


def _read_group(sent: Any, spec: InputField) -> Any:
    if spec.owner is None or not isinstance(sent, Mapping):
        raise InputError("This is no JSON object: write fields by name between braces, or leave it out.")
    values, errors = _read_fields(spec.parts, sent)
    if errors:
        raise CalculationErrors(errors)
    return spec.owner(**values)


def _in_bounds(value: float, typed: str, spec: InputField) -> float:
    unit = f" {pretty(spec.unit)}" if spec.unit not in {"", "1"} else ""
    if spec.above and value <= 0:
        raise InputError(f'"{typed}" is not more than 0: write for example {spec.example}.')
    if spec.minimum is not None and value < spec.minimum:
        raise InputError(f'"{typed}" is too little: write at least {spec.minimum:.10g}{unit}.')
    if spec.maximum is not None and value > spec.maximum:
        raise InputError(f'"{typed}" is too much: write at most {spec.maximum:.10g}{unit}.')
    return value


class Rule(Protocol):
    """A rule between fields: it sees which are given, and the values of those that could be read."""

    def errors(self, given: set[str], values: Mapping[str, Any]) -> list[FieldError]:
        """What is wrong with the fields together."""


@dataclass(frozen=True)
class Check:
    """A rule between values: `holds` gets those of `names`, in order; where it fails, the first of them is refused.

    Nothing is said while one of them cannot be read.
    """

    names: tuple[str, ...]
    holds: Callable[..., bool]
    message: str

    def errors(self, given: set[str], values: Mapping[str, Any]) -> list[FieldError]:
        """The first name, if the values do not go together."""
        readable = all(name in values for name in self.names)
        if not readable or self.holds(*(values[name] for name in self.names)):
            return []
        return [{"field": self.names[0], "message": self.message}]


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

    def errors(self, given: set[str], values: Mapping[str, Any]) -> list[FieldError]:
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
    rules: tuple[Rule, ...] = ()

    @cached_property
    def inputs(self) -> tuple[InputField, ...]:
        """The input fields in the order of a form."""
        return _described(self.input_type)

    @cached_property
    def outputs(self) -> tuple[Output, ...]:
        """The results in the order in which they are shown."""
        return _with_columns(self.output_type)

    def run(self, data: Mapping[str, Any]) -> dict[str, Any]:
        """The results by name, ready for JSON. Raises CalculationErrors with everything that is wrong."""
        result = self.function(self._read(data))
        return {spec.name: _for_json(getattr(result, spec.name)) for spec in self.outputs}

    def _read(self, data: Mapping[str, Any]) -> Any:
        values, errors = _read_fields(self.inputs, data)
        given = {name for name, value in data.items() if not _left_out(value)}
        for rule in self.rules:
            errors += rule.errors(given, values)
        if errors:
            raise CalculationErrors(errors)
        return self.input_type(**values)


def _annotations(owner: type) -> list[tuple[str, Any]]:
    hints = get_type_hints(owner, include_extras=True)
    return [(field.name, hints[field.name].__metadata__[0]) for field in dataclasses.fields(owner)]


def _described(owner: type) -> tuple[InputField, ...]:
    return tuple(dataclasses.replace(spec, name=name) for name, spec in _annotations(owner))


def _with_columns(owner: type) -> tuple[Output, ...]:
    rows = {name: row_of(hint) for name, hint in get_type_hints(owner).items()}
    return tuple(
        dataclasses.replace(spec, name=name, columns=_with_columns(row) if (row := rows[name]) else ())
        for name, spec in _annotations(owner)
    )


def row_of(hint: Any) -> type | None:
    """The dataclass of the rows, for the type of a result that is a table; else None."""
    row = get_args(hint)[0] if get_origin(hint) is list else None
    return row if isinstance(row, type) and dataclasses.is_dataclass(row) else None


def _left_out(value: Any) -> bool:
    return value is None or (isinstance(value, str) and not value.strip())


def _read_fields(specs: tuple[InputField, ...], data: Mapping[str, Any]) -> tuple[dict[str, Any], list[FieldError]]:
    """The values that could be read, by name, and everything that is wrong with the others."""
    values: dict[str, Any] = {}
    errors: list[FieldError] = []
    for spec in specs:
        sent = data.get(spec.name)
        try:
            values[spec.name] = _read_one(spec.default if _left_out(sent) else sent, spec)
        except CalculationErrors as inner:
            errors += [{**error, "field": f"{spec.name}.{error['field']}"} for error in inner.errors]
        except (InputError, QuantityError, FormulaError) as error:
            errors.append({"field": spec.name, "message": str(error)})
    known = [spec.name for spec in specs]
    message = f"There is no such field: leave it out. There are {', '.join(known)}."
    return values, errors + [{"field": str(name), "message": message} for name in data if name not in known]


def _read_one(sent: Any, spec: InputField) -> Any:
    if spec.owner:
        return spec.read({} if sent is None else sent, spec)
    if sent is None and not spec.required:
        return None
    if sent is None:
        remedy = f"one of {', '.join(spec.choices)}" if spec.choices else f"for example {spec.example}"
        raise InputError(f"This field is needed: write {remedy}.")
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
    if isinstance(value, list):
        return [_for_json(inner) for inner in value]
    if dataclasses.is_dataclass(value):
        return {field.name: _for_json(getattr(value, field.name)) for field in dataclasses.fields(value)}
    return value
