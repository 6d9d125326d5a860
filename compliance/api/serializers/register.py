"""Substances, products and their revisions."""

from typing import Any

from django.utils.text import format_lazy
from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.register.checks import LONGEST_GLOVES
from chemicals.register.hazards import MOST_STATEMENTS
from chemicals.register.models import Form, LimitKind, Per, Substance
from chemicals.register.selectors import get_makeup
from chemicals.science.ghs import MESSAGES, PICTOGRAMS, SIGNAL_WORDS, list_classes
from chemicals.science.identity import PACKING_GROUPS
from chemicals.science.reactivity import REACTS_AS
from compliance.api.fields import LONGEST_AMOUNT, Choice, Day, Flag, Identifier, Strict, Text, Words, rows
from compliance.api.serializers.base import Figure, Person, Shape, choices_of

KINDS_HELP = format_lazy(
    "{} {}.", _("One kind:"), "; ".join(f"{kind} ({meaning})" for kind, meaning in REACTS_AS.items())
)
STATEMENT_HELP = _("A hazard or precautionary statement, beginning with its code, such as H302; its text as typed.")
CLASS_HELP = _("One class with its category, by the short name that sheets print, such as Skin Corr. 1B.")
SYNONYM_HELP = _("One other name.")
CLASSES = [each.kind for each in list_classes()]


class MetalShare(Shape):
    """A metal of a substance."""

    metal = serializers.CharField(help_text=_("Symbol of the metal."))
    fraction = serializers.CharField(help_text=_("Grams of it per gram of the substance, as a decimal text."))


class Makeup(serializers.Serializer[Any]):
    """What follows from the formula."""

    molar_mass = serializers.CharField(allow_null=True, help_text=_("Grams per mole; null without a formula."))
    metals = MetalShare(many=True, help_text=_("The metals in it that a workshop balances."))

    def to_representation(self, instance: Substance) -> dict[str, Any]:
        """Return what follows from a substance's formula."""
        found = get_makeup(instance)
        return {
            "molar_mass": None if found.molar_mass is None else str(found.molar_mass),
            "metals": [{"metal": metal, "fraction": str(part)} for metal, part in found.metals.items()],
        }


class SubstanceShape(Shape):
    """A chemical species."""

    uuid = serializers.UUIDField(help_text=_("The substance's identifier."))
    name = serializers.CharField(help_text=_("Its name."))
    synonyms = serializers.ListField(
        child=serializers.CharField(help_text=SYNONYM_HELP), help_text=_("Other names by which it is known.")
    )
    cas_number = serializers.CharField(help_text=_("Its CAS number; empty where none was written."))
    ec_number = serializers.CharField(help_text=_("Its EC number; empty where none was written."))
    formula = serializers.CharField(help_text=_("Its formula; the metal content follows from it."))
    makeup = Makeup(source="*", help_text=_("What follows from the formula."))
    inert = serializers.BooleanField(help_text=_("Declared to react with nothing here: balanced by its formula."))


class StartersShape(Shape):
    """What was added."""

    added = SubstanceShape(many=True, help_text=_("The new substances; none if all of them were here."))


class SubstanceInput(Strict):
    """A new substance."""

    name = Text(max_length=120, help_text=_("A name that no other substance here has."))
    synonyms = Words(
        child=Text(max_length=120, help_text=SYNONYM_HELP),
        required=False,
        max_length=30,
        help_text=_("Other names by which it is known."),
    )
    cas_number = Text(required=False, allow_blank=True, max_length=12, help_text=_("Such as 7758-99-8."))
    ec_number = Text(required=False, allow_blank=True, max_length=9, help_text=_("Such as 231-847-6."))
    formula = Text(required=False, allow_blank=True, max_length=80, help_text=_("Such as CuSO4.5H2O."))
    inert = Flag(
        required=False, help_text=_("True if it reacts with nothing here: it is then balanced by its formula.")
    )


class SubstanceChange(SubstanceInput):
    """A correction of a substance."""

    name = Text(required=False, max_length=120, help_text=_("A name that no other substance here has."))


