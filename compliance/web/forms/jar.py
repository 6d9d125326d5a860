"""The form of containers that come in."""

from collections.abc import Mapping
from datetime import date
from typing import Any
from uuid import UUID

from django import forms
from django.forms.boundfield import BoundField
from django.utils.text import format_lazy
from django.utils.translation import gettext_lazy as _

from chemicals.ledger.naming import LONGEST, list_free_names
from chemicals.register.models import Form, Product
from chemicals.register.selectors import get_product_for, list_products_for
from chemicals.workshop.errors import FieldError, InvalidInputError
from chemicals.workshop.models import Membership
from chemicals.workshop.selectors import get_place_for
from compliance.clearance.receiving import LONGEST_LOT, MOST_ALIKE, JarInput, NewProductInput
from compliance.web.forms.base import Group, Rows, WebForm
from compliance.web.forms.fields import AmountField, DayField, LineField, ThingField, WholeField, WordField
from compliance.web.forms.register import place_field

NEW = {f"new_product.{name}": f"new_{name}" for name in ("name", "supplier", "form")}
"""What the service calls the parts of a new product, and what the form does."""


MOST_OFFERED = 300
"""Products of a list to choose from."""


class JarForm(WebForm):
    """Containers of one product, as they came in."""

    key = forms.UUIDField(widget=forms.HiddenInput)
    too_many = False
    """Whether the register holds too many products for a list on a phone."""

    def __init__(self, member: Membership, today: date, data: Any = None, **kwargs: Any) -> None:
        super().__init__(data, **kwargs)
        self.member = member
        self.products = self._list_offered()
        self.groups = (
            Group("new", _("It is not in the register yet"), tuple(NEW.values()), folded=bool(self.products)),
            Group("more", _("Opened before, or a size to keep in mind"), ("opened_on", "capacity"), folded=True),
        )
        self.fields.update({**self._product_fields(), **self._container_fields(today)})

    def _list_offered(self) -> dict[str, Product]:
        """Return what can be chosen: every product, or of too many only the one that is chosen already."""
        rows = list(list_products_for(self.member)[: MOST_OFFERED + 1])
        if len(rows) > MOST_OFFERED:
            self.too_many = True
            rows = _find(self.member, self.data if self.is_bound else self.initial)
        return {str(row.uuid): row for row in rows}

    def _product_fields(self) -> dict[str, forms.Field]:
        products = [(row.uuid, f"{row.name} · {row.supplier}".rstrip(" ·")) for row in self.products.values()]
        return {
            "product": ThingField(products, label=_("Product"), required=False, empty=_("Choose, or a new one below")),
            "new_name": LineField(label=_("Name of the product"), required=False, max_length=120),
            "new_supplier": LineField(label=_("Supplier"), required=False, max_length=120),
            "new_form": WordField(
                Form.choices,
                label=_("Physical form"),
                required=False,
                help_text=_("All else is entered later. Until then it counts as something that nobody can name."),
            ),
        }

    def _container_fields(self, today: date) -> dict[str, forms.Field]:
        return {
            "amount": AmountField(
                ["mass", "volume"],
                example="1 kg",
                label=_("Amount in each"),
                required=False,
                help_text=_("As on the label: 1 kg, 2.5 L. Empty: nothing is in it yet."),
            ),
            "count": WholeField(1, MOST_ALIKE, label=_("How many alike"), initial=1),
            "name": LineField(
                label=_("Name of the container"), required=False, max_length=LONGEST, help_text=self._name_help()
            ),
            "place": place_field(self.member),
            "lot": LineField(label=_("Lot"), required=False, max_length=LONGEST_LOT),
            "received_on": DayField(label=_("Received on"), initial=today),
            "expires_on": DayField(label=_("Keeps until"), required=False),
            "opened_on": DayField(label=_("Opened on"), required=False),
            "capacity": AmountField(["volume"], example="2.5 L", label=_("Holds at most"), required=False),
        }

    def _name_help(self) -> Any:
        """Say how it is called if nothing is written. It stands not in the field: another product may be chosen."""
        chosen = self.products.get(str(self.initial.get("product")))
        if chosen is None:
            return _("Empty: as the product, with the next free number. Several are numbered.")
        suggested = next(list_free_names(self.member, chosen.name))
        return format_lazy(_("Empty: {name}. Several are numbered."), name=suggested)

    @property
    def product_parts(self) -> list[BoundField]:
        """Return what is asked first."""
        return [self["product"]]

    @property
    def main_parts(self) -> list[BoundField | Rows]:
        """Return what everybody is asked of the containers."""
        return [part for part in super().main_parts if part.name != "product"]

    def clean(self) -> dict[str, Any]:
        """Refuse a jar of nothing together with all else that is wrong."""
        said: dict[str, Any] = super().clean() or self.cleaned_data
        if not any(self.data.get(name) for name in ("product", *NEW.values())):
            self.add_error("product", _("Choose the product, or write a new one."))
        return said

    def to_jar(self) -> JarInput:
        """Return what came in."""
        said = self.cleaned_data
        names = ("name", "count", "amount", "lot", "received_on", "opened_on", "expires_on")
        return JarInput(
            product=said["product"] and get_product_for(self.member, said["product"]),
            new_product=self._new_product(),
            place=said["place"] and get_place_for(self.member, said["place"]),
            capacity=said["capacity"] and said["capacity"].base,
            **{name: said[name] for name in names},
        )

    def _new_product(self) -> NewProductInput | None:
        name, supplier, form = (self.cleaned_data[name] for name in NEW.values())
        return NewProductInput(name=name, supplier=supplier, form=form) if name or supplier or form else None

    def add_domain_errors(self, error: InvalidInputError) -> None:
        own = [FieldError(NEW.get(each.field, each.field), each.message) for each in error.errors]
        super().add_domain_errors(InvalidInputError(own))


def _find(member: Membership, said: Mapping[str, Any]) -> list[Product]:
    """Return the product that is said, if it is one of the workshop's."""
    try:
        chosen = UUID(str(said.get("product")))
    except ValueError:
        return []
    return list(list_products_for(member).filter(uuid=chosen))
