"""Substances, products and revisions that are written together: a few queries for each table, however many rows."""

from collections.abc import Sequence
from datetime import datetime

from django.db import transaction
from django_scopes import scope

from chemicals.register.checks import Checked
from chemicals.register.models import CompositionLine, ExposureLimit, Product, ProductRevision, Substance
from chemicals.workshop.models import Membership
from chemicals.workshop.permissions import require_writer

BATCH = 500
"""Rows of a table that are written at once."""


def write_catalogue(
    *, actor: Membership, now: datetime, substances: Sequence[Substance], revisions: Sequence[Checked]
) -> None:
    """Write new substances, then revisions that were checked; each knows its number and its product.

    A product that is not written yet is written with its first revision. All of it is the actor's own workshop.
    Raises IntegrityError where a name or a number was taken meanwhile.
    """
    require_writer(actor)
    products = [checked.revision.product for checked in revisions if checked.revision.product.pk is None]
    for row in (*substances, *products):
        row.note_searched()
    for checked in revisions:
        checked.revision.product.note_made_of(line.substance for line in checked.lines)
    for checked in revisions:
        checked.revision.created_at, checked.revision.created_by = now, actor
    with transaction.atomic(), scope(workshop=actor.workshop):
        Substance.objects.bulk_create(substances, batch_size=BATCH)
        known = [each.revision.product for each in revisions if each.revision.product.pk is not None]
        Product.objects.bulk_create(products, batch_size=BATCH)
        Product.objects.bulk_update(known, ["made_of"], batch_size=BATCH)
        ProductRevision.objects.bulk_create([each.revision for each in revisions], batch_size=BATCH)
        for checked in revisions:
            for line in checked.lines:
                line.revision = checked.revision
            for limit in checked.limits:
                limit.revision = checked.revision
        CompositionLine.objects.bulk_create([line for each in revisions for line in each.lines], batch_size=BATCH)
        ExposureLimit.objects.bulk_create([limit for each in revisions for limit in each.limits], batch_size=BATCH)
