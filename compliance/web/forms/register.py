"""Forms of the register: substances, products, revisions, stock containers."""

from functools import partial
from typing import Any

from django import forms
from django.utils.functional import lazy
from django.utils.text import format_lazy
from django.utils.translation import gettext_lazy as _

from chemicals.register.checks import LONGEST_GLOVES, TRANSPORT
from chemicals.register.models import Form, LimitKind, ProductRevision, Substance
from chemicals.register.selectors import list_substances_for
from chemicals.register.services import LimitInput, LineInput, RevisionInput
from chemicals.science.ghs import SIGNAL_WORDS, list_classes, split_codes
from chemicals.science.identity import PACKING_GROUPS
from chemicals.science.quantity import show
from chemicals.science.reactivity import REACTS_AS
from chemicals.workshop.models import Membership
from chemicals.workshop.selectors import list_places_for
from compliance.documents.pictograms import SYMBOLS
from compliance.documents.words import symbol_name
from compliance.web.forms.base import Group, Row, Rows, WebForm
from compliance.web.forms.fields import (
    DayField,
    FlagField,
    LineField,
    SheetField,
    ThingField,
    WordField,
    WordsField,
)  # fmt: skip

REACTIVITY = [(code, meaning) for code, meaning in REACTS_AS.items()]


def list_lines(text: str) -> tuple[str, ...]:
    """Return the lines of a text in which something stands."""
    return tuple(line.strip() for line in text.splitlines() if line.strip())


class SubstanceForm(WebForm):
    """A chemical species."""

    name = LineField(label=_("Name"), max_length=120, help_text=_("For example copper sulfate pentahydrate."))
    formula = LineField(
        label=_("Formula"),
        required=False,
        max_length=80,
        help_text=_("For example CuSO4.5H2O. Without it, its metal cannot be counted."),
    )
    cas_number = LineField(label=_("CAS number"), required=False, max_length=20, help_text=_("For example 7758-99-8."))
    ec_number = LineField(label=_("EC number"), required=False, max_length=20, help_text=_("For example 231-847-6."))
    synonyms = LineField(
        label=_("Other names"), required=False, lines=3, help_text=_("One in each line; each of them finds it.")
    )
    inert = FlagField(
        label=_("It reacts with nothing here"),
        help_text=_("Then it is balanced by its formula, beside the metals: sodium sulfate, boric acid."),
    )

    def said(self) -> dict[str, Any]:
        """Return what services take."""
        return {**self.cleaned_data, "synonyms": list_lines(self.cleaned_data["synonyms"])}


def start_substance(row: Substance) -> dict[str, Any]:
    """Return the first values of a form that corrects a substance."""
    names = ("name", "formula", "cas_number", "ec_number", "inert")
    return {**{name: getattr(row, name) for name in names}, "synonyms": "\n".join(row.synonyms)}


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
        help_text=_("One in each line, the code first: H302 Harmful if swallowed. Codes alone may share a line."),
    )
    reactivity = WordsField(
        REACTIVITY,
        label=_("Reacts as"),
        help_text=_("What section 10 of the sheet says. This decides what it must never meet."),
    )

    def hazards(self) -> dict[str, Any]:
        """Return signal word, pictograms, statements and reactivity as services take them."""
        cleaned = self.cleaned_data
        return {
            "signal_word": cleaned["signal_word"],
            "pictograms": tuple(cleaned["pictograms"]),
            "statements": tuple(part for line in list_lines(cleaned["statements"]) for part in split_codes(line)),
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
            label=_("Content"),
            max_length=40,
            help_text=_("Of the mass, or per litre: 98 %, 20-30 %, < 1 %, 250 g/L."),
        )


def _class_choices() -> list[tuple[str, Any]]:
    """Return the classes under the names of their chapters, each with its categories."""
    chapters: dict[str, list[tuple[str, str]]] = {}
    for each in list_classes():
        chapters.setdefault(each.hazard_class, []).append((each.kind, each.kind))
    return list(chapters.items())


class ClassRow(Row):
    """A hazard class with its category."""

    def __init__(self, **kwargs: Any) -> None:
        super().__init__(**kwargs)
        self.fields["kind"] = WordField(_class_choices(), label=_("Class and category"))


class LimitRow(Row):
    """An exposure limit."""

    def __init__(self, things: list[tuple[Any, str]], **kwargs: Any) -> None:
        super().__init__(**kwargs)
        whole = _("the product as a whole")
        self.fields["substance"] = ThingField(things, label=_("Substance"), required=False, empty=whole, initial="")
        self.fields["kind"] = WordField(LimitKind.choices, label=_("Kind"))
        self.fields["value"] = LineField(
            label=_("Limit"), max_length=40, help_text=_("With its unit: 0.05 mg/m3 or 0.9 ppm.")
        )
        self.fields["source"] = LineField(
            label=_("Where it stands"), max_length=200, help_text=_("The list, its year: as on the sheet.")
        )


