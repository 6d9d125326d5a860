"""Background tasks of the ledger."""

from collections.abc import Mapping
from datetime import datetime
from typing import Any

from django_scopes import scope

from chemicals.jobs.registry import Effect
from chemicals.ledger.late import prepare_step
from chemicals.workshop.models import Workshop


def recompute(payload: Mapping[str, Any], *, now: datetime) -> Effect | None:
    """Bring the books of a workshop one stretch further, after a late entry with too many later ones."""
    workshop = Workshop.objects.get(pk=payload["workshop"])
    with scope(workshop=workshop):
        return prepare_step(workshop, payload["done"])
