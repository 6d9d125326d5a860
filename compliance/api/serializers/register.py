"""Substances, products and their revisions."""

from django.utils.text import format_lazy
from django.utils.translation import gettext_lazy as _
from rest_framework import serializers

from chemicals.register.models import Form, Per
from chemicals.science.ghs import PICTOGRAMS, SIGNAL_WORDS
from chemicals.science.reactivity import REACTS_AS
from compliance.api.fields import LONGEST_AMOUNT, Choice, Day, Flag, Identifier, Strict, Text, Words, rows
from compliance.api.serializers.base import Figure, Person, Shape, choices_of

KINDS_HELP = format_lazy(
    "{} {}.", _("One kind:"), "; ".join(f"{kind} ({meaning})" for kind, meaning in REACTS_AS.items())
)
STATEMENT_HELP = _("A hazard statement, beginning with its code, such as H302.")


class SubstanceShape(Shape):
    """A chemical species."""

    uuid = serializers.UUIDField(help_text=_("The substance's identifier."))
    name = serializers.CharField(help_text=_("Its name."))
    cas_number = serializers.CharField(help_text=_("Its CAS number; empty where none was written."))
    formula = serializers.CharField(help_text=_("Its formula; the metal content follows from it."))
    inert = serializers.BooleanField(help_text=_("Declared to react with nothing here: balanced by its formula."))


class SubstanceInput(Strict):
    """A new substance."""

    name = Text(max_length=120, help_text=_("A name that no other substance here has."))
    cas_number = Text(required=False, allow_blank=True, max_length=12, help_text=_("Such as 7758-99-8."))
    formula = Text(required=False, allow_blank=True, max_length=80, help_text=_("Such as CuSO4.5H2O."))
    inert = Flag(
        required=False, help_text=_("True if it reacts with nothing here: it is then balanced by its formula.")
    )


class LineShape(Shape):
    """One substance of a product."""

    substance = serializers.UUIDField(source="substance.uuid", help_text=_("The substance."))
    name = serializers.CharField(source="substance.name", help_text=_("Its name."))
    cas_number = serializers.CharField(source="substance.cas_number", help_text=_("Its CAS number."))
    formula = serializers.CharField(source="substance.formula", help_text=_("Its formula."))
    content = serializers.CharField(source="typed", help_text=_("The content as it was written."))
    amount = serializers.IntegerField(help_text=_("Micrograms of the substance per kilogram or litre of the product."))
    per = choices_of(Per.values, _("What the amount refers to."))


class RevisionShape(Shape):
    """A product as it was known from a moment on."""

    uuid = serializers.UUIDField(source="product.uuid", help_text=_("The product's identifier, in all revisions."))
    name = serializers.CharField(source="product.name", help_text=_("The name on the label."))
    supplier = serializers.CharField(source="product.supplier", help_text=_("Who sells it."))
    revision = serializers.IntegerField(source="number", help_text=_("The number of this revision, counted from 1."))
    form = choices_of(Form.values, _("The physical form."))
    density = Figure(dimension="density", allow_null=True, help_text=_("The density; null where none was written."))
    complete = serializers.BooleanField(help_text=_("Whether the composition names every metal in it."))
    reactivity = serializers.ListField(
        child=choices_of(REACTS_AS, KINDS_HELP), help_text=_("What it reacts as, by the safety data sheet.")
    )
    signal_word = serializers.CharField(help_text=_("Danger, Warning or nothing, as entered."))
    pictograms = serializers.ListField(
        child=choices_of(PICTOGRAMS, _("One pictogram.")), help_text=_("The hazard pictograms, as entered.")
    )
    statements = serializers.ListField(
        child=serializers.CharField(help_text=STATEMENT_HELP), help_text=_("The hazard statements, as entered.")
    )
    safety_data_sheet = serializers.CharField(
        source="safety_data_sheet.sha256",
        default=None,
        allow_null=True,
        help_text=_("SHA-256 of the sheet: fetch it from attachments; null where there is none."),
    )
    sheet_date = serializers.DateField(allow_null=True, help_text=_("The revision date that stands on the sheet."))
    lines = LineShape(many=True, help_text=_("The composition."))
    created_at = serializers.DateTimeField(help_text=_("When this revision was written."))
    created_by = Person(help_text=_("Who wrote it."))


class LineInput(Strict):
    """One substance of a product."""

    substance = Identifier(help_text=_("A substance of this workshop."))
    content = Text(max_length=LONGEST_AMOUNT, help_text=_('"98 %" of the mass, or a concentration such as "250 g/L".'))


class RevisionInput(Strict):
    """What is known of a product from now on; earlier revisions stay as they were."""

    form = Choice(choices=Form.choices, help_text=_("The physical form."))
    lines = rows(LineInput, most=50, required=False, help_text=_("The composition."))
    complete = Flag(required=False, help_text=_("Whether the composition names every metal in it; true if left out."))
    density = Text(
        required=False, allow_blank=True, max_length=LONGEST_AMOUNT, help_text=_('For example "1.84 g/cm3".')
    )
    reactivity = Words(
        child=Choice(choices=list(REACTS_AS.items()), help_text=KINDS_HELP),
        required=False,
        help_text=_("What it reacts as, by the safety data sheet. It decides what it must never meet."),
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
        help_text=_("As they stand on the sheet."),
    )
    safety_data_sheet = Text(
        required=False, allow_null=True, max_length=64, help_text=_("SHA-256 of a PDF uploaded to attachments.")
    )
    sheet_date = Day(required=False, allow_null=True, help_text=_("The revision date that stands on the sheet."))


class ProductInput(RevisionInput):
    """A new product with its first revision."""

    name = Text(max_length=120, help_text=_("The name as it stands on the label."))
    supplier = Text(required=False, allow_blank=True, max_length=120, help_text=_("Who sells it."))
