"""The job table: the truth about background work, whoever carries it.

Not under the workshop's scope: a worker serves every workshop, and the task opens the scope it needs.
"""

import uuid

from django.db import models
from django.db.models import F, Q
from django.utils.translation import gettext_lazy as _

from chemicals.workshop.models import Workshop


class State(models.TextChoices):
    """Where a job stands. A failed job has used up its tries and waits for a person."""

    QUEUED = "queued", _("queued")
    RUNNING = "running", _("running")
    DONE = "done", _("done")
    FAILED = "failed", _("failed")


class Job(models.Model):
    """One piece of background work, written in the transaction of what caused it."""

    id = models.UUIDField(primary_key=True, default=uuid.uuid4, editable=False)
    task = models.CharField(_("task"), max_length=60)
    payload = models.TextField(_("payload"), default="{}")
    workshop = models.ForeignKey(Workshop, on_delete=models.CASCADE, null=True, blank=True, related_name="jobs")
    state = models.CharField(_("state"), max_length=8, choices=State.choices, default=State.QUEUED)
    due_at = models.DateTimeField(_("due"))
    carried_until = models.DateTimeField(null=True, blank=True)
    """When to send the id to the broker again: a broker may lose it, the table does not."""
    attempts = models.PositiveIntegerField(default=0)
    """Counts claims and never goes back: a claim holds only while this number is unchanged."""
    tries = models.PositiveIntegerField(_("tries"), default=0)
    """Claims since the last step that succeeded; the limit is on these."""
    lease_until = models.DateTimeField(null=True, blank=True)
    claimed_by = models.CharField(max_length=120, blank=True)
    last_error = models.CharField(_("last error"), max_length=1000, blank=True)
    progress_done = models.PositiveIntegerField(default=0)
    progress_total = models.PositiveIntegerField(default=0)
    created_at = models.DateTimeField()
    finished_at = models.DateTimeField(null=True, blank=True)

    class Meta:
        constraints = [
            models.CheckConstraint(condition=Q(state__in=State.values), name="job_state_known"),
            models.CheckConstraint(
                condition=Q(state=State.RUNNING, lease_until__isnull=False) & ~Q(claimed_by="")
                | ~Q(state=State.RUNNING) & Q(lease_until__isnull=True, claimed_by=""),
                name="job_lease_while_running",
            ),
            models.CheckConstraint(
                condition=Q(state__in=[State.DONE, State.FAILED], finished_at__isnull=False)
                | ~Q(state__in=[State.DONE, State.FAILED]) & Q(finished_at__isnull=True),
                name="job_finished_when_over",
            ),
            models.CheckConstraint(condition=Q(progress_done__lte=F("progress_total")), name="job_progress_in_total"),
            models.CheckConstraint(condition=Q(tries__lte=F("attempts")), name="job_tries_in_attempts"),
        ]
        indexes = [
            models.Index(fields=["due_at"], condition=Q(state=State.QUEUED), name="job_queued_due"),
            models.Index(fields=["lease_until"], condition=Q(state=State.RUNNING), name="job_running_lease"),
            models.Index(fields=["workshop", "created_at"], name="job_of_workshop"),
        ]

    def __str__(self) -> str:
        return f"{self.task} ({self.state})"


class Schedule(models.Model):
    """When a repeated task is due next. The column decides, no timer does: a missed tick catches up once."""

    task = models.CharField(max_length=60)
    every_seconds = models.PositiveIntegerField()
    due_at = models.DateTimeField()

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["task"], name="schedule_task_once"),
            models.CheckConstraint(condition=Q(every_seconds__gte=1), name="schedule_every_positive"),
        ]

    def __str__(self) -> str:
        return f"{self.task} every {self.every_seconds} s"
