"""Receivers, and drop-offs of waste containers."""

import uuid

from django.db import models
from django.utils.translation import gettext_lazy as _
from django_scopes import ScopedManager

from chemicals.ledger.models import Vessel
from chemicals.workshop.models import Membership, Workshop
from compliance.documents.models import Paper


class Receiver(models.Model):
    """Who takes waste containers."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="receivers")
    name = models.CharField(_("name"), max_length=120)
    address = models.TextField(_("address"), blank=True)
    reference = models.CharField(_("our number there"), max_length=60, blank=True)

    objects: "models.Manager[Receiver]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["workshop", "name"], name="receiver_name_once")]

    def __str__(self) -> str:
        return self.name


class Mode(models.TextChoices):
    """How the containers get there."""

    BROUGHT = "brought", _("brought")
    PICKED_UP = "picked up", _("picked up")


class State(models.TextChoices):
    """How far a drop-off is. Receipts come later."""

    DRAFT = "draft", _("draft")
    PACKED = "packed", _("packed")
    HANDED_OVER = "handed over", _("handed over")


class DropOff(models.Model):
    """A delivery of waste containers to a receiver. Packed: its manifest is issued and its list stands."""

    uuid = models.UUIDField(default=uuid.uuid4, unique=True, editable=False)
    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="drop_offs")
    receiver = models.ForeignKey(Receiver, on_delete=models.PROTECT, related_name="drop_offs")
    mode = models.CharField(_("mode"), max_length=10, choices=Mode.choices, default=Mode.BROUGHT)
    planned_for = models.DateField(_("planned for"))
    state = models.CharField(max_length=12, choices=State.choices, default=State.DRAFT)
    manifest = models.OneToOneField(Paper, null=True, blank=True, on_delete=models.PROTECT, related_name="drop_off")
    created_at = models.DateTimeField()
    created_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[DropOff]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.CheckConstraint(condition=models.Q(state__in=State.values), name="drop_off_state"),
            models.CheckConstraint(condition=models.Q(mode__in=Mode.values), name="drop_off_mode"),
            models.CheckConstraint(
                condition=models.Q(state="draft") | models.Q(manifest__isnull=False),
                name="drop_off_manifest_when_packed",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.receiver} {self.planned_for:%Y-%m-%d}"


class DropOffContainer(models.Model):
    """A waste container on a drop-off; it goes along once."""

    drop_off = models.ForeignKey(DropOff, on_delete=models.PROTECT, related_name="containers")
    vessel = models.OneToOneField(Vessel, on_delete=models.PROTECT, related_name="drop_off_container")

    def __str__(self) -> str:
        return str(self.vessel)
