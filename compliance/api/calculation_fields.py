"""The calculations of the science as requests and answers, generated from their one table."""

from decimal import Decimal
from typing import Any, Literal, get_args, get_origin, get_type_hints

from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.science.calculation import Calculation, InputField
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
    fields = {spec.name: _build_input(spec) for spec in calculation.inputs}
    doc = calculation.input_type.__doc__
    return type(f"{_class_name(calculation)}Input", (Strict,), {**fields, "__doc__": doc})


def _build_input(spec: InputField) -> CalculationField:
    return CalculationField(
        spec,
        required=spec.required,
        allow_null=not spec.required,
        label=spec.label,
        help_text=f"{spec.label}. {spec.help}",
    )


def build_answer(calculation: Calculation) -> type[Shape]:
    """Return the serializer that describes what comes out of a calculation."""
    hints = get_type_hints(calculation.output_type)
    fields = {
        spec.name: _build_output(
            hints[spec.name], f"{spec.label}{f', in {spec.unit}' if spec.unit else ''}. {spec.help}"
        )
        for spec in calculation.outputs
    }
    return type(f"{_class_name(calculation)}Output", (Shape,), {**fields, "__doc__": calculation.output_type.__doc__})


def _build_output(hint: Any, help_text: str) -> Any:
    options: dict[str, Any] = {"help_text": help_text}
    if get_origin(hint) not in (None, dict, Literal):  # only what may be null is a union here
        hint = next(part for part in get_args(hint) if part is not type(None))
        options["allow_null"] = True
    if get_origin(hint) is Literal:
        return choices_of(get_args(hint), **options)
    if get_origin(hint) is dict:
        number = serializers.FloatField(help_text=_("The value under this name."))
        return serializers.DictField(child=number, **options)
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
