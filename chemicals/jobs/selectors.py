"""Reads about background work."""

from dataclasses import dataclass
from datetime import datetime, timedelta
from uuid import UUID

from django.db.models import Count, Q, QuerySet

from chemicals.jobs.models import Job, State
from chemicals.workshop.errors import NotFoundError
from chemicals.workshop.models import Membership


@dataclass(frozen=True)
class Overview:
    """How background work stands: what waits, what is late, what runs, what failed for good."""

    queued: int
    late: int
    running: int
    failed: int


def get_overview(*, now: datetime, patience: timedelta = timedelta(minutes=5)) -> Overview:
    """Count jobs by state; late ones have been due for longer than the patience. One query."""
    late = Q(state=State.QUEUED, due_at__lte=now - patience)
    return Overview(
        **Job.objects.aggregate(
            queued=Count("pk", filter=Q(state=State.QUEUED)),
            late=Count("pk", filter=late),
            running=Count("pk", filter=Q(state=State.RUNNING)),
            failed=Count("pk", filter=Q(state=State.FAILED)),
        )
    )


def list_failed() -> QuerySet[Job]:
    """Return the jobs that used up their tries, newest first. One query."""
    return Job.objects.filter(state=State.FAILED).order_by("-finished_at", "pk")


def list_jobs_for(member: Membership) -> QuerySet[Job]:
    """Return the jobs of the member's workshop, newest first. One query."""
    return Job.objects.filter(workshop=member.workshop).order_by("-created_at", "pk")


def get_job_for(member: Membership, job_id: UUID) -> Job:
    """Return one job of the member's workshop, for its state and progress."""
    try:
        return list_jobs_for(member).get(pk=job_id)
    except Job.DoesNotExist as error:
        raise NotFoundError("There is no such job in this workshop.") from error
