"""The form that looks for products and containers: it makes an address that can be kept and passed on."""

from collections.abc import Iterable
from typing import Any
from urllib.parse import urlencode

from django import forms
from django.forms.boundfield import BoundField
from django.http import QueryDict
from django.utils.translation import gettext_lazy as _

from chemicals.register.selectors import list_suppliers_for
from chemicals.workshop.models import Membership
from chemicals.workshop.selectors import list_places_for
from compliance.premises.filters import FILTERS, LONGEST_TEXT, Wanted
from compliance.web.forms.base import Shown
from compliance.web.forms.fields import LineField, ThingField, WordField

TYPED = forms.TextInput(
    attrs={
        "type": "search",
        "autocomplete": "off",
        "autocapitalize": "off",
        "spellcheck": "false",
        "hx-trigger": "input changed delay:200ms, search",
        "hx-include": "closest form",
    }
)
"""The box that looks while somebody types; without scripts the form's button does."""


class FindForm(Shown):
    """What to look for. Whatever is left empty does not matter. Two queries."""

    def __init__(self, member: Membership, data: QueryDict, address: str) -> None:
        super().__init__(data)
        places = list_places_for(member).values_list("uuid", "name")
        suppliers = [(name, name) for name in list_suppliers_for(member)]
        any_of = _("all")
        help_text = _("Words of a name, supplier, substance, other name, place; CAS or EC number, formula, code.")
        box = LineField(label=_("Look for"), help_text=help_text, max_length=LONGEST_TEXT, required=False, widget=TYPED)
        box.widget.attrs["hx-get"] = address
        self.fields |= {
            "q": box,
            "place": ThingField(places, label=_("Place"), empty=any_of, required=False),
            "supplier": WordField(suppliers, label=_("Supplier"), empty=any_of, required=False),
        }
        for name, each in FILTERS.items():
            empty = _("all that is not gone") if name == "state" else any_of
            choices: Iterable[tuple[str, Any]] = each.choices.items()
            self.fields[name] = WordField(choices, label=each.label, empty=empty, required=False)

    @property
    def filters(self) -> list[BoundField]:
        """Return everything but the box for words."""
        return [self[name] for name in self.fields if name != "q"]

    @property
    def chosen(self) -> list[BoundField]:
        """Return what is chosen, besides the words."""
        return [field for field in self.filters if field.value()]

    @property
    def has_wrong_filters(self) -> bool:
        """Say whether anything that is chosen is wrong: then it must be seen."""
        return any(field.errors for field in self.filters)

    @property
    def kept(self) -> str:
        """Return what was chosen as an address keeps it."""
        pairs: Iterable[tuple[str, Any]] = ((name, self.data.get(name)) for name in self.fields)
        return urlencode([(name, value) for name, value in pairs if value])

    @property
    def wanted(self) -> Wanted:
        """Return what is looked for."""
        return Wanted.of(self.cleaned_data)
