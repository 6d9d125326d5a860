"""Waste streams and the fillings of waste containers."""

import uuid

from django.db import models
from django.utils.translation import gettext_lazy as _
from django_scopes import ScopedManager

from chemicals.ledger.models import Vessel
from chemicals.workshop.models import Workshop


class WasteStream(models.Model):
    """What a receiver approved. ``reactivity`` is what the stream may react as; ``never`` is printed on the label."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="waste_streams")
    name = models.CharField(_("name"), max_length=80)
    origin = models.CharField(_("origin"), max_length=120)
    profile_number = models.CharField(_("profile number"), max_length=40, blank=True)
    code = models.CharField(_("waste code as you chose it"), max_length=40, blank=True)
    reactivity = models.JSONField(_("may react as"), default=list, blank=True)
    signal_word = models.CharField(_("signal word"), max_length=10, blank=True)
    pictograms = models.JSONField(_("pictograms"), default=list, blank=True)
    statements = models.JSONField(_("hazard statements"), default=list, blank=True)

    objects: "models.Manager[WasteStream]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["workshop", "name"], name="waste_stream_name_once")]

    def __str__(self) -> str:
        return self.name


class WasteContainer(models.Model):
    """One filling of one stream. ``tare`` in micrograms."""

    vessel = models.OneToOneField(Vessel, on_delete=models.PROTECT, related_name="waste_container")
    stream = models.ForeignKey(WasteStream, on_delete=models.PROTECT, related_name="containers")
    material = models.CharField(_("material"), max_length=60, blank=True)
    tare = models.BigIntegerField(_("tare"), null=True, blank=True)
    gross = models.BigIntegerField(_("gross weight"), null=True, blank=True)
    closed_at = models.DateTimeField(_("closed"), null=True, blank=True)

    objects: "models.Manager[WasteContainer]" = ScopedManager(workshop="vessel__workshop")

    def __str__(self) -> str:
        return self.vessel.name
