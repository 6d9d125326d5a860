"""The form of a calculation, built from its description."""

from typing import Any

from django import forms

from chemicals.science.calculation import Calculation, InputField
from compliance.web.forms.base import WebForm


class CalculationForm(WebForm):
    """Fields of a calculation as typed; the calculation itself says what is wrong with them."""

    def __init__(self, calculation: Calculation, data: Any = None) -> None:
        super().__init__(data)
        self.names = [spec.name for spec in calculation.inputs]
        for spec in calculation.inputs:
            self.fields[spec.name] = _build(spec)
            self.fields[spec.name].widget.is_required = spec.required

    def given(self) -> dict[str, str]:
        """Return what was typed."""
        return {name: str(self.data.get(name, "")) for name in self.names}


def _build(spec: InputField) -> forms.Field:
    if spec.kind == "choice":
        choices = [(word, word) for word in spec.choices]
        return forms.ChoiceField(
            choices=choices, label=spec.label, help_text=spec.help, required=False, initial=spec.default
        )
    example = f" {spec.example}" if spec.example not in spec.help else ""
    attrs = {"autocomplete": "off", "autocapitalize": "off", "spellcheck": "false"}
    return forms.CharField(
        label=spec.label,
        help_text=f"{spec.help}{f' For example{example}.' if example else ''}",
        required=False,
        widget=forms.TextInput(attrs=attrs),
    )
