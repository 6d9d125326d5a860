"""Numbered papers: frozen data and the hash of the issued bytes."""

import uuid

from django.db import models
from django.utils.translation import gettext_lazy as _
from django_scopes import ScopedManager

from chemicals.journal.models import Entry
from chemicals.workshop.models import Membership, Workshop


class PaperKind(models.TextChoices):
    """Papers that are issued with a number."""

    WASTE_LABEL = "waste-label", _("waste label")
    MANIFEST = "manifest", _("manifest")
    LABELS = "labels", _("labels of vessels")
    EMERGENCY = "emergency", _("emergency sheet")
    REGISTER = "register", _("list of chemicals")


class Paper(models.Model):
    """An issued paper. ``data`` are canonical bytes; the PDF lies with the attachments under its SHA-256."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="papers")
    kind = models.CharField(_("kind"), max_length=12, choices=PaperKind.choices)
    number = models.PositiveIntegerField(_("number"))
    data = models.BinaryField()
    pdf_sha256 = models.CharField(max_length=64)
    entry = models.OneToOneField(Entry, on_delete=models.PROTECT, related_name="paper")
    issued_at = models.DateTimeField()
    issued_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[Paper]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["workshop", "kind", "number"], name="paper_number_once"),
            models.CheckConstraint(condition=models.Q(kind__in=PaperKind.values), name="paper_kind"),
        ]

    def __str__(self) -> str:
        return f"{self.kind} {self.number}"