class RevisionForm(HazardForm):
    """What is known of a product, as it stands on its safety data sheet."""

    field_order = ("name", "supplier", "form", "density", "ph_floor")
    groups = (
        Group("composition", _("What is in it (section 3 of the sheet)"), ("lines", "complete")),
        Group(
            "hazards",
            _("Hazards (sections 2 and 10)"),
            ("hazard_classes", "signal_word", "pictograms", "statements", "reactivity"),
        ),
        Group("exposure", _("Exposure limits and gloves (section 8)"), ("limits", "gloves"), folded=True),
        Group(
            "transport",
            _("Transport (section 14)"),
            ("un_number", "shipping_name", "transport_class", "packing_group", "transport_unclassified"),
            folded=True,
        ),
        Group("sheet", _("The sheet itself"), ("sheet", "sheet_language", "sheet_date", "supplier_telephone")),
    )
    form = WordField(Form.choices, label=_("Physical form"))
    density = LineField(
        label=_("Density"), required=False, max_length=40, help_text=_("Of a liquid, for example 1.20 g/mL.")
    )
    ph_floor = LineField(
        label=_("Lowest pH"),
        required=False,
        max_length=20,
        help_text=_("Only if the supplier's sheet states down to which pH the bath may go, for example 3.5."),
    )

    def __init__(self, member: Membership, *args: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.substances = {row.uuid: row for row in list_substances_for(member)}
        things = [(row.uuid, row.name) for row in self.substances.values()]
        hazards = {name: self.fields.pop(name) for name in HazardForm.base_fields}
        hazards["statements"].label = _("Hazard and precautionary statements")
        self.add_rows(Rows("lines", _("Composition"), "", partial(LineRow, things), blank=3))
        self.fields["complete"] = FlagField(
            label=_("This list names every metal in it"),
            help_text=_("Without this, every metal not named is unknown wherever it is poured in."),
        )
        self.add_rows(Rows("hazard_classes", _("Hazard class"), _("As section 2.1 has them."), ClassRow, blank=3))
        self.fields.update(hazards)
        self.add_rows(Rows("limits", _("Exposure limit"), "", partial(LimitRow, things), blank=1))
        self.fields["gloves"] = LineField(
            label=_("Gloves"), required=False, lines=2, max_length=LONGEST_GLOVES, help_text=_("As on the sheet.")
        )
        self.fields.update(_transport_fields())
        self.fields["sheet"] = SheetField(label=_("Safety data sheet"), help_text=_("The PDF from the supplier."))
        self.fields["sheet_language"] = LineField(
            label=_("Language of the sheet"), required=False, max_length=35, help_text=_("By its tag: de, en, fr-CH.")
        )
        self.fields["sheet_date"] = DayField(label=_("Revision date of the sheet"), required=False)
        self.fields["supplier_telephone"] = LineField(
            label=_("Supplier's telephone"),
            required=False,
            max_length=60,
            help_text=_("As in section 1 of the sheet; printed on the labels of its containers."),
        )

    def to_revision(self, sheet: Any) -> RevisionInput:
        """Return the revision with its kept sheet."""
        cleaned = self.cleaned_data
        lines, classes, limits = (
            [row.cleaned_data for row in self.rows[name].filled] for name in ("lines", "hazard_classes", "limits")
        )
        as_typed = ("form", "complete", "density", "ph_floor", "gloves", *TRANSPORT, "transport_unclassified")
        return RevisionInput(
            lines=tuple(LineInput(self.substances[line["substance"]], line["content"]) for line in lines),
            hazard_classes=tuple(row["kind"] for row in classes),
            limits=tuple(
                LimitInput(row["kind"], row["value"], row["source"], self.substances.get(row["substance"]))
                for row in limits
            ),
            safety_data_sheet=sheet,
            sheet_language=cleaned["sheet_language"],
            sheet_date=cleaned["sheet_date"],
            supplier_telephone=cleaned["supplier_telephone"],
            **{name: cleaned[name] for name in as_typed},
            **self.hazards(),
        )


def _transport_fields() -> dict[str, Any]:
    none = [("", _("none"))]
    return {
        "un_number": LineField(label=_("UN number"), required=False, max_length=10, help_text=_("For example 1830.")),
        "shipping_name": LineField(label=_("Proper shipping name"), required=False, max_length=200),
        "transport_class": LineField(
            label=_("Class"), required=False, max_length=40, help_text=_("With subsidiary classes: 8 (6.1).")
        ),
        "packing_group": forms.ChoiceField(
            label=_("Packing group"), required=False, choices=[*none, *((each, each) for each in PACKING_GROUPS)]
        ),
        "transport_unclassified": FlagField(label=_("The sheet says: not classified for transport")),
    }


class ProductForm(RevisionForm):
    """A product with its first revision."""

    name = LineField(label=_("Name"), max_length=120, help_text=_("As on the label."))
    supplier = LineField(label=_("Supplier"), required=False, max_length=120)


def start_from(revision: ProductRevision) -> dict[str, Any]:
    """Return the first values of a form for the next revision: those of this one."""
    as_kept = ("form", "complete", "signal_word", "pictograms", "reactivity", "gloves", *TRANSPORT)
    more = ("transport_unclassified", "sheet_language", "sheet_date", "supplier_telephone")
    return {
        "initial": {
            **{name: getattr(revision, name) for name in (*as_kept, *more)},
            "density": "" if revision.density is None else show(revision.density, "density", digits=6),
            "ph_floor": "" if revision.ph_floor is None else show(revision.ph_floor, "ph", digits=6),
            "statements": "\n".join(revision.statements),
        },
        "initial_rows": {
            "lines": [{"substance": str(line.substance.uuid), "content": line.typed} for line in revision.lines.all()],
            "hazard_classes": [{"kind": kind} for kind in revision.hazard_classes],
            "limits": [
                {
                    "substance": "" if limit.substance is None else str(limit.substance.uuid),
                    "kind": limit.kind,
                    "value": limit.value,
                    "source": limit.source,
                }
                for limit in revision.limits.all()
            ],
        },
    }


def place_field(member: Membership) -> ThingField:
    """Return the field that asks where a vessel stands."""
    places = [(place.uuid, place.name) for place in list_places_for(member)]
    return ThingField(places, label=_("Place"), required=False)
