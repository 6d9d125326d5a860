"""The calculations of the science as requests and answers, generated from their one table."""

from decimal import Decimal
from functools import partial
from typing import Any, Literal, cast, get_args, get_origin, get_type_hints

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.science.calculation import Calculation, InputField, Output, row_of
from compliance.api.fields import Strict
from compliance.api.serializers.base import Shape, choices_of


def _class_name(calculation: Calculation) -> str:
    return "".join(word.title() for word in calculation.name.split("-"))


class CalculationField(serializers.Field[Any, Any, Any, Any]):
    """One input: passed on as it came, since the calculation itself reads and refuses it by name."""

    def __init__(self, spec: InputField, **options: Any) -> None:
        self.spec = spec
        super().__init__(**options)

    def to_internal_value(self, data: Any) -> Any:
        """Return what was sent."""
        return data

    def to_representation(self, value: Any) -> Any:
        """Return it as it was sent."""
        return value


def build_request(calculation: Calculation) -> type[Strict]:
    """Return the serializer that describes what goes into a calculation."""
    return _build_inputs(f"{_class_name(calculation)}Input", calculation.input_type, calculation.inputs)


def _build_inputs(name: str, owner: type, specs: tuple[InputField, ...]) -> type[Strict]:
    fields = {spec.name: _build_input(f"{name}{spec.name.title()}", spec) for spec in specs}
    return type(name, (Strict,), {**fields, "__doc__": owner.__doc__})


def _build_input(name: str, spec: InputField) -> Any:
    build = _build_inputs(name, spec.owner, spec.parts) if spec.owner else partial(CalculationField, spec)
    return build(
        required=spec.required,
        allow_null=not spec.required,
        label=spec.label,
        help_text=f"{spec.label}. {spec.help}",
    )


def build_answer(calculation: Calculation) -> type[Shape]:
    """Return the serializer that describes what comes out of a calculation."""
    return _build_outputs(f"{_class_name(calculation)}Output", calculation.output_type, calculation.outputs)


def _build_outputs(name: str, owner: type, specs: tuple[Output, ...]) -> type[Shape]:
    hints = get_type_hints(owner)
    fields = {spec.name: _build_output(f"{name}{spec.name.title()}", hints[spec.name], spec) for spec in specs}
    return type(name, (Shape,), {**fields, "__doc__": owner.__doc__})


def _build_output(name: str, hint: Any, spec: Output) -> Any:
    options: dict[str, Any] = {"help_text": f"{spec.label}{f', in {spec.unit}' if spec.unit else ''}. {spec.help}"}
    if row := row_of(hint):
        return cast("Any", _build_outputs(name, row, spec.columns))(many=True, **options)
    if get_origin(hint) not in (None, dict, list, Literal):  # only what may be null is a union here
        hint = next(part for part in get_args(hint) if part is not type(None))
        options["allow_null"] = True
    if get_origin(hint) is Literal:
        return choices_of(get_args(hint), **options)
    if get_origin(hint) is dict:
        number = serializers.FloatField(help_text=_("The value under this name."))
        return serializers.DictField(child=number, **options)
    if get_origin(hint) is list:
        return serializers.ListField(child=serializers.FloatField(help_text=_("One value.")), **options)
    known: dict[Any, type[serializers.Field[Any, Any, Any, Any]]] = {
        Decimal: serializers.FloatField,
        float: serializers.FloatField,
        int: serializers.IntegerField,
        str: serializers.CharField,
    }
    return known[hint](**options)


class CalculationShape(Shape):
    """A calculation by its name."""

    name = serializers.CharField(help_text=_("The last part of its address."))
    title = serializers.CharField(help_text=_("What it is called."))
    help = serializers.CharField(help_text=_("What it answers."))
    example = serializers.DictField(help_text=_("A body that can be sent as it is."))


class CalculationsShape(Shape):
    """Everything that can be calculated."""

    calculations = CalculationShape(many=True, help_text=_("In the order in which pages list them."))
