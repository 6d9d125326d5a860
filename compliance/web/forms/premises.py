"""Forms of labels, of the rule for the list of chemicals, and of the numbers that are called in an emergency."""

import re
from datetime import date
from typing import Any

from django import forms
from django.utils.text import format_lazy
from django.utils.translation import gettext_lazy as _

from chemicals.workshop.services import MOST_EMERGENCY_NUMBERS, NumberInput
from compliance.documents.stock import ALL_STOCKS, PAGES
from compliance.premises.rules import list_rules
from compliance.premises.services import LONGEST_NOTE, MOST_LABELS
from compliance.web.forms.base import Row, Rows, WebForm
from compliance.web.forms.fields import DayField, LineField, WholeField, WordField

STOCKS = [
    (stock.name, format_lazy(_("{name}: {width:.0f} × {height:.0f} mm"), **stock._asdict())) for stock in ALL_STOCKS
]
MOST_ON_A_SHEET = max(stock.labels for stock in ALL_STOCKS)


class StockForm(WebForm):
    """Which sheet of labels lies in the printer, from where on it is free, and how many of each."""

    key = forms.UUIDField(widget=forms.HiddenInput)
    stock = WordField(STOCKS, label=_("Label stock"), help_text=_("As it lies in the printer; print at 100 %."))
    start = WholeField(
        1,
        MOST_ON_A_SHEET,
        label=_("First free label on the sheet"),
        initial=1,
        help_text=_("1 is top left; count along the rows."),
    )
    copies = WholeField(1, MOST_LABELS, label=_("Of each"), initial=1)


class LabelsForm(StockForm):
    """What shall have a label."""

    codes = LineField(
        label=_("Codes"),
        lines=4,
        help_text=_("The short codes of containers and tanks, as many as you like, with blanks or in lines."),
    )
    field_order = ("codes", "stock", "start", "copies")

    def list_codes(self) -> list[str]:
        """Return the codes as typed, each as often as it was."""
        return [code for code in re.split(r"[\s,;]+", self.cleaned_data["codes"]) if code]


class DecantForm(StockForm):
    """What else is to be known of what was decanted."""

    note = LineField(
        label=_("Note"), required=False, max_length=LONGEST_NOTE, help_text=_("For example 1:10 in water.")
    )
    field_order = ("note", "stock", "start", "copies")


class PaperForm(WebForm):
    """On which paper; the key makes a second press of the button harmless."""

    key = forms.UUIDField(widget=forms.HiddenInput)
    paper_size = WordField([(size, size) for size in PAGES], label=_("Paper"), initial="A4")


class RuleForm(WebForm):
    """The rule whose columns the list has."""

    rule = WordField([(rule.code, str(rule)) for rule in list_rules()], label=_("Rule"))
    checked_on = DayField(
        label=_("Compared on"),
        help_text=_("The day on which somebody here compared the line above with the law that holds for you."),
    )
    citation = LineField(
        label=_("Citation"),
        required=False,
        max_length=200,
        help_text=_("Where you read it. Printed on the list; needed where the line was written from memory."),
    )

    def __init__(self, today: date, data: Any = None, **kwargs: Any) -> None:
        super().__init__(data, **kwargs)
        self.fields["checked_on"].initial = today


class NumberRow(Row):
    """Whom to call."""

    def __init__(self, **kwargs: Any) -> None:
        super().__init__(**kwargs)
        self.fields["label"] = LineField(label=_("Whom to call"), max_length=80)
        self.fields["number"] = LineField(
            label=_("Telephone"), max_length=60, help_text=_("As it is dialled from here.")
        )


class NumbersForm(WebForm):
    """The numbers that the emergency sheet prints, in this order."""

    def __init__(self, numbers: list[dict[str, str]], data: Any = None) -> None:
        super().__init__(data, initial_rows={"numbers": numbers})
        most = _("At most {most}, the most important first.")
        self.add_rows(Rows("numbers", _("Number"), format_lazy(most, most=MOST_EMERGENCY_NUMBERS), NumberRow, blank=2))

    def list_numbers(self) -> list[NumberInput]:
        """Return what was written, in order."""
        return [NumberInput(**form.cleaned_data) for form in self.rows["numbers"].filled]
