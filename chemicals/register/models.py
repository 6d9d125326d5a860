"""The catalogue: substances, products and their immutable revisions. No amounts."""

import uuid
from collections.abc import Iterable

from django.db import models
from django.utils.translation import gettext_lazy as _
from django_scopes import ScopedManager

from chemicals.journal.models import Attachment
from chemicals.science.ghs import Contradiction, find_contradictions
from chemicals.science.identity import PACKING_GROUPS
from chemicals.workshop.models import Membership, Workshop
from chemicals.workshop.searched import Searched
from chemicals.workshop.texts import searchable

MOST_PH = 14_000
"""The highest pH that a sheet's floor may have, in thousandths."""


class Substance(Searched):
    """A chemical species: CAS and EC number, formula, synonyms; molar mass and metals follow from the formula.

    One that is declared ``inert`` reacts with nothing here: it is balanced by its formula, like a metal.
    """

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="substances")
    name = models.CharField(_("name"), max_length=120)
    cas_number = models.CharField(_("CAS number"), max_length=12, blank=True)
    ec_number = models.CharField(_("EC number"), max_length=9, blank=True)
    formula = models.CharField(_("formula"), max_length=80, blank=True)
    synonyms = models.JSONField(_("synonyms"), default=list, blank=True)
    inert = models.BooleanField(_("reacts with nothing here"), default=False)

    objects: "models.Manager[Substance]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["workshop", "name"], name="substance_name_once")]

    def __str__(self) -> str:
        return self.name

    def search_texts(self) -> Iterable[str]:
        return (self.name, *map(str, self.synonyms), self.cas_number, self.ec_number, self.formula)


class Product(Searched):
    """What is bought. Everything that may change stands in its revisions.

    ``made_of`` is the searched text of the substances of the current one.
    """

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="products")
    name = models.CharField(_("name"), max_length=120)
    supplier = models.CharField(_("supplier"), max_length=120, blank=True)
    made_of = models.TextField(editable=False, blank=True, default="")

    objects: "models.Manager[Product]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["workshop", "name", "supplier"], name="product_name_once")]

    def __str__(self) -> str:
        return self.name

    def search_texts(self) -> Iterable[str]:
        return (self.name, self.supplier)

    def note_made_of(self, substances: Iterable[Substance]) -> None:
        """Bring the searched text of its composition up to date; whoever calls this saves the row."""
        self.made_of = searchable(*(text for each in substances for text in each.search_texts()))


class Form(models.TextChoices):
    """The physical form of a product as bought."""

    SOLID = "solid", _("solid")
    LIQUID = "liquid", _("liquid")
    GAS = "gas", _("gas")


