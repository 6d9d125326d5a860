"""The form of a calculation, built from its description."""

from typing import Any

from django import forms
from django.utils.translation import gettext_lazy as _

from chemicals.science.calculation import Calculation, InputField
from compliance.web.forms.base import Group, WebForm


class CalculationForm(WebForm):
    """Fields of a calculation as typed; the calculation itself says what is wrong with them."""

    def __init__(self, calculation: Calculation, data: Any = None) -> None:
        super().__init__(data)
        self.specs = calculation.inputs
        for spec in calculation.inputs:
            for name, part in _parts(spec).items():
                self.fields[name] = _build(part)
                self.fields[name].widget.is_required = part.required
        self.groups = [
            Group(spec.name, spec.label, [*_parts(spec)], folded=True, help=spec.help)
            for spec in self.specs
            if spec.parts
        ]

    def given(self) -> dict[str, Any]:
        """Return what was typed, the parts of a group by their own names."""
        return {spec.name: self._typed(spec) for spec in self.specs}

    def _typed(self, spec: InputField) -> Any:
        if spec.parts:
            return {part.name: str(self.data.get(name, "")) for name, part in _parts(spec).items()}
        return str(self.data.get(spec.name, ""))


def _parts(spec: InputField) -> dict[str, InputField]:
    """Return what is typed for an input, by the names of the form: a field, or each part of a group."""
    return {f"{spec.name}.{part.name}": part for part in spec.parts} or {spec.name: spec}


def _build(spec: InputField) -> forms.Field:
    if spec.kind == "choice":
        choices = [*([("", _("Choose"))] if spec.required else []), *((word, word) for word in spec.choices)]
        return forms.ChoiceField(
            choices=choices, label=spec.label, help_text=spec.help, required=False, initial=spec.default
        )
    helps = [spec.help]
    if spec.example not in spec.help:
        helps.append(_("For example %s.") % spec.example)
    if spec.default is not None:
        helps.append(_("Left empty: %s.") % spec.default)
    attrs = {"autocomplete": "off", "autocapitalize": "off", "spellcheck": "false"}
    return forms.CharField(
        label=spec.label,
        help_text=" ".join(map(str, helps)),
        required=False,
        widget=forms.TextInput(attrs=attrs),
    )
