"""The journal: immutable, chained entries; the head of each workshop's chain; attachments."""

import uuid

from django.db import models
from django_scopes import ScopedManager

from chemicals.books.occurred import MINUTE, PRECISIONS
from chemicals.workshop.models import Membership, Workshop


class Entry(models.Model):
    """One immutable, dated record of something that happened.

    ``body`` holds the canonical bytes as written; every other column is a copy of what stands in it, for searching.
    Triggers refuse UPDATE, DELETE, replace and TRUNCATE.
    """

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="entries")
    sequence = models.BigIntegerField()
    uuid = models.UUIDField(unique=True, default=uuid.uuid4)
    kind = models.CharField(max_length=24)
    kind_version = models.PositiveSmallIntegerField()
    occurred_at = models.DateTimeField()
    precision = models.CharField(max_length=8, default=MINUTE)
    recorded_at = models.DateTimeField()
    member = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="entries")
    verdict = models.CharField(max_length=12)
    about = models.ForeignKey("self", null=True, on_delete=models.PROTECT, related_name="mentions")
    body = models.BinaryField()
    previous_hash = models.BinaryField(max_length=32)
    hash = models.BinaryField(max_length=32)

    objects: "models.Manager[Entry]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["workshop", "sequence"], name="entry_sequence_once"),
            models.CheckConstraint(condition=models.Q(sequence__gte=1), name="entry_sequence_from_one"),
            models.CheckConstraint(condition=models.Q(precision__in=PRECISIONS), name="entry_precision"),
        ]
        indexes = [models.Index(fields=["workshop", "occurred_at", "sequence"], name="entry_fold_order")]

    def __str__(self) -> str:
        return f"{self.sequence} {self.kind}"


class Head(models.Model):
    """The end of a workshop's chain. An append locks this row."""

    workshop = models.OneToOneField(Workshop, on_delete=models.PROTECT, primary_key=True, related_name="head")
    sequence = models.BigIntegerField(default=0)
    hash = models.BinaryField(max_length=32)

    def __str__(self) -> str:
        return f"{self.sequence} {bytes(self.hash).hex()}"


class Attachment(models.Model):
    """A file of a workshop, kept outside the database under its SHA-256."""

    workshop = models.ForeignKey(Workshop, on_delete=models.PROTECT, related_name="attachments")
    sha256 = models.CharField(max_length=64)
    name = models.CharField(max_length=200)
    media_type = models.CharField(max_length=100)
    size = models.BigIntegerField()
    added_at = models.DateTimeField()
    added_by = models.ForeignKey(Membership, on_delete=models.PROTECT, related_name="+")

    objects: "models.Manager[Attachment]" = ScopedManager(workshop="workshop")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["workshop", "sha256"], name="attachment_once")]

    def __str__(self) -> str:
        return self.name