class ProductRevision(models.Model):
    """A product as it was known from a moment on; never changed, only followed by the next.

    ``density`` in micrograms per millilitre, ``ph_floor`` in thousandths: down to which pH the supplier's sheet lets a
    bath go. ``reactivity`` names what it reacts as, declared by the user from the sheet. Hazards as the user enters
    them: classes by their short name, signal word, pictograms, statements by code with their text as typed. Transport
    as section 14 of the sheet has it; ``transport_unclassified`` where it says that it is no dangerous goods.
    """

    product = models.ForeignKey(Product, on_delete=models.PROTECT, related_name="revisions")
    number = models.PositiveIntegerField()
    form = models.CharField(_("physical form"), max_length=8, choices=Form.choices)
    density = models.BigIntegerField(_("density"), null=True, blank=True)
    ph_floor = models.BigIntegerField(_("lowest pH"), null=True, blank=True)
    complete = models.BooleanField(_("the list names every metal in it"), default=True)
    reactivity = models.JSONField(_("reacts as"), default=list, blank=True)
    hazard_classes = models.JSONField(_("hazard classes"), default=list, blank=True)
    signal_word = models.CharField(_("signal word"), max_length=10, blank=True)
    pictograms = models.JSONField(_("pictograms"), default=list, blank=True)
    statements = models.JSONField(_("hazard statements"), default=list, blank=True)
    gloves = models.TextField(_("gloves"), max_length=1000, blank=True)
    un_number = models.CharField(_("UN number"), max_length=4, blank=True)
    shipping_name = models.CharField(_("proper shipping name"), max_length=200, blank=True)
    transport_class = models.CharField(_("class for transport"), max_length=40, blank=True)
    packing_group = models.CharField(_("packing group"), max_length=3, blank=True)
    transport_unclassified = models.BooleanField(_("not classified for transport"), default=False)
    supplier_telephone = models.CharField(_("supplier's telephone"), max_length=60, blank=True)
    safety_data_sheet = models.ForeignKey(Attachment, null=True, blank=True, on_delete=models.PROTECT, related_name="+")
    sheet_language = models.CharField(_("language of the sheet"), max_length=35, blank=True)
    sheet_date = models.DateField(_("revision date of the sheet"), null=True, blank=True)
    created_at = models.DateTimeField()
    created_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[ProductRevision]" = ScopedManager(workshop="product__workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["product", "number"], name="revision_number_once"),
            models.CheckConstraint(
                condition=models.Q(density=None) | models.Q(density__gt=0), name="revision_density_above_zero"
            ),
            models.CheckConstraint(
                condition=models.Q(ph_floor=None) | models.Q(ph_floor__gte=0, ph_floor__lte=MOST_PH),
                name="revision_ph_floor_range",
            ),
            models.CheckConstraint(condition=models.Q(form__in=Form.values), name="revision_form"),
            models.CheckConstraint(
                condition=models.Q(packing_group__in=["", *PACKING_GROUPS]), name="revision_packing_group"
            ),
            models.CheckConstraint(
                condition=models.Q(transport_unclassified=False)
                | models.Q(un_number="", shipping_name="", transport_class="", packing_group=""),
                name="revision_transport_or_none",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.product} ({self.number})"

    @property
    def contradictions(self) -> tuple[Contradiction, ...]:
        """In what classes, statements, signal word and pictograms do not go together; pointed out, never corrected."""
        return find_contradictions(
            classes=self.hazard_classes,
            statements=self.statements,
            signal_word=self.signal_word,
            pictograms=self.pictograms,
        )


class Per(models.TextChoices):
    """What a content refers to."""

    KILOGRAM = "kg", _("of the mass")
    LITRE = "L", _("per litre")


class CompositionLine(models.Model):
    """One substance of a product revision: micrograms per kilogram or per litre, with standard uncertainty.

    Of a range, which stays as ``typed``, the middle and the uncertainty of a rectangular distribution.
    """

    revision = models.ForeignKey(ProductRevision, on_delete=models.PROTECT, related_name="lines")
    substance = models.ForeignKey(Substance, on_delete=models.PROTECT, related_name="+")
    typed = models.CharField(max_length=80)
    amount = models.BigIntegerField()
    sd = models.BigIntegerField(default=0)
    per = models.CharField(max_length=2, choices=Per.choices)

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["revision", "substance"], name="composition_substance_once"),
            models.CheckConstraint(condition=models.Q(amount__gte=0, sd__gte=0), name="composition_not_negative"),
            models.CheckConstraint(condition=models.Q(per__in=Per.values), name="composition_per"),
        ]

    def __str__(self) -> str:
        return f"{self.substance}: {self.typed}"


class LimitKind(models.TextChoices):
    """What an exposure limit is compared with."""

    LONG = "8 h", _("average over a shift of 8 h")
    SHORT = "15 min", _("short-term, average over 15 min")
    CEILING = "ceiling", _("never to be exceeded")
    DANGER = "danger", _("immediately dangerous to life or health")
    OTHER = "other", _("another kind")


class ExposureLimit(models.Model):
    """An exposure limit of section 8 of the sheet: value with its unit and source as typed.

    ``substance`` is empty where the limit is said of the product as a whole.
    """

    revision = models.ForeignKey(ProductRevision, on_delete=models.PROTECT, related_name="limits")
    substance = models.ForeignKey(Substance, null=True, blank=True, on_delete=models.PROTECT, related_name="+")
    kind = models.CharField(max_length=8, choices=LimitKind.choices)
    value = models.CharField(max_length=80)
    source = models.CharField(max_length=200)

    class Meta:
        constraints = [
            models.CheckConstraint(condition=models.Q(kind__in=LimitKind.values), name="exposure_limit_kind")
        ]

    def __str__(self) -> str:
        return f"{self.value} ({self.get_kind_display()})"
