"""What many answers share: amounts with unit and uncertainty, names of things, the two ends of a movement."""

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from typing import Any

from django.utils.translation import gettext as _now
from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.science.quantity import show
from chemicals.science.units import DIMENSIONS

STANDS_HELP = _("While a late entry is being worked in: the moment up to which the books stand; null if they say all.")
UNCERTAINTY_HELP = _("Standard uncertainty in the same unit; 0 where none was stated.")


class Shape(serializers.Serializer[Any]):
    """What an answer looks like. Shapes only: whatever they show was read before."""


class With:
    """A row together with what was read beside it: the answer shows both as one."""

    def __init__(self, row: object, **more: Any) -> None:
        self._row = row
        self.__dict__.update(more)

    def __getattr__(self, name: str) -> Any:
        return getattr(self._row, name)


@dataclass(frozen=True)
class Estimate:
    """An amount in base units of a dimension, with its standard uncertainty; ``base`` None is unknown."""

    base: int | None
    sd: int = 0
    dimension: str = "mass"


class Figure(Shape):
    """An amount as the books keep it, and as a person reads it."""

    base = serializers.IntegerField(allow_null=True, help_text=_("Whole base units; null is unknown, which is not 0."))
    sd = serializers.IntegerField(help_text=UNCERTAINTY_HELP)
    unit = serializers.CharField(help_text=_("The base unit: ug, nL, mm2, ppm and so on."))
    text = serializers.CharField(help_text=_("The amount in a readable unit, such as 9.464 L, or: unknown."))

    def __init__(
        self, *args: Any, dimension: str = "mass", of: Callable[[Any], Estimate] | None = None, **options: Any
    ) -> None:
        self.of = of or (lambda base: Estimate(base, 0, dimension))
        super().__init__(*args, **options)

    def to_representation(self, instance: Any) -> dict[str, Any]:
        """Return whole base units of the field's dimension, or what ``of`` makes of the instance, in both spellings."""
        found = self.of(instance)
        return {
            "base": found.base,
            "sd": found.sd,
            "unit": DIMENSIONS[found.dimension].base_unit,
            "text": _now("unknown") if found.base is None else show(found.base, found.dimension),
        }


class Named(Shape):
    """A thing by its identifier and its name."""

    uuid = serializers.UUIDField(help_text=_("Its identifier."))
    name = serializers.CharField(help_text=_("Its name."))


class Person(Shape):
    """A member of the workshop."""

    uuid = serializers.UUIDField(help_text=_("The membership that the journal names."))
    name = serializers.CharField(source="user", help_text=_("The person's name."))


class End(Shape):
    """One end of a movement: a vessel, or a boundary where matter enters or leaves.

    ``of`` makes the end's key of an instance: the vessel's identifier, or the boundary; names stand in the context.
    """

    vessel = serializers.UUIDField(allow_null=True, help_text=_("The vessel; null for a boundary."))
    name = serializers.CharField(help_text=_("The vessel's name, or the boundary: supplier, parts, air and so on."))

    def __init__(self, *args: Any, of: Callable[[Any], str] = str, **options: Any) -> None:
        self.of = of
        super().__init__(*args, **options)

    def to_representation(self, instance: Any) -> dict[str, Any]:
        """Return the end by its identifier and name."""
        key = self.of(instance)
        names: Mapping[str, str] = self.context["vessels"]
        return {"vessel": key, "name": names[key]} if key in names else {"vessel": None, "name": key}


class Hex(serializers.CharField):
    """Bytes in hex."""

    def to_representation(self, value: Any) -> str:
        """Return the hex digits."""
        return bytes(value).hex()


class ErrorRow(Shape):
    """One thing that is wrong."""

    field = serializers.CharField(
        help_text=_("The field, query parameter or header; empty where the whole request is meant.")
    )
    message = serializers.CharField(help_text=_("What is wrong, and what to do."))


class Errors(Shape):
    """Everything that is wrong, at once."""

    errors = ErrorRow(  # type: ignore[assignment]  # a field of the answer, not the serializer's own attribute
        many=True, help_text=_("One row for each thing that is wrong.")
    )


class Refusal(Errors):
    """A conflict with what is recorded, or something that may not be done."""

    reasons = serializers.ListField(
        child=serializers.CharField(help_text=_("One reason.")),
        required=False,
        help_text=_("Why this may not be done, if it may not: one sentence for each danger."),
    )


def choices_of(values: Iterable[str], help_text: Any, **options: Any) -> serializers.ChoiceField:
    """Return a field of an answer that holds one of the words."""
    return serializers.ChoiceField(choices=[(value, value) for value in values], help_text=help_text, **options)
