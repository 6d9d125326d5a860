"""Forms of the register: substances, products, revisions, stock containers."""

from functools import partial
from typing import Any

from django import forms
from django.utils.functional import lazy
from django.utils.text import format_lazy
from django.utils.translation import gettext_lazy as _

from chemicals.register.models import Form, ProductRevision
from chemicals.register.selectors import list_substances_for
from chemicals.register.services import LineInput, RevisionInput
from chemicals.science.ghs import SIGNAL_WORDS
from chemicals.science.quantity import show
from chemicals.science.reactivity import REACTS_AS
from chemicals.workshop.models import Membership
from chemicals.workshop.selectors import list_places_for
from compliance.documents.pictograms import SYMBOLS
from compliance.documents.words import symbol_name
from compliance.web.forms.base import Row, Rows, WebForm
from compliance.web.forms.fields import (
    AmountField,
    DayField,
    FlagField,
    LineField,
    SheetField,
    ThingField,
    WordField,
    WordsField,
)  # fmt: skip

REACTIVITY = [(code, meaning) for code, meaning in REACTS_AS.items()]


class SubstanceForm(WebForm):
    """A chemical species."""

    name = LineField(label=_("Name"), max_length=120, help_text=_("For example copper sulfate pentahydrate."))
    formula = LineField(
        label=_("Formula"),
        required=False,
        max_length=80,
        help_text=_("For example CuSO4.5H2O. Without it, its metal cannot be counted."),
    )
    cas_number = LineField(label=_("CAS number"), required=False, max_length=12, help_text=_("For example 7758-99-8."))
    inert = FlagField(
        label=_("It reacts with nothing here"),
        help_text=_("Then it is balanced by its formula, beside the metals: sodium sulfate, boric acid."),
    )


class HazardForm(WebForm):
    """Hazards as they are entered: words and symbols of the UN standard, what it reacts as."""

    signal_word = forms.ChoiceField(
        label=_("Signal word"), required=False, choices=[(word, word or _("none")) for word in SIGNAL_WORDS]
    )
    pictograms = WordsField(
        [(code, format_lazy("{}: {}", code, lazy(symbol_name, str)(code))) for code in SYMBOLS],
        label=_("Pictograms"),
    )
    statements = LineField(
        label=_("Hazard statements"),
        required=False,
        lines=4,
        help_text=_("One in each line, the code first: H302 Harmful if swallowed."),
    )
    reactivity = WordsField(
        REACTIVITY,
        label=_("Reacts as"),
        help_text=_("What section 10 of the sheet says. This decides what it must never meet."),
    )

    def hazards(self) -> dict[str, Any]:
        """Return signal word, pictograms, statements and reactivity as services take them."""
        cleaned = self.cleaned_data
        lines = [line.strip() for line in cleaned["statements"].splitlines()]
        return {
            "signal_word": cleaned["signal_word"],
            "pictograms": tuple(cleaned["pictograms"]),
            "statements": tuple(line for line in lines if line),
            "reactivity": tuple(cleaned["reactivity"]),
        }


class LineRow(Row):
    """A substance in a product."""

    def __init__(self, things: list[tuple[Any, str]], **kwargs: Any) -> None:
        super().__init__(**kwargs)
        self.fields["substance"] = ThingField(
            things,
            label=_("Substance"),
            initial="",
            missing=_("No substance yet. Add one on the page Substances."),
        )
        self.fields["content"] = LineField(
            label=_("Content"), max_length=40, help_text=_("Of the mass, or per litre: 98 % or 250 g/L.")
        )


class RevisionForm(HazardForm):
    """What is known of a product, as it stands on its safety data sheet."""

    field_order = ("name", "supplier", "form", "density")
    form = WordField(Form.choices, label=_("Physical form"))
    density = LineField(
        label=_("Density"), required=False, max_length=40, help_text=_("Of a liquid, for example 1.20 g/mL.")
    )

    def __init__(self, member: Membership, *args: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.substances = {row.uuid: row for row in list_substances_for(member)}
        things = [(row.uuid, row.name) for row in self.substances.values()]
        hazards = {name: self.fields.pop(name) for name in HazardForm.base_fields}
        self.add_rows(Rows("lines", _("Composition"), _("Section 3 of the sheet."), partial(LineRow, things), blank=3))
        self.fields["complete"] = FlagField(
            label=_("This list names every metal in it"),
            help_text=_("Without this, every metal not named is unknown wherever it is poured in."),
        )
        self.fields.update(hazards)
        self.fields["sheet"] = SheetField(label=_("Safety data sheet"), help_text=_("The PDF from the supplier."))
        self.fields["sheet_date"] = DayField(label=_("Revision date of the sheet"), required=False)

    def to_revision(self, sheet: Any) -> RevisionInput:
        """Return the revision with its kept sheet."""
        cleaned = self.cleaned_data
        lines = [row.cleaned_data for row in self.rows["lines"].filled]
        return RevisionInput(
            form=cleaned["form"],
            lines=tuple(LineInput(self.substances[line["substance"]], line["content"]) for line in lines),
            complete=cleaned["complete"],
            density=cleaned["density"],
            safety_data_sheet=sheet,
            sheet_date=cleaned["sheet_date"],
            **self.hazards(),
        )


class ProductForm(RevisionForm):
    """A product with its first revision."""

    name = LineField(label=_("Name"), max_length=120, help_text=_("As on the label."))
    supplier = LineField(label=_("Supplier"), required=False, max_length=120)


def start_from(revision: ProductRevision) -> dict[str, Any]:
    """Return the first values of a form for the next revision: those of this one."""
    density = revision.density
    return {
        "initial": {
            "form": revision.form,
            "density": "" if density is None else show(density, "density", digits=6),
            "complete": revision.complete,
            "signal_word": revision.signal_word,
            "pictograms": revision.pictograms,
            "statements": "\n".join(revision.statements),
            "reactivity": revision.reactivity,
            "sheet_date": revision.sheet_date,
        },
        "initial_rows": {
            "lines": [{"substance": str(line.substance.uuid), "content": line.typed} for line in revision.lines.all()]
        },
    }


class StockForm(WebForm):
    """A container of a product."""

    def __init__(self, member: Membership, data: Any = None, *, name: str = "") -> None:
        super().__init__(data, initial={"name": name})
        self.fields["name"] = LineField(label=_("Name"), max_length=80, help_text=_("As written on the container."))
        self.fields["place"] = place_field(member)
        self.fields["capacity"] = AmountField(["volume"], example="2.5 L", label=_("Holds at most"), required=False)


def place_field(member: Membership) -> ThingField:
    """Return the field that asks where a vessel stands."""
    places = [(place.uuid, place.name) for place in list_places_for(member)]
    return ThingField(places, label=_("Place"), required=False)