class LineShape(Shape):
    """One substance of a product."""

    substance = serializers.UUIDField(source="substance.uuid", help_text=_("The substance."))
    name = serializers.CharField(source="substance.name", help_text=_("Its name."))
    cas_number = serializers.CharField(source="substance.cas_number", help_text=_("Its CAS number."))
    formula = serializers.CharField(source="substance.formula", help_text=_("Its formula."))
    content = serializers.CharField(source="typed", help_text=_("The content as it was written."))
    amount = serializers.IntegerField(
        help_text=_("Micrograms of the substance per kilogram or litre of the product; of a range the middle.")
    )
    sd = serializers.IntegerField(
        help_text=_("Standard uncertainty of the amount: of a range its width over the root of 12; of a figure 0.")
    )
    per = choices_of(Per.values, _("What the amount refers to."))


class ExposureLimitShape(Shape):
    """An exposure limit of section 8 of the sheet."""

    substance = serializers.UUIDField(
        source="substance.uuid", default=None, allow_null=True, help_text=_("Of what; null for the product as a whole.")
    )
    kind = choices_of(LimitKind.values, _("What it is compared with."))
    value = serializers.CharField(help_text=_("The limit with its unit, as typed."))
    source = serializers.CharField(  # type: ignore[assignment]  # a field of the answer, not the serializer's own
        help_text=_("Where it stands, as typed.")
    )


class ContradictionShape(Shape):
    """Two parts of what was entered that do not go together. Nothing was changed, and nothing refused."""

    code = choices_of(MESSAGES, _("Which kind of contradiction it is."))
    message = serializers.CharField(help_text=_("What calls for what."))


class RevisionShape(Shape):
    """A product as it was known from a moment on."""

    uuid = serializers.UUIDField(source="product.uuid", help_text=_("The product's identifier, in all revisions."))
    name = serializers.CharField(source="product.name", help_text=_("The name on the label."))
    supplier = serializers.CharField(source="product.supplier", help_text=_("Who sells it."))
    revision = serializers.IntegerField(source="number", help_text=_("The number of this revision, counted from 1."))
    form = choices_of(Form.values, _("The physical form."))
    density = Figure(dimension="density", allow_null=True, help_text=_("The density; null where none was written."))
    ph_floor = Figure(
        dimension="ph",
        allow_null=True,
        help_text=_("Down to which pH the supplier's sheet lets the bath go; null where it does not say."),
    )
    complete = serializers.BooleanField(help_text=_("Whether the composition names every metal in it."))
    reactivity = serializers.ListField(
        child=choices_of(REACTS_AS, KINDS_HELP), help_text=_("What it reacts as, by the safety data sheet.")
    )
    hazard_classes = serializers.ListField(
        child=choices_of(CLASSES, CLASS_HELP), help_text=_("The hazard classes with their categories, as entered.")
    )
    signal_word = serializers.CharField(help_text=_("Danger, Warning or nothing, as entered."))
    pictograms = serializers.ListField(
        child=choices_of(PICTOGRAMS, _("One pictogram.")), help_text=_("The hazard pictograms, as entered.")
    )
    statements = serializers.ListField(
        child=serializers.CharField(help_text=STATEMENT_HELP), help_text=_("The hazard statements, as entered.")
    )
    contradictions = ContradictionShape(
        many=True, help_text=_("In what classes, statements, signal word and pictograms do not go together.")
    )
    limits = ExposureLimitShape(many=True, help_text=_("The exposure limits of section 8."))
    gloves = serializers.CharField(help_text=_("What section 8 says of gloves."))
    un_number = serializers.CharField(help_text=_("The four digits of the UN number; empty where none was written."))
    shipping_name = serializers.CharField(help_text=_("The proper shipping name, as typed."))
    transport_class = serializers.CharField(help_text=_("The class for transport with subsidiary ones, as typed."))
    packing_group = serializers.CharField(help_text=_("I, II, III or nothing."))
    transport_unclassified = serializers.BooleanField(
        help_text=_("Whether the sheet says that it is not classified for transport.")
    )
    supplier_telephone = serializers.CharField(help_text=_("The supplier's telephone, as in section 1 of the sheet."))
    safety_data_sheet = serializers.CharField(
        source="safety_data_sheet.sha256",
        default=None,
        allow_null=True,
        help_text=_("SHA-256 of the sheet: fetch it from attachments; null where there is none."),
    )
    sheet_language = serializers.CharField(help_text=_("The sheet's language by its tag (BCP 47), such as de."))
    sheet_date = serializers.DateField(allow_null=True, help_text=_("The revision date that stands on the sheet."))
    lines = LineShape(many=True, help_text=_("The composition."))
    created_at = serializers.DateTimeField(help_text=_("When this revision was written."))
    created_by = Person(help_text=_("Who wrote it."))


