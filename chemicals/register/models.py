"""The catalogue: substances, products and their immutable revisions. No amounts."""

import uuid

from django.db import models
from django.utils.translation import gettext_lazy as _
from django_scopes import ScopedManager

from chemicals.journal.models import Attachment
from chemicals.workshop.models import Membership, Workshop


class Substance(models.Model):
    """A chemical species: CAS number, formula, molar mass follows from the formula.

    One that is declared ``inert`` reacts with nothing here: it is balanced by its formula, like a metal.
    """

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="substances")
    name = models.CharField(_("name"), max_length=120)
    cas_number = models.CharField(_("CAS number"), max_length=12, blank=True)
    formula = models.CharField(_("formula"), max_length=80, blank=True)
    inert = models.BooleanField(_("reacts with nothing here"), default=False)

    objects: "models.Manager[Substance]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["workshop", "name"], name="substance_name_once")]

    def __str__(self) -> str:
        return self.name


class Product(models.Model):
    """What is bought. Everything that may change stands in its revisions."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="products")
    name = models.CharField(_("name"), max_length=120)
    supplier = models.CharField(_("supplier"), max_length=120, blank=True)

    objects: "models.Manager[Product]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["workshop", "name", "supplier"], name="product_name_once")]

    def __str__(self) -> str:
        return self.name


class Form(models.TextChoices):
    """The physical form of a product as bought."""

    SOLID = "solid", _("solid")
    LIQUID = "liquid", _("liquid")


class ProductRevision(models.Model):
    """A product as it was known from a moment on; never changed, only followed by the next.

    ``density`` in micrograms per millilitre. ``reactivity`` names what it reacts as, declared by the user from the
    sheet. ``hazards`` as the user enters them: signal word, pictograms, statements by code.
    """

    product = models.ForeignKey(Product, on_delete=models.PROTECT, related_name="revisions")
    number = models.PositiveIntegerField()
    form = models.CharField(_("physical form"), max_length=8, choices=Form.choices)
    density = models.BigIntegerField(_("density"), null=True, blank=True)
    complete = models.BooleanField(_("the list names every metal in it"), default=True)
    reactivity = models.JSONField(_("reacts as"), default=list, blank=True)
    signal_word = models.CharField(_("signal word"), max_length=10, blank=True)
    pictograms = models.JSONField(_("pictograms"), default=list, blank=True)
    statements = models.JSONField(_("hazard statements"), default=list, blank=True)
    safety_data_sheet = models.ForeignKey(Attachment, null=True, blank=True, on_delete=models.PROTECT, related_name="+")
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
            models.CheckConstraint(condition=models.Q(form__in=Form.values), name="revision_form"),
        ]

    def __str__(self) -> str:
        return f"{self.product} ({self.number})"


class Per(models.TextChoices):
    """What a content refers to."""

    KILOGRAM = "kg", _("of the mass")
    LITRE = "L", _("per litre")


class CompositionLine(models.Model):
    """One substance of a product revision: micrograms per kilogram or per litre, with standard uncertainty."""

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