class LineInput(Strict):
    """One substance of a product."""

    substance = Identifier(help_text=_("A substance of this workshop."))
    content = Text(
        max_length=LONGEST_AMOUNT,
        help_text=_('Of the mass, or per litre: "98 %", "20-30 %", "< 1 %", ">= 95 %", "250 g/L".'),
    )


class ExposureLimitInput(Strict):
    """An exposure limit."""

    substance = Identifier(
        required=False, allow_null=True, help_text=_("Of what; left out for the product as a whole.")
    )
    kind = Choice(choices=LimitKind.choices, help_text=_("What it is compared with."))
    value = Text(max_length=LONGEST_AMOUNT, help_text=_('With its unit: "0.05 mg/m3" or "0.9 ppm".'))
    source = Text(  # type: ignore[assignment]  # a field of the body, not the serializer's own attribute
        max_length=200, help_text=_("Where it stands: the list and its year, as on the sheet.")
    )


class RevisionInput(Strict):
    """What is known of a product from now on; earlier revisions stay as they were."""

    form = Choice(choices=Form.choices, help_text=_("The physical form."))
    lines = rows(LineInput, most=50, required=False, help_text=_("The composition."))
    complete = Flag(required=False, help_text=_("Whether the composition names every metal in it; true if left out."))
    density = Text(
        required=False, allow_blank=True, max_length=LONGEST_AMOUNT, help_text=_('For example "1.84 g/cm3".')
    )
    ph_floor = Text(
        required=False,
        allow_blank=True,
        max_length=LONGEST_AMOUNT,
        help_text=_('Down to which pH the supplier\'s sheet lets the bath go, for example "3.5".'),
    )
    reactivity = Words(
        child=Choice(choices=list(REACTS_AS.items()), help_text=KINDS_HELP),
        required=False,
        help_text=_("What it reacts as, by the safety data sheet. It decides what it must never meet."),
    )
    hazard_classes = Words(
        child=Choice(choices=[(kind, kind) for kind in CLASSES], help_text=CLASS_HELP),
        required=False,
        help_text=_("As they stand in section 2.1 of the sheet."),
    )
    signal_word = Choice(
        choices=[(word, word) for word in SIGNAL_WORDS],
        required=False,
        allow_blank=True,
        help_text=_("As it stands on the sheet; empty for none."),
    )
    pictograms = Words(
        child=Choice(choices=[(code, code) for code in PICTOGRAMS], help_text=_("One pictogram.")),
        required=False,
        help_text=_("As they stand on the sheet."),
    )
    statements = Words(
        child=Text(max_length=300, help_text=STATEMENT_HELP),
        required=False,
        max_length=MOST_STATEMENTS,
        help_text=_("As they stand on the sheet."),
    )
    limits = rows(ExposureLimitInput, most=50, required=False, help_text=_("The exposure limits of section 8."))
    gloves = Text(
        required=False, allow_blank=True, max_length=LONGEST_GLOVES, help_text=_("What section 8 says of gloves.")
    )
    un_number = Text(required=False, allow_blank=True, max_length=10, help_text=_("Four digits, such as 1830."))
    shipping_name = Text(required=False, allow_blank=True, max_length=200, help_text=_("As in section 14."))
    transport_class = Text(
        required=False, allow_blank=True, max_length=40, help_text=_("With subsidiary classes: 8 (6.1).")
    )
    packing_group = Choice(
        choices=[(group, group) for group in PACKING_GROUPS],
        required=False,
        allow_blank=True,
        help_text=_("As in section 14; empty for none."),
    )
    transport_unclassified = Flag(
        required=False, help_text=_("True if the sheet says that it is not classified for transport.")
    )
    supplier_telephone = Text(
        required=False, allow_blank=True, max_length=60, help_text=_("As in section 1 of the sheet; for labels.")
    )
    safety_data_sheet = Text(
        required=False, allow_null=True, max_length=64, help_text=_("SHA-256 of a PDF uploaded to attachments.")
    )
    sheet_language = Text(
        required=False, allow_blank=True, max_length=35, help_text=_("By its tag (BCP 47): de, en, fr-CH.")
    )
    sheet_date = Day(required=False, allow_null=True, help_text=_("The revision date that stands on the sheet."))


class ProductInput(RevisionInput):
    """A new product with its first revision."""

    name = Text(max_length=120, help_text=_("The name as it stands on the label."))
    supplier = Text(required=False, allow_blank=True, max_length=120, help_text=_("Who sells it."))
